"""Completing the square: the two figures `variance` and `centre` of var = variance + (x - centre)'V(x - centre).

From an intercept's row, from running sums of a survival fit, or from standard errors printed for known people.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


SMALLEST = 1e-9
"""Of the largest singular value: below it rows of people do not tell two terms apart."""


@dataclass(frozen=True, slots=True, eq=False)
class Square:
    """`variance` a and `centre` c, in the units of x; `misfit` is the largest relative residual of what was printed."""

    variance: float
    centre: Array
    misfit: float = 0.0


def square_of_intercept(covariance: Array) -> Square:
    """From the covariance of (intercept, slopes), intercept first; the intercept holds at x = 0.

    c = -V^-1 v0 and a = v00 - v0'V^-1 v0 (Hosmer & Lemeshow, Applied Logistic Regression: variance of the logit).
    """
    v0 = (covariance[0, 1:] + covariance[1:, 0]) / 2
    solution = _solve(covariance[1:, 1:], v0)
    return Square(float(covariance[0, 0] - (v0 * solution).sum()), -solution)


def square_of_sums(hazard: float, squares: float, moments: Array) -> Square:
    """From the sums H, A and q: a = A/H^2 and c = q/H (Tsiatis, Ann Stat 1981;9:93; Link, Biometrics 1984;40:601)."""
    return Square(squares / (hazard * hazard), moments / hazard)


def square_of_people(x: Array, variances: Array, covariance: Array) -> Square | None:
    """From the variances of the linear predictor printed for several people; None where they do not fix the answer.

    x of shape (m, p), m > p; with d = x - x[0] and e = c - x[0] the variances are linear in k = a + e'Ve and h = Ve:
    var - d'Vd = k - 2 h'd. The m - p - 1 people beyond those needed show in `misfit`.
    """
    d = x - x[0]
    known = np.array([(row[:, None] * row[None, :] * covariance).sum() for row in d])
    if find_tied(x):
        return None
    spread = np.abs(d).max(axis=0)
    design = np.column_stack([np.ones(len(d)), -2.0 * d / spread])
    answer, _, _, _ = np.linalg.lstsq(design, variances - known, rcond=None)
    h = answer[1:] / spread
    e = _solve(covariance, h)
    residuals = variances - known - (design * answer).sum(axis=1)
    return Square(float(answer[0] - (e * h).sum()), x[0] + e, float(np.abs(residuals / variances).max()))


def find_tied(x: Array) -> tuple[int, ...]:
    """The columns, by number, in which the people do not differ independently of the other columns."""
    d = x - x[0]
    spread = np.abs(d).max(axis=0)
    if (spread == 0).any():
        return _places(spread == 0)
    _, sizes, directions = np.linalg.svd(d / spread)
    lost = directions[int((sizes > SMALLEST * sizes[0]).sum()) :]
    return _places(np.abs(lost).max(axis=0, initial=0.0) > 1e-6)


def _places(mask: NDArray[np.bool_]) -> tuple[int, ...]:
    return tuple(int(place) for place in np.flatnonzero(mask))


def _solve(covariance: Array, right: Array) -> Array:
    """V^-1 right, on the correlation scale, where the units of the terms cost no digits."""
    sd = np.sqrt(np.diag(covariance))
    scaled = covariance / sd[:, None] / sd[None, :]
    return np.asarray(np.linalg.solve((scaled + scaled.T) / 2, right / sd) / sd, dtype=np.float64)
