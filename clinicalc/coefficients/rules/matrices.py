"""Covariance and correlation matrices: square, symmetric, positive definite."""

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.schema import Matrix

SYMMETRY = 1e-8
"""Largest difference of two mirrored entries, in units of the two standard deviations."""


def judge_matrix(matrix: Matrix, size: int, rows: str) -> str:
    """What is wrong with a covariance of `size` rows, which stand for `rows` ("estimated terms"); "" if nothing is."""
    if len(matrix) != size:
        return f"the matrix has {len(matrix)} rows, and there are {size} {rows}."
    for index, row in enumerate(matrix):
        if len(row) != size:
            return f"row {index + 1} of the matrix has {len(row)} entries, and there are {size} {rows}."
    return _judge_numbers(np.array(matrix, dtype=np.float64))


def _judge_numbers(values: NDArray[np.float64]) -> str:
    if not np.isfinite(values).all():
        return "the matrix holds a number that is not finite."
    diagonal = np.diag(values)
    if (diagonal <= 0).any():
        place = int(np.argmax(diagonal <= 0)) + 1
        return f"the matrix is not positive definite: entry {place} of its diagonal, a variance, is not above 0."
    deviations = np.sqrt(diagonal)
    with np.errstate(all="ignore"):
        scaled = values / deviations[:, None] / deviations[None, :]
    if not np.isfinite(scaled).all():
        return "the matrix is not positive definite: an entry is far too large beside the two variances it belongs to."
    skew = np.abs(scaled - scaled.T)
    if skew.max() > SYMMETRY:
        row, column = (int(place) + 1 for place in np.unravel_index(int(skew.argmax()), skew.shape))
        return f"the matrix is not symmetric: row {row}, column {column} differs from its mirrored entry."
    smallest = float(np.linalg.eigvalsh((scaled + scaled.T) / 2)[0])
    if smallest <= len(values) * np.finfo(np.float64).eps:
        return (
            "the matrix is not positive definite: its smallest eigenvalue on the correlation scale is "
            f"{quoted(round(smallest, 12))}. Was it rounded too much, or are two terms the same?"
        )
    return ""
