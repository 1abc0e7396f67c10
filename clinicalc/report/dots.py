"""A probability as people: a grid of dots, filled row by row, every dot one person.

From 1 to 99 % the grid is 100 people, else 1000. It is never without a marked dot and never marked whole: where the
number is fewer than one person of 1000, the first dot is a ring in accent, neither filled nor empty, and the sentence
says "fewer than 1"; the last one is such a ring where it is all but fewer than one. The small grid beside the number
is always 100 people; where the number is no whole person of 100, part of its first (or last) dot is filled.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from functools import lru_cache
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
    filled, empty = _small_dots(pitch)
    shapes: tuple[Shape, ...] = (*filled[:full], *empty[full:])
    if whole == 1000:
        x, y = filled[ring].x, filled[ring].y
        shapes = (*filled[:ring], *_partly_filled(x, y, 0.45 * pitch, part), *empty[ring + 1 :])
    return Figure(side, side, shapes, _sentence(count, whole, probability), _table(count, whole, probability))


@lru_cache(maxsize=8)
def _small_dots(pitch: float) -> tuple[tuple[Dot, ...], tuple[Dot, ...]]:
    """All people of the small grid as full dots, and all of them as empty ones."""
    places = [((at % _SIDE + 0.5) * pitch, (at // _SIDE + 0.5) * pitch) for at in range(_SIDE * _SIDE)]
    full = tuple(Dot(x, y, 0.45 * pitch, fill=Tone.ACCENT) for x, y in places)
    return full, tuple(Dot(x, y, 0.27 * pitch, fill=Tone.EDGE) for x, y in places)


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
    layout = _Layout(pitch, gap, radius, columns, rows, line, empty)
    filled, ring, open_ = layout.people()
    if count is not None:
        shapes = (*filled[:count], *open_[count:])
    elif probability < 0.5:
        shapes = (ring[0], *open_[1:])
    else:
        shapes = (*filled[:-1], ring[-1])
    return Figure(
        layout.width, layout.height, shapes, _sentence(count, whole, probability), _table(count, whole, probability)
    )


@dataclass(frozen=True, slots=True)
class _Layout:
    """Where people stand: `pitch` from dot to dot, `gap` more in the middle; `line` outlines what is not filled.

    Where dots are small, those not filled are smaller dots of radius `empty` instead of open circles.
    """

    pitch: float
    gap: float
    radius: float
    columns: int
    rows: int
    line: float
    empty: float | None

    @property
    def width(self) -> float:
        """With the outlines, which lie half outside of their circles."""
        return (self.columns - 1) * self.pitch + self.gap + 2 * self.radius + self.line

    @property
    def height(self) -> float:
        """With the outlines."""
        return (self.rows - 1) * self.pitch + self.gap + 2 * self.radius + self.line

    @lru_cache(maxsize=8)  # noqa: B019 (the same few layouts for every keystroke)
    def people(self) -> tuple[tuple[Dot, ...], tuple[Dot, ...], tuple[Dot, ...]]:
        """Every person as a filled dot, as a ring in accent that stands for fewer than one person, and as empty."""
        start = self.line / 2 + self.radius
        xs = [start + at * self.pitch + (self.gap if at >= self.columns // 2 else 0) for at in range(self.columns)]
        ys = [start + at * self.pitch + (self.gap if at >= self.rows // 2 else 0) for at in range(self.rows)]
        places = [(x, y) for y in ys for x in xs]
        filled = tuple(Dot(x, y, self.radius, fill=Tone.ACCENT) for x, y in places)
        ring = tuple(Dot(x, y, self.radius, outline=Tone.ACCENT, line=self.line) for x, y in places)
        if self.empty is not None:
            return filled, ring, tuple(Dot(x, y, self.empty, fill=Tone.EDGE) for x, y in places)
        return filled, ring, tuple(Dot(x, y, self.radius, outline=Tone.EDGE, line=self.line) for x, y in places)


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
