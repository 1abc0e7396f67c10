"""The columns of a fit, centred and scaled, and which of them are at fault when it cannot be made."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.faults import FitFault, refuse_fit

Array = NDArray[np.float64]

STEEPEST = 8.0
"""Largest |b| sd(x), of what the other columns leave of x: beyond it the fit separates events from others."""
WIDEST = 10.0
"""Largest standard error of a coefficient, in those at b = 0."""
FLATTEST = 1e-11
"""Smallest eigenvalue of the information at b = 0 as a correlation: below it columns follow from one another."""

ALIKE = 1e-4
"""Smallest eigenvalue of a correlation below which its inverse loses too many digits: a spline of many knots."""


@dataclass(frozen=True, slots=True, eq=False)
class ScaledColumns:
    """z = (x - centre) / spread, (n, p), column by column in memory."""

    z: Array
    centre: Array
    spread: Array


def scale_columns(x: Array) -> ScaledColumns:
    """Raises FitRefused for no column, a value that is not finite, and a column of one value."""
    if x.shape[1] == 0:
        raise refuse_fit(FitFault.NO_COLUMNS)
    z = np.array(x, dtype=np.float64, order="F")
    centre, spread, faulty, constant = np.empty(x.shape[1]), np.empty(x.shape[1]), [], []
    for place in range(x.shape[1]):
        column = z[:, place]
        if not np.isfinite(column).all():
            faulty.append(place)
            continue
        centre[place] = column.mean()
        size = np.abs(column).max()
        column -= centre[place]
        reach = np.abs(column).max()
        # what is left of a column of one value is the rounding of its mean
        if reach <= 1e-13 * size:
            constant.append(place)
            continue
        column /= reach
        root = np.sqrt((column * column).mean())
        column /= root
        spread[place] = reach * root
    if faulty:
        raise refuse_fit(FitFault.NOT_FINITE, tuple(faulty))
    if constant:
        raise refuse_fit(FitFault.CONSTANT, tuple(constant))
    return ScaledColumns(z, centre, spread)


def are_alike(information: Array) -> bool:
    """Whether the inverse of the information, (p, p), on columns as they are loses digits that a clinician sees."""
    size = np.sqrt(np.diag(information))
    return bool(np.linalg.eigvalsh(information / np.outer(size, size))[0] < ALIKE)


def straighten(z: Array) -> tuple[Array, Array]:
    """Columns q (n, p) at right angles, of mean square 1, and the triangle (p, p) with z = q triangle.

    By modified Gram-Schmidt (Björck, BIT 1967;7:1-21), column by column. On q the information is far from flat, and the
    condition of z enters the covariance once; it enters the inverse of the information on z squared.
    """
    q, triangle = np.array(z, order="F"), np.zeros((z.shape[1], z.shape[1]))
    for place in range(z.shape[1]):
        triangle[place, place] = np.sqrt((q[:, place] * q[:, place]).mean())
        q[:, place] /= triangle[place, place]
        for later in range(place + 1, z.shape[1]):
            triangle[place, later] = (q[:, place] * q[:, later]).mean()
            q[:, later] -= triangle[place, later] * q[:, place]
    return q, triangle


def turn_back(covariance: Array, triangle: Array) -> Array:
    """The covariance of the coefficients of z, (p, p), from that of q, mirrored entries the same."""
    half = np.linalg.solve(triangle, np.linalg.cholesky(covariance))
    filled = half @ half.T
    return np.asarray((filled + filled.T) / 2, dtype=np.float64)


def refuse_flat(information: Array, people: float) -> None:
    """Raises FitRefused where the information at b = 0, (p, p), leaves a column or a sum of columns undetermined."""
    flat = np.flatnonzero(~(np.diag(information) > 1e-12 * people))
    if len(flat):
        raise refuse_fit(FitFault.CONSTANT, tuple(flat.tolist()))
    size = np.sqrt(np.diag(information))
    values, vectors = np.linalg.eigh(information / np.outer(size, size))
    if values[0] <= FLATTEST:
        # the part of each column in the directions without information
        part = np.sqrt((vectors[:, values <= FLATTEST] ** 2).sum(axis=1))
        raise refuse_fit(FitFault.COLLINEAR, tuple(np.flatnonzero(part > 0.01).tolist()))


def find_separated(scaled: Array, information: Array, null: Array) -> tuple[int, ...]:
    """The columns whose coefficient has no limit; b of scaled columns, and the information at b and at 0, (p, p).

    A coefficient is out of bounds where it is steeper than STEEPEST or its standard error wider than WIDEST times that
    at b = 0. Steepness is judged by what the other columns leave of a column: the terms of a spline and a square have
    large coefficients of opposite sign. Of those out of bounds the ones that went far are named, not what they pulled.
    """
    deviations = np.sqrt(np.diag(invert(null)))
    # where nothing is left of the information in some direction, a trace of that at 0 shows which columns it holds
    trace = 0.0 if has_inverse(information) else 1e-8
    wide = np.sqrt(np.abs(np.diag(invert(information + trace * null))))
    steep = np.abs(scaled) / (np.sqrt(np.diag(null)) * deviations)
    wild = (steep > STEEPEST) | (wide > WIDEST * deviations)
    far = steep >= 0.05 * steep[wild].max(initial=0.0)
    return tuple(np.flatnonzero(wild & far).tolist())


def has_inverse(information: Array) -> bool:
    """Whether a symmetric matrix is finite, positive definite, and can be solved."""
    if not np.isfinite(information).all():
        return False
    try:
        np.linalg.cholesky(information)
        # at the end of a separation one factorisation may still pass where another meets a nought
        np.linalg.inv(information)
    except np.linalg.LinAlgError:
        return False
    return True


def invert(information: Array) -> Array:
    """The inverse of a symmetric matrix, with mirrored entries the same."""
    inverse = np.linalg.inv(information)
    return np.asarray((inverse + inverse.T) / 2, dtype=np.float64)


def add_columns(x: Array, b: Array) -> Array:
    """The sum of the columns of x (n, p), each times its b (p,): (n,); the same bits with any number of threads."""
    total = np.zeros(len(x))
    for place, factor in enumerate(b):
        total += factor * x[:, place]
    return total


def sum_columns(x: Array, weights: Array) -> Array:
    """For each column of x (n, p) the sum over people of weight times value, shape (p,)."""
    return np.array([float((weights * x[:, place]).sum()) for place in range(x.shape[1])])


def sum_products(x: Array, weights: Array) -> Array:
    """For each pair of columns of x (n, p) the sum over people of weight times both, shape (p, p)."""
    size = x.shape[1]
    found = np.empty((size, size))
    for place in range(size):
        weighed = weights * x[:, place]
        for other in range(place + 1):
            found[place, other] = found[other, place] = float((weighed * x[:, other]).sum())
    return found


def to_own_scale(columns: ScaledColumns) -> Array:
    """The matrix that takes coefficients of scaled columns to those of the columns given, intercept first."""
    turn = np.diag(np.append(1.0, 1 / columns.spread))
    turn[0, 1:] = -columns.centre / columns.spread
    return turn


def to_scaled(columns: ScaledColumns, coefficients: Array) -> Array:
    """Coefficients (p + 1,) of the columns given as those of the scaled ones, intercept first."""
    slopes = coefficients[1:]
    return np.append(coefficients[0] + (columns.centre * slopes).sum(), columns.spread * slopes)
