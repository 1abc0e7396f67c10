"""Where a name can stand beside the line it names without lying on anything that is drawn."""

from collections.abc import Sequence

Box = tuple[float, float, float, float]
"""Left, top, right and bottom."""
Point = tuple[float, float]

_CLEAR = 2.0


def find_free_place(
    asked: tuple[float, float],
    own: Sequence[Point],
    gap: float,
    within: Box,
    taken: Sequence[Box],
    others: Sequence[Sequence[Point]],
) -> Box | None:
    """A box of the width and height `asked` beside the line `own`, as far to its end as there is room; None for none.

    It stands up and left of a point of the line's last two thirds or down and right of it, by `gap`; inside of
    `within`, clear of the boxes `taken`, with none of the `others` in it or between it and its own line. The points of
    all lines are close together.
    """
    wide, high = asked
    for x, y in reversed(own[len(own) // 3 :]):
        above = (x - gap - wide, y - gap - high, x - gap, y - gap)
        below = (x + gap, y + gap, x + gap + wide, y + gap + high)
        for box in (above, below):
            reach = (min(box[0], x), min(box[1], y), max(box[2], x), max(box[3], y))
            free = _lies_in(box, within) and not any(_meet(box, other) for other in taken)
            if free and not _crosses(box, own) and not any(_crosses(reach, line) for line in others):
                return box
    return None


def _lies_in(box: Box, within: Box) -> bool:
    return within[0] <= box[0] and within[1] <= box[1] and box[2] <= within[2] and box[3] <= within[3]


def _meet(one: Box, other: Box) -> bool:
    return one[0] < other[2] and other[0] < one[2] and one[1] < other[3] and other[1] < one[3]


def _crosses(box: Box, line: Sequence[Point]) -> bool:
    left, top, right, bottom = box[0] - _CLEAR, box[1] - _CLEAR, box[2] + _CLEAR, box[3] + _CLEAR
    return any(left <= x <= right and top <= y <= bottom for x, y in line)
