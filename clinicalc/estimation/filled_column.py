"""One column filled in from the others, once: drawn from what its imputation model leaves open.

Numbers by predictive mean matching: the coefficients of a linear model are drawn from their posterior, and each person
who lacks the value is given that of a donor whose prediction, by the estimates, is near to his, by the draw (Little, J
Bus Econ Stat 1988;6:287; ten donors: Morris, White & Royston, BMC Med Res Methodol 2014;14:75). Only values that
somebody has are given. Answers of yes or no by a logistic model with drawn coefficients, kept finite by a few people of
small weight that are added (White, Daniel & Royston, Comput Stat Data Anal 2010;54:2267).
"""

from dataclasses import dataclass

import numpy as np
from numpy.random import Generator
from numpy.typing import NDArray

from clinicalc.estimation.binomial import HIGHEST

Array = NDArray[np.float64]

DONORS = 10
_LOST = 1e-10
"""Share of the largest direction of scaled columns below which a direction is no direction of its own."""
_STEPS = 30
_AT_REST = 1e-8
"""Largest step of a scaled coefficient at which a draw may be made about it."""


@dataclass(frozen=True, slots=True, eq=False)
class Halves:
    """The other columns of those who have the value, and of those who lack it, on one scale: (n, p), (m, p)."""

    known: Array
    lacking: Array


def split_scaled(design: Array, lacks: NDArray[np.bool_]) -> Halves:
    """The columns (n + m, p) about the means, and in the standard deviations, of those who have the value."""
    known = design[~lacks]
    mean, sd = known.mean(axis=0), known.std(axis=0)
    sd = np.where(sd > 0, sd, 1.0)
    return Halves((known - mean) / sd, (design[lacks] - mean) / sd)


def draw_numbers(values: Array, halves: Halves, rng: Generator) -> Array:
    """Values for those who lack them, (m,), from those who have them, `values` (n,), n above p + 1."""
    z, mean = halves.known, values.mean()
    sizes, turned = np.linalg.eigh(z.T @ z)
    kept = sizes > _LOST * max(float(sizes.max(initial=0.0)), 1.0)
    sizes, turned = sizes[kept], turned[:, kept]
    along = z @ turned
    estimate = (along.T @ (values - mean)) / sizes
    fitted = mean + along @ estimate
    left = values - fitted
    sigma = np.sqrt((left * left).sum() / rng.chisquare(len(values) - len(sizes) - 1))
    drawn = estimate + sigma * rng.standard_normal(len(sizes)) / np.sqrt(sizes)
    level = mean + sigma * rng.standard_normal() / np.sqrt(len(values))
    return values[_choose_donors(fitted, level + (halves.lacking @ turned) @ drawn, rng)]


def draw_answers(values: Array, halves: Halves, start: Array, rng: Generator) -> tuple[Array, Array]:
    """Answers, 1 or 0, for those who lack them, (m,), and the estimates to start from the next time, (p + 1,)."""
    x, y, weights = _with_few_more(values, halves.known)
    b, information = _climb(x, y, weights, start)
    if not np.isfinite(b).all():
        b, information = _climb(x, y, weights, np.zeros_like(start))
    sizes, turned = np.linalg.eigh(information)
    drawn = b + turned @ (rng.standard_normal(len(b)) / np.sqrt(sizes))
    p = _expected(drawn[0] + halves.lacking @ drawn[1:])
    return (rng.random(len(p)) < p).astype(np.float64), b


def _choose_donors(fitted: Array, wanted: Array, rng: Generator) -> NDArray[np.intp]:
    """For each wanted prediction the place of one of the nearest, each of them as likely as the others.

    Among equal predictions, as people have them who differ in nothing, chance says who is near.
    """
    count = len(fitted)
    donors = min(DONORS, count)
    shuffled = rng.permutation(count)
    order = shuffled[np.argsort(fitted[shuffled], kind="stable")]
    ranked = fitted[order]
    below = np.searchsorted(ranked, wanted, side="left")
    above = np.searchsorted(ranked, wanted, side="right")
    at = below + np.floor(rng.random(len(wanted)) * (above - below + 1)).astype(np.int64)
    first = np.clip(at - donors, 0, max(count - 2 * donors, 0))
    window = first[:, None] + np.arange(min(2 * donors, count))[None, :]
    away = np.abs(ranked[window] - wanted[:, None])
    # of those equally far, the ones next to the place that chance chose come first
    near = np.lexsort((np.abs(window - at[:, None]), away))[:, :donors]
    chosen = near[np.arange(len(wanted)), rng.integers(0, donors, len(wanted))]
    return np.asarray(order[first + chosen], dtype=np.intp)


def _with_few_more(values: Array, z: Array) -> tuple[Array, Array, Array]:
    """Columns with the intercept's before them, outcome and weights: the people, and four more for each column.

    They stand one standard deviation to either side of the mean of that column, with and without the answer, and weigh
    p + 1 all together.
    """
    n, p = z.shape
    more = np.zeros((4 * p, p))
    for place in range(p):
        more[4 * place : 4 * place + 4, place] = (1.0, 1.0, -1.0, -1.0)
    x = np.column_stack([np.ones(n + 4 * p), np.vstack([z, more])])
    y = np.concatenate([values, np.tile((0.0, 1.0), 2 * p)])
    weights = np.concatenate([np.ones(n), np.full(4 * p, (p + 1) / (4 * p) if p else 0.0)])
    return x, y, weights


def _climb(x: Array, y: Array, weights: Array, start: Array) -> tuple[Array, Array]:
    """The estimates and the information there; not finite where Newton's steps ran off."""
    b = start
    information = np.eye(len(b))
    for _ in range(_STEPS):
        p = _expected(x @ b)
        information = x.T @ (x * (weights * p * (1.0 - p))[:, None])
        try:
            step = np.linalg.solve(information, x.T @ (weights * (y - p)))
        except np.linalg.LinAlgError:
            return np.full_like(b, np.nan), information
        b = b + step
        if np.abs(step).max() < _AT_REST:
            return b, information
    return np.full_like(b, np.nan), information


def _expected(eta: Array) -> Array:
    return np.asarray(1.0 / (1.0 + np.exp(np.minimum(-eta, HIGHEST))), dtype=np.float64)
