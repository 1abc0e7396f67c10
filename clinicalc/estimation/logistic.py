"""A binomial model with logit or complementary log-log link, by statsmodels, with its score proven by own sums.

Logit where there are no weights and the link is the logit, GLM (binomial, tol 1e-12) else; own Newton steps go on from
there to rounding. Columns are centred and scaled inside. The covariance is the inverse of the expected information at
the maximum, summed anew: GLM's own is one step behind. Robust covariances: White, Econometrica 1980;48:817, and for
clusters Liang & Zeger (1986), with the factors of R's sandwich package (statsmodels leaves HC1's out).
"""

import warnings
from dataclasses import dataclass
from enum import StrEnum
from typing import Any

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.binomial import Link, find_bends, find_slopes, sum_loglik
from clinicalc.estimation.clusters import make_sandwich, sum_clusters
from clinicalc.estimation.columns import (
    are_alike,
    find_separated,
    has_inverse,
    invert,
    refuse_flat,
    scale_columns,
    straighten,
    to_own_scale,
    turn_back,
)
from clinicalc.estimation.faults import FitFault, refuse_fit

__all__ = ["Link", "LogisticFit", "Sandwich", "fit_logistic", "robust_covariance"]

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

MOST_STEPS = 50
MOST_HALVINGS = 20
TOLERANCE = 1e-16
"""Squared distance to the maximum, in standard errors, at which the last step is taken."""
MOST_ROWS_OF_GLM = 200_000
"""GLM keeps a dozen copies of its design, and takes more than a gigabyte for a million people."""
SCORE_SLACK = 1e-8
"""Largest score of a scaled column that may be left, for each person."""


class Sandwich(StrEnum):
    """How a robust covariance is corrected for a small number: HC0 not at all, HC1 by n / (n - k).

    With clusters HC1 takes G / (G - 1) times (n - 1) / (n - k). n counts people, k the intercept too.
    """

    HC0 = "hc0"
    HC1 = "hc1"


@dataclass(frozen=True, slots=True, eq=False)
class LogisticFit:
    """Coefficients (p + 1,), intercept first (at 0 of every column), and their model covariance; columns as given.

    `people` and `events` are sums of the weights where there are any. `score_max` is the largest score of a scaled
    column that was left, for each person: proven below 1e-8.
    """

    link: Link
    coefficients: Array
    covariance: Array
    loglik_null: float
    loglik: float
    score_max: float
    iterations: int
    people: float
    events: float


def fit_logistic(
    y: Array, x: Array, *, link: Link = Link.LOGIT, weights: Array | None = None, offset: Array | None = None
) -> LogisticFit:
    """The fit of y (0 or 1, (n,)) on x (n, p), without a column for the intercept; `weights` are frequencies.

    `offset` (n,) is a part of the linear predictor that is not estimated. Raises FitRefused (code of FitFault, places
    of the columns of x).
    """
    counts = np.ones(len(y)) if weights is None else np.asarray(weights, dtype=np.float64)
    away: Array | float = 0.0 if offset is None else offset
    people, events = check_answers(y, counts, away)
    columns = scale_columns(x)
    if len(columns.centre) > min((y == 1).sum(), (y == 0).sum()):
        raise refuse_fit(FitFault.MORE_COLUMNS_THAN_EVENTS)
    design = np.column_stack([np.ones(len(y)), columns.z])
    start = begin(design, y, link, counts, away)
    null = sum_information(design, find_slopes(design, start, y, link, away)[1] * counts)
    refuse_flat(without_intercept(null), people)
    b, iterations = _estimate(design, y, link, weights, start, offset)
    b, steps, converged = _climb(design, b, y, link, counts, away)
    gradient, curvature = find_slopes(design, b, y, link, away)
    information = sum_information(design, curvature * counts)
    wild = find_separated(b[1:], without_intercept(information), without_intercept(null))
    if wild:
        raise refuse_fit(FitFault.SEPARATED, wild)
    worst = float(np.abs((design * (gradient * counts)[:, None]).sum(axis=0)).max()) / people
    if not (converged and worst <= SCORE_SLACK):
        raise refuse_fit(FitFault.NOT_CONVERGED)
    covariance = invert(information)
    if are_alike(information):
        q, triangle = straighten(design)
        covariance = turn_back(invert(sum_information(q, curvature * counts)), triangle)
    turn = to_own_scale(columns)
    return LogisticFit(
        link=link,
        coefficients=turn @ b,
        covariance=turn @ covariance @ turn.T,
        loglik_null=sum_loglik(design, start, y, link, counts, away),
        loglik=sum_loglik(design, b, y, link, counts, away),
        score_max=worst,
        iterations=iterations + steps,
        people=people,
        events=events,
    )


def robust_covariance(
    y: Array,
    x: Array,
    fit: LogisticFit,
    *,
    weights: Array | None = None,
    cluster: Codes | None = None,
    sandwich: Sandwich = Sandwich.HC1,
    offset: Array | None = None,
) -> Array:
    """The sandwich covariance (p + 1, p + 1), intercept first; refuses fewer than two clusters.

    A frequency weight is so many people; they are of one cluster where there are clusters. Weights and offset are those
    of the fit.
    """
    counts = np.ones(len(y)) if weights is None else np.asarray(weights, dtype=np.float64)
    design = np.column_stack([np.ones(len(y)), x])
    gradient, _ = find_slopes(design, fit.coefficients, y, fit.link, 0.0 if offset is None else offset)
    people, size = float(counts.sum()), design.shape[1]
    factor = 1.0
    if cluster is None:
        rows = design * (gradient * np.sqrt(counts))[:, None]
        factor = people / (people - size) if sandwich is Sandwich.HC1 else 1.0
    else:
        rows = sum_clusters(design * (gradient * counts)[:, None], cluster)
        if sandwich is Sandwich.HC1:
            factor = len(rows) / (len(rows) - 1) * (people - 1) / (people - size)
    return factor * make_sandwich(fit.covariance, rows)


def check_answers(y: Array, counts: Array, away: Array | float) -> tuple[float, float]:
    """People and events; raises FitRefused for what no fit can be made from."""
    if not len(y):
        raise refuse_fit(FitFault.NO_PEOPLE)
    if not (np.isfinite(y).all() and np.isfinite(counts).all() and np.isfinite(away).all()):
        raise refuse_fit(FitFault.NOT_FINITE)
    if not np.isin(y, (0.0, 1.0)).all():
        raise refuse_fit(FitFault.OUTCOME_NOT_BINARY)
    if (counts <= 0).any():
        raise refuse_fit(FitFault.WEIGHT_NOT_POSITIVE)
    people, events = float(counts.sum()), float((counts * y).sum())
    if not events:
        raise refuse_fit(FitFault.NO_EVENTS)
    if (y == 1).all():
        raise refuse_fit(FitFault.NO_OTHERS)
    return people, events


def begin(design: Array, y: Array, link: Link, counts: Array, away: Array | float) -> Array:
    """The coefficients with the intercept alone that is best beside the offset."""
    start = np.zeros(design.shape[1])
    share = float((counts * y).sum() / counts.sum())
    start[0] = np.log(share / (1 - share)) if link is Link.LOGIT else np.log(-np.log1p(-share))
    if not np.isscalar(away):
        start[:1], _, _ = _climb(design[:, :1], start[:1] - np.mean(away), y, link, counts, away)
    return start


def _estimate(
    design: Array, y: Array, link: Link, weights: Array | None, start: Array, offset: Array | None
) -> tuple[Array, int]:
    """The coefficients by statsmodels and its iterations; `start` where it does not come to rest or is not asked."""
    from statsmodels.discrete.discrete_model import Logit
    from statsmodels.genmod.families import Binomial
    from statsmodels.genmod.families.links import CLogLog
    from statsmodels.genmod.generalized_linear_model import GLM

    results: Any
    plain = link is Link.LOGIT and weights is None and offset is None
    if not plain and len(y) > MOST_ROWS_OF_GLM:
        return start, 0
    # what it warns of is judged here by figures: separation, no convergence
    with warnings.catch_warnings(), np.errstate(all="ignore"):
        warnings.simplefilter("ignore")
        try:
            if plain:
                results = Logit(y, design).fit(start_params=start, maxiter=100, disp=0, skip_hessian=True)
                steps, rests = results.mle_retvals["iterations"], results.mle_retvals["converged"]
            else:
                family = Binomial() if link is Link.LOGIT else Binomial(link=CLogLog())
                model = GLM(y, design, family=family, freq_weights=weights, offset=offset)
                results = model.fit(start, tol=1e-12, maxiter=200)
                steps, rests = results.fit_history["iteration"], results.converged
        except (np.linalg.LinAlgError, ValueError):
            return start, 0
    if not (rests and np.isfinite(results.params).all()):
        return start, 0
    # GLM may say that it rests far beyond the maximum, where no likelihood is left
    counts, away = np.ones(len(y)) if weights is None else weights, 0.0 if offset is None else offset
    found, begun = (sum_loglik(design, b, y, link, counts, away) for b in (results.params, start))
    return (results.params, int(steps)) if found >= begun else (start, 0)


def _climb(
    design: Array, b: Array, y: Array, link: Link, counts: Array, away: Array | float
) -> tuple[Array, int, bool]:
    """The maximum by own Newton steps from b, how many there were, and whether they came to rest.

    GLM stops some 1e-9 before the maximum; where statsmodels gave nothing these steps are the fit.
    """
    loglik = sum_loglik(design, b, y, link, counts, away)
    for steps in range(MOST_STEPS):
        slope = design.T @ (find_slopes(design, b, y, link, away)[0] * counts)
        information = sum_information(design, find_bends(design, b, y, link, away) * counts)
        if not has_inverse(information):
            return b, steps, False
        step = np.linalg.solve(information, slope)
        distance = float((step * slope).sum())
        for _ in range(MOST_HALVINGS):
            after = sum_loglik(design, b + step, y, link, counts, away)
            if np.isfinite(after) and after >= loglik - 1e-12 * abs(loglik):
                break
            step = step / 2
        b, loglik = b + step, after
        if distance <= TOLERANCE:
            return b, steps, True
    return b, MOST_STEPS, False


def sum_information(design: Array, curvature: Array) -> Array:
    """The sum over people of curvature times x x', (k, k)."""
    return np.asarray(design.T @ (design * curvature[:, None]), dtype=np.float64)


def without_intercept(information: Array) -> Array:
    """The information on the slopes once the intercept is estimated too."""
    cross = information[0, 1:]
    return np.asarray(information[1:, 1:] - np.outer(cross, cross) / information[0, 0], dtype=np.float64)
