"""Where a name can stand close beside a line of two that run together for a while, so that it is read as that one's."""

from itertools import pairwise

from clinicalc.report.free_places import Box, Point


def find_place_beside(
    asked: tuple[float, float],
    line: list[Point],
    rise: float,
    within: Box,
    taken: list[Box],
    other: list[Point],
    least: float,
) -> Box | None:
    """A box of the width and height `asked` right of a point of the line, else left of it; None where there is none.

    Its foot (rise 1) or middle (0.5) is about as high as the point, and it is `least` off it or some times that; inside
    of `within`, clear of the boxes `taken`. The other line runs neither through it nor between it and its own.
    """
    for times in (1.0, 2.0, 4.0, 7.0):
        gap = times * least
        for x, y in line:
            top = y - rise * asked[1] - (gap if rise == 1.0 else 0.0)
            for left in (x + gap, x - gap - asked[0]):
                box = (left, top, left + asked[0], top + asked[1])
                reach = (min(left, x), min(top, y), max(box[2], x), max(box[3], y))
                free = _lies_in(box, within) and not any(_meet(box, one) for one in taken)
                if free and not _holds(box, line) and not _holds(reach, other):
                    return box
    return None


def _lies_in(box: Box, within: Box) -> bool:
    return within[0] <= box[0] and within[1] <= box[1] and box[2] <= within[2] and box[3] <= within[3]


def _meet(one: Box, other: Box) -> bool:
    return one[0] < other[2] and other[0] < one[2] and one[1] < other[3] and other[1] < one[3]


def _holds(box: Box, line: list[Point]) -> bool:
    return any(box[0] - 2 <= x <= box[2] + 2 and box[1] - 2 <= y <= box[3] + 2 for x, y in line)


def fill_in(run: list[Point]) -> list[Point]:
    """The same line with points closer together, three more in each stroke."""
    found: list[Point] = []
    for (x, y), (to_x, to_y) in pairwise(run):
        found += [(x + (to_x - x) * part, y + (to_y - y) * part) for part in (0.0, 0.25, 0.5, 0.75)]
    return [*found, *run[-1:]]
