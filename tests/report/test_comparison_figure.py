"""The comparison: forms of its two numbers, the axis of their difference, and the words."""

from dataclasses import replace
from itertools import pairwise

import pytest

from clinicalc.assessment.comparison import ChangedValue, Comparison, Side
from clinicalc.report.columns import Columns
from clinicalc.report.comparison_figure import Compared, draw_comparison
from clinicalc.report.phrases_comparison import difference_band_words, difference_sentence
from clinicalc.report.scale import Scale
from clinicalc.report.shapes import Figure, Line, Rect, Text, Tone
from tests.report.viewing import EVERY_SIZE, MEASURE, WINDOW, assert_inside, assert_no_words_overlap

FULL = Comparison(
    level=0.95,
    changes=(ChangedValue("smoker", "Smokes now", "no", "Yes", "No"),),
    own=Side(0.122, 0.878, 0.093, 0.161),
    changed=Side(0.06, 0.94, 0.045, 0.079),
    difference=-0.062,
    difference_lower=-0.085,
    difference_upper=-0.04,
    because="",
)


def drawn(comparison: Comparison = FULL, columns: Columns = WINDOW, **more: tuple[float, ...]) -> Figure:
    figure = draw_comparison(Compared("cloglog", comparison, "% within 10 years", **more), columns, MEASURE)
    assert figure is not None
    return figure


def across(own: float, lower: float, upper: float) -> Comparison:
    return replace(FULL, difference=own, difference_lower=lower, difference_upper=upper)


def written(figure: Figure) -> list[str]:
    return [shape.text for shape in figure.shapes if isinstance(shape, Text)]


def test_as_entered_is_filled_and_solid_with_changes_open_and_dashed() -> None:
    figure = drawn()
    place = Scale("cloglog", 436, left=272).position
    (filled,) = [s for s in figure.shapes if isinstance(s, Rect) and s.fill is Tone.TINT]
    assert [filled.x, filled.x + filled.width] == pytest.approx([place(0.093), place(0.161)])
    changed, difference = [s for s in figure.shapes if isinstance(s, Rect) and s.fill is None]
    assert [changed.x, changed.x + changed.width] == pytest.approx([place(0.045), place(0.079)])
    assert changed.outline is difference.outline is Tone.ACCENT
    lines = [s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.ACCENT and s.x == s.to_x]
    assert [line.x for line in lines if line.dash] == pytest.approx([place(0.06), 272 + 436 * 3.8 / 20])
    assert place(0.122) in [line.x for line in lines if not line.dash]


def test_the_difference_stands_on_a_linear_axis_of_its_own() -> None:
    figure = drawn()
    box = [s for s in figure.shapes if isinstance(s, Rect) and s.fill is None][1]
    assert box.x == pytest.approx(272 + 436 * 1.5 / 20)
    assert box.x + box.width == pytest.approx(272 + 436 * 6 / 20)
    assert {"−10", "−5", "0", "+5", "+10", "−6.2 points", "percentage points"} <= set(written(figure))


@pytest.mark.parametrize(
    ("lower", "upper", "end"),
    [
        (-0.01, 0.02, "+5"),
        (-0.05, 0.05, "+5"),
        (-0.051, 0.0, "+10"),
        (0.03, 0.11, "+20"),
        (-0.3, 0.1, "+40"),
        (-0.41, -0.2, "+100"),
        (-0.99, -0.97, "+100"),
    ],
)
def test_the_smallest_axis_that_holds_the_band(lower: float, upper: float, end: str) -> None:
    figure = drawn(across((lower + upper) / 2, lower, upper))
    ends = [text for text in written(figure) if text in ("+5", "+10", "+20", "+40", "+100")]
    assert ends[-1] == end
    box = [s for s in figure.shapes if isinstance(s, Rect) and s.fill is None][1]
    assert box.x >= 272 - 1e-9
    assert box.x + box.width <= 272 + 436 + 1e-9


@pytest.mark.parametrize("columns", EVERY_SIZE)
@pytest.mark.parametrize(
    "comparison",
    [
        FULL,
        across(0.062, 0.04, 0.085),
        across(0.003, -0.031, 0.04),
        across(-0.3, -0.4, -0.1),
        across(0.0, 0.0, 0.0),
        replace(FULL, difference_lower=None, difference_upper=None, because="No band."),
        replace(FULL, own=Side(0.003, 0.997, 0.0001, 0.9995)),
        replace(FULL, own=Side(0.9999, 0.0001, None, None)),
        across(4e-8, -1e-8, 8e-8),
        across(0.4, 0.0004, 0.8),
    ],
)
def test_everything_is_inside_and_no_words_run_into_each_other(comparison: Comparison, columns: Columns) -> None:
    figure = drawn(comparison, columns)
    assert_inside(figure)
    assert_no_words_overlap(figure)


def test_the_band_of_the_difference_in_figures_is_clear_of_what_is_drawn() -> None:
    for comparison in (FULL, across(0.062, 0.04, 0.085), across(0.003, -0.031, 0.04)):
        figure = drawn(comparison)
        (words,) = [s for s in figure.shapes if isinstance(s, Text) and "band" in s.text]
        box = [s for s in figure.shapes if isinstance(s, Rect) and s.fill is None][1]
        wide = MEASURE(words.text, words.size)
        beside = words.x > box.x + box.width or words.x + wide < box.x
        assert beside or words.y - words.size > box.y + box.height


def test_the_figure_is_as_high_whatever_the_difference_is() -> None:
    heights = {drawn(across(own, own - 0.02, own + 0.02)).height for own in (-0.3, -0.01, 0.0, 0.04)}
    assert len(heights) == 1


def test_without_numbers_nothing_is_drawn() -> None:
    none = Comparison(0.95, (), None, None, None, None, None, "Another equation answers for the changed values.")
    assert draw_comparison(Compared("logit", none), WINDOW, MEASURE) is None


def test_the_wide_scale_where_either_number_or_the_sheet_needs_it() -> None:
    assert not any(text.startswith("wide scale") for text in written(drawn()))
    low = replace(FULL, changed=Side(0.004, 0.996, None, None))
    for figure in (drawn(low), drawn(also=(0.9,))):
        assert "wide scale, 0.05 to 99\u202f%" in written(figure)


def test_the_words_for_a_screen_reader_and_the_table_have_every_figure() -> None:
    figure = drawn()
    assert figure.sentence == (
        "As entered 12.2\u202f%, 95\u202f% band 9.3–16.1\u202f%; with changes 6.0\u202f%, 95\u202f% band 4.5–7.9\u202f%"
        "; difference −6.2 percentage points; 95\u202f% band −8.5 to −4.0 points"
    )
    assert figure.table == (
        ("Smokes now", "Yes, changed to No"),
        ("As entered", "12.2\u202f%, 95\u202f% band 9.3–16.1\u202f%"),
        ("With changes", "6.0\u202f%, 95\u202f% band 4.5–7.9\u202f%"),
        ("Difference", "−6.2 percentage points, 95\u202f% band −8.5 to −4.0 points"),
    )


def test_both_numbers_stand_on_their_side_of_a_decision_point() -> None:
    close = replace(FULL, own=Side(0.12004, 0.87996, 0.0996, 0.161))
    figure = drawn(close, beside=(0.12, 0.1))
    assert "12.00\u202f%" not in written(figure)
    assert "12.0\u202f%" in written(figure)  # on it and above it are the same side
    below = drawn(replace(FULL, own=Side(0.11996, 0.88004, 0.0996, 0.161)), beside=(0.12, 0.1))
    assert "11.996\u202f%" in written(below)
    assert below.table[1] == ("As entered", "11.996\u202f%, 95\u202f% band 9.96–16.1\u202f%")


@pytest.mark.parametrize(
    ("ends", "figure"),
    [
        ((-0.062, -0.085, -0.04), "−6.2 points"),
        ((-0.051, -0.085, -0.0004), "−5.10 points"),  # as many decimals as its band needs
        ((4e-8, -1e-8, 8e-8), "just above 0 points"),
        ((0.0, 0.0, 0.0), "0.0 points"),
    ],
)
def test_the_difference_is_drawn_and_said_in_the_same_figures(ends: tuple[float, float, float], figure: str) -> None:
    comparison = across(*ends)
    shown = drawn(comparison)
    band = difference_band_words(comparison)
    assert {figure, band} <= set(written(shown))
    assert band in shown.sentence
    assert band in shown.table[-1][1]
    if comparison.difference == 0.0:
        assert difference_sentence(comparison).startswith("Difference 0 points: ")
    else:
        assert difference_sentence(comparison) == f"Difference {figure}, {band}."


def test_rows_stand_a_lane_apart() -> None:
    figure = drawn()
    ys = [shape.y for shape in figure.shapes if isinstance(shape, Text) and shape.x == 0]
    assert next(lower - upper for upper, lower in pairwise(ys)) == pytest.approx(26)
