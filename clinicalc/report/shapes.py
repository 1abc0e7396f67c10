"""What is painted: lines of text, ruled lines and boxes, in points from the top left corner of the page."""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from enum import StrEnum

from clinicalc.report.typefaces import Weight


class Tone(StrEnum):
    """The inks of a print, as sRGB; there is no verdict among them."""

    INK = "#171B2B"
    SOFT = "#505869"
    RULE = "#D3D7DE"
    HATCH = "#8D93A3"
    PAPER = "#FFFFFF"


@dataclass(frozen=True, slots=True)
class Text:
    """A line of text from `x` on, standing on the baseline `y`."""

    x: float
    y: float
    text: str
    size: float
    weight: Weight = Weight.REGULAR
    tone: Tone = Tone.INK

    def moved(self, dx: float, dy: float) -> "Text":
        """The same text elsewhere."""
        return replace(self, x=self.x + dx, y=self.y + dy)


@dataclass(frozen=True, slots=True)
class Line:
    """A straight line."""

    x: float
    y: float
    to_x: float
    to_y: float
    width: float
    tone: Tone

    def moved(self, dx: float, dy: float) -> "Line":
        """The same line elsewhere."""
        return replace(self, x=self.x + dx, y=self.y + dy, to_x=self.to_x + dx, to_y=self.to_y + dy)


@dataclass(frozen=True, slots=True)
class Rect:
    """A box, filled, outlined or both; `y` is its top."""

    x: float
    y: float
    width: float
    height: float
    fill: Tone | None = None
    outline: Tone | None = None
    line: float = 1.0

    def moved(self, dx: float, dy: float) -> "Rect":
        """The same box elsewhere."""
        return replace(self, x=self.x + dx, y=self.y + dy)


Shape = Text | Line | Rect


def hatch(x: float, y: float, width: float, height: float, pitch: float = 5.0) -> Iterator[Line]:
    """Rising strokes at 45 degrees, `pitch` points apart, cut off at the edges of the box."""
    start = x - height + pitch
    while start < x + width:
        left, right = max(start, x), min(start + height, x + width)
        yield Line(left, y + height - (left - start), right, y + height - (right - start), 0.6, Tone.HATCH)
        start += pitch
