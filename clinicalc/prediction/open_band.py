"""Average and limits of a prediction over weighted points that stand for what nobody measured.

The variance on the link scale is that of the coefficients, averaged over the points, and that of the linear predictor
among them: Var(eta) = E[a + (x - c)'V(x - c)] + Var(E[eta | x]), by the law of total variance. The first holds
tr(V S), S the covariance of the design terms among the points, without its being worked out.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from math import sqrt
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Draws, Line, Precision
from clinicalc.prediction.links import complement, probability
from clinicalc.prediction.mixture import Part, mixture_limits, weighted_quantiles
from clinicalc.prediction.predict import adjustment_variance, drawn_predictors, linear_predictor, standard_deviation

Ends = tuple[float, float]


@dataclass(frozen=True, slots=True, eq=False)
class AveragedPrediction:
    """What a prediction comes to over the points.

    `share` and `rest`: the averages of g(eta) and of 1 - g(eta). `parts`: for each combination of open answers, weight,
    mean and standard deviation of the (adjusted) linear predictor over the points alone, coefficients as they are.
    `shares` and `rests`: the averages within each combination. `limits`: on the link scale, of points and coefficients
    together; None where the line has no band.
    """

    share: float
    rest: float
    parts: tuple[Part, ...]
    shares: tuple[float, ...]
    rests: tuple[float, ...]
    limits: Ends | None

    @property
    def mean(self) -> float:
        """The expected linear predictor."""
        return sum(part.weight * part.mean for part in self.parts)

    @property
    def sd(self) -> float:
        """The standard deviation of the linear predictor over the points, coefficients as they are."""
        mean = self.mean
        return sqrt(
            sum(part.weight * (part.sd * part.sd + (part.mean - mean) * (part.mean - mean)) for part in self.parts)
        )


@dataclass(frozen=True, slots=True, eq=False)
class _Combination:
    """One set of open answers: the places of its points, their weights, which add up to 1, and what they come to."""

    places: NDArray[np.intp]
    weights: Column
    part: Part


def average_prediction(
    line: Line,
    design: Sequence[Column],
    weights: Column,
    combination: NDArray[np.intp],
    adjustment: Adjustment | None,
    level: float,
) -> AveragedPrediction | None:
    """The average over points with these design columns and weights, each of shape (K,); weights add up to 1.

    `combination` says for each point which set of open answers it belongs to. None where a point, or the band, has no
    finite result.
    """
    plain = linear_predictor(line, design)
    eta = plain if adjustment is None else adjustment.intercept + adjustment.slope * plain
    if not np.isfinite(eta).all():
        return None
    g, rest = probability(line.link, eta), complement(line.link, eta)
    sets = [_gather(np.flatnonzero(combination == k), weights, eta) for k in range(int(combination.max()) + 1)]
    limits = _limits(line, design, plain, sets, adjustment, level)
    if limits is not None and not np.isfinite(limits).all():
        return None
    return AveragedPrediction(
        share=float((weights * g).sum()),
        rest=float((weights * rest).sum()),
        parts=tuple(one.part for one in sets),
        shares=tuple(float((one.weights * g[one.places]).sum()) for one in sets),
        rests=tuple(float((one.weights * rest[one.places]).sum()) for one in sets),
        limits=limits,
    )


def average_columns(design: Sequence[Column], weights: Column) -> tuple[Column, ...]:
    """The expected design columns, each of shape (1,)."""
    return tuple(np.array([(weights * column).sum()]) for column in design)


def _gather(places: NDArray[np.intp], weights: Column, eta: Column) -> _Combination:
    share = float(weights[places].sum())
    own = weights[places] / share if share else weights[places]
    return _Combination(places, own, Part(share, *_moments(eta[places], own)))


def _moments(eta: Column, weights: Column) -> tuple[float, float]:
    mean = float((weights * eta).sum())
    away = eta - mean
    return mean, sqrt(float((weights * away * away).sum()))


def _limits(
    line: Line,
    design: Sequence[Column],
    plain: Column,
    sets: Sequence[_Combination],
    adjustment: Adjustment | None,
    level: float,
) -> Ends | None:
    if isinstance(line.band, Precision):
        deviation = standard_deviation(line.band, design, plain, adjustment)
        return mixture_limits([_with_variance(one, deviation[one.places]) for one in sets], level)
    if line.band is None or not line.band.enough_for(level):
        return None
    return _drawn_limits(line.band, line, design, plain, sets, adjustment, level)


def _with_variance(combination: _Combination, deviation: Column) -> Part:
    """The part with the coefficients' variance at its points, on average, added to that among them."""
    part, weights = combination.part, combination.weights
    return Part(part.weight, part.mean, sqrt(part.sd * part.sd + float((weights * deviation * deviation).sum())))


def _drawn_limits(
    band: Draws,
    line: Line,
    design: Sequence[Column],
    plain: Column,
    sets: Sequence[_Combination],
    adjustment: Adjustment | None,
    level: float,
) -> Ends:
    """Percentiles over draws and combinations of the expected predictor, row by row of the draws.

    The spread of the numbers within a combination, itself averaged over the draws, and an adjustment's imprecision are
    joined to them as distances from the middle (Zou & Donner, Stat Med 2008;27:1693), as for a measured patient.
    """
    centres = [average_columns([column[one.places] for column in design], one.weights) for one in sets]
    columns = [np.concatenate(column) for column in zip(*centres, strict=True)]
    drawn = drawn_predictors(band, line, columns)
    weights = np.repeat([one.part.weight for one in sets], drawn.shape[1])
    shares = (0.5 - level / 2.0, 0.5, 0.5 + level / 2.0)
    low, middle, high = (float(end) for end in weighted_quantiles(drawn.ravel(), weights, shares))
    extra, slope, intercept = 0.0, 1.0, 0.0
    for one in sets:
        if one.part.sd > 0.0:
            there = [column[one.places] for column in design]
            extra += one.part.weight * _drawn_variance(band, line, there, one.weights)
    if adjustment is not None:
        slope, intercept = adjustment.slope, adjustment.intercept
        of_adjustment = (
            one.part.weight * float((one.weights * adjustment_variance(adjustment, plain[one.places])).sum())
            for one in sets
        )
        extra = slope * slope * extra + sum(of_adjustment)
    quantile = NormalDist().inv_cdf(shares[2])
    extra *= quantile * quantile
    below, above = slope * (middle - low), slope * (high - middle)
    moved = intercept + slope * middle
    return moved - sqrt(below * below + extra), moved + sqrt(above * above + extra)


def _drawn_variance(band: Draws, line: Line, design: Sequence[Column], weights: Column) -> float:
    """b'Sb averaged over the draws: S the covariance of the design terms among the points, b a draw's coefficients."""
    rows = np.tile(np.array(line.coefficients)[:, np.newaxis], band.baselines.size)
    rows[list(band.estimated)] = band.coefficients
    moving = [(column - (weights * column).sum(), row) for column, row in zip(design, rows, strict=True)]
    moving = [(away, row) for away, row in moving if away.any()]
    return sum(float((weights * one * other).sum()) * float((b * c).mean()) for one, b in moving for other, c in moving)
