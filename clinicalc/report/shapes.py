"""What is painted, on screen and on paper: text, lines, boxes, dots and outlines, measured from the top left corner.

Shapes name their ink and know no colour: paper and each theme of the window bring a colour for every name.
"""

from collections.abc import Hashable, Iterable, Iterator
from dataclasses import dataclass, replace
from enum import Enum, StrEnum, auto
from typing import Protocol

from clinicalc.report.typefaces import Weight


class Tone(StrEnum):
    """The inks by name; there is no verdict among them. The values are the names under which a theme lists them."""

    GROUND = "ground"
    SHEET = "sheet"
    FIELD = "field"
    INK = "ink"
    SOFT = "soft"
    RULE = "rule"
    EDGE = "edge"
    ACCENT = "accent"
    ON_ACCENT = "on_accent"
    TINT = "tint"
    WASH = "wash"
    SEL = "sel"
    HATCH = "hatch"


class Anchor(Enum):
    """Which point of a text stands at its x."""

    START = auto()
    MIDDLE = auto()
    END = auto()


class Measure(Hashable, Protocol):
    """How wide a text runs; `Lettering.width` is one."""

    def __call__(self, text: str, size: float, weight: Weight = Weight.REGULAR, /) -> float:
        """The width in the unit of `size`."""


@dataclass(frozen=True, slots=True)
class Text:
    """A line of text standing on the baseline `y`; `anchor` says which point of it stands at `x`."""

    x: float
    y: float
    text: str
    size: float
    weight: Weight = Weight.REGULAR
    tone: Tone = Tone.INK
    anchor: Anchor = Anchor.START

    def moved(self, dx: float, dy: float) -> "Text":
        """The same text elsewhere."""
        return Text(self.x + dx, self.y + dy, self.text, self.size, self.weight, self.tone, self.anchor)

    def left(self, width: float) -> float:
        """Where the text begins, when it is `width` wide."""
        match self.anchor:
            case Anchor.START:
                return self.x
            case Anchor.MIDDLE:
                return self.x - width / 2
            case Anchor.END:
                return self.x - width


@dataclass(frozen=True, slots=True)
class Line:
    """A straight line, cut off square at both ends; `dash` is the length of strokes and of gaps, nought for none."""

    x: float
    y: float
    to_x: float
    to_y: float
    width: float
    tone: Tone
    dash: float = 0.0

    def moved(self, dx: float, dy: float) -> "Line":
        """The same line elsewhere."""
        return Line(self.x + dx, self.y + dy, self.to_x + dx, self.to_y + dy, self.width, self.tone, self.dash)


@dataclass(frozen=True, slots=True)
class Rect:
    """A box, filled, outlined or both; `y` is its top, `radius` rounds its corners. The outline lies on the edge."""

    x: float
    y: float
    width: float
    height: float
    fill: Tone | None = None
    outline: Tone | None = None
    line: float = 1.0
    radius: float = 0.0

    def moved(self, dx: float, dy: float) -> "Rect":
        """The same box elsewhere."""
        x, y = self.x + dx, self.y + dy
        return Rect(x, y, self.width, self.height, self.fill, self.outline, self.line, self.radius)


@dataclass(frozen=True, slots=True)
class Dot:
    """A circle round its middle, filled or open or both; the outline lies on the edge."""

    x: float
    y: float
    radius: float
    fill: Tone | None = None
    outline: Tone | None = None
    line: float = 1.0

    def moved(self, dx: float, dy: float) -> "Dot":
        """The same circle elsewhere."""
        return Dot(self.x + dx, self.y + dy, self.radius, self.fill, self.outline, self.line)


@dataclass(frozen=True, slots=True)
class Poly:
    """A run of straight strokes through `points`, or the closed area within them where it has a fill."""

    points: tuple[tuple[float, float], ...]
    fill: Tone | None = None
    outline: Tone | None = None
    line: float = 1.0

    def moved(self, dx: float, dy: float) -> "Poly":
        """The same outline elsewhere."""
        return replace(self, points=tuple((x + dx, y + dy) for x, y in self.points))


Shape = Text | Line | Rect | Dot | Poly


@dataclass(frozen=True, slots=True)
class Figure:
    """A drawing with what it says in words.

    `sentence` is what a screen reader says, `table` the same figures as rows of text. `baseline` is the y of the text
    that the drawing stands on, where it has one.
    """

    width: float
    height: float
    shapes: tuple[Shape, ...]
    sentence: str
    table: tuple[tuple[str, ...], ...]
    baseline: float = 0.0


def move(shapes: Iterable[Shape], dx: float, dy: float) -> tuple[Shape, ...]:
    """The same shapes elsewhere."""
    return tuple(shape.moved(dx, dy) for shape in shapes)


def hatch(x: float, y: float, width: float, height: float, pitch: float = 5.0) -> Iterator[Line]:
    """Rising strokes at 45 degrees, `pitch` apart, cut off at the edges of the box."""
    start = x - height + pitch
    while start < x + width:
        left, right = max(start, x), min(start + height, x + width)
        yield Line(left, y + height - (left - start), right, y + height - (right - start), 0.6, Tone.HATCH)
        start += pitch


def pointer(tip_x: float, y: float, length: float, tone: Tone) -> Poly:
    """A filled triangle with its tip at `tip_x`, pointing right; a negative length points left. As high as 1.2 long."""
    half = abs(length) * 0.6
    return Poly(((tip_x, y), (tip_x - length, y - half), (tip_x - length, y + half)), fill=tone)
