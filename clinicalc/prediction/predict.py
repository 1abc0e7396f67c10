"""Probability and band for any number of patients, in the column form that gives the same bits for one and a million.

Sums run over the terms in file order, one column at a time; a matrix product would round differently with the number
of rows. The band is made on the link scale and transformed at its ends: for the logit link Hosmer, Lemeshow &
Sturdivant, Applied Logistic Regression, 3rd ed. 2013, section 1.4; for the cumulative hazard the log-log limits of
Link, Biometrics 1984;40:601.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from statistics import NormalDist

import numpy as np

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Draws, Line, Precision
from clinicalc.prediction.links import complement, probability

BLOCK = 8192
"""Rows worked on at a time: small enough that the running columns stay in the processor's cache."""

FEW = 64
"""Rows up to which the parts of a variance are worked out together."""

DRAWN_FIGURES = 1 << 17
"""Linear predictors worked out at a time for a band of draws, patients times draws: 1 MB."""


@dataclass(frozen=True, slots=True, eq=False)
class Prediction:
    """For each patient, shape (n,): the linear predictor, g of it, 1 - g, and the band's ends (None: no band)."""

    eta: Column
    probability: Column
    complement: Column
    lower: Column | None
    upper: Column | None
    eta_lower: Column | None
    eta_upper: Column | None


def predict(
    line: Line,
    design: Sequence[Column],
    *,
    adjustment: Adjustment | None = None,
    level: float = 0.95,
    band: bool = True,
) -> Prediction:
    """The prediction from design columns, one a term in file order, each of shape (n,).

    A line without a band, or with too few draws for the level, gives none; `band=False` spares the work where nobody
    asks for it. With an adjustment that carries no covariance the band is that of the model alone, moved and stretched.
    """
    n = design[0].size
    basis = line.band if band and not (isinstance(line.band, Draws) and not line.band.enough_for(level)) else None
    rows = 2 if basis is None else 6
    out = np.empty((rows, n))
    quantile = NormalDist().inv_cdf(0.5 + level / 2.0)
    for start in range(0, n, BLOCK):
        here = slice(start, min(start + BLOCK, n))
        columns = [column[here] for column in design]
        eta = linear_predictor(line, columns)
        moved = eta if adjustment is None else adjustment.intercept + adjustment.slope * eta
        ends: tuple[Column, Column] | None = None
        if isinstance(basis, Precision):
            half = quantile * standard_deviation(basis, columns, eta, adjustment)
            ends = moved - half, moved + half
        elif basis is not None:
            ends = _draw_limits(basis, line, columns, eta, adjustment, level, quantile)
        out[0, here] = moved
        out[1, here] = probability(line.link, moved)
        if ends is not None:
            out[2, here], out[3, here] = ends
            out[4, here], out[5, here] = (probability(line.link, end) for end in ends)
    return Prediction(
        eta=out[0],
        probability=out[1],
        complement=complement(line.link, out[0]),
        eta_lower=out[2] if basis is not None else None,
        eta_upper=out[3] if basis is not None else None,
        lower=out[4] if basis is not None else None,
        upper=out[5] if basis is not None else None,
    )


def linear_predictor(line: Line, columns: Sequence[Column]) -> Column:
    """lp0 + x'b before any adjustment, shape (n,), added term by term in file order."""
    eta = np.full(columns[0].size, line.lp0)
    product = np.empty_like(eta)
    for coefficient, column in zip(line.coefficients, columns, strict=True):
        np.multiply(column, coefficient, out=product)
        np.add(eta, product, out=eta)
    return eta


def standard_deviation(
    band: Precision, columns: Sequence[Column], eta: Column, adjustment: Adjustment | None
) -> Column:
    """That of the (adjusted) linear predictor under the imprecision of the coefficients, shape (n,).

    `eta` is the linear predictor before any adjustment.
    """
    deviation: Column = np.sqrt(_variance(band, columns, eta, adjustment))
    return deviation


def _variance(band: Precision, columns: Sequence[Column], eta: Column, adjustment: Adjustment | None) -> Column:
    """Variance of the (adjusted) linear predictor, shape (n,): a + sum over k of (sum over j >= k of L_jk d_j)^2."""
    if eta.size <= FEW:
        total = _model_variance_of_few(band, columns, eta.size)
    else:
        total = _model_variance(band, columns, eta.size)
    if adjustment is None:
        return total
    return adjustment.slope * adjustment.slope * total + adjustment_variance(adjustment, eta)


def _model_variance(band: Precision, columns: Sequence[Column], n: int) -> Column:
    """That of the linear predictor before any adjustment, shape (n,)."""
    size = len(band.estimated)
    away = [columns[term] - centre for term, centre in zip(band.estimated, band.centre, strict=True)]
    total = np.full(n, band.variance)
    product, part = np.empty_like(total), np.empty_like(total)
    for k in range(size):
        np.multiply(away[k], band.root[k, k], out=part)
        for j in range(k + 1, size):
            np.multiply(away[j], band.root[j, k], out=product)
            np.add(part, product, out=part)
        np.multiply(part, part, out=part)
        np.add(total, part, out=total)
    return total


def _model_variance_of_few(band: Precision, columns: Sequence[Column], n: int) -> Column:
    """The same to the bit, shape (n,): every sum in the same order, all parts at once.

    With few rows a call costs more than its figures; with many, the parts would leave the cache.
    """
    parts = np.zeros((len(band.estimated), n))
    for j, (term, centre) in enumerate(zip(band.estimated, band.centre, strict=True)):
        parts[: j + 1] += band.root[j, : j + 1, np.newaxis] * (columns[term] - centre)
    parts *= parts
    total = np.full(n, band.variance)
    for part in parts:
        total += part
    return total


def adjustment_variance(adjustment: Adjustment, eta: Column) -> Column:
    """[1, eta] C [1, eta]' with C the covariance of intercept and slope; nought where it is not known.

    The square is completed, so that rounding cannot make it negative.
    """
    if adjustment.covariance is None:
        return np.zeros(eta.size)
    v00, v01, v11 = adjustment.covariance
    if v11 == 0.0:
        return np.full(eta.size, v00)
    # the root first: a tiny v11 makes a distance too large to be squared alone
    away = float(np.sqrt(v11)) * (eta + v01 / v11)
    return max(v00 - v01 * v01 / v11, 0.0) + away * away


def _draw_limits(
    band: Draws,
    line: Line,
    columns: Sequence[Column],
    eta: Column,
    adjustment: Adjustment | None,
    level: float,
    quantile: float,
) -> tuple[Column, Column]:
    """Percentiles (type 7) of the linear predictor over the draws, each of shape (n,).

    An adjustment's own imprecision is independent of the draws; the two are joined as distances from the middle, square
    root of the sum of squares on each side (Zou & Donner, Stat Med 2008;27:1693). The middle is the median of the
    draws: the percentiles lie on its two sides always, and need not lie on those of the estimate.
    """
    shares = [0.5 - level / 2.0, 0.5, 0.5 + level / 2.0]
    lower, middle, upper = (np.empty_like(eta) for _ in shares)
    together = max(1, DRAWN_FIGURES // band.baselines.size)
    for start in range(0, eta.size, together):
        here = slice(start, start + together)
        drawn = drawn_predictors(band, line, [column[here] for column in columns])
        lower[here], middle[here], upper[here] = np.quantile(drawn, shares, axis=1)
    if adjustment is None:
        return lower, upper
    moved = adjustment.intercept + adjustment.slope * middle
    extra = quantile * quantile * adjustment_variance(adjustment, eta)
    below = adjustment.slope * (middle - lower)
    above = adjustment.slope * (upper - middle)
    return moved - np.sqrt(below * below + extra), moved + np.sqrt(above * above + extra)


def drawn_predictors(band: Draws, line: Line, columns: Sequence[Column]) -> Column:
    """The linear predictor of each patient under each draw, shape (n, K); fixed terms keep the file's coefficient."""
    drawn = np.tile(band.baselines, (columns[0].size, 1))
    for k, term in enumerate(band.estimated):
        drawn += band.coefficients[k] * columns[term][:, np.newaxis]
    for term in range(len(columns)):
        if term not in band.estimated:
            drawn += (line.coefficients[term] * columns[term])[:, np.newaxis]
    return drawn
