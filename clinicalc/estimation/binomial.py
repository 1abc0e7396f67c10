"""The log likelihood of a binary outcome under the logit and the complementary log-log link, and its slopes by eta.

p = 1/(1 + exp(-eta)), or 1 - exp(-exp(eta)): McCullagh & Nelder, Generalized Linear Models (1989), chapter 4.
`design` is (n, k) with the column of the intercept, `b` (k,), `y` 0 or 1, `away` an offset (n,) or 0.
"""

from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

HIGHEST = 700.0
"""exp of more is near the largest number there is."""


class Link(StrEnum):
    """The scale on which the model is linear."""

    LOGIT = "logit"
    CLOGLOG = "cloglog"


def find_slopes(design: Array, b: Array, y: Array, link: Link, away: Array | float = 0.0) -> tuple[Array, Array]:
    """For each person the derivative of the log likelihood by eta, and its expected curvature."""
    eta = np.minimum(design @ b + away, HIGHEST)
    with np.errstate(over="ignore", under="ignore"):
        if link is Link.LOGIT:
            p, rest = 1 / (1 + np.exp(-eta)), 1 / (1 + np.exp(eta))
            return np.where(y == 1, rest, -p), p * rest
        hazard = np.exp(eta)
        # for small p the two exponentials cancel, expm1 does not; far above, the event adds nothing
        odds = 1 / np.expm1(np.minimum(hazard, HIGHEST))
        return hazard * np.where(y == 1, odds, -1.0), hazard * hazard * odds


def find_bends(design: Array, b: Array, y: Array, link: Link, away: Array | float = 0.0) -> Array:
    """For each person the observed curvature of the log likelihood by eta, never below 0."""
    expected = find_slopes(design, b, y, link, away)[1]
    if link is Link.LOGIT:
        return expected
    hazard = np.exp(np.minimum(design @ b + away, HIGHEST))
    odds = 1 / np.expm1(np.minimum(hazard, HIGHEST))
    return np.where(y == 1, np.maximum(hazard * odds * (hazard * (1 + odds) - 1), 0.0), hazard)


def sum_loglik(design: Array, b: Array, y: Array, link: Link, counts: Array, away: Array | float = 0.0) -> float:
    """The log likelihood, each person counted so many times."""
    eta = np.minimum(design @ b + away, HIGHEST)
    if link is Link.LOGIT:
        return float(-(counts * np.logaddexp(0.0, np.where(y == 1, -eta, eta))).sum())
    hazard = np.exp(eta)
    return float((counts * np.where(y == 1, np.log(-np.expm1(-hazard)), -hazard)).sum())
