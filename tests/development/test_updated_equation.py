"""The band of a moved equation is beta^2 var(eta) + [1, eta] V [1, eta]' for everybody, whatever the parent's basis."""

from typing import Any

import msgspec
import numpy as np
import pytest
from msgspec import UNSET

from clinicalc.coefficients.schema import (
    AtCentre,
    CovarianceBand,
    DrawsBand,
    Equation,
    Interval,
    NoBand,
    ReconstructedBand,
    RobustBand,
)
from clinicalc.coefficients.spans import Span
from clinicalc.development.updated_equation import INDEPENDENT, Move, keep_spans, recalibrate_equation
from clinicalc.prediction.line import Draws, Precision, lines_of
from clinicalc.prediction.predict import predict
from tests.coefficients.tiny_model import tiny_cloglog_model, tiny_logit_model

SPANS = (Span(5.0), Span(10.0))
MOVES = {
    SPANS[0]: Move(SPANS[0], 0.2, 0.8, (0.02, 0.004, 0.01), 400, 30),
    SPANS[1]: Move(SPANS[1], 0.3, 0.8, (0.015, 0.003, 0.01), 400, 70),
}
SHIFTS = {span: Move(span, 0.25, 1.0, (0.02, 0.0, 0.0), 400, 30) for span in SPANS}
COVARIANCE = np.array([[0.04, 0.002, 0.001], [0.002, 0.01, 0.0005], [0.001, 0.0005, 0.0009]])
CENTRES = (AtCentre(0.003, (4.0, 0.4, 0.6), 5.0), AtCentre(0.002, (4.1, 0.3, 0.7), 10.0))
X = np.array([[4.2, 1.0, -1.0], [3.9, 0.0, 2.0], [4.0, 0.5, 0.5], [0.0, 0.0, 0.0]])


def equation(band: Any = None) -> Equation:
    """Women of the tiny model, with three terms and two horizons."""
    rows = tuple(tuple(row) for row in COVARIANCE.tolist())
    found = tiny_cloglog_model().equations[0]
    return msgspec.structs.replace(found, uncertainty=band or CovarianceBand(rows, CENTRES))


def rows() -> tuple[tuple[float, ...], ...]:
    """The covariance as the file has it."""
    return tuple(tuple(row) for row in COVARIANCE.tolist())


def etas(found: Equation, place: int) -> tuple[np.ndarray[Any, Any], np.ndarray[Any, Any]]:
    """Eta and its variance for the people X at a horizon, as the bedside has them: half widths over 1.96."""
    made = predict(lines_of(found)[place], [np.ascontiguousarray(column) for column in X.T])
    assert made.eta_lower is not None
    assert made.eta_upper is not None
    half = (made.eta_upper - made.eta_lower) / 2 / 1.959963984540054
    return made.eta, half * half


@pytest.mark.parametrize("moves", [MOVES, SHIFTS])
@pytest.mark.parametrize("place", [0, 1])
def test_the_band_is_the_sum_of_both(moves: dict[Span, Move], place: int) -> None:
    eta, variance = etas(equation(), place)
    found, together = etas(recalibrate_equation(equation(), moves, "1.0.0"), place)
    move = moves[SPANS[place]]
    v00, v01, v11 = move.covariance
    np.testing.assert_allclose(found, move.intercept + move.slope * eta, rtol=1e-12)
    expected = move.slope**2 * variance + v00 + 2 * eta * v01 + eta * eta * v11
    np.testing.assert_allclose(together, expected, rtol=1e-9)
    assert (together > move.slope**2 * variance).all()


def test_what_stands_beside_the_figures() -> None:
    interval = Interval("link", 0.95, 0.1, 1.7)
    terms = tuple(msgspec.structs.replace(term, interval=interval) for term in equation().terms)
    parent = msgspec.structs.replace(equation(), terms=terms)
    found = recalibrate_equation(parent, MOVES, "1.0.0")
    assert [term.interval for term in found.terms] == [UNSET] * 3
    assert [term.coefficient for term in found.terms] == pytest.approx([0.8 * t.coefficient for t in terms])
    assert [(h.people, h.events, h.baseline_survival) for h in found.horizons] == [(400, 30, UNSET), (400, 70, UNSET)]
    shifted = recalibrate_equation(parent, SHIFTS, "1.0.0")
    assert shifted.terms == parent.terms
    assert isinstance(shifted.uncertainty, CovarianceBand)
    assert shifted.uncertainty.covariance == rows()


def test_the_basis_stays_what_it_was() -> None:
    for band in (RobustBand(rows(), CENTRES), ReconstructedBand(rows(), CENTRES, ("Printed limits were rounded.",))):
        found = recalibrate_equation(equation(band), MOVES, "1.0.0").uncertainty
        assert type(found) is type(band)
        if isinstance(found, ReconstructedBand):
            assert found.assumptions == ("Printed limits were rounded.", INDEPENDENT)
    robust = {span: robust_move(move) for span, move in MOVES.items()}
    assert isinstance(recalibrate_equation(equation(), robust, "1.0.0").uncertainty, RobustBand)
    none = recalibrate_equation(equation(NoBand("It was not printed.")), MOVES, "1.0.0").uncertainty
    assert none == NoBand(
        "Only how precisely the update was estimated is known, not how precisely the coefficients of version 1.0.0 "
        "were, of which it was made: It was not printed."
    )


def robust_move(move: Move) -> Move:
    """The move with a robust covariance."""
    return Move(move.span, move.intercept, move.slope, move.covariance, move.people, move.events, robust=True)


def test_one_fixed_term_moves_with_the_slope_and_two_leave_no_band() -> None:
    parent = equation()
    fixed = (msgspec.structs.replace(parent.terms[0], fixed=True), *parent.terms[1:])
    smaller = tuple(tuple(row) for row in COVARIANCE[1:, 1:].tolist())
    centres = tuple(msgspec.structs.replace(at, centre=at.centre[1:]) for at in CENTRES)
    one = msgspec.structs.replace(parent, terms=fixed, uncertainty=CovarianceBand(smaller, centres))
    eta, variance = etas(one, 1)
    found, together = etas(moved := recalibrate_equation(one, MOVES, "1.0.0"), 1)
    v00, v01, v11 = MOVES[SPANS[1]].covariance
    np.testing.assert_allclose(together, 0.64 * variance + v00 + 2 * eta * v01 + eta * eta * v11, rtol=1e-9)
    assert all(term.fixed is UNSET for term in moved.terms)
    assert recalibrate_equation(one, SHIFTS, "1.0.0").terms[0].fixed is True
    two = (*(msgspec.structs.replace(term, fixed=True) for term in parent.terms[:2]), parent.terms[2])
    last = tuple(msgspec.structs.replace(at, centre=at.centre[2:]) for at in CENTRES)
    bare = msgspec.structs.replace(parent, terms=two, uncertainty=CovarianceBand(((0.0009,),), last))
    assert isinstance(recalibrate_equation(bare, MOVES, "1.0.0").uncertainty, NoBand)
    assert isinstance(recalibrate_equation(bare, SHIFTS, "1.0.0").uncertainty, CovarianceBand)
    assert len(found) == len(X)


def test_draws_are_moved_by_draws() -> None:
    generator = np.random.default_rng(5)
    parent = equation()
    b = [term.coefficient for term in parent.terms]
    drawn = generator.multivariate_normal(b, COVARIANCE, 5000)
    lp0 = np.array([line.lp0 for line in lines_of(parent)])
    baselines = lp0 - (drawn - b) @ np.array([4.05, 0.35, 0.65])[:, None] + generator.normal(0, 0.05, (5000, 1))
    band = DrawsBand(tuple(map(tuple, drawn.tolist())), tuple(map(tuple, baselines.tolist())))
    one = msgspec.structs.replace(parent, uncertainty=band)
    moved = recalibrate_equation(one, MOVES, "1.0.0")
    before, after = lines_of(one)[1].band, lines_of(moved)[1].band
    assert isinstance(before, Draws)
    assert isinstance(after, Draws)
    old = before.baselines[:, None] + before.coefficients.T @ X.T
    new = after.baselines[:, None] + after.coefficients.T @ X.T
    v00, v01, v11 = MOVES[SPANS[1]].covariance
    eta = lp0[1] + X @ b
    # the product of the two small errors is left out of the delta method, and 5,000 draws leave some percent
    expected = 0.64 * old.var(axis=0) + v00 + 2 * eta * v01 + eta * eta * v11 + v11 * old.var(axis=0)
    np.testing.assert_allclose(new.var(axis=0), expected, rtol=0.08)
    assert (np.abs(new.mean(axis=0) - (0.3 + 0.8 * eta)) < 4 * np.sqrt(expected / 5000)).all()
    assert recalibrate_equation(one, MOVES, "1.0.0") == moved, "the same draws every time"


def test_horizons_are_left_out_with_their_centres() -> None:
    kept = keep_spans(equation(), SPANS[1:])
    assert [line.span for line in lines_of(kept)] == [SPANS[1]]
    assert isinstance(kept.uncertainty, CovarianceBand)
    assert kept.uncertainty.at_centre == CENTRES[1:]
    drawn = DrawsBand(((1.0, 1.0, 1.0),) * 200, ((1.0, 2.0),) * 200)
    kept = keep_spans(equation(drawn), SPANS[1:])
    assert isinstance(kept.uncertainty, DrawsBand)
    assert set(kept.uncertainty.baselines) == {(2.0,)}
    assert keep_spans(equation(), SPANS) == equation()


def test_a_logistic_equation_keeps_its_digits_far_from_the_people() -> None:
    parent = tiny_logit_model().equations[0]
    ten = Span(10.0)
    found = recalibrate_equation(parent, {ten: Move(ten, -0.1, 1.1, (0.01, -0.002, 0.005), 90, 20)}, "1.0.0")
    before, after = lines_of(parent)[0], lines_of(found)[0]
    assert isinstance(before.band, Precision)
    x = np.array([[55.0, 0.4], [30.0, 1.0], [75.0, 0.0]])
    columns = [np.ascontiguousarray(column) for column in x.T]
    old, new = predict(before, columns), predict(after, columns)
    assert old.eta_upper is not None
    assert new.eta_upper is not None
    z = 1.959963984540054
    variance = ((old.eta_upper - old.eta) / z) ** 2
    expected = 1.21 * variance + 0.01 - 0.004 * old.eta + 0.005 * old.eta**2
    np.testing.assert_allclose(((new.eta_upper - new.eta) / z) ** 2, expected, rtol=1e-12)
    assert found.reference_person == parent.reference_person
