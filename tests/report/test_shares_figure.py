"""The walk of shares: every row, where its bar begins and ends, and what raises or lowers."""

from itertools import pairwise

import numpy as np
import pytest

from clinicalc.assessment.shares import Share, Shares
from clinicalc.prediction.links import probability
from clinicalc.report.columns import Columns
from clinicalc.report.scale import Scale, on_link
from clinicalc.report.shapes import Dot, Figure, Line, Poly, Rect, Text, Tone
from clinicalc.report.shares_figure import Walk, draw_shares, share_words
from tests.report.viewing import EVERY_SIZE, MEASURE, WINDOW, assert_inside, assert_no_words_overlap

STEPS = (("Smokes now", "Yes", 0.58), ("Age", "61 years", 0.41), ("HDL cholesterol", "1.9 mmol/L", -0.19))


def walk_of(
    *steps: tuple[str, str, float],
    start: float = -3.0,
    reference: str = "",
    patient: str = "",
    also: tuple[float, ...] = (),
) -> Walk:
    shares = Shares(
        start,
        float(probability("cloglog", np.array([start]))[0]),
        tuple(Share(label.lower(), label, own, "other", amount) for label, own, amount in steps),
    )
    end = start + sum(amount for _, _, amount in steps)
    chance = float(probability("cloglog", np.array([end]))[0])
    return Walk("cloglog", shares, chance, 1 - chance, reference, patient, "% within 10 years", also)


def drawn(walk: Walk, columns: Columns = WINDOW) -> Figure:
    return draw_shares(walk, columns, MEASURE)


def at(eta: float, *, wide: bool = False) -> float:
    """The x of a linear predictor on the window's ruler."""
    scale = Scale("cloglog", 436, wide=wide, left=272)
    start, stop = (on_link("cloglog", end) for end in scale.ends)
    return 272 + 436 * (eta - start) / (stop - start)


def bars(figure: Figure) -> list[Rect]:
    return [shape for shape in figure.shapes if isinstance(shape, Rect)]


def test_steps_begin_where_the_last_one_ended_and_filled_ones_raise() -> None:
    figure = drawn(walk_of(*STEPS))
    first, second, third = bars(figure)
    assert [first.x, first.x + first.width] == pytest.approx([at(-3), at(-2.42)])
    assert [second.x, second.x + second.width] == pytest.approx([at(-2.42), at(-2.01)])
    # an open box keeps its outline inside of the step: 0.8 on each side
    assert [third.x - 0.8, third.x + third.width + 0.8] == pytest.approx([at(-2.2), at(-2.01)])
    assert [bar.fill for bar in (first, second, third)] == [Tone.ACCENT, Tone.ACCENT, Tone.SHEET]
    assert [bar.outline for bar in (first, second, third)] == [None, None, Tone.ACCENT]
    assert [lower.y - upper.y for upper, lower in pairwise((first, second))] == [22.0]


def test_an_open_dot_begins_and_a_filled_dot_ends_on_the_hairline() -> None:
    figure = drawn(walk_of(*STEPS))
    begin, end = (shape for shape in figure.shapes if isinstance(shape, Dot))
    assert [begin.x, end.x] == pytest.approx([at(-3), at(-2.2)])
    assert [begin.fill, end.fill] == [Tone.SHEET, Tone.ACCENT]
    (hair,) = [s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.ACCENT]
    assert hair.x == hair.to_x == end.x
    assert hair.to_y > end.y > hair.y


def test_every_row_has_its_words_and_its_figure() -> None:
    figure = drawn(walk_of(*STEPS, reference="woman of 55", patient="matching age 75"))
    written = [shape.text for shape in figure.shapes if isinstance(shape, Text)]
    for text in ("Reference person", "woman of 55", "Smokes now", "Yes", "+0.58", "61 years", "−0.19", "This patient"):
        assert text in written
    assert figure.table == (
        ("Reference person, woman of 55", "4.9\u202f%"),
        ("Smokes now Yes, reference other", "+0.58"),
        ("Age 61 years, reference other", "+0.41"),
        ("HDL cholesterol 1.9 mmol/L, reference other", "−0.19"),
        ("This patient, matching age 75", "10.5\u202f%"),
    )
    assert figure.sentence.startswith("From 4.9\u202f% for the reference person (woman of 55) to 10.5\u202f%")
    assert "Smokes now Yes, reference other: +0.58" in figure.sentence


def test_a_person_like_the_reference_person_has_two_dots_and_no_bar() -> None:
    figure = drawn(walk_of())
    assert bars(figure) == []
    begin, end = (shape for shape in figure.shapes if isinstance(shape, Dot))
    assert begin.x == end.x
    assert figure.sentence.endswith("no value differs")


def test_a_step_too_narrow_for_a_box_is_a_stroke_with_a_gap_where_it_lowers() -> None:
    figure = drawn(walk_of(("Up", "1", 0.4), ("Down", "2", -0.004), ("Up again", "3", 0.003)))
    strokes = [s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.ACCENT and s.width == 2]
    down, up = strokes[:2], strokes[2:]
    assert down[1].y - down[0].to_y > 4
    assert up[1].y == up[0].to_y


@pytest.mark.parametrize(
    ("amount", "words"),
    [(0.58, "+0.58"), (-0.194, "−0.19"), (0.005, "+0.01"), (0.0049, "+0.005"), (-0.0031, "−0.003"), (12.3, "+12.30")],
)
def test_shares_in_figures(amount: float, words: str) -> None:
    """0.005 in two decimals is 0.01 because the nearest double lies above it."""
    assert share_words(amount) == words


def test_the_wide_scale_where_reference_step_or_the_sheet_needs_it() -> None:
    assert not wide(drawn(walk_of(*STEPS)))
    assert wide(drawn(walk_of(*STEPS, start=-6)))
    assert wide(drawn(walk_of(("Up", "1", 4.0), ("Down", "2", -3.5))))
    assert wide(drawn(walk_of(*STEPS, also=(0.004,))))
    bar = bars(drawn(walk_of(*STEPS, also=(0.004,))))[0]
    assert bar.x == pytest.approx(at(-3, wide=True))


def wide(figure: Figure) -> bool:
    return any(isinstance(shape, Text) and shape.text.startswith("wide scale") for shape in figure.shapes)


@pytest.mark.parametrize("start", [-12.0, 4.0])
def test_what_lies_beyond_the_wide_scale_is_pointed_at(start: float) -> None:
    figure = drawn(walk_of(("Up", "1", 0.4), start=start))
    assert len([shape for shape in figure.shapes if isinstance(shape, Poly)]) == 2
    assert_inside(figure)


LONG = (
    ("Takes tablets for blood pressure or for anything else that lowers it", "Yes, more than one kind of them", 0.7),
    ("Systolic blood pressure", "142 mmHg", 0.2),
    ("Aveeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeeerylongword", "No", -0.1),
)


@pytest.mark.parametrize("columns", EVERY_SIZE)
@pytest.mark.parametrize("steps", [STEPS, LONG, ()])
def test_words_are_whole_and_clear_of_each_other_in_every_size(
    columns: Columns, steps: tuple[tuple[str, str, float], ...]
) -> None:
    walk = walk_of(*steps, reference="woman of 55, no tablets, non-smoker", patient="matching age 75")
    figure = drawn(walk, columns)
    assert_inside(figure)
    assert_no_words_overlap(figure)
    written = "".join(shape.text.replace(" ", "") for shape in figure.shapes if isinstance(shape, Text))
    for label, own, _ in steps:
        assert label.replace(" ", "") in written
        assert own.replace(" ", "") in written
    texts = [shape for shape in figure.shapes if isinstance(shape, Text)]
    assert all(text.size in (columns.base, columns.ruler.text) for text in texts)
