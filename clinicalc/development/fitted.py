"""A fit from its figures as arrays: with an intercept, or with the sums of a hazard."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.schema import Matrix
from clinicalc.development.fit import Fit, FitBaseline, FitKind
from clinicalc.development.squares import square_of_intercept

Array = NDArray[np.float64]

AT_ZERO = "The intercept is taken to hold with every term, as computed, at 0."


def fit_with_intercept(
    kind: FitKind,
    names: Sequence[str],
    coefficients: Sequence[float],
    covariance: Array | None,
    *,
    reference: Sequence[float] | None = None,
    robust: bool = False,
) -> Fit:
    """A binomial fit; the intercept comes first in `coefficients` and `covariance`, and not in `names`.

    `reference` is the value of each term at which the intercept holds, such as the centres of a fit on centred columns;
    None stands for 0 everywhere, and a remark says so. The baseline is moved to zero: lp0 = b0 - x_ref'b.
    """
    b = np.array(coefficients[1:], dtype=np.float64)
    at = np.zeros(len(b)) if reference is None else np.array(reference, dtype=np.float64)
    lp0 = float(coefficients[0]) - float((at * b).sum())
    baseline = FitBaseline(None, lp0)
    if covariance is not None:
        square = square_of_intercept(covariance)
        baseline = FitBaseline(None, lp0, square.variance, tuple((at + square.centre).tolist()))
    return Fit(
        kind=kind,
        names=tuple(names),
        coefficients=tuple(b.tolist()),
        covariance=None if covariance is None else rows_of(covariance[1:, 1:]),
        robust=robust,
        baselines=(baseline,),
        remarks=(AT_ZERO,) if reference is None else (),
    )


def rows_of(values: Array) -> Matrix:
    """An array as the rows of a file, of shape (p, p); mirrored entries are made the same."""
    even = (values + values.T) / 2
    return tuple(tuple(float(entry) for entry in row) for row in even)
