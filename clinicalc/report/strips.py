"""Strips: the lines of a page, each with what stands on it, before it is known on which page they come to stand."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Shape, Text, Tone, move
from clinicalc.report.typefaces import Weight

WIDTH = 510.0
"""Points between the margins of a page."""
BASE, SMALL = 10.5, 9.0
"""Type sizes in points."""
LEADING, CLOSE_LEADING, CLOSEST_LEADING = 1.34, 1.24, 1.18
"""Height of a line in type sizes: usually, where much has to go on one page, and where it is still too much."""
LONGEST_WHOLE = 12
"""Strips; a paragraph or table row of more may be parted by a page break, but for its first and last two lines."""
SEMIBOLD = Weight.SEMIBOLD


@dataclass(frozen=True, slots=True)
class Strip:
    """A strip across the page, shapes measured from its top left corner.

    `keep` holds it to the strip after it; `head` is repeated above it where it comes first on a page; `grows` is what
    it may be higher where everything stands on one page with room to spare.
    """

    height: float
    shapes: tuple[Shape, ...] = ()
    keep: bool = False
    head: tuple["Strip", ...] = ()
    grows: float = 0.0


@dataclass(frozen=True, slots=True)
class Style:
    """How a text is set."""

    size: float = BASE
    weight: Weight = Weight.REGULAR
    tone: Tone = Tone.INK
    leading: float = LEADING

    @property
    def height(self) -> float:
        """The height of a line."""
        return self.size * self.leading

    @property
    def baseline(self) -> float:
        """From the top of a line down to its baseline, so that capitals (0.66 of the size) stand in the middle."""
        return (self.height + 0.66 * self.size) / 2


PLAIN, STRONG, SOFT = Style(), Style(weight=SEMIBOLD), Style(tone=Tone.SOFT)
CAPTION = Style(SMALL, tone=Tone.SOFT)
TABLE, SMALL_PRINT = Style(SMALL + 0.5), Style(SMALL)


def set_lines(lettering: Lettering, text: str, left: float, width: float, style: Style = PLAIN) -> list[Strip]:
    """A paragraph as one strip a line."""
    lines = lettering.wrap(text, width, style.size, style.weight)
    return [
        Strip(style.height, (Text(left, style.baseline, line, style.size, style.weight, style.tone),)) for line in lines
    ]


def part_words(lettering: Lettering, text: str, room: float, size: float = BASE) -> tuple[str, str]:
    """The words that go into a room, and those that do not."""
    if lettering.width(text, size) <= room:
        return text, ""
    words = text.split(" ")
    fits = 0
    while fits < len(words) and lettering.width(" ".join(words[: fits + 1]), size) <= room:
        fits += 1
    return " ".join(words[:fits]), " ".join(words[fits:])


def height_of(strips: Sequence[Strip]) -> float:
    """How high strips stand on each other."""
    return sum(strip.height for strip in strips)


def join_beside(columns: Sequence[Sequence[Strip]]) -> list[Strip]:
    """Columns side by side: one strip that is read column by column, or where they are long one strip a line."""
    rows = max(len(column) for column in columns)
    if rows <= LONGEST_WHOLE:
        return [join_columns(columns)]
    return [join_columns([column[place : place + 1] for column in columns]) for place in range(rows)]


def join_columns(columns: Sequence[Sequence[Strip]]) -> Strip:
    """All strips of all columns as one, the highest column giving the height."""
    shapes: list[Shape] = []
    height = 0.0
    for column in columns:
        y = 0.0
        for strip in column:
            seen = [shape for shape in strip.shapes if not _is_empty(shape)]
            shapes += move(seen, 0, y) if y else seen
            y += strip.height
        height = max(height, y)
    return Strip(height, tuple(shapes))


def _is_empty(shape: Shape) -> bool:
    return isinstance(shape, Text) and not shape.text


def hold_together(strips: Sequence[Strip]) -> list[Strip]:
    """The strips held together where they are few; else only the first and the last two lines are."""
    last = len(strips) - 1
    held = range(last) if len(strips) <= LONGEST_WHOLE else (0, 1, last - 2, last - 1)
    return [
        strip if strip.keep or place not in held else replace(strip, keep=True) for place, strip in enumerate(strips)
    ]
