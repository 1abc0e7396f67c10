"""Logistic and Cox fits with a ridge penalty: slopes are drawn towards 0 by their squares, the intercept is not.

The objective is the log likelihood less strength / 2 times the sum of (slope x standard deviation)^2, with n - 1 below
the variance: Hoerl & Kennard, Technometrics 1970;12:55; le Cessie & van Houwelingen, Appl Stat 1992;41:191; for Cox
Verweij & van Houwelingen, Stat Med 1994;13:2427. With H the information with the penalty and I that without, the
covariance is H^-1 I H^-1 (Gray, J Am Stat Assoc 1992;87:942): how the estimate varies from sample to sample, without
what shrinkage moves it. Effective degrees of freedom are the trace of I H^-1 over the slopes.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.binomial import Link, find_slopes, sum_loglik
from clinicalc.estimation.columns import ScaledColumns, has_inverse, invert, scale_columns, to_own_scale, to_scaled
from clinicalc.estimation.cox import CoxFit, State, Stratum, check_times, look, split_strata
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.logistic import (
    LogisticFit,
    begin,
    check_answers,
    sum_information,
)

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

MOST_STEPS = 100
MOST_HALVINGS = 30
TOLERANCE = 1e-22
"""Squared distance to the maximum, in standard errors, at which the last step is taken."""


@dataclass(frozen=True, slots=True, eq=False)
class RidgeRisks:
    """`fit` has Gray's covariance and the log likelihoods without the penalty; `inverse` is H^-1, as a robust
    covariance needs it; `degrees` are those of the slopes."""

    fit: LogisticFit
    inverse: Array
    degrees: float


@dataclass(frozen=True, slots=True, eq=False)
class RidgeHazards:
    """The same of a Cox fit."""

    fit: CoxFit
    inverse: Array
    degrees: float


def fit_ridge_risks(
    y: Array,
    x: Array,
    strength: float,
    *,
    weights: Array | None = None,
    offset: Array | None = None,
    start: Array | None = None,
) -> RidgeRisks:
    """The fit of y (0 or 1, (n,)) on x (n, p), without a column for the intercept; `strength` above 0.

    `weights` are counts of people; `start` (p + 1,) is where to begin, intercept first, on the columns as given. Raises
    FitRefused (code of FitFault, places of the columns of x).
    """
    counts = np.ones(len(y)) if weights is None else np.asarray(weights, dtype=np.float64)
    away: Array | float = 0.0 if offset is None else offset
    people, events = check_answers(y, counts, away)
    columns = scale_columns(x)
    design = np.column_stack([np.ones(len(y)), columns.z])
    null = begin(design, y, Link.LOGIT, counts, away)
    penalty = np.append(0.0, strength * spread_squared(columns, counts))
    b, steps = climb_risks(design, null if start is None else to_scaled(columns, start), y, counts, away, penalty)
    gradient, curvature = find_slopes(design, b, y, Link.LOGIT, away)
    information = sum_information(design, curvature * counts)
    inverse = invert(information + np.diag(penalty))
    turn = to_own_scale(columns)
    left = design.T @ (gradient * counts) - penalty * b
    fit = LogisticFit(
        link=Link.LOGIT,
        coefficients=turn @ b,
        covariance=_mirror(turn @ inverse @ information @ inverse @ turn.T),
        loglik_null=sum_loglik(design, null, y, Link.LOGIT, counts, away),
        loglik=sum_loglik(design, b, y, Link.LOGIT, counts, away),
        score_max=float(np.abs(left).max()) / people,
        iterations=steps,
        people=people,
        events=events,
    )
    return RidgeRisks(fit, _mirror(turn @ inverse @ turn.T), len(b) - 1 - float((np.diag(inverse) * penalty).sum()))


def fit_ridge_hazards(
    cohort: Cohort, strength: float, *, ties: Ties = Ties.EFRON, strata: Codes | None = None, start: Array | None = None
) -> RidgeHazards:
    """The Cox fit; `strength` above 0, `start` (p,) where to begin. Raises FitRefused."""
    events = check_times(cohort)
    columns = scale_columns(cohort.x)
    parts = split_strata(cohort, columns, ties, strata)
    counts = np.ones(len(cohort.times)) if cohort.weights is None else cohort.weights
    penalty = strength * spread_squared(columns, counts)
    null = look(parts, np.zeros(len(penalty)))
    found, steps = climb_hazards(parts, null if start is None else look(parts, start * columns.spread), penalty)
    inverse = invert(found.information + np.diag(penalty))
    own = np.outer(columns.spread, columns.spread)
    fit = CoxFit(
        coefficients=found.b / columns.spread,
        covariance=_mirror(inverse @ found.information @ inverse) / own,
        loglik_null=null.loglik,
        loglik=found.loglik,
        score_max=float(np.abs(found.score - penalty * found.b).max()) / len(cohort.times),
        iterations=steps,
        people=len(cohort.times),
        events=events,
    )
    return RidgeHazards(fit, inverse / own, len(penalty) - float((np.diag(inverse) * penalty).sum()))


def spread_squared(columns: ScaledColumns, counts: Array) -> Array:
    """The variance of each scaled column, with n - 1 below, (p,); counts (n,) of people."""
    people = float(counts.sum())
    found = np.empty(len(columns.centre))
    for place in range(len(found)):
        z = columns.z[:, place]
        away = z - float((counts * z).sum()) / people
        found[place] = float((counts * away * away).sum()) / max(people - 1, 1.0)
    return found


def climb_risks(
    design: Array,
    b: Array,
    y: Array,
    counts: Array,
    away: Array | float,
    penalty: Array,
    tolerance: float = TOLERANCE,
) -> tuple[Array, int]:
    """The largest penalised likelihood of scaled columns by Newton steps, and how many; `penalty` (k,), 0 for none."""

    def judge(b: Array) -> float:
        return sum_loglik(design, b, y, Link.LOGIT, counts, away) - float((penalty * b * b).sum()) / 2

    best = judge(b)
    for steps in range(1, MOST_STEPS + 1):
        gradient, curvature = find_slopes(design, b, y, Link.LOGIT, away)
        slope = design.T @ (gradient * counts) - penalty * b
        information = sum_information(design, curvature * counts) + np.diag(penalty)
        if not has_inverse(information):
            break
        step = np.linalg.solve(information, slope)
        distance = float((step * slope).sum())
        for _ in range(MOST_HALVINGS):
            after = judge(b + step)
            if np.isfinite(after) and after >= best - 1e-12 * abs(best):
                break
            step = step / 2
        b, best = b + step, after
        if distance <= tolerance:
            return b, steps
    raise refuse_fit(FitFault.NOT_CONVERGED)


def climb_hazards(
    parts: list[Stratum], state: State, penalty: Array, tolerance: float = TOLERANCE
) -> tuple[State, int]:
    """The same of the partial likelihood, from `state`; `penalty` (p,) of the scaled columns."""
    best = _judge(state, penalty)
    for steps in range(1, MOST_STEPS + 1):
        slope = state.score - penalty * state.b
        information = state.information + np.diag(penalty)
        if not has_inverse(information):
            break
        step = np.linalg.solve(information, slope)
        distance = float((step * slope).sum())
        for _ in range(MOST_HALVINGS):
            after = look(parts, state.b + step)
            if np.isfinite(after.loglik) and _judge(after, penalty) >= best - 1e-12 * abs(best):
                break
            step = step / 2
        state, best = after, _judge(after, penalty)
        if distance <= tolerance:
            return state, steps
    raise refuse_fit(FitFault.NOT_CONVERGED)


def _judge(state: State, penalty: Array) -> float:
    return state.loglik - float((penalty * state.b * state.b).sum()) / 2


def _mirror(matrix: Array) -> Array:
    """Symmetric to the last bit."""
    return np.asarray((matrix + matrix.T) / 2, dtype=np.float64)
