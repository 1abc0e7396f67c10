"""How a penalised fit is repeated on other people: functions of a module, which another process can be sent.

A strength that was chosen is chosen anew in every sample, where choosing is quick enough; the copies of a person stay
in one fold then, or those left out would be told of by themselves.
"""

from collections.abc import Callable
from functools import partial

import numpy as np
from numpy.typing import NDArray

from clinicalc.development.study_method_figures import Penalty, PenaltyFigures
from clinicalc.estimation.bootstrap_risks import RiskPeople
from clinicalc.estimation.firth import fit_firth
from clinicalc.estimation.people_at_risk import Cohort, Ties
from clinicalc.estimation.ridge import fit_ridge_hazards, fit_ridge_risks
from clinicalc.estimation.ridge_strength import choose_hazard_strength, choose_risk_strength

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
RiskRefit = Callable[[RiskPeople, Codes], Array]
HazardRefit = Callable[[Cohort, Codes | None, Codes], Array]

MOST_TO_CHOOSE = 1000
"""People beyond which a strength is kept: choosing it makes some hundred fits, in each of some hundred samples."""


def find_risk_refits(penalty: PenaltyFigures, people: int) -> tuple[RiskRefit, RiskRefit]:
    """The penalised fit of a binary outcome as it was made, and as it is repeated."""
    if penalty.kind is Penalty.FIRTH:
        return refit_firth, refit_firth
    own = partial(refit_ridge_risks, strength=penalty.strength)
    again = partial(refit_ridge_risks, strength=None)
    return own, again if penalty.chosen and people <= MOST_TO_CHOOSE else own


def find_hazard_refits(penalty: PenaltyFigures, people: int, ties: Ties) -> tuple[HazardRefit, HazardRefit]:
    """The penalised fit of times as it was made, and as it is repeated."""
    own = partial(refit_ridge_hazards, strength=penalty.strength, ties=ties)
    again = partial(refit_ridge_hazards, strength=None, ties=ties)
    return own, again if penalty.chosen and people <= MOST_TO_CHOOSE else own


def refit_firth(people: RiskPeople, copies: Codes) -> Array:
    """Coefficients (k,) with Firth's penalty, intercept first. Raises FitRefused."""
    return fit_firth(people.y, people.x, offset=people.offset).fit.coefficients


def refit_ridge_risks(people: RiskPeople, copies: Codes, *, strength: float | None) -> Array:
    """Coefficients (k,) with a ridge, intercept first; without a strength it is chosen. Raises FitRefused."""
    y, x, offset = people.y, people.x, people.offset
    if strength is None:
        strength = choose_risk_strength(y, x, offset=offset, cluster=copies).strength
    return fit_ridge_risks(y, x, strength, offset=offset).fit.coefficients


def refit_ridge_hazards(
    cohort: Cohort, strata: Codes | None, copies: Codes, *, strength: float | None, ties: Ties
) -> Array:
    """Coefficients (p,) of a Cox fit with a ridge; without a strength it is chosen. Raises FitRefused."""
    if strength is None:
        strength = choose_hazard_strength(cohort, ties=ties, strata=strata, cluster=copies).strength
    return fit_ridge_hazards(cohort, strength, ties=ties, strata=strata).fit.coefficients
