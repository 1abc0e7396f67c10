"""The calibration slope of a study's fit in the very people it was made from.

Maximum likelihood makes it 1: along the estimated terms the likelihood is flat. A penalty takes that away, and the
slope is worked out: the coefficient of the linear predictor, fitted to the same people without a penalty.
"""

import numpy as np
from msgspec import UnsetType

from clinicalc.cohort.checked import BinaryOutcome, SurvivalOutcome
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit_ground import ROUND_TIMES
from clinicalc.development.stated_fit import StatedSlope
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_tables import EstimateTable
from clinicalc.errors import FitRefused
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.people_at_risk import Cohort, Ties, round_times


def find_slope(fitted: FittedStudy, figures: FitFigures) -> StatedSlope | None:
    """The slope, None where it is not known: with values filled in, with fixed terms, or where it has no end."""
    equation = next(one for one in fitted.model.equations if one.content.id == figures.equations[0])
    # with fixed terms in it the sum has a slope of its own; with filled-in values each set has
    if figures.imputed is not None or any(term.fixed for term in equation.terms):
        return None
    if figures.penalty is None:
        return StatedSlope(1.0, is_exact=True)
    try:
        return StatedSlope(_refit(fitted, figures), is_exact=False)
    except (
        FitRefused
    ):  # the predictor tells everybody apart, as it may where a penalty was needed, or tells nobody apart
        return None


def _refit(fitted: FittedStudy, figures: FitFigures) -> float:
    outcome, people = fitted.cohort.outcome, fitted.people[figures.id]
    x = np.asfortranarray(fitted.predictors[figures.id].reshape(-1, 1))
    if isinstance(outcome, BinaryOutcome):
        return float(fit_logistic(outcome.y[people.used], x).coefficients[1])
    table = next(plan.table for plan in fitted.study.fits if plan.id == figures.id)
    strata = people.stratum[people.complete] if len(figures.equations) > 1 else None
    ties = Ties.EFRON if isinstance(table.ties, UnsetType) else Ties(table.ties)
    cohort = _watch(outcome, people.used, x, table)
    return float(fit_cox(cohort, ties=ties, strata=strata).coefficients[0])


def _watch(outcome: SurvivalOutcome, rows: np.ndarray, x: np.ndarray, table: EstimateTable) -> Cohort:
    entry = None if outcome.entry is None else outcome.entry[rows]
    if entry is not None and not (entry > 0).any():
        entry = None
    cohort = Cohort(outcome.times[rows], (outcome.status[rows] == 1).astype(np.float64), x, entry)
    return round_times(cohort, ROUND_TIMES if isinstance(table.round_times, UnsetType) else table.round_times)
