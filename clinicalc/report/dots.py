"""A probability as people: a grid of dots, filled row by row, every dot one person.

From 1 to 99 % the grid is 100 people, else 1000. It is never without a marked dot and never marked whole: where the
number is fewer than one person of 1000, the first dot is a ring in accent, neither filled nor empty, and the sentence
says "fewer than 1"; the last one is such a ring where it is all but fewer than one. The small grid beside the number
is always 100 people; where the number is no whole person of 100, part of its first (or last) dot is filled.
"""

from collections.abc import Iterator
from math import cos, pi, sin

from clinicalc.assessment.numerals import of_people
from clinicalc.report.shapes import Dot, Figure, Poly, Shape, Tone

SMALL_SIDE = 67.0
DOT = 15.0
_SIDE, _WIDE, _HIGH = 10, 50, 20
_ARC_STEPS = 24


def draw_small_grid(probability: float, side: float = SMALL_SIDE) -> Figure:
    """10 x 10 people on a square of `side`: full dots in accent, the others smaller and in edge ink."""
    pitch = side / _SIDE
    count, whole = of_people(probability)
    people = 100.0 * (count or 0) / whole if probability < 0.5 or count else 100.0
    full = int(people)
    part = people - full
    ring = full if people < 100 else 99
    shapes: list[Shape] = []
    for place in range(100):
        x, y = (place % _SIDE + 0.5) * pitch, (place // _SIDE + 0.5) * pitch
        if whole == 1000 and place == ring:
            shapes += _partly_filled(x, y, 0.45 * pitch, part)
        elif place < full:
            shapes.append(Dot(x, y, 0.45 * pitch, fill=Tone.ACCENT))
        else:
            shapes.append(Dot(x, y, 0.27 * pitch, fill=Tone.EDGE))
    return Figure(side, side, tuple(shapes), _sentence(count, whole, probability), _table(count, whole, probability))


def draw_people(probability: float, dot: float = DOT, room: float | None = None) -> Figure:
    """10 x 10 large dots, a gap after the fifth row and column; 50 x 20 small ones, `room` wide, for 1000 people.

    `dot` is the width of a large dot. Left out, `room` is what 50 x 20 dots need to be as high as 100 large ones.
    """
    count, whole = of_people(probability)
    if whole == 100:
        pitch, gap, radius, columns, rows = 1.265 * dot, dot / 3, dot / 2, _SIDE, _SIDE
        line, empty = max(1.0, dot / 20), None
    else:
        wide = room if room is not None else 30.0 * dot
        pitch = wide / (_WIDE + 0.6)
        gap, radius, columns, rows = 0.6 * pitch, 0.36 * pitch, _WIDE, _HIGH
        line, empty = 1.0, 0.18 * pitch
    edge = line / 2  # an outline lies half outside of its circle
    shapes = []
    for place in range(whole):
        row, column = divmod(place, columns)
        x = edge + radius + column * pitch + (gap if column >= columns // 2 else 0)
        y = edge + radius + row * pitch + (gap if row >= rows // 2 else 0)
        shapes.append(_person(x, y, radius, _mark(place, count, whole, probability), line, empty))
    width = (columns - 1) * pitch + gap + 2 * (radius + edge)
    height = (rows - 1) * pitch + gap + 2 * (radius + edge)
    return Figure(width, height, tuple(shapes), _sentence(count, whole, probability), _table(count, whole, probability))


def _mark(place: int, count: int | None, whole: int, probability: float) -> bool | None:
    """Whether a dot is filled; None for the ring that stands for fewer than one person."""
    if count is not None:
        return place < count
    if probability < 0.5:
        return None if place == 0 else False
    return None if place == whole - 1 else True


def _person(x: float, y: float, radius: float, filled: bool | None, line: float, empty: float | None) -> Dot:
    """A filled dot, a ring in accent, an open circle or, where dots are small, a smaller dot of radius `empty`."""
    if filled:
        return Dot(x, y, radius, fill=Tone.ACCENT)
    if filled is None:
        return Dot(x, y, radius, outline=Tone.ACCENT, line=line)
    if empty is not None:
        return Dot(x, y, empty, fill=Tone.EDGE)
    return Dot(x, y, radius, outline=Tone.EDGE, line=line)


def _partly_filled(x: float, y: float, radius: float, part: float) -> Iterator[Shape]:
    """A ring in accent of which a sector is filled, clockwise from the top."""
    if part > 0:
        turns = [2 * pi * part * step / _ARC_STEPS for step in range(_ARC_STEPS + 1)]
        rim = ((x + radius * sin(turn), y - radius * cos(turn)) for turn in turns)
        yield Poly(((x, y), *rim), fill=Tone.ACCENT)
    line = 0.26 * radius
    yield Dot(x, y, radius - line / 2, outline=Tone.ACCENT, line=line)


def _sentence(count: int | None, whole: int, probability: float) -> str:
    if count is not None:
        return f"{count} of {whole} dots are filled" if count != 1 else f"1 of {whole} dots is filled"
    if probability < 0.5:
        return f"No dot is filled: fewer than 1 of {whole}"
    return f"All dots but the last are filled: all but fewer than 1 of {whole}"


def _table(count: int | None, whole: int, probability: float) -> tuple[tuple[str, ...], ...]:
    if count is not None:
        return (("have it", f"{count} of {whole}"), ("do not", f"{whole - count} of {whole}"))
    few, most = f"fewer than 1 of {whole}", f"all but fewer than 1 of {whole}"
    return (("have it", few), ("do not", most)) if probability < 0.5 else (("have it", most), ("do not", few))
