"""Fits of the same equation to several imputed sets made one fit, band and all, by Rubin's rules."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.development.fit import Fit, FitBaseline
from clinicalc.development.fitted import rows_of
from clinicalc.development.squares import square_of_intercept
from clinicalc.estimation.rubin import Pooled, pool

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class PooledFit:
    """The fit, and its slopes as they were pooled; `baselines` are (lp0, slopes) pooled together at each horizon."""

    fit: Fit
    slopes: Pooled
    baselines: tuple[Pooled, ...]


def pool_fits(fits: Sequence[Fit], complete_degrees: float) -> PooledFit:
    """One fit from those to the sets, two at least, of which each knows its precision.

    What is pooled is the linear predictor: at each horizon the estimates (lp0, b), whose covariance in one set is
    [[a + c'Vc, -(Vc)'], [-Vc, V]] with its variance a, centre c and slopes' V (see Fit). The completed square of the
    total covariance gives a and c back, so that var = a + (x - c)'V(x - c) is the total variance of each person's
    linear predictor. `complete_degrees` are those of the fit if nothing were missing.
    """
    b = np.array([fit.coefficients for fit in fits])
    v = np.array([fit.covariance for fit in fits])
    slopes = pool(b, v, complete_degrees)
    baselines = []
    pooled = []
    for place, first in enumerate(fits[0].baselines):
        each = [fit.baselines[place] for fit in fits]
        estimates = np.column_stack([[one.lp0 for one in each], b])
        joint = np.array([_joint(one, covariance) for one, covariance in zip(each, v, strict=True)])
        both = pool(estimates, joint, complete_degrees)
        square = square_of_intercept(both.total)
        centre = tuple(square.centre.tolist())
        baselines.append(FitBaseline(first.time, float(both.estimates[0]), square.variance, centre))
        pooled.append(both)
    fit = replace(
        fits[0],
        coefficients=tuple(slopes.estimates.tolist()),
        covariance=rows_of(slopes.total),
        baselines=tuple(baselines),
    )
    return PooledFit(fit, slopes, tuple(pooled))


def _joint(baseline: FitBaseline, v: Array) -> Array:
    """The covariance of (lp0, b) of one set, (p + 1, p + 1)."""
    assert baseline.variance is not None  # a fit made here knows its precision
    assert baseline.centre is not None
    c = np.array(baseline.centre)
    across = (v * c[None, :]).sum(axis=1)
    joint = np.empty((len(c) + 1, len(c) + 1))
    joint[0, 0] = baseline.variance + (c * across).sum()
    joint[0, 1:] = joint[1:, 0] = -across
    joint[1:, 1:] = v
    return joint
