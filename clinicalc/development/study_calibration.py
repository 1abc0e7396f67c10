"""The apparent calibration of a fit: what it predicts for the very people it was made from, and what happened.

A model looks better in these people than in others. Strata of one fit are looked at together, as they were fitted.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.model import ModelEquation
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, SurvivalOutcome
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import FitKind
from clinicalc.development.fit_ground import ROUND_TIMES
from clinicalc.development.study_people import FitPeople, equations_of
from clinicalc.development.study_strata import FitPlan
from clinicalc.estimation.calibrated import Calibration
from clinicalc.estimation.calibration import Watched, calibrate_risks, calibrate_times

Array = NDArray[np.float64]
Rows = NDArray[np.bool_]

_RESAMPLES, _MOST = 200, 10_000
"""Samples for the band of a curve of a binary outcome, for so many people at most: with more it is narrow, and slow."""


@dataclass(frozen=True, slots=True, eq=False)
class FitCalibration:
    """One fit at one horizon: its id, its equations that have the horizon, the span (None where it states none).

    `calibration` pools the people of these equations. With `censored` other events come first in some of them and are
    taken as censored there, as the fit takes them: the risk observed is that of a world without them.
    """

    fit: str
    equations: tuple[str, ...]
    span: Span | None
    calibration: Calibration
    censored: bool = False


def calibrate_fit(fitted: FittedStudy) -> tuple[FitCalibration, ...]:
    """The apparent calibration of every fit of the study at each of its horizons, in their order.

    Where values were filled in, each person's risk is that of the mean linear predictor over the sets.
    """
    return tuple(found for plan in fitted.study.fits for found in _calibrate_plan(fitted, plan))


def _calibrate_plan(fitted: FittedStudy, plan: FitPlan) -> Iterator[FitCalibration]:
    equations = equations_of(fitted.model, plan)
    people = fitted.people[plan.id]
    strata = people.stratum[people.complete]
    for span in dict.fromkeys(line.span for equation in equations for line in equation.lines):
        concerned = [place for place, each in enumerate(equations) if any(line.span == span for line in each.lines)]
        rows = np.isin(strata, concerned)
        ids = tuple(equations[place].content.id for place in concerned)
        eta = np.full(len(strata), np.nan)
        time = None
        for place in concerned:
            lp0, time = _baseline(fitted, equations[place], span)
            eta[strata == place] = lp0
        predictions = _risks(FitKind(plan.table.kind), (eta + fitted.predictors[plan.id])[rows])
        calibration = _calibrate(fitted, plan, people, rows, predictions, time)
        yield FitCalibration(plan.id, ids, span, calibration, censored=_censors(fitted, plan, people))


def _baseline(fitted: FittedStudy, equation: ModelEquation, span: Span | None) -> tuple[float, float | None]:
    """The linear predictor with every term at zero at a horizon, and its time in the unit of the times."""
    baselines = fitted.fits[equation.content.id].baselines
    place = next(place for place, line in enumerate(equation.lines) if line.span == span)
    baseline = baselines[place] if len(baselines) > 1 else baselines[0]
    return baseline.lp0, baseline.time


def _risks(kind: FitKind, eta: Array) -> Array:
    with np.errstate(over="ignore", under="ignore"):
        p = 1.0 / (1.0 + np.exp(-eta)) if kind.link == "logit" else -np.expm1(-np.exp(eta))
    return np.asarray(p, dtype=np.float64)


def _calibrate(
    fitted: FittedStudy, plan: FitPlan, people: FitPeople, rows: Rows, predictions: Array, time: float | None
) -> Calibration:
    outcome, used = fitted.cohort.outcome, people.used[rows]
    if isinstance(outcome, BinaryOutcome):
        return calibrate_risks(predictions, outcome.y[used], resamples=_RESAMPLES if len(used) <= _MOST else 0)
    assert time is not None  # a fit to times has a time at each horizon
    return calibrate_times(predictions, _watched(outcome, plan, used), time)


def _watched(outcome: SurvivalOutcome, plan: FitPlan, used: NDArray[np.int64]) -> Watched:
    """The people with times as the fit rounds them, other events as the fit takes them."""
    table = plan.table
    decimals = ROUND_TIMES if isinstance(table.round_times, UnsetType) else table.round_times
    status = outcome.status[used]
    if table.kind == "cox":
        status = np.where(status == 1, 1.0, 0.0)
    entry = None if outcome.entry is None else np.round(outcome.entry[used], decimals)
    if entry is not None and not (entry > 0).any():
        entry = None
    return Watched(np.round(outcome.times[used], decimals), status, entry)


def _censors(fitted: FittedStudy, plan: FitPlan, people: FitPeople) -> bool:
    outcome = fitted.cohort.outcome
    if isinstance(outcome, BinaryOutcome) or plan.table.kind != "cox":
        return False
    return bool((outcome.status[people.used] == 2).any())
