"""The band of a covariance: level, centre, fixed terms, horizons, recalibration."""

from statistics import NormalDist

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from clinicalc.coefficients.schema import (
    AtCentre,
    CompetingEvents,
    CovarianceBand,
    Equation,
    Factor,
    Horizon,
    NoBand,
    Term,
    Uncertainty,
)
from clinicalc.coefficients.spans import Span
from clinicalc.prediction.line import Adjustment, Draws, Line, Precision, lines_of
from clinicalc.prediction.links import Link, probability
from clinicalc.prediction.predict import Prediction, predict
from tests.prediction.invented import TEN_YEARS, Array, invent_columns, invent_draws, invent_line, invent_precision

LEVELS = (0.5, 0.8, 0.9, 0.95, 0.99, 0.999)


def half_width(prediction: Prediction) -> Array:
    assert prediction.eta_upper is not None
    assert prediction.eta_lower is not None
    return np.asarray((prediction.eta_upper - prediction.eta_lower) / 2)


def by_matrix(band: Precision, columns: tuple[Array, ...]) -> Array:
    """The standard deviation by the plain quadratic form."""
    away = np.column_stack([columns[term] for term in band.estimated]) - np.array(band.centre)
    variance = band.variance + np.einsum("ij,jk,ik->i", away, band.root @ band.root.T, away)
    return np.asarray(np.sqrt(variance), dtype=np.float64)


@pytest.mark.parametrize("link", ["logit", "cloglog"])
@pytest.mark.parametrize("level", LEVELS)
def test_level(link: Link, level: float) -> None:
    band = invent_precision(5)
    line, columns = invent_line(link, 5, band), invent_columns(200, 5)
    result = predict(line, columns, level=level)
    expected = NormalDist().inv_cdf((1 + level) / 2) * by_matrix(band, columns)
    assert half_width(result) == pytest.approx(expected, rel=1e-12)
    assert result.eta == pytest.approx(-2 + np.column_stack(columns) @ np.array(line.coefficients), rel=1e-12)
    assert result.eta_lower is not None
    assert result.lower is not None
    assert np.array_equal(result.lower, probability(link, result.eta_lower))


def test_level_moves_only_the_band() -> None:
    line, columns = invent_line("logit", 5, invent_precision(5)), invent_columns(50, 5)
    assert np.array_equal(predict(line, columns, level=0.5).eta, predict(line, columns, level=0.99).eta)


@pytest.mark.parametrize("basis", [invent_precision(3), invent_draws(200, 3)], ids=["covariance", "draws"])
def test_no_band_is_made_where_none_is_asked_for(basis: Precision | Draws) -> None:
    line, columns = invent_line("logit", 3, basis), invent_columns(40, 3)
    adjustment = Adjustment(0.2, 0.9, (0.01, 0.0, 0.01))
    asked = predict(line, columns, adjustment=adjustment)
    spared = predict(line, columns, adjustment=adjustment, band=False)
    assert asked.lower is not None
    assert (spared.lower, spared.upper, spared.eta_lower, spared.eta_upper) == (None, None, None, None)
    assert np.array_equal(spared.eta, asked.eta)
    assert np.array_equal(spared.probability, asked.probability)
    assert np.array_equal(spared.complement, asked.complement)


def test_fixed_terms_bring_no_variance() -> None:
    band = invent_precision(4, estimated=(0, 2))
    line, columns = invent_line("logit", 4, band), invent_columns(100, 4)
    result = predict(line, columns)
    assert half_width(result) == pytest.approx(NormalDist().inv_cdf(0.975) * by_matrix(band, columns), rel=1e-12)
    moved = (columns[0], columns[1] + 5, columns[2], columns[3] - 3)
    other = predict(line, moved)
    assert half_width(other) == pytest.approx(half_width(result), rel=1e-12)
    shift = 5 * line.coefficients[1] - 3 * line.coefficients[3]
    assert other.eta == pytest.approx(result.eta + shift, rel=1e-12, abs=1e-12)


# ---------------------------------------------------------------- from the file's equation to lines


def equation(uncertainty: Uncertainty) -> Equation:
    return Equation(
        id="all",
        applies_when={},
        link="cloglog",
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=(
            Term(id="a", coefficient=0.5, product=(Factor(of="a"),)),
            Term(id="b", coefficient=-0.25, product=(Factor(of="b"),), fixed=True),
        ),
        horizons=(
            Horizon(time=30.0, unit="d", log_cumulative_hazard=-3.0),
            Horizon(years=1.0, baseline_survival=0.9, mean_linear_predictor=0.75),
        ),
        uncertainty=uncertainty,
    )


def test_each_horizon_has_its_own_line() -> None:
    # in another order than the horizons stand
    at = (AtCentre(0.04, (2.0,), years=1.0), AtCentre(0.09, (1.0,), time=30.0, unit="d"))
    early, late = lines_of(equation(CovarianceBand(((0.25,),), at)))
    assert (early.span, late.span) == (Span(30, "d"), Span(1))
    assert early.lp0 == -3
    assert late.lp0 == pytest.approx(np.log(-np.log(0.9)) - 0.75, rel=1e-15)
    columns = (np.array([3.0]), np.array([10.0]))
    q = NormalDist().inv_cdf(0.975)
    # var = a + V (x - c)^2 with only the first term estimated
    assert half_width(predict(early, columns)) == pytest.approx([q * np.sqrt(0.09 + 0.25 * 4)], rel=1e-13)
    assert half_width(predict(late, columns)) == pytest.approx([q * np.sqrt(0.04 + 0.25 * 1)], rel=1e-13)
    assert predict(early, columns).eta[0] == pytest.approx(-3 + 1.5 - 2.5, rel=1e-15)
    assert early.basis == "covariance"


def test_no_basis_no_band() -> None:
    line = lines_of(equation(NoBand("The paper prints none.")))[0]
    columns = (np.array([3.0]), np.array([10.0]))
    for adjustment in (None, Adjustment(0.1, 0.9, (0.02, 0.0, 0.01))):
        result = predict(line, columns, adjustment=adjustment)
        assert result.lower is None
        assert result.upper is None
        assert result.eta_lower is None
        assert result.eta_upper is None
    assert line.no_band_because == "The paper prints none."


# ---------------------------------------------------------------- recalibration

# R 4.2.2: glm(y ~ lp, family=binomial) of a logistic fit on MASS Pima.tr, applied to Pima.te; predict(se.fit=TRUE);
# the fit's own coefficients taken as known. lp, risk, se, lower, upper
PIMA = Adjustment(-0.0866925449942585, 0.95545396157234, (0.024390787026257, 0.00618742208691119, 0.0121664715817489))
PIMA_CASES = (
    (-6.0, 0.00296054693478154, 0.623004573760324, 0.000874937448463846, 0.00996807417433687),
    (-3.0, 0.0495923490640567, 0.311069925805324, 0.0275788375814513, 0.0875943185305496),
    (-1.5, 0.179480149793105, 0.182217128241169, 0.132732401417077, 0.238170771259363),
    (-0.5, 0.36252548470203, 0.145756587620536, 0.299412470516996, 0.430762251927582),
    (0.8, 0.663218606742652, 0.205127287745035, 0.568474175131139, 0.746439614507869),
    (2.5, 0.909037776605115, 0.36244771325909, 0.830835175048287, 0.95312791503314),
)


@pytest.mark.parametrize(("lp", "risk", "se", "lower", "upper"), PIMA_CASES)
def test_recalibrated_band_of_r(lp: float, risk: float, se: float, lower: float, upper: float) -> None:
    # no variance of its own: nought at the centre, which is where the patient is
    known = Precision((0,), np.array([[1.0]]), 0.0, (lp,))
    line = Line(TEN_YEARS, "logit", 0.0, (1.0,), known, "covariance")
    result = predict(line, (np.array([lp]),), adjustment=PIMA)
    assert result.probability[0] == pytest.approx(risk, rel=0, abs=1e-12)
    assert half_width(result)[0] / NormalDist().inv_cdf(0.975) == pytest.approx(se, rel=1e-12)
    assert result.lower is not None
    assert result.upper is not None
    assert (result.lower[0], result.upper[0]) == pytest.approx((lower, upper), rel=0, abs=1e-12)


def test_recalibration_adds_to_the_models_variance() -> None:
    """var' = slope^2 var + [1, eta] C [1, eta]', the two sets of data being independent."""
    band = invent_precision(3)
    line, columns = invent_line("logit", 3, band), invent_columns(100, 3)
    eta = predict(line, columns).eta
    v00, v01, v11 = PIMA.covariance or (0, 0, 0)
    variance = PIMA.slope**2 * by_matrix(band, columns) ** 2 + v00 + 2 * v01 * eta + v11 * eta**2
    result = predict(line, columns, adjustment=PIMA)
    assert result.eta == pytest.approx(PIMA.intercept + PIMA.slope * eta, rel=1e-13)
    assert half_width(result) == pytest.approx(NormalDist().inv_cdf(0.975) * np.sqrt(variance), rel=1e-12)
    unknown = predict(line, columns, adjustment=Adjustment(PIMA.intercept, PIMA.slope, None))
    assert half_width(unknown) == pytest.approx(PIMA.slope * half_width(predict(line, columns)), rel=1e-12)


def test_rounding_cannot_make_the_variance_negative() -> None:
    """Intercept and slope all but the same figure, at the linear predictor where their errors cancel."""
    rng = np.random.default_rng(6)
    negative = 0
    for s0, s1 in rng.uniform(0.01, 3, size=(300, 2)):
        v00, v01, v11 = s0 * s0, -s0 * s1, s1 * s1
        eta = s0 / s1
        negative += v00 + 2 * v01 * eta + v11 * eta * eta < 0
        known = Precision((0,), np.array([[1.0]]), 0.0, (eta,))
        line = Line(TEN_YEARS, "logit", 0.0, (1.0,), known, "covariance")
        width = half_width(predict(line, (np.array([eta]),), adjustment=Adjustment(0.0, 1.0, (v00, v01, v11))))
        assert 0 <= width[0] < 1e-6
    assert negative > 0  # the plain form does go below nought here


# ---------------------------------------------------------------- whatever the figures

FIGURE = st.floats(-1e3, 1e3)


@st.composite
def people(draw: st.DrawFn) -> tuple[Line, tuple[Array, ...]]:
    terms = draw(st.integers(1, 5))
    square = draw(arrays(np.float64, (terms, terms), elements=st.floats(-10, 10)))
    scale = 10.0 ** draw(st.integers(-6, 3))
    root = np.linalg.cholesky((square @ square.T + 0.01 * np.eye(terms)) * scale)
    row = arrays(np.float64, terms, elements=FIGURE)
    centre = tuple(float(c) for c in draw(row))
    band = Precision(tuple(range(terms)), root, draw(st.floats(0, 10)), centre)
    x = [np.array([value, at]) for value, at in zip(draw(row), centre, strict=True)]
    coefficients = tuple(float(b) / 100 for b in draw(row))
    line = Line(TEN_YEARS, draw(st.sampled_from(["logit", "cloglog"])), draw(FIGURE), coefficients, band, "covariance")
    return line, tuple(x)


@st.composite
def adjustments(draw: st.DrawFn) -> Adjustment | None:
    if draw(st.booleans()):
        return None
    # up to a correlation of one: intercept and slope may be all but the same figure
    s0, s1, r = draw(st.floats(1e-6, 3)), draw(st.floats(1e-6, 3)), draw(st.floats(-1, 1))
    return Adjustment(draw(st.floats(-5, 5)), draw(st.floats(0.01, 3)), (s0 * s0, r * s0 * s1, s1 * s1))


@given(people(), adjustments(), st.tuples(st.floats(0.01, 0.999), st.floats(0.01, 0.999)))
def test_band_holds_the_estimate_and_widens_with_the_level(
    given_people: tuple[Line, tuple[Array, ...]], adjustment: Adjustment | None, levels: tuple[float, float]
) -> None:
    line, columns = given_people
    narrow, wide = (predict(line, columns, adjustment=adjustment, level=level) for level in sorted(levels))
    for result in (narrow, wide):
        # a negative variance would show here as not a number
        assert (half_width(result) >= 0).all()
        assert result.eta_lower is not None
        assert result.eta_upper is not None
        assert result.lower is not None
        assert result.upper is not None
        assert (result.eta_lower <= result.eta).all()
        assert (result.eta <= result.eta_upper).all()
        assert (result.lower <= result.probability).all()
        assert (result.probability <= result.upper).all()
    assert narrow.eta_lower is not None
    assert narrow.eta_upper is not None
    assert wide.eta_lower is not None
    assert wide.eta_upper is not None
    assert (wide.eta_lower <= narrow.eta_lower).all()
    assert (narrow.eta_upper <= wide.eta_upper).all()
