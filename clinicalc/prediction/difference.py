"""The difference of two probabilities that rest on the same coefficients, with its band.

The band is that of g(eta2) - g(eta1) under the joint imprecision of both linear predictors: what the two share, such as
the baseline, largely cancels, so it is not the distance of the two bands.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.joint import join_rows
from clinicalc.prediction.line import Adjustment, Draws, Line, Precision
from clinicalc.prediction.links import difference_between
from clinicalc.prediction.normal_difference import difference_quantiles
from clinicalc.prediction.predict import drawn_predictors, linear_predictor

_TOLD_APART = 1e-14
"""The quantiles are found to about so much."""


@dataclass(frozen=True, slots=True)
class Difference:
    """g of the second row less g of the first, and the ends of its band (None: no band)."""

    value: float
    lower: float | None
    upper: float | None


def difference(
    line: Line, design: Sequence[Column], *, adjustment: Adjustment | None = None, level: float = 0.95
) -> Difference:
    """The difference between two rows of design columns, one a term in file order, each of shape (2,).

    Exactly nought, with both ends, between two rows that are the same. No band where `predict` would give none. The
    band always holds the difference: where that is the largest that the coefficients allow, as near one half, the
    quantiles would leave it out.
    """
    eta = linear_predictor(line, design)
    moved = eta if adjustment is None else adjustment.intercept + adjustment.slope * eta
    value = float(difference_between(line.link, moved[:1], moved[1:])[0])
    shares = 0.5 - level / 2.0, 0.5 + level / 2.0
    if line.band is None or (isinstance(line.band, Draws) and not line.band.enough_for(level)):
        return Difference(value, None, None)
    if all(column[0] == column[1] for column in design):
        return Difference(0.0, 0.0, 0.0)
    if isinstance(line.band, Precision):
        joint = join_rows(line, line.band, design, adjustment)
        lower, upper = difference_quantiles(line.link, joint, shares)
    else:
        lower, upper = _drawn_limits(line.band, line, design, adjustment, value, shares)
    return Difference(value, _reach(lower, value, min), _reach(upper, value, max))


def _reach(end: float, value: float, outer: Callable[[float, float], float]) -> float:
    """The end, moved onto the value where it lies on the wrong side of it, or too near to be told from it."""
    return value if abs(end - value) <= _TOLD_APART else outer(end, value)


def _drawn_limits(
    band: Draws,
    line: Line,
    design: Sequence[Column],
    adjustment: Adjustment | None,
    value: float,
    shares: tuple[float, float],
) -> tuple[float, float]:
    """Percentiles (type 7) of the difference taken row by row over the draws.

    An adjustment's own imprecision is joined as `predict` joins it: as distances from the median of the draws, square
    root of the sum of squares on each side (Zou & Donner, Stat Med 2008;27:1693), its own distances being those of its
    quantiles from the estimate.
    """
    drawn = drawn_predictors(band, line, design)
    if adjustment is not None:
        drawn = adjustment.intercept + adjustment.slope * drawn
    apart = difference_between(line.link, drawn[0], drawn[1])
    lower, middle, upper = (float(end) for end in np.quantile(apart, [shares[0], 0.5, shares[1]]))
    if adjustment is None or adjustment.covariance is None:
        return lower, upper
    alone = join_rows(line, None, design, adjustment)
    below, above = (end - value for end in difference_quantiles(line.link, alone, shares))
    low = middle - float(np.sqrt((middle - lower) * (middle - lower) + below * below))
    high = middle + float(np.sqrt((upper - middle) * (upper - middle) + above * above))
    return max(low, -1.0), min(high, 1.0)
