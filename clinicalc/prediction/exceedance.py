"""How surely a model's probability lies above a threshold, as far as its coefficients are known.

Phi((eta - g^-1(T)) / sd), exact on the link scale. It speaks of the coefficients, not of anybody's event.
"""

from collections.abc import Sequence
from statistics import NormalDist

import numpy as np

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Draws, Line
from clinicalc.prediction.links import Link, link_of
from clinicalc.prediction.predict import (
    adjustment_variance,
    drawn_predictors,
    linear_predictor,
    standard_deviation,
)


def place_on_link(link: Link, threshold: float) -> float:
    """g^-1 of a probability; minus infinity for nought, infinity for one."""
    return float(link_of(link, np.array([threshold]), np.array([1.0 - threshold]))[0])


def confidences_above(
    line: Line, design: Sequence[Column], etas: Sequence[float], *, adjustment: Adjustment | None = None
) -> tuple[float, ...] | None:
    """The confidence, 0 to 1, that the (adjusted) linear predictor is at or above each of `etas`; None without a band.

    `design` holds one row, each column of shape (1,). Over draws it is the share of draws at or above; an adjustment's
    own imprecision, which is independent of them, is laid round every draw as a normal.
    """
    plain = linear_predictor(line, design)
    intercept, slope = (0.0, 1.0) if adjustment is None else (adjustment.intercept, adjustment.slope)
    if line.band is None:
        return None
    if isinstance(line.band, Draws):
        middles = intercept + slope * drawn_predictors(line.band, line, design)[0]
        sd = 0.0 if adjustment is None else float(np.sqrt(adjustment_variance(adjustment, plain)[0]))
    else:
        middles = intercept + slope * plain
        sd = float(standard_deviation(line.band, design, plain, adjustment)[0])
    return tuple(_share_above(middles, sd, eta) for eta in etas)


def _share_above(middles: Column, sd: float, eta: float) -> float:
    """The mean over the middles of Phi((middle - eta) / sd); with an sd of nought, the share at or above."""
    if sd == 0.0:
        return float(np.mean(middles >= eta))
    cdf = NormalDist().cdf
    return sum(cdf(away) for away in ((middles - eta) / sd).tolist()) / middles.size
