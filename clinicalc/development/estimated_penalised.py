"""A penalised fit to arrays, as the packaging takes it: Firth or ridge for a binary outcome, ridge for Cox.

Firth's covariance is the inverse of the information at the estimate. A ridge has Gray's, which is how the estimate
varies from sample to sample; robust or by clusters, the sum of squared scores stands in the middle of it. No covariance
holds what shrinkage moves coefficients by, or that the strength was chosen in the same people.
"""

from collections.abc import Iterator, Sequence
from dataclasses import replace

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.development.estimated_hazards import FixedTerms, HazardPlan, centred_offset, fits_of
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fitted import fit_with_intercept
from clinicalc.development.study_method_figures import Penalty, PenaltyFigures
from clinicalc.development.study_tables import EstimateTable
from clinicalc.estimation import cox_residuals, logistic
from clinicalc.estimation.binomial import HIGHEST
from clinicalc.estimation.cox import CoxFit
from clinicalc.estimation.firth import fit_firth
from clinicalc.estimation.hazard_sums import Cohort
from clinicalc.estimation.logistic import LogisticFit
from clinicalc.estimation.ridge import fit_ridge_hazards, fit_ridge_risks
from clinicalc.estimation.ridge_strength import (
    STRONGEST,
    WEAKEST,
    ChosenStrength,
    choose_hazard_strength,
    choose_risk_strength,
)
from clinicalc.estimation.screened import Screen, Screened
from clinicalc.estimation.second_process import one_thread

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

SEPARATION = (Screen.SEPARATED, Screen.LEVEL_WITHOUT_EVENTS, Screen.LEVEL_ONLY_EVENTS)
"""What a screening finds of terms without a finite coefficient."""
NOTICEABLE = 0.05
"""Difference of mean prediction and observed share, as a part of the rarer answer's share, from which it is told."""


@one_thread()
def fit_penalised_risks(
    y: Array, x: Array, names: Sequence[str], fixed: FixedTerms, table: EstimateTable, cluster: Codes | None
) -> tuple[LogisticFit, Fit, PenaltyFigures]:
    """The engine's fit, the Fit (intercept with every term at zero), and its figures. Raises FitRefused."""
    offset = fixed.sum if len(fixed.coefficients) else None
    robust = table.covariance_kind != "model"
    if table.penalty == "firth":
        fit = fit_firth(y, x, offset=offset).fit
        covariance, words = fit.covariance, "with Firth’s penalty"
        figures = PenaltyFigures(Penalty.FIRTH, None, False, float(x.shape[1]))
    else:
        found = _stated(table) or choose_risk_strength(y, x, offset=offset, cluster=cluster)
        ridge = fit_ridge_risks(y, x, found.strength, offset=offset)
        fit, covariance, words = ridge.fit, ridge.fit.covariance, _say_ridge(found, table)
        if robust:
            bread = replace(fit, covariance=ridge.inverse)
            covariance = logistic.robust_covariance(y, x, bread, cluster=cluster, offset=offset)
        figures = PenaltyFigures(Penalty.RIDGE, found.strength, _is_chosen(table), ridge.degrees)
    eta = fit.coefficients[0] + x @ fit.coefficients[1:] + (0.0 if offset is None else offset)
    means = 1 / (1 + np.exp(np.minimum(-eta, HIGHEST)))
    figures = replace(figures, mean_predicted=float(means.mean()), observed=float(y.mean()))
    made = fit_with_intercept(
        FitKind.LOGISTIC,
        names,
        fit.coefficients.tolist(),
        covariance,
        reference=np.zeros(x.shape[1]).tolist(),
        robust=robust,
    )
    remark = f"Logistic fit {words} to {int(fit.people):,} people with {int(fit.events):,} events."
    return fit, replace(made, remarks=(remark,)), figures


def fit_penalised_hazards(
    cohort: Cohort, names: Sequence[str], fixed: FixedTerms, strata: Codes, plan: HazardPlan, table: EstimateTable
) -> tuple[CoxFit, tuple[Fit, ...], PenaltyFigures]:
    """The engine's Cox fit with a ridge, a Fit for each stratum, and its figures. Raises FitRefused."""
    asked = centred_offset(cohort, fixed)
    several = strata if len(plan.horizons) > 1 else None
    found = _stated(table) or choose_hazard_strength(asked, ties=plan.ties, strata=several, cluster=plan.cluster)
    ridge = fit_ridge_hazards(asked, found.strength, ties=plan.ties, strata=several)
    covariance = ridge.fit.covariance
    if plan.robust:
        bread = replace(ridge.fit, covariance=ridge.inverse)
        covariance = cox_residuals.robust_covariance(asked, bread, plan.ties, strata=several, cluster=plan.cluster)
    fits = fits_of(cohort, names, fixed, strata, plan, ridge.fit, covariance, f" {_say_ridge(found, table)}")
    return ridge.fit, fits, PenaltyFigures(Penalty.RIDGE, found.strength, _is_chosen(table), ridge.degrees)


def remark_penalty(id: str, penalty: PenaltyFigures | None) -> Iterator[str]:
    """What a penalty did that its reader may not expect, in sentences."""
    if penalty is None:
        return
    weakest, strongest = penalty.over_sets or (penalty.strength, penalty.strength)
    where = "" if weakest == strongest else " in at least one set of the values filled in"
    if penalty.chosen and strongest is not None and strongest >= STRONGEST:
        yield (
            f"{id}: the strongest ridge that is tried, {STRONGEST:,.0f}, predicts those left out best{where}: these "
            "terms tell next to nothing of people who were not in the fit. Every prediction is near the mean."
        )
    if penalty.chosen and weakest is not None and weakest <= WEAKEST:
        yield (
            f"{id}: the weakest ridge that is tried, {WEAKEST:g}, predicts those left out best{where}. Is a term made "
            "from the outcome, so that it tells everybody apart? If not, and no coefficient runs off without it, the "
            "fit needs no penalty."
        )
    mean, seen = penalty.mean_predicted, penalty.observed
    if mean is not None and seen is not None and abs(mean - seen) > NOTICEABLE * min(seen, 1 - seen):
        pulled = ". Firth’s penalty pulls predictions towards one half" if penalty.kind is Penalty.FIRTH else ""
        yield (
            f"{id}: the mean of the predictions is {100 * mean:.1f}\u202f%, and {100 * seen:.1f}\u202f% had the event"
            f"{pulled} (Puhr et al., Stat Med 2017;36:2302). The risks are off by so much on average: gather more "
            "events, or see whether a ridge, whose mean is that of the people, does as well."
        )


def ease_separation(found: Sequence[Screened], table: EstimateTable) -> tuple[Screened, ...]:
    """What a screening found; where the fit has a penalty separation does not forbid it, and is a caution."""
    if isinstance(table.penalty, UnsetType):
        return tuple(found)
    return tuple(
        replace(one, gravity=Grade.CAUTION, code=Screen.HELD_BY_PENALTY)
        if one.gravity is Grade.STOP and one.code in SEPARATION
        else one
        for one in found
    )


def _stated(table: EstimateTable) -> ChosenStrength | None:
    if isinstance(table.ridge_strength, UnsetType):
        return None
    return ChosenStrength(table.ridge_strength, np.nan, False)


def _is_chosen(table: EstimateTable) -> bool:
    return isinstance(table.ridge_strength, UnsetType)


def _say_ridge(found: ChosenStrength, table: EstimateTable) -> str:
    how = "chosen by 10-fold cross-validation" if _is_chosen(table) else "as stated"
    return f"{_of_strength(found.strength)} ({how})"


def _of_strength(strength: float) -> str:
    return f"with a ridge of strength {strength:.6g}"


def say_strengths(remark: str, first: PenaltyFigures | None, pooled: PenaltyFigures | None) -> str:
    """What is said of the fit to the first set, said of all sets: the ridge has the strengths that they had."""
    if first is None or first.strength is None or pooled is None or pooled.over_sets is None:
        return remark
    low, high = pooled.over_sets
    return remark.replace(_of_strength(first.strength), f"with a ridge of strength {low:.3g} to {high:.3g}")
