"""A name beside one of two lines: off both, and never with the other between."""

from clinicalc.report.places_beside import fill_in, find_place_beside

FALLING = fill_in([(float(x), float(x)) for x in range(0, 101, 4)])
WITHIN = (0.0, 0.0, 300.0, 100.0)


def test_right_of_the_first_point_that_has_room() -> None:
    assert find_place_beside((60.0, 10.0), FALLING[20:], 1.0, WITHIN, [], [], 6.0) == (26.0, 4.0, 86.0, 14.0)


def test_left_where_there_is_no_room_at_the_right() -> None:
    box = find_place_beside((60.0, 10.0), FALLING[::-1], 0.5, (0.0, 0.0, 104.0, 100.0), [], [], 6.0)
    assert box == (23.0, 90.0, 83.0, 100.0)  # 6 off, the line would run through its corner; 12 off it is clear


def test_never_over_the_other_line_nor_beyond_it() -> None:
    upright = fill_in([(104.0, float(y)) for y in range(0, 101, 4)])
    box = find_place_beside((60.0, 10.0), FALLING[::-1], 0.5, WITHIN, [], upright, 6.0)
    assert box is not None
    assert box[2] < 104.0


def test_none_where_everything_is_taken() -> None:
    assert find_place_beside((60.0, 10.0), FALLING, 1.0, WITHIN, [WITHIN], [], 6.0) is None
    assert find_place_beside((60.0, 10.0), [], 1.0, WITHIN, [], [], 6.0) is None
