"""People as dots: how many are filled, in which order, and what stands where there is less than one person."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.assessment.numerals import of_people
from clinicalc.report.dots import draw_people, draw_small_grid
from clinicalc.report.shapes import Dot, Figure, Poly, Tone


def dots(figure: Figure) -> list[Dot]:
    return [shape for shape in figure.shapes if isinstance(shape, Dot)]


def is_filled(dot: Dot) -> bool:
    return dot.fill is Tone.ACCENT


def is_ring(dot: Dot) -> bool:
    return dot.outline is Tone.ACCENT


def test_a_hundred_people_filled_row_by_row_with_a_gap_in_the_middle() -> None:
    figure = draw_people(0.122)
    grid = dots(figure)
    assert [is_filled(dot) for dot in grid] == [True] * 12 + [False] * 88
    first, fifth, sixth, tenth, eleventh = (grid[place] for place in (0, 4, 5, 9, 10))
    pitch = (fifth.x - first.x) / 4
    assert sixth.x - fifth.x == pytest.approx(pitch + 5)
    assert eleventh.x == first.x
    assert eleventh.y - first.y == pytest.approx(pitch)
    assert grid[50].y - grid[40].y == pytest.approx(pitch + 5)
    assert tenth.x + tenth.radius <= figure.width
    assert {dot.radius for dot in grid} == {7.5}
    assert {dot.outline for dot in grid if not is_filled(dot)} == {Tone.EDGE}


def test_the_dots_of_the_patient_sheet_are_the_same_grid_larger() -> None:
    small, large = draw_people(0.122), draw_people(0.122, dot=28)
    assert {dot.radius for dot in dots(large)} == {14}
    assert large.width / small.width == pytest.approx(28 / 15, rel=0.01)
    assert large.sentence == small.sentence == "12 of 100 dots are filled"


def test_a_thousand_people_under_one_percent() -> None:
    figure = draw_people(0.004)
    grid = dots(figure)
    assert len(grid) == 1000
    assert [is_filled(dot) for dot in grid[:5]] == [True, True, True, True, False]
    assert sum(map(is_filled, grid)) == 4
    assert len({dot.y for dot in grid}) == 20
    assert len({dot.x for dot in grid}) == 50
    assert figure.table == (("have it", "4 of 1000"), ("do not", "996 of 1000"))
    assert draw_people(0.004, room=300).width == pytest.approx(300, abs=2)


@given(st.floats(min_value=0.0, max_value=1.0, exclude_min=True, exclude_max=True))
def test_never_no_dot_and_never_all_dots(probability: float) -> None:
    figure = draw_people(probability)
    grid = dots(figure)
    count, whole = of_people(probability)
    filled, rings = sum(map(is_filled, grid)), sum(map(is_ring, grid))
    assert len(grid) == whole
    if count is not None:
        assert (filled, rings) == (count, 0)
    else:
        assert rings == 1
        assert filled == (0 if probability < 0.5 else whole - 1)
        assert "fewer than 1 of 1000" in figure.sentence
    assert all(dot.x - dot.radius >= 0 and dot.x + dot.radius <= figure.width for dot in grid)
    assert all(dot.y - dot.radius >= 0 and dot.y + dot.radius <= figure.height for dot in grid)


@given(st.floats(min_value=0.0, max_value=1.0, exclude_min=True, exclude_max=True))
def test_the_small_grid_is_a_hundred_people_and_never_without_a_mark(probability: float) -> None:
    figure = draw_small_grid(probability)
    grid = dots(figure)
    assert (figure.width, figure.height, len(grid)) == (67, 67, 100)
    count, whole = of_people(probability)
    filled, rings = sum(map(is_filled, grid)), sum(map(is_ring, grid))
    assert filled + rings > 0
    assert filled < 100
    if whole == 100:
        assert (filled, rings) == (count, 0)
    elif count is not None:
        assert filled == count // 10
        assert rings == (1 if count % 10 or filled == 100 else rings)
    else:
        assert (filled, rings) == ((0, 1) if probability < 0.5 else (99, 1))


@pytest.mark.parametrize(("probability", "part"), [(0.0025, 0.2), (0.004, 0.4), (0.0075, 0.8), (0.996, 0.6)])
def test_part_of_a_person_of_a_hundred_is_part_of_a_dot(probability: float, part: float) -> None:
    (sector,) = [shape for shape in draw_small_grid(probability).shapes if isinstance(shape, Poly)]
    assert area(sector) == pytest.approx(part * 3.14159 * (0.45 * 6.7) ** 2, rel=0.02)


def area(poly: Poly) -> float:
    """By the shoelace formula."""
    points = poly.points
    pairs = zip(points, (*points[1:], points[0]), strict=True)
    return abs(sum(x1 * y2 - x2 * y1 for (x1, y1), (x2, y2) in pairs)) / 2


def test_less_than_one_of_a_thousand_is_a_ring_alone() -> None:
    few, most = draw_small_grid(0.0003), draw_small_grid(0.9997)
    assert [place for place, dot in enumerate(dots(few)) if is_ring(dot)] == [0]
    assert [place for place, dot in enumerate(dots(most)) if is_ring(dot)] == [99]
    assert not [shape for shape in (*few.shapes, *most.shapes) if isinstance(shape, Poly)]
    assert few.sentence == "No dot is filled: fewer than 1 of 1000"
