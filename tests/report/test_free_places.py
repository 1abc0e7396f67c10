"""Where a name finds a place beside its line, and that it takes none that is not free."""

from clinicalc.report.free_places import find_free_place

WITHIN = (0.0, 0.0, 100.0, 100.0)
RISING = [(float(x), 100.0 - x) for x in range(0, 101, 2)]


def test_up_and_left_of_the_last_point_that_has_room() -> None:
    assert find_free_place((20.0, 10.0), RISING, 5.0, WITHIN, [], []) == (59.0, 1.0, 79.0, 11.0)


def test_down_and_right_where_the_other_side_is_taken() -> None:
    taken = [(0.0, 0.0, 100.0, 20.0)]
    box = find_free_place((20.0, 10.0), RISING, 5.0, WITHIN, taken, [])
    assert box is not None
    left, top, right, bottom = box
    assert top >= 20.0
    assert (right - left, bottom - top) == (20.0, 10.0)
    assert all(not (left < x < right and top < y < bottom) for x, y in RISING)


def test_none_where_everything_is_taken_or_too_narrow() -> None:
    assert find_free_place((20.0, 10.0), RISING, 5.0, WITHIN, [WITHIN], []) is None
    assert find_free_place((120.0, 10.0), RISING, 5.0, WITHIN, [], []) is None
    assert find_free_place((20.0, 10.0), [], 5.0, WITHIN, [], []) is None
    crowd = [[(float(x), float(y)) for x in range(0, 101, 4) for y in range(0, 101, 4)]]
    assert find_free_place((20.0, 10.0), RISING, 5.0, WITHIN, [], crowd) is None


def test_never_beyond_another_line() -> None:
    steeper = [(x, y - 8.0) for x, y in RISING]
    box = find_free_place((20.0, 10.0), RISING, 5.0, WITHIN, [], [steeper])
    assert box is not None
    left, top, _, _ = box
    # down and right of a point of its own line: the other one is above
    assert any(x == left - 5.0 and y == top - 5.0 for x, y in RISING)
