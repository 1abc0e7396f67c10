"""What a new version does to numbers: where both dots stand, that they are told apart, and what is written beside."""

from dataclasses import replace

import pytest

from clinicalc.report.columns import Columns
from clinicalc.report.effect_figure import Move, Moves, draw_effect, pair_words
from clinicalc.report.scale import Scale
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Poly, Text, Tone
from clinicalc.report.typefaces import Weight
from tests.report.viewing import EVERY_SIZE, MEASURE, WINDOW, assert_inside, assert_no_words_overlap

MOVES = Moves(
    "cloglog",
    (
        Move("woman of 41", 0.011, 0.010, "age 41, sex female (10 years)"),
        Move("man of 61, smoker", 0.166, 0.158),
        Move("man of 76, diabetes, smoker", 0.431, 0.425),
    ),
    "1.2.0",
    "1.3.0",
    "% within 10 years",
)
FAR = Moves(
    "logit",
    (
        Move("a name that takes several lines wherever it stands, since it says all there is to say", 0.0001, 0.5),
        Move("woman of 60", 0.3, 0.9999),
        Move("woman of 35", None, 0.05),
        Move("man of 35", None, None),
        Move("man of 50", 0.2, 0.2),
    ),
    "1.2.0-a.long.name.of.a.version",
    "1.3.0",
)


def drawn(moves: Moves = MOVES, columns: Columns = WINDOW) -> Figure:
    return draw_effect(moves, columns, MEASURE)


def dots(figure: Figure) -> tuple[list[Dot], list[Dot]]:
    """The open ones and the filled ones."""
    found = [shape for shape in figure.shapes if isinstance(shape, Dot)]
    return [dot for dot in found if dot.fill is None], [dot for dot in found if dot.fill is not None]


def written(figure: Figure) -> list[str]:
    return [shape.text for shape in figure.shapes if isinstance(shape, Text)]


def test_both_numbers_stand_on_the_ruler_of_the_link() -> None:
    scale = Scale("cloglog", WINDOW.ruler.width, left=WINDOW.ruler_at)
    old, new = dots(drawn())
    assert [dot.x for dot in old] == pytest.approx([scale.position(at) for at in (0.011, 0.166, 0.431)])
    assert [dot.x for dot in new] == pytest.approx([scale.position(at) for at in (0.010, 0.158, 0.425)])
    assert [dot.y for dot in old] == [dot.y for dot in new]
    assert {dot.outline for dot in old} == {dot.fill for dot in new} == {Tone.ACCENT}
    logit = Scale("logit", WINDOW.ruler.width, left=WINDOW.ruler_at)
    assert dots(drawn(replace(MOVES, link="logit")))[0][1].x == pytest.approx(logit.position(0.166))


def test_a_number_that_stays_shows_both_dots() -> None:
    (old,), (new,) = dots(drawn(replace(MOVES, moves=(Move("woman of 41", 0.1, 0.1),))))
    assert old.x == new.x
    assert new.radius < old.radius - old.line / 2  # a gap between them
    shapes = drawn().shapes
    assert max(shapes.index(dot) for dot in dots(drawn())[0][:1]) < shapes.index(dots(drawn())[1][0])


def test_numbers_far_apart_are_joined_and_close_ones_are_not() -> None:
    def joints(*moves: Move) -> list[Line]:
        shapes = drawn(replace(MOVES, moves=moves)).shapes
        return [shape for shape in shapes if isinstance(shape, Line) and shape.tone is Tone.ACCENT]

    assert joints(Move("", 0.431, 0.425)) == []
    for old, new in ((0.1, 0.4), (0.4, 0.1)):
        (line,) = joints(Move("", old, new))
        (ring,), (dot,) = dots(drawn(replace(MOVES, moves=(Move("", old, new),))))
        assert line.to_x == dot.x
        assert abs(line.x - ring.x) == pytest.approx(ring.radius + ring.line / 2)  # the ring stays open
        assert (line.x > ring.x) == (new > old)


def test_old_figure_arrow_and_new_figure_stand_in_columns() -> None:
    figure = drawn()
    texts = [shape for shape in figure.shapes if isinstance(shape, Text)]
    assert [t.text for t in texts if t.text.endswith("\u202f%")] == ["1.0\u202f%", "15.8\u202f%", "42.5\u202f%"]
    arrows = [t for t in texts if t.text == "→"]
    assert len(arrows) == 3
    assert len({arrow.x for arrow in arrows}) == 1
    for left, right in (("1.1", "1.0\u202f%"), ("16.6", "15.8\u202f%"), ("43.1", "42.5\u202f%")):
        (before,) = (t for t in texts if t.text == left)
        (after,) = (t for t in texts if t.text == right)
        assert before.anchor is after.anchor is Anchor.END
        assert before.x < arrows[0].x < after.x == WINDOW.figures_end


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        (0.011, 0.010, ("1.1", "1.0")),
        (0.1234, 0.1235, ("12.34", "12.35")),  # one decimal would write both as 12.3
        (0.2, 0.2000001, ("20.00000", "20.00001")),
        (0.2, 0.2 + 1e-12, ("20.0", "20.0")),
        (0.2, 0.2, ("20.0", "20.0")),
        (None, 0.2, ("–", "20.0")),
        (0.2, None, ("20.0", "–")),
        (0.0001, 0.9999, ("<0.1", ">99.9")),
    ],
)
def test_figures_have_as_many_decimals_as_tell_them_apart(
    old: float | None, new: float | None, words: tuple[str, str]
) -> None:
    assert pair_words(old, new) == words


def test_a_number_beyond_the_scale_makes_it_the_wide_one_and_beyond_that_stands_at_its_end() -> None:
    assert not any("wide scale" in text for text in written(drawn()))
    figure = drawn(FAR)
    (words,) = (s for s in figure.shapes if isinstance(s, Text) and s.text.startswith("wide scale"))
    assert words.weight is Weight.SEMIBOLD
    old, new = dots(figure)
    assert old[0].x == WINDOW.ruler_at
    assert new[1].x == WINDOW.ruler_at + WINDOW.ruler.width
    below, above = (shape for shape in figure.shapes if isinstance(shape, Poly))
    assert max(x for x, _ in below.points) < WINDOW.ruler_at
    assert min(x for x, _ in above.points) > WINDOW.ruler_at + WINDOW.ruler.width


def test_what_gives_no_number_has_no_dot_and_says_so() -> None:
    figure = drawn(FAR)
    old, new = dots(figure)
    assert (len(old), len(new)) == (3, 4)
    assert written(figure).count("–") == 3
    assert not any(text.startswith("–\u202f") for text in written(figure))
    assert ("woman of 35", "no number to 5.0\u202f%") in figure.table
    assert ("man of 35", "no number to no number") in figure.table


def test_sentence_and_table_say_every_row() -> None:
    figure = drawn()
    assert figure.sentence == (
        "3 patients on a scale of 0.5 to 80\u202f%, open dots 1.2.0, filled dots 1.3.0:"
        " woman of 41 1.1\u202f% to 1.0\u202f%; man of 61, smoker 16.6\u202f% to 15.8\u202f%;"
        " man of 76, diabetes, smoker 43.1\u202f% to 42.5\u202f%"
    )
    assert figure.table[0] == ("From 1.2.0 to 1.3.0", "% within 10 years")
    assert figure.table[1] == ("age 41, sex female (10 years)", "1.1\u202f% to 1.0\u202f%")
    assert ("man of 50", "20.0\u202f% to 20.0\u202f%, the same") in drawn(FAR).table
    close = drawn(replace(MOVES, moves=(Move("man of 50", 0.2, 0.2 + 1e-12),)))
    assert close.table[1][1].endswith(", the same to 6 decimals")


def test_nothing_to_draw_is_an_axis_and_says_so() -> None:
    figure = drawn(replace(MOVES, moves=()))
    assert figure.sentence == "No patient to show"
    assert dots(figure) == ([], [])


@pytest.mark.parametrize("columns", EVERY_SIZE)
@pytest.mark.parametrize("moves", [MOVES, FAR])
def test_everything_stays_inside_and_apart_on_screen_and_paper(moves: Moves, columns: Columns) -> None:
    figure = drawn(moves, columns)
    assert_inside(figure)
    assert_no_words_overlap(figure)
    assert figure.baseline > max(dot.y for kind in dots(figure) for dot in kind)
