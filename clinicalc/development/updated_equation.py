"""An equation of a coefficient file recalibrated or refitted: its coefficients, baselines and band anew.

eta' = alpha + beta eta with eta = lp0 + x'b, estimated in people independent of those of the equation. With z = x - c,
where the equation's var = a + z'Vz, and eta at c called e, the covariance of (value at c, slopes) is beta^2 diag(a, V)
+ J V_ab J', J = [[1, e], [0, b]]; its completed square gives variance and centre anew. So var(eta') = beta^2 var(eta) +
[1, eta] V_ab [1, eta]'. That the new baseline makes an error of the old one good is not counted: the band is the wider.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import msgspec
import numpy as np
from msgspec import UNSET, UnsetType
from numpy.typing import NDArray

from clinicalc.coefficients.baselines import baseline
from clinicalc.coefficients.file_types import LONGEST_TEXT
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.schema import (
    AtCentre,
    CovarianceBand,
    DrawsBand,
    Equation,
    Horizon,
    NoBand,
    ReconstructedBand,
    RobustBand,
    Term,
    Uncertainty,
)
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.development.fit import Fit
from clinicalc.development.fitted import rows_of
from clinicalc.development.squares import square_of_intercept

Array = NDArray[np.float64]
SEED = 1
"""Of the normal draws of intercept and slope that go with the bootstrap draws of an equation."""
INDEPENDENT = (
    "The update was estimated in people independent of those the earlier version was made from; the imprecision of both"
    " is added."
)


@dataclass(frozen=True, slots=True)
class Move:
    """At one horizon eta' = intercept + slope eta; variance of the intercept, covariance, variance of the slope.

    `people` are those it was estimated from, `events` theirs by the horizon. `robust`: the covariance is a robust one.
    """

    span: Span
    intercept: float
    slope: float
    covariance: tuple[float, float, float]
    people: int
    events: int
    robust: bool = False


@dataclass(frozen=True, slots=True)
class Counted:
    """Who a refit at one horizon was made from."""

    people: int
    events: int


def keep_spans(equation: Equation, spans: Sequence[Span]) -> Equation:
    """The equation with these horizons only."""
    places = [place for place, horizon in enumerate(equation.horizons) if span_of(horizon) in spans]
    if len(places) == len(equation.horizons):
        return equation
    band = equation.uncertainty
    if isinstance(band, DrawsBand):
        rows = tuple(tuple(row[place] for place in places) for row in band.baselines)
        band = msgspec.structs.replace(band, baselines=rows)
    elif not isinstance(band, NoBand):
        kept = tuple(at for at in band.at_centre if span_of(at) in spans)
        band = msgspec.structs.replace(band, at_centre=kept)
    horizons = tuple(equation.horizons[place] for place in places)
    return msgspec.structs.replace(equation, horizons=horizons, uncertainty=band)


def recalibrate_equation(equation: Equation, moves: Mapping[Span, Move], version: str) -> Equation:
    """The equation moved at each of its horizons; every `Move` has the same slope.

    `version` names the earlier version where there is no basis for a band. Terms marked fixed are no longer so where
    the slope was estimated, as it moves them too. Printed intervals stand only beside figures that are unchanged.
    """
    first = next(iter(moves.values()))
    moved = first.covariance[2] > 0 or first.slope != 1.0
    terms = tuple(_move_term(term, first.slope) if moved else term for term in equation.terms)
    return msgspec.structs.replace(
        equation,
        terms=terms,
        horizons=tuple(_move_horizon(equation, horizon, moves[_span(horizon)]) for horizon in equation.horizons),
        uncertainty=_move_band(equation, moves, terms, version),
    )


def refit_equation(equation: Equation, fit: Fit, counted: Sequence[Counted]) -> Equation:
    """The equation with the figures of a fit, whose names are the terms that are not fixed, in their order."""
    figures = dict(zip(fit.names, fit.coefficients, strict=True))
    terms = tuple(
        term if term.fixed is True else msgspec.structs.replace(term, coefficient=figures[term.id], interval=UNSET)
        for term in equation.terms
    )
    horizons, centres = [], []
    for horizon, line, count in zip(equation.horizons, fit.baselines, counted, strict=True):
        horizons.append(_with_baseline(equation, horizon, line.lp0, count.people, count.events))
        assert line.variance is not None  # a refit made here knows its precision
        assert line.centre is not None
        centres.append(AtCentre(line.variance, line.centre, horizon.years, horizon.time, horizon.unit))
    assert fit.covariance is not None
    kind = RobustBand if fit.robust else CovarianceBand
    band = kind(fit.covariance, tuple(centres))
    return msgspec.structs.replace(equation, terms=terms, horizons=tuple(horizons), uncertainty=band)


def _span(horizon: Horizon) -> Span:
    span = span_of(horizon)
    assert span is not None  # the file's rules have been checked
    return span


def _lp0(equation: Equation, horizon: Horizon) -> float:
    found = baseline(horizon, equation.link)
    assert found is not None  # the file's rules have been checked
    return found


def _move_term(term: Term, slope: float) -> Term:
    return msgspec.structs.replace(term, coefficient=slope * term.coefficient, interval=UNSET, fixed=UNSET)


def _move_horizon(equation: Equation, horizon: Horizon, move: Move) -> Horizon:
    lp0 = move.intercept + move.slope * _lp0(equation, horizon)
    return _with_baseline(equation, horizon, lp0, move.people, move.events)


def _with_baseline(equation: Equation, horizon: Horizon, lp0: float, people: int, events: int) -> Horizon:
    time: dict[str, float | str | UnsetType] = {"years": horizon.years, "time": horizon.time, "unit": horizon.unit}
    made = Horizon(**time, people=people, events=events)  # type: ignore[arg-type]
    if equation.link == "logit":
        return msgspec.structs.replace(made, intercept=lp0)
    return msgspec.structs.replace(made, log_cumulative_hazard=lp0)


def _move_band(equation: Equation, moves: Mapping[Span, Move], terms: tuple[Term, ...], version: str) -> Uncertainty:
    band = equation.uncertainty
    if isinstance(band, NoBand):
        return NoBand(
            f"Only how precisely the update was estimated is known, not how precisely the coefficients of version "
            f"{version} were, of which it was made: {band.because}"[:LONGEST_TEXT]
        )
    # as they stand in the earlier version; a fixed coefficient is known exactly there, and moves with the slope
    b = np.array([term.coefficient for term in equation.terms])
    known = [place for place, term in enumerate(equation.terms) if term.fixed is not True]
    whole = [place for place, term in enumerate(terms) if term.fixed is not True]
    if isinstance(band, DrawsBand):
        return _move_draws(equation, band, moves, b, known, whole)
    return _move_covariance(equation, band, moves, b, known, whole)


def _move_covariance(
    equation: Equation,
    band: CovarianceBand | RobustBand | ReconstructedBand,
    moves: Mapping[Span, Move],
    b: Array,
    known: Sequence[int],
    whole: Sequence[int],
) -> Uncertainty:
    v = np.zeros((len(b), len(b)))
    given = np.array(band.covariance)
    v[np.ix_(known, known)] = (given + given.T) / 2
    centres, slopes = [], v
    for horizon in equation.horizons:
        move = moves[_span(horizon)]
        at = next(part for part in band.at_centre if span_of(part) == span_of(horizon))
        c = np.zeros(len(b))
        c[known] = at.centre
        v00, v01, v11 = move.covariance
        slopes = move.slope * move.slope * v + v11 * np.outer(b, b)
        if v11 == 0:
            own = move.slope * move.slope * at.variance + v00
            centres.append((own, c[whole]))
            continue
        fault = judge_matrix(rows_of(slopes[np.ix_(whole, whole)]), len(whole), "terms")
        if fault:
            return NoBand(
                "Several coefficients were not estimated in the earlier version, and all of them move with the one "
                "slope of the update: the covariance of the coefficients has no inverse."
            )
        e = _lp0(equation, horizon) + float((c * b).sum())
        joint = np.empty((len(whole) + 1, len(whole) + 1))
        joint[0, 0] = move.slope * move.slope * at.variance + v00 + 2 * e * v01 + e * e * v11
        joint[0, 1:] = joint[1:, 0] = (v01 + e * v11) * b[whole]
        joint[1:, 1:] = slopes[np.ix_(whole, whole)]
        square = square_of_intercept(joint)
        centres.append((max(square.variance, 0.0), c[whole] + square.centre))
    at_centre = tuple(
        AtCentre(float(variance), tuple(centre.tolist()), horizon.years, horizon.time, horizon.unit)
        for horizon, (variance, centre) in zip(equation.horizons, centres, strict=True)
    )
    matrix = rows_of(slopes[np.ix_(whole, whole)])
    if isinstance(band, ReconstructedBand):
        said = () if isinstance(band.assumptions, UnsetType) else band.assumptions
        return ReconstructedBand(matrix, at_centre, (*said, INDEPENDENT))
    robust = isinstance(band, RobustBand) or any(move.robust for move in moves.values())
    return (RobustBand if robust else CovarianceBand)(matrix, at_centre)


def _move_draws(
    equation: Equation,
    band: DrawsBand,
    moves: Mapping[Span, Move],
    b: Array,
    known: Sequence[int],
    whole: Sequence[int],
) -> DrawsBand:
    """Each draw of the equation moved by a draw of intercept and slope of its own, normal about the estimates."""
    rows, baselines = np.array(band.coefficients), np.array(band.baselines)
    generator = np.random.default_rng(SEED)
    of_slope, of_intercept = generator.standard_normal((2, len(rows)))
    first = next(iter(moves.values()))
    away = np.sqrt(first.covariance[2]) * of_slope
    full = np.tile(b, (len(rows), 1))
    full[:, known] = rows
    moved = np.empty_like(baselines)
    for place, horizon in enumerate(equation.horizons):
        move = moves[_span(horizon)]
        v00, v01, v11 = move.covariance
        steep = v01 / v11 if v11 > 0 else 0.0
        rest = max(v00 - steep * v01, 0.0)
        intercepts = move.intercept + steep * away + np.sqrt(rest) * of_intercept
        moved[:, place] = intercepts + (move.slope + away) * baselines[:, place]
    slopes = full[:, list(whole)] * (first.slope + away)[:, None]
    return DrawsBand(_rows(slopes), _rows(moved))


def _rows(values: Array) -> tuple[tuple[float, ...], ...]:
    return tuple(tuple(float(entry) for entry in row) for row in values)
