"""A logistic fit with Firth's penalty, which has finite coefficients where the likelihood has no maximum.

Firth, Biometrika 1993;80:27: the log likelihood plus half the logarithm of the determinant of the information (prior of
Jeffreys), whose score is X'(y - p + h (1/2 - p)) with h the diagonal of the hat matrix; Heinze & Schemper, Stat Med
2002;21:2409, for separated data. The covariance is the inverse of the information (without the penalty) at the
estimate, as in R's brglm2. Columns are centred and scaled inside, which changes nothing: the penalty is the same.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.binomial import Link, find_slopes, sum_loglik
from clinicalc.estimation.columns import has_inverse, invert, refuse_flat, scale_columns, to_own_scale, to_scaled
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.logistic import (
    LogisticFit,
    begin,
    check_answers,
    sum_information,
    without_intercept,
)

Array = NDArray[np.float64]

MOST_STEPS = 500
MOST_HALVINGS = 30
TOLERANCE = 1e-25
"""Squared length of the last step, in standard errors; these steps shorten by a factor, they do not square."""
LONGEST = 5.0
"""Longest step of a scaled coefficient."""


@dataclass(frozen=True, slots=True, eq=False)
class FirthFit:
    """`fit` has the log likelihoods without the penalty; its `score_max` is that of the penalised score.

    `penalised` is the log likelihood with the penalty, of the columns as given.
    """

    fit: LogisticFit
    penalised: float


def fit_firth(
    y: Array, x: Array, *, weights: Array | None = None, offset: Array | None = None, start: Array | None = None
) -> FirthFit:
    """The fit of y (0 or 1, (n,)) on x (n, p), without a column for the intercept.

    `weights` are counts of people; `start` (p + 1,) is where to begin, intercept first, on the columns as given.
    Raises FitRefused (code of FitFault, places of the columns of x).
    """
    counts = np.ones(len(y)) if weights is None else np.asarray(weights, dtype=np.float64)
    away: Array | float = 0.0 if offset is None else offset
    people, events = check_answers(y, counts, away)
    columns = scale_columns(x)
    if len(columns.centre) > min((y == 1).sum(), (y == 0).sum()):
        raise refuse_fit(FitFault.MORE_COLUMNS_THAN_EVENTS)
    design = np.column_stack([np.ones(len(y)), columns.z])
    null = begin(design, y, Link.LOGIT, counts, away)
    refuse_flat(
        without_intercept(sum_information(design, find_slopes(design, null, y, Link.LOGIT, away)[1] * counts)), people
    )
    b, steps = _climb(design, null if start is None else to_scaled(columns, start), y, counts, away)
    score, information = _look(design, b, y, counts, away)
    worst = float(np.abs(score).max()) / people
    turn = to_own_scale(columns)
    loglik = sum_loglik(design, b, y, Link.LOGIT, counts, away)
    fit = LogisticFit(
        link=Link.LOGIT,
        coefficients=turn @ b,
        covariance=turn @ invert(information) @ turn.T,
        loglik_null=sum_loglik(design, null, y, Link.LOGIT, counts, away),
        loglik=loglik,
        score_max=worst,
        iterations=steps,
        people=people,
        events=events,
    )
    # the determinant on the columns given is that on scaled ones times the square of every spread
    return FirthFit(fit, loglik + _half_log_determinant(information) + float(np.log(columns.spread).sum()))


def _climb(design: Array, b: Array, y: Array, counts: Array, away: Array | float) -> tuple[Array, int]:
    """The largest penalised likelihood and the steps to it; raises FitRefused where they do not come to rest."""
    best, last = _sum_penalised(design, b, y, counts, away), np.zeros(len(b))
    for steps in range(1, MOST_STEPS + 1):
        score, information = _look(design, b, y, counts, away)
        if not has_inverse(information):
            break
        step: Array = np.asarray(np.linalg.solve(information, score), dtype=np.float64)
        distance = float((step * score).sum())
        step /= max(1.0, float(np.abs(step).max()) / LONGEST)
        # the information leaves out how the penalty bends: where steps go to and fro, half of one meets the maximum
        if float((step * last).sum()) < 0:
            step /= 2
        last = step
        for _ in range(MOST_HALVINGS):
            after = _sum_penalised(design, b + step, y, counts, away)
            if after >= best - 1e-12 * abs(best):
                break
            step = step / 2
        b, best = b + step, after
        if distance <= TOLERANCE:
            return b, steps
    raise refuse_fit(FitFault.NOT_CONVERGED)


def _look(design: Array, b: Array, y: Array, counts: Array, away: Array | float) -> tuple[Array, Array]:
    """The penalised score (k,) and the information (k, k); a person counted often has the hat value of each alone."""
    slope, bend = find_slopes(design, b, y, Link.LOGIT, away)
    information = sum_information(design, bend * counts)
    if not has_inverse(information):
        return np.full(len(b), np.nan), information
    hat = bend * ((design @ np.linalg.inv(information)) * design).sum(axis=1)
    # slope is y - p for either answer, so that 1/2 - p follows from it without cancellation
    half = slope + np.where(y == 1, -0.5, 0.5)
    return np.asarray(design.T @ ((slope + hat * half) * counts), dtype=np.float64), information


def _sum_penalised(design: Array, b: Array, y: Array, counts: Array, away: Array | float) -> float:
    """The penalised log likelihood of scaled columns; -inf where the information has no inverse."""
    information = sum_information(design, find_slopes(design, b, y, Link.LOGIT, away)[1] * counts)
    if not has_inverse(information):
        return -np.inf
    return sum_loglik(design, b, y, Link.LOGIT, counts, away) + _half_log_determinant(information)


def _half_log_determinant(information: Array) -> float:
    return float(np.log(np.diag(np.linalg.cholesky(information))).sum())
