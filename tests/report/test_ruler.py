"""The ruler: which form each thing has, in which lane, and what is left out without a number or a band."""

from dataclasses import replace
from itertools import pairwise

import pytest

from clinicalc.assessment.numerals import percent_in_full
from clinicalc.report.fonts import read_lettering
from clinicalc.report.measured import DecisionPoint, Interval, Lane, Measured
from clinicalc.report.ruler import Ruler, RulerSize, draw_ruler
from clinicalc.report.shapes import Line, Poly, Rect, Shape, Text, Tone

SIZE = RulerSize(436)
ALL = tuple(Lane)
FULL = Measured(
    "cloglog",
    0.122,
    band=Interval(0.093, 0.161),
    spread=Interval(0.087, 0.17),
    decisions=(DecisionPoint(0.1, "practice setting"),),
)


def ruler(measured: Measured, *lanes: Lane, size: RulerSize = SIZE) -> Ruler:
    return draw_ruler(measured, size, read_lettering().width, lanes or ALL)


def lines(drawn: Ruler, tone: Tone, width: float) -> list[Line]:
    return [s for s in drawn.figure.shapes if isinstance(s, Line) and s.tone is tone and s.width == width]


def boxes(drawn: Ruler, tone: Tone) -> list[Rect]:
    return [s for s in drawn.figure.shapes if isinstance(s, Rect) and s.fill is tone]


def pointers(drawn: Ruler) -> list[Poly]:
    return [s for s in drawn.figure.shapes if isinstance(s, Poly)]


def hairline(drawn: Ruler) -> list[Line]:
    long = [line for line in lines(drawn, Tone.ACCENT, 2) if line.to_y - line.y > 20]
    return [line for line in long if line.x == line.to_x]


def test_the_hairline_stands_at_the_number_under_its_head() -> None:
    drawn = ruler(FULL)
    (hair,) = hairline(drawn)
    assert hair.x == drawn.scale.position(0.122)
    (head,) = pointers(drawn)
    xs, ys = zip(*head.points, strict=True)
    assert max(xs) - min(xs) == 12
    assert sum(xs) / 3 == pytest.approx(hair.x)
    (body,) = boxes(drawn, Tone.WASH)[:1]
    assert max(ys) <= body.y


def test_the_band_is_filled_and_closed_in_the_first_lane_and_the_spread_open_in_the_second() -> None:
    drawn = ruler(FULL)
    (band,) = boxes(drawn, Tone.TINT)
    at = drawn.scale.position
    assert band.x == at(0.093)
    assert band.x + band.width == pytest.approx(at(0.161))
    ends = [line for line in lines(drawn, Tone.ACCENT, 2) if line.y == band.y]
    assert [line.x for line in ends] == [band.x, pytest.approx(band.x + band.width)]
    (spread,) = [line for line in lines(drawn, Tone.INK, 2) if line.y == line.to_y]
    assert (spread.x, spread.to_x) == (at(0.087), at(0.17))
    assert spread.y > band.y + band.height
    assert [lane.name for lane in drawn.lanes] == ["95\u202f% band", "Re-measurement spread", "Decision point"]
    assert [lane.figures for lane in drawn.lanes] == ["9.3–16.1\u202f%", "8.7–17.0\u202f%", "10.0\u202f%"]
    pitches = [lower.y - upper.y for upper, lower in zip(drawn.lanes, drawn.lanes[1:], strict=False)]
    assert pitches == [27.0, 27.0]


def test_the_decision_point_is_dashed_to_the_axis_with_its_source_clear_of_the_hairline() -> None:
    measure = read_lettering().width
    for probability in (0.122, 0.1001, 0.09):
        drawn = ruler(replace(FULL, probability=probability))
        (dashed,) = [s for s in drawn.figure.shapes if isinstance(s, Line) and s.dash]
        (hair,) = hairline(drawn)
        assert dashed.x == dashed.to_x == drawn.scale.position(0.1)
        assert dashed.to_y == hair.to_y
        (source,) = [s for s in drawn.figure.shapes if isinstance(s, Text) and s.text == "practice setting"]
        assert not source.x < hair.x < source.x + measure(source.text, source.size)
        assert not source.x < dashed.x < source.x + measure(source.text, source.size)


@pytest.mark.parametrize("at", [0.005, 0.006, 0.79, 0.8])
def test_the_source_stays_on_the_ruler(at: float) -> None:
    drawn = ruler(replace(FULL, decisions=(DecisionPoint(at, "practice setting"),)))
    (source,) = [s for s in drawn.figure.shapes if isinstance(s, Text) and s.text == "practice setting"]
    wide = read_lettering().width(source.text, source.size)
    assert drawn.overhang <= source.x <= source.x + wide <= drawn.overhang + 436


@pytest.mark.parametrize(("at", "end"), [(0.002, 0.0), (0.9, 436.0)])
def test_a_decision_point_beyond_the_scale_is_pointed_at_and_leaves_the_scale_alone(at: float, end: float) -> None:
    drawn = ruler(replace(FULL, decisions=(DecisionPoint(at, "practice setting"),)))
    assert not drawn.scale.wide
    assert not [s for s in drawn.figure.shapes if isinstance(s, Line) and s.dash]
    (pointer,) = [s for s in pointers(drawn) if s.fill is Tone.INK]
    xs = [x - drawn.overhang for x, _ in pointer.points]
    assert all(x < 0 if end == 0 else x > end for x in xs)


def test_a_band_that_goes_on_beyond_the_wide_scale_is_pointed_at() -> None:
    drawn = ruler(Measured("cloglog", 0.01, band=Interval(0.0001, 0.995)), Lane.BAND)
    (band,) = boxes(drawn, Tone.TINT)
    assert band.x == drawn.overhang
    assert band.width == pytest.approx(436)
    beyond = [s for s in pointers(drawn) if all(not 0 <= x - drawn.overhang <= 436 for x, _ in s.points)]
    assert len(beyond) == 2
    inside = ruler(Measured("cloglog", 0.01, band=Interval(0.001, 0.95)), Lane.BAND)
    assert len(pointers(inside)) == 1


def test_a_smaller_ruler_is_the_same_ruler() -> None:
    """A print in points draws all heights three quarters as high; thin lines are set apart."""
    large = ruler(FULL)
    small = ruler(FULL, size=RulerSize(327, lane=20.25, text=9.75, line=0.75))
    assert small.figure.height == pytest.approx(0.75 * large.figure.height)
    assert small.lanes[1].y == pytest.approx(0.75 * large.lanes[1].y)
    assert hairline(small) == []  # 2 wide on screen, 1.5 in print
    assert len(lines(small, Tone.ACCENT, 1.5)) == len(lines(large, Tone.ACCENT, 2))


def test_without_a_covariance_the_lane_says_so_and_stays_empty() -> None:
    drawn = ruler(replace(FULL, band=None, spread=None, decisions=()), Lane.BAND)
    assert boxes(drawn, Tone.TINT) == []
    assert [lane.figures for lane in drawn.lanes] == ["no band"]
    assert len(hairline(drawn)) == 1
    assert "no band" in drawn.figure.sentence


def test_without_a_number_only_scale_and_decision_point_stay_in_their_places() -> None:
    empty, full = ruler(replace(FULL, probability=None)), ruler(FULL)
    assert [lane.figures for lane in empty.lanes] == ["–", "–", "10.0\u202f%"]
    assert [lane.y for lane in empty.lanes] == [lane.y for lane in full.lanes]
    assert (empty.figure.width, empty.figure.height) == (full.figure.width, full.figure.height)
    tones = {tone for shape in empty.figure.shapes for tone in tones_of(shape)}
    assert tones == {Tone.RULE, Tone.EDGE, Tone.SOFT, Tone.INK, Tone.SHEET}
    (dashed,) = lines(empty, Tone.INK, 2)
    assert dashed.dash
    assert lines(empty, Tone.INK, 1) == []  # the ticks stand in edge
    assert empty.figure.table[0] == ("Probability", "no number")


def tones_of(shape: Shape) -> set[Tone]:
    named = (getattr(shape, name, None) for name in ("tone", "fill", "outline"))
    return {tone for tone in named if tone is not None}


def test_the_wide_scale_is_said_under_the_axis() -> None:
    drawn = ruler(Measured("logit", 0.004, band=Interval(0.002, 0.006)), Lane.BAND)
    (said,) = [s for s in drawn.figure.shapes if isinstance(s, Text) and s.text.startswith("wide")]
    assert said.text == "wide scale, 0.05 to 99\u202f%"
    assert drawn.figure.baseline < said.y <= drawn.figure.height
    assert not [s for s in ruler(FULL).figure.shapes if isinstance(s, Text) and s.text.startswith("wide")]


@pytest.mark.parametrize(("probability", "end"), [(0.0002, 0.0), (0.9995, 436.0)])
def test_beyond_the_wide_scale_the_head_points_out_at_the_end(probability: float, end: float) -> None:
    drawn = ruler(Measured("cloglog", probability), Lane.BAND)
    (head,) = pointers(drawn)
    xs = [x - drawn.overhang for x, _ in head.points]
    assert all(x <= 0 if end == 0 else x >= end for x in xs)
    assert (min if end == 0 else max)(xs) == pytest.approx(end - 12 if end == 0 else end + 12)
    assert hairline(drawn) == []
    assert drawn.figure.table[0][1] == ("<0.1\u202f%" if end == 0 else ">99.9\u202f%")


@pytest.mark.parametrize("probability", [0.0002, 0.004, 0.005, 0.122, 0.8, 0.9995])
@pytest.mark.parametrize("text", [9.0, 13.0, 26.0])
def test_everything_lies_inside_the_figure(probability: float, text: float) -> None:
    size = RulerSize(436, lane=2 * text + 1, text=text)
    band = Interval(probability / 3, min(0.99999, probability * 3))
    drawn = ruler(replace(FULL, probability=probability, band=band, spread=band), size=size)
    measure = read_lettering().width
    for shape in drawn.figure.shapes:
        match shape:
            case Text():
                wide = measure(shape.text, shape.size, shape.weight)
                xs, ys = [shape.left(wide), shape.left(wide) + wide], [shape.y - 0.7 * shape.size, shape.y]
            case Line():
                xs, ys = [shape.x, shape.to_x], [shape.y, shape.to_y]
            case Rect():
                xs, ys = [shape.x, shape.x + shape.width], [shape.y, shape.y + shape.height]
            case Poly():
                xs, ys = [x for x, _ in shape.points], [y for _, y in shape.points]
            case _:
                pytest.fail(f"a ruler has no {shape}")
        assert min(xs) >= 0
        assert max(xs) <= drawn.figure.width
        assert min(ys) >= 0
        assert max(ys) <= drawn.figure.height


def test_the_words_beside_the_ruler_and_its_table_are_the_same_figures() -> None:
    drawn = ruler(replace(FULL, level=0.9))
    assert drawn.lanes[0].name == "90\u202f% band"
    named = [(lane.name, lane.figures) for lane in drawn.lanes[:2]]
    decision = ("Decision point (practice setting)", "10.0\u202f%")
    assert drawn.figure.table == (("Probability", "12.2\u202f%"), *named, decision)
    assert "Decision point (practice setting): 10.0\u202f%" in drawn.figure.sentence
    assert drawn.figure.sentence.startswith("12.2\u202f% on a ruler from 0.5 to 80\u202f%")


def test_each_of_up_to_three_decision_points_has_a_lane_its_dashed_line_and_its_name() -> None:
    names = ("practice setting", "talk it over", "printed by the source", "one more")
    points = tuple(DecisionPoint(at, name) for at, name in zip((0.1, 0.075, 0.2, 0.3), names, strict=True))
    drawn = ruler(replace(FULL, decisions=points))
    assert [lane.figures for lane in drawn.lanes[2:]] == ["10.0\u202f%", "7.5\u202f%", "20.0\u202f%"]
    assert {lane.name for lane in drawn.lanes[2:]} == {"Decision point"}
    dashed = [s for s in drawn.figure.shapes if isinstance(s, Line) and s.dash]
    assert [line.x for line in dashed] == [drawn.scale.position(at) for at in (0.1, 0.075, 0.2)]
    starts = [line.y for line in dashed]
    assert [later - earlier for earlier, later in pairwise(starts)] == [27.0, 27.0]
    assert len({line.to_y for line in dashed}) == 1
    written = [s.text for s in drawn.figure.shapes if isinstance(s, Text)]
    assert set(names[:3]) <= set(written)
    assert names[3] not in written
    assert ("Decision point (one more)", "30.0\u202f%") in drawn.figure.table


STATED = tuple(DecisionPoint(at, f"at {at:g}") for at in (0.01, 0.05, 0.1, 0.15, 0.2, 0.4))


@pytest.mark.parametrize(
    ("measured", "nearest"),
    [
        (Measured("logit", 0.122, 0.878), (0.1, 0.15, 0.2)),
        # 0.05 is nearer by probability (0.08 and 0.12), but not on the logit scale: 1.04 and 0.81
        (Measured("logit", 0.13, 0.87), (0.1, 0.15, 0.2)),
        (Measured("logit", 0.28, 0.72), (0.15, 0.2, 0.4)),
        (Measured("cloglog", 0.001, 0.999), (0.01, 0.05, 0.1)),
        (Measured("cloglog", 1.0, 1e-30), (0.15, 0.2, 0.4)),
        (Measured("logit"), (0.01, 0.05, 0.1)),
    ],
)
def test_the_decision_points_nearest_to_the_number_are_drawn_in_order(
    measured: Measured, nearest: tuple[float, ...]
) -> None:
    drawn = ruler(replace(measured, decisions=STATED), Lane.BAND, Lane.DECISION)
    assert [lane.figures for lane in drawn.lanes[1:]] == [percent_in_full(at) for at in nearest]
    dashed = [s for s in drawn.figure.shapes if isinstance(s, Line) and s.dash]
    pointed = [s for s in pointers(drawn) if s.fill is Tone.INK]
    assert len(dashed) + len(pointed) == 3
    table = {row for row in drawn.figure.table if row[0].startswith("Decision point")}
    assert table == {
        (f"Decision point (at {point.probability:g})", percent_in_full(point.probability)) for point in STATED
    }


def test_no_name_is_written_through_another_line_where_there_is_room() -> None:
    measure = read_lettering().width
    points = tuple(DecisionPoint(at, name) for at, name in ((0.1, "practice"), (0.05, "first"), (0.2, "second")))
    drawn = ruler(replace(FULL, decisions=points))
    xs = [drawn.scale.position(at) for at in (0.1, 0.05, 0.2, 0.122)]
    for point in points:
        (name,) = [s for s in drawn.figure.shapes if isinstance(s, Text) and s.text == point.source]
        assert not any(name.x < x < name.x + measure(name.text, name.size) for x in xs)


def test_a_long_name_is_cut_on_the_ruler_and_whole_in_the_table() -> None:
    name = "the value above which the practice in Tarnwick has agreed to talk about every treatment there is"
    drawn = ruler(replace(FULL, decisions=(DecisionPoint(0.1, name),)))
    (cut,) = [s for s in drawn.figure.shapes if isinstance(s, Text) and s.text.endswith("…")]
    assert name.startswith(cut.text[:-1])
    assert cut.x >= drawn.overhang
    assert cut.x + read_lettering().width(cut.text, cut.size) <= drawn.overhang + 436
    assert (f"Decision point ({name})", "10.0\u202f%") in drawn.figure.table


def test_a_name_between_two_lines_too_close_for_it_stands_beyond_them() -> None:
    """To the left of 10 % stands the line of 5 %, to its right the hairline: the name goes on to the other side."""
    points = (DecisionPoint(0.05, "Talk it over"), DecisionPoint(0.1, "Setting of the practice"))
    measured = Measured("logit", 0.123, 0.877, decisions=points)
    ruler = draw_ruler(measured, RulerSize(436), read_lettering().width, (Lane.DECISION,))
    (name,) = [s for s in ruler.figure.shapes if isinstance(s, Text) and s.text == "Setting of the practice"]
    lines = [ruler.scale.position(at) for at in (0.05, 0.1, 0.123)]
    assert not any(name.x - 4 < line < name.x + read_lettering().width(name.text, name.size) + 4 for line in lines)
    assert min(abs(name.x - line) for line in lines) == pytest.approx(8.0)
