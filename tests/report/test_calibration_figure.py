"""The calibration figure: what stands where, what is said in words, and that all of it stays inside at every size."""

from dataclasses import replace

import numpy as np
import pytest

from clinicalc.estimation.calibrated import Calibration, CalibrationGroup
from clinicalc.report.calibration_figure import ShownCalibration, draw_calibration
from clinicalc.report.linear_axis import LinearAxis
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.shapes import Dot, Figure, Line, Poly, Rect, Text, Tone
from tests.report.calibrations import EVERY_SIZE, binary, every_kind, rare, tied, timed
from tests.report.viewing import MEASURE, assert_inside, assert_no_words_overlap, reach

SIZE = PlotSize(440.0)
KINDS = every_kind()
NOTE = "The people are those the model was fitted to."


def drawn(calibration: Calibration, size: PlotSize = SIZE, span: str = "5 years") -> Figure:
    return draw_calibration(ShownCalibration(calibration, span, NOTE), size, MEASURE)


def written(figure: Figure) -> list[str]:
    return [shape.text for shape in figure.shapes if isinstance(shape, Text)]


def dots(figure: Figure) -> list[Dot]:
    return [shape for shape in figure.shapes if isinstance(shape, Dot)]


def axes(figure: Figure) -> tuple[LinearAxis, LinearAxis, float]:
    """Both axes as they were drawn, from the ink lines, and their end from the figures."""
    level = next(
        s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.INK and s.y == s.to_y and not s.dash
    )
    upright = next(s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.INK and s.x == s.to_x)
    end = max(float(text) for text in written(figure) if text.replace(".", "").isdigit()) / 100
    return (
        LinearAxis(level.x, level.to_x - level.x, end, end),
        LinearAxis(upright.to_y, upright.y - upright.to_y, end, end),
        end,
    )


@pytest.mark.parametrize("size", EVERY_SIZE)
@pytest.mark.parametrize("kind", KINDS)
def test_everything_stays_inside_and_apart(kind: str, size: PlotSize) -> None:
    figure = drawn(KINDS[kind], size)
    assert_inside(figure)
    assert_no_words_overlap(figure)
    assert figure.width == size.width


@pytest.mark.parametrize("size", EVERY_SIZE)
@pytest.mark.parametrize("kind", ["binary", "timed", "tied"])
def test_circles_stand_at_predicted_and_observed_with_their_limits(kind: str, size: PlotSize) -> None:
    calibration, figure = KINDS[kind], drawn(KINDS[kind], size)
    across, up, _ = axes(figure)
    assert across.length == pytest.approx(-up.length)  # a square
    for dot, group in zip(dots(figure), calibration.groups, strict=True):
        assert group.observed is not None
        assert (dot.x, dot.y) == pytest.approx((across.place(group.predicted), up.place(group.observed)))
    limits = [s for s in figure.shapes if isinstance(s, Line) and s.x == s.to_x and s.tone is Tone.INK][1:]
    for line, group in zip(limits, calibration.groups, strict=True):
        assert group.lower is not None
        assert group.upper is not None
        assert (line.y, line.to_y) == pytest.approx((up.place(group.upper), up.place(group.lower)))


def test_the_diagonal_is_dashed_from_corner_to_corner() -> None:
    figure = drawn(KINDS["binary"])
    across, up, end = axes(figure)
    (line,) = (s for s in figure.shapes if isinstance(s, Line) and s.dash)
    assert (line.x, line.y) == pytest.approx((across.place(0.0), up.place(0.0)))
    assert (line.to_x, line.to_y) == pytest.approx((across.place(end), up.place(end)))


def test_the_curve_lies_in_its_tinted_band_and_never_beyond_the_axes() -> None:
    for kind in ("binary", "timed", "high"):
        figure = drawn(KINDS[kind])
        across, up, _ = axes(figure)
        curves = [s for s in figure.shapes if isinstance(s, Poly) and s.outline is Tone.ACCENT]
        (band,) = (s for s in figure.shapes if isinstance(s, Poly) and s.fill is Tone.TINT)
        assert figure.shapes.index(band) < min(figure.shapes.index(curve) for curve in curves)
        for x, y in [*band.points, *(point for curve in curves for point in curve.points)]:
            assert across.start - 1e-9 <= x <= across.start + across.length + 1e-9
            assert up.start + up.length - 1e-9 <= y <= up.start + 1e-9
    assert "lowess" in written(drawn(KINDS["binary"]))
    assert "Cox spline" in written(drawn(KINDS["timed"]))


def test_names_lie_on_no_circle_limit_or_line() -> None:
    for kind, calibration in KINDS.items():
        for size in EVERY_SIZE:
            figure = drawn(calibration, size)
            names = [s for s in figure.shapes if isinstance(s, Text) and s.text in ("ideal", "lowess", "Cox spline")]
            for name in names:
                left, top, right, bottom = reach(name)
                for shape in figure.shapes:
                    if isinstance(shape, Dot) or (
                        isinstance(shape, Line) and shape.tone is Tone.INK and not shape.dash
                    ):
                        begin, above, end, below = reach(shape)
                        apart = right <= begin or end <= left or bottom <= above or below <= top
                        assert apart, (kind, size, name.text, shape)


@pytest.mark.parametrize("size", EVERY_SIZE)
@pytest.mark.parametrize("kind", KINDS)
def test_the_diagonal_is_named_over_its_end_outside_of_the_square(kind: str, size: PlotSize) -> None:
    figure = drawn(KINDS[kind], size)
    (diagonal,) = (s for s in figure.shapes if isinstance(s, Line) and s.dash)
    (name,) = (s for s in figure.shapes if isinstance(s, Text) and s.text == "ideal")
    _, _, right, bottom = reach(name)
    assert right == pytest.approx(max(diagonal.x, diagonal.to_x))
    assert bottom <= min(diagonal.y, diagonal.to_y)


def test_the_name_of_the_curve_lies_over_no_edge_of_the_tint_where_there_is_room() -> None:
    for kind in ("binary", "timed"):
        figure = drawn(KINDS[kind])
        (band,) = (s for s in figure.shapes if isinstance(s, Poly) and s.fill is Tone.TINT)
        (name,) = (s for s in figure.shapes if isinstance(s, Text) and s.text in ("lowess", "Cox spline"))
        left, top, right, bottom = reach(name)
        assert not any(left < x < right and top < y < bottom for x, y in band.points)


@pytest.mark.parametrize(
    ("size", "beside"), [(PlotSize(510.0, 9.0, 0.75), True), (PlotSize(720.0), True), (SIZE, False)]
)
def test_notes_stand_beside_the_square_where_lines_can_be_read_there(size: PlotSize, beside: bool) -> None:
    figure = drawn(KINDS["timed"], size)
    across, up, _ = axes(figure)
    notes = [
        s for s in figure.shapes if isinstance(s, Text) and s.text.startswith(("Dashed line", "Curve:", "The people"))
    ]
    assert len(notes) == 3
    for note in notes:
        assert (note.x > across.start + across.length) is beside
        assert (note.y < up.start) is beside


def test_people_hang_as_bars_below_the_axis() -> None:
    calibration = KINDS["binary"]
    figure = drawn(calibration)
    across, up, end = axes(figure)
    bars = [s for s in figure.shapes if isinstance(s, Rect) and s.fill is Tone.HATCH]
    counts, _ = np.histogram(calibration.spread.predictions, bins=40, range=(0.0, end))
    assert len(bars) == (counts > 0).sum()
    assert all(bar.y >= up.start for bar in bars)
    tallest = max(bars, key=lambda bar: bar.height)
    place = int(counts.argmax())
    assert across.place(place * end / 40) <= tallest.x < across.place((place + 1) * end / 40)
    beyond = int((calibration.spread.predictions > end).sum())
    assert any(f"{beyond} above" in text for text in written(figure)) == bool(beyond)


def test_figures_notes_and_table_say_what_is_drawn() -> None:
    figure = drawn(KINDS["timed"])
    words = " ".join(written(figure))
    assert "tenths of the people, one minus Kaplan–Meier with log-log limits (95\u202f%)" in words
    assert "Cox model on a spline of 3 knots in log(−log(1\u202f−\u202fprediction)); tinted its 95\u202f% band" in words
    assert NOTE in words
    calibration = KINDS["timed"]
    assert figure.sentence.startswith("Calibration at 5 years in 700 people: mean predicted ")
    assert "mean (ICI)" in figure.sentence
    assert len(figure.table) == 1 + 1 + 10 + 4
    assert figure.table[1][0].startswith("All, 700 people, ")
    assert [row[0] for row in figure.table[-4:]] == ["ICI", "E50", "E90", "Emax"]
    assert f"{100 * calibration.groups[-1].predicted:.1f}\u202f%" in figure.table[11][1]
    sampled = " ".join(written(drawn(binary())))
    assert "lowess, span 2/3; tinted its 95\u202f% band from 40 bootstrap samples." in sampled
    assert "tinted" not in " ".join(written(drawn(binary(resamples=0))))


def test_what_cannot_be_drawn_is_said() -> None:
    few = " ".join(written(drawn(rare())))
    assert "No curve: fewer than 10 people with the event, or without it." in few
    assert "cut off" in few
    ties = drawn(tied())
    assert "3 groups of like predictions" in " ".join(written(ties))
    assert "ICI" not in ties.sentence
    alone = " ".join(written(drawn(replace(tied(), groups=tied().groups[:1]))))
    assert "Circles: 1 group of like predictions," in alone
    lost = drawn(timed(longest=4.0))
    count = sum(group.observed is None for group in KINDS["lost"].groups)
    assert count
    assert len(dots(lost)) == len(KINDS["lost"].groups) - count
    assert f"{count} not drawn: nobody followed so long." in " ".join(written(lost))
    assert "No curve: nobody was followed so long." in " ".join(written(lost))
    assert "not known, nobody was followed so long" in lost.table[1][1]


def test_none_and_all_of_a_group_are_written_as_they_are() -> None:
    plain = KINDS["tied"]
    nobody = CalibrationGroup(20, 0, 0.1, 0.0, 0.0, 0.16)
    everybody = CalibrationGroup(20, 20, 0.6, 1.0, None, None)
    figure = drawn(replace(plain, groups=(nobody, everybody)), span="")
    assert figure.table[2][1] == "predicted 10.0\u202f%, observed 0\u202f% (0–16.0)"
    assert figure.table[3][1] == "predicted 60.0\u202f%, observed 100\u202f% (no limits)"
    assert figure.sentence.startswith("Calibration in 60 people")
    assert_inside(figure)
