"""The number, its empty seats, and the range line beside a value."""

import pytest

from clinicalc.report.fonts import read_lettering
from clinicalc.report.number import draw_number, draw_seats
from clinicalc.report.range_line import RangeOfValues, draw_range
from clinicalc.report.shapes import Dot, Figure, Line, Poly, Text, Tone
from clinicalc.report.typefaces import Weight

KIDNEY = RangeOfValues(30, 120, "30", "120")


def texts(figure: Figure) -> list[Text]:
    return [shape for shape in figure.shapes if isinstance(shape, Text)]


@pytest.mark.parametrize(("vetted", "tone"), [(True, Tone.ACCENT), (False, Tone.SOFT)])
def test_digits_and_sign_stand_on_one_baseline(vetted: bool, tone: Tone) -> None:
    figure = draw_number("12.2\u202f%", read_lettering().width, vetted=vetted)
    digits, sign = texts(figure)
    assert (digits.text, digits.size, digits.weight) == ("12.2", 76, Weight.REGULAR)
    assert sign.text == "%"
    assert sign.size == pytest.approx(32)
    assert digits.y == sign.y == figure.baseline
    assert {digits.tone, sign.tone} == {tone}
    assert sign.x > read_lettering().width("12.2", 76)
    assert figure.sentence.startswith("12.2\u202f%")
    assert ("not vetted" in figure.sentence) is not vetted


@pytest.mark.parametrize(
    ("percentage", "digits"), [("<0.1\u202f%", "<0.1"), (">99.9\u202f%", ">99.9"), ("3.0\u202f%", "3.0")]
)
def test_every_percentage_keeps_its_sign_apart(percentage: str, digits: str) -> None:
    figure = draw_number(percentage, read_lettering().width, vetted=True, size=68)
    assert [text.text for text in texts(figure)] == [digits, "%"]
    assert figure.table == (("Probability", percentage),)


def test_without_a_number_there_are_four_seats_on_the_same_baseline() -> None:
    seats = draw_seats(read_lettering().width)
    number = draw_number("12.2\u202f%", read_lettering().width, vetted=True)
    assert (seats.baseline, seats.height) == (number.baseline, number.height)
    assert len([shape for shape in seats.shapes if isinstance(shape, Line | Dot)]) == 4
    assert [text.text for text in texts(seats)] == ["%"]
    assert not any(character.isdigit() for text in texts(seats) for character in text.text)
    assert seats.sentence == "No number"


def value_tick(figure: Figure) -> list[Line]:
    return [shape for shape in figure.shapes if isinstance(shape, Line) and shape.tone is Tone.ACCENT]


def test_a_value_inside_the_range_has_a_tick_at_its_place() -> None:
    measure = read_lettering().width
    axis = next(s for s in draw_range(KIDNEY, None, measure, inside=True).shapes if isinstance(s, Line))
    for value, part in ((30, 0.0), (52.5, 0.25), (75, 0.5), (120, 1.0)):
        figure = draw_range(KIDNEY, value, measure, inside=True)
        (tick,) = value_tick(figure)
        assert tick.x == pytest.approx(axis.x + part * (axis.to_x - axis.x))
        assert {text.tone for text in texts(figure)} == {Tone.SOFT}
        assert not [shape for shape in figure.shapes if isinstance(shape, Poly)]


@pytest.mark.parametrize(("value", "strong", "words"), [(27, "30", "below"), (127, "120", "above")])
def test_outside_the_range_its_end_is_strong_and_a_pointer_stands_beyond(value: float, strong: str, words: str) -> None:
    figure = draw_range(KIDNEY, value, read_lettering().width, inside=False)
    assert value_tick(figure) == []
    assert [text.text for text in texts(figure) if text.weight is Weight.SEMIBOLD and text.tone is Tone.INK] == [strong]
    (pointer,) = [shape for shape in figure.shapes if isinstance(shape, Poly)]
    xs = [x for x, _ in pointer.points]
    assert max(xs) < 26 if words == "below" else min(xs) > 90
    assert figure.sentence == f"Derivation range 30 to 120, the value lies {words} it"


def test_nothing_typed_leaves_the_range_alone() -> None:
    figure = draw_range(KIDNEY, None, read_lettering().width, inside=False)
    assert value_tick(figure) == []
    assert figure.table == (("Derivation range", "30 to 120"),)


@pytest.mark.parametrize(
    ("span", "words", "closed"),
    [
        (RangeOfValues(None, 120, "", "120"), "up to 120", 1),
        (RangeOfValues(30, None, "30", ""), "30 and above", 1),
        (KIDNEY, "30 to 120", 2),
    ],
)
def test_an_open_side_has_no_end(span: RangeOfValues, words: str, closed: int) -> None:
    figure = draw_range(span, None, read_lettering().width, inside=True)
    upright = [s for s in figure.shapes if isinstance(s, Line) and s.x == s.to_x]
    assert len(upright) == closed
    assert figure.table == (("Derivation range", words),)


@pytest.mark.parametrize("value", [500, 5_000, 50_000])
@pytest.mark.parametrize("low", ["1000", "1.03", "3"])
def test_wide_figures_move_the_line_and_never_lie_on_each_other(low: str, value: float) -> None:
    measure = read_lettering().width
    span = RangeOfValues(1_000, 25_000, low, "25000")
    figure = draw_range(span, value, measure, inside=1_000 <= value <= 25_000)
    axis = next(shape for shape in figure.shapes if isinstance(shape, Line))
    left, right = texts(figure)
    begins = left.left(measure(left.text, left.size, left.weight))
    assert 0 <= begins < left.x < axis.x < axis.to_x < right.x
    assert right.x + measure(right.text, right.size, right.weight) <= figure.width
    for pointer in (shape for shape in figure.shapes if isinstance(shape, Poly)):
        assert all(0 <= x <= figure.width for x, _ in pointer.points)
