"""A logistic fit in a few lines, so that a listing of data can be followed to a coefficient file."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class LogisticFit:
    """Coefficients, intercept first, with the inverse information and the deviance."""

    coefficients: Array
    covariance: Array
    deviance: float


def fit_logistic(x: Array, y: Array) -> LogisticFit:
    """Maximum likelihood by Newton's method; x of shape (n, p) without a column of ones, y of 0 and 1."""
    design = np.column_stack([np.ones(len(y)), x])
    b = np.zeros(design.shape[1])
    for _ in range(25):
        p = 1 / (1 + np.exp(-design @ b))
        information = design.T @ (design * (p * (1 - p))[:, None])
        step = np.linalg.solve(information, design.T @ (y - p))
        b = b + step
        if np.abs(step).max() < 1e-13:
            break
    eta = design @ b
    deviance = -2 * float(np.sum(y * eta - np.logaddexp(0, eta)))
    return LogisticFit(b, np.linalg.inv(information), deviance)
