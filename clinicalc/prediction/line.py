"""One equation at one horizon: its linear predictor and how precisely that is known."""

from dataclasses import dataclass

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.coefficients.baselines import baseline
from clinicalc.coefficients.schema import DrawsBand, Equation, Horizon, NoBand, RecalibrationLine
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.prediction.links import Link

Array = NDArray[np.float64]

DRAWS_BEYOND = 10
"""So many draws at least must lie outside a band of the asked level."""


@dataclass(frozen=True, slots=True, eq=False)
class Precision:
    """var = variance + (x - centre)'V(x - centre), V = root root', over the terms in `estimated`."""

    estimated: tuple[int, ...]
    root: Array
    """Lower Cholesky factor of the covariance, shape (p, p)."""
    variance: float
    centre: tuple[float, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Draws:
    """Bootstrap rows: `coefficients` of the terms in `estimated`, shape (p, K), and `baselines`, shape (K,)."""

    estimated: tuple[int, ...]
    coefficients: Array
    baselines: Array

    def enough_for(self, level: float) -> bool:
        """Whether so many rows lie beyond a band of this level that its ends mean something."""
        return round(self.baselines.size * (1.0 - level), 9) >= DRAWS_BEYOND


@dataclass(frozen=True, slots=True, eq=False)
class Line:
    """eta = lp0 + x'b on the scale of `link`; without a `band` the reason stands in `no_band_because`."""

    span: Span
    link: Link
    lp0: float
    coefficients: tuple[float, ...]
    band: Precision | Draws | None
    basis: str
    no_band_because: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class Adjustment:
    """A recalibration on the link scale: eta' = intercept + slope eta, with the covariance of the two or None."""

    intercept: float
    slope: float
    covariance: tuple[float, float, float] | None
    """Variance of the intercept, covariance, variance of the slope."""


def adjustment_of(line: RecalibrationLine) -> Adjustment:
    """The adjustment that a coefficient file states for one equation."""
    if isinstance(line.covariance, UnsetType) or line.covariance is None:
        return Adjustment(line.intercept, line.slope, None)
    (v00, v01), (_, v11) = line.covariance
    return Adjustment(line.intercept, line.slope, (v00, v01, v11))


def lines_of(equation: Equation) -> tuple[Line, ...]:
    """The equation as one line for each horizon, in file order. The file's rules have been checked before."""
    return tuple(_line_at(equation, place, horizon) for place, horizon in enumerate(equation.horizons))


def _line_at(equation: Equation, place: int, horizon: Horizon) -> Line:
    span, lp0 = span_of(horizon), baseline(horizon, equation.link)
    assert span is not None
    assert lp0 is not None
    uncertainty = equation.uncertainty
    estimated = tuple(t for t, term in enumerate(equation.terms) if term.fixed is not True)
    band: Precision | Draws | None = None
    because = ""
    if isinstance(uncertainty, NoBand):
        because = uncertainty.because
    elif isinstance(uncertainty, DrawsBand):
        rows = np.array(uncertainty.baselines)
        band = Draws(
            estimated,
            np.ascontiguousarray(np.array(uncertainty.coefficients).T),
            np.ascontiguousarray(rows[:, place]),
        )
    else:
        given = np.array(uncertainty.covariance)
        at = next(part for part in uncertainty.at_centre if span_of(part) == span)
        band = Precision(estimated, np.linalg.cholesky((given + given.T) / 2.0), at.variance, at.centre)
    return Line(
        span=span,
        link=equation.link,
        lp0=lp0,
        coefficients=tuple(term.coefficient for term in equation.terms),
        band=band,
        basis=uncertainty.__struct_config__.tag if isinstance(uncertainty.__struct_config__.tag, str) else "",
        no_band_because=because,
    )
