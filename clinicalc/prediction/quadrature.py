"""Points and weights for an average over a standard normal variable.

Where the averaged function is smooth: Gauss-Hermite. Where it jumps or bends at known places: Gauss-Legendre on panels
that end there, so that no point's weight lies across a jump. (Davis & Rabinowitz, Methods of Numerical Integration,
2nd ed. 1984, sections 2.7 and 3.6.)
"""

from functools import cache
from math import pi, sqrt

import numpy as np

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Array

POINTS = (64, 32, 14)
"""Gauss-Hermite points a variable, where one, two or three are averaged over together."""

MOST_VARIABLES = len(POINTS)

_PANEL_POINTS = (16, 10, 8)
_PANEL_ENDS = (-8.5, -3.5, 0.0, 3.5, 8.5)
"""Ends of the panels where nothing bends; 2e-17 of the normal distribution lies outside."""

FARTHEST = 6.5
"""A bend so many standard deviations out does not count: 8e-11 of the distribution lies beyond it."""

_LIGHTEST = 1e-26
"""Points with less weight than this are left out: they lie so far out that nothing there is a value."""


@cache
def hermite_rule(points: int) -> tuple[Column, Column]:
    """Points z and weights of the standard normal distribution, each of shape (n,); the weights add up to 1."""
    # imported when first asked for: most patients have every value measured
    from numpy.polynomial.hermite_e import hermegauss

    z, weights = hermegauss(points)
    weights = weights / weights.sum()
    heavy = weights > _LIGHTEST
    return np.ascontiguousarray(z[heavy]), np.ascontiguousarray(weights[heavy])


@cache
def _legendre_rule(points: int) -> tuple[Column, Column]:
    from numpy.polynomial.legendre import leggauss

    x, weights = leggauss(points)
    return np.ascontiguousarray(x), np.ascontiguousarray(weights)


def normal_points(bends: Array, variables: int = 1) -> tuple[Array, Array]:
    """Points and weights for each row of `bends`, shape (rows, k): both of shape (rows, m).

    A row of `bends` holds the standardised values at which the averaged function jumps or bends in that row; those that
    lie far out count for nothing. `variables`: over how many variables one averages in all.
    """
    near = np.isfinite(bends) & (np.abs(bends) < FARTHEST)
    if not near.any():
        z, weights = hermite_rule(POINTS[variables - 1])
        return np.tile(z, (bends.shape[0], 1)), np.tile(weights, (bends.shape[0], 1))
    counting = near.any(axis=0)
    bends, near = bends[:, counting], near[:, counting]
    ends = np.tile(np.array(_PANEL_ENDS), (bends.shape[0], 1))
    ends = np.sort(np.concatenate([ends, np.where(near, bends, 0.0)], axis=1), axis=1)
    x, weights = _legendre_rule(_PANEL_POINTS[variables - 1])
    half = (ends[:, 1:] - ends[:, :-1])[:, :, np.newaxis] / 2.0
    middle = (ends[:, 1:] + ends[:, :-1])[:, :, np.newaxis] / 2.0
    z = (middle + half * x).reshape(bends.shape[0], -1)
    dense = np.exp(-z * z / 2.0) / sqrt(2.0 * pi) * (half * weights).reshape(z.shape)
    return z, dense
