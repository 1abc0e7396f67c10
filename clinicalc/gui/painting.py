"""Paints shapes on the screen and on a printer; the PDF is painted from the same shapes by the room of the print.

At once and as a whole: no timers, no threads, nothing that could leave an old number standing.
"""

import re
from collections.abc import Iterable, Mapping, Sequence
from functools import cache, lru_cache
from itertools import groupby
from math import floor
from typing import assert_never, cast

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontDatabase, QPainter, QPainterPath, QPen, QPolygonF, QTransform

from clinicalc.gui.tokens import Tokens
from clinicalc.gui.typeface import FAMILY
from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Dot, Line, Poly, Rect, Shape, Text, Tone
from clinicalc.report.typefaces import Weight
from clinicalc.resources import read_shipped

_LEFT_OUT = ("kern", "liga", "clig", "calt", "dlig")
"""Font features that the PDF does not have: what they would join or move stands as it was measured."""
_ROUNDING = 1e-6
_WORDS = re.compile("[^ ]+ *| +")


def colours_of(tokens: Tokens) -> Mapping[Tone, QColor]:
    """The colour of every ink in a theme."""
    return {tone: QColor(getattr(tokens, tone.value)) for tone in Tone}


def paint(
    painter: QPainter,
    shapes: Iterable[Shape],
    colours: Mapping[Tone, QColor],
    lettering: Lettering,
    *,
    scale: float = 1.0,
    snap: bool = True,
) -> None:
    """Paint shapes from the painter's origin, every measure times `scale` (a printer: its dots by the shapes' points).

    `snap` puts thin upright and level lines on whole device pixels, and the edges of boxes; leave it off for a printer.
    Texts are as wide as `lettering` measures them, so that screen and paper agree.
    """
    painter.save()
    try:
        painter.setRenderHints(QPainter.RenderHint.Antialiasing | QPainter.RenderHint.TextAntialiasing)
        painter.scale(scale, scale)
        grid = _Grid(painter.deviceTransform(), snap=snap)
        for _, run in groupby(shapes, _look):
            alike = list(run)
            match alike[0]:
                case Line():
                    _stroke(painter, cast(list[Line], alike), colours, grid)
                case Dot():
                    _round(painter, cast(list[Dot], alike), colours)
                case _:
                    for shape in alike:
                        _paint_one(painter, shape, colours, lettering, grid)
    finally:
        painter.restore()


def _paint_one(
    painter: QPainter, shape: Shape, colours: Mapping[Tone, QColor], lettering: Lettering, grid: "_Grid"
) -> None:
    match shape:
        case Text():
            _write(painter, shape, colours[shape.tone], lettering, grid)
        case Line():
            _stroke(painter, [shape], colours, grid)
        case Rect():
            _ink(painter, shape, colours, grid)
            box = grid.box(shape)
            painter.drawRoundedRect(box, shape.radius, shape.radius) if shape.radius else painter.drawRect(box)
        case Dot():
            _round(painter, [shape], colours)
        case Poly():
            _ink(painter, shape, colours, None)
            _outline(painter, shape, grid)
        case _:
            assert_never(shape)


def _look(shape: Shape) -> tuple[object, ...]:
    """Lines of one pen and dots of one ink go to Qt together: each call on its own costs more than the drawing."""
    match shape:
        case Line():
            return Line, shape.width, shape.tone, shape.dash, shape.x == shape.to_x or shape.y == shape.to_y
        case Dot():
            return Dot, shape.fill, shape.outline, shape.line
        case _:
            return ()


class _Grid:
    """The device's pixels in the measure of the shapes; where nothing is to be moved it leaves every place alone."""

    def __init__(self, device: QTransform, *, snap: bool) -> None:
        self._snaps = snap and not device.isRotating()
        self._zoom = (device.m11(), device.m22())
        self._start = (device.dx(), device.dy())

    @property
    def zoom(self) -> float:
        """How many of the device's pixels there are to one of the shapes' measure."""
        return abs(self._zoom[0]) or 1.0

    def width(self, width: float) -> float:
        """A line's width in whole pixels, at least one."""
        return max(1, round(width * self._zoom[0])) / self._zoom[0] if self._snaps else width

    def edge(self, at: float, axis: int) -> float:
        """The nearest edge between two pixels; `axis` is 0 for x, 1 for y."""
        if not self._snaps:
            return at
        return (floor(at * self._zoom[axis] + self._start[axis] + 0.5) - self._start[axis]) / self._zoom[axis]

    def baseline(self, at: float) -> float:
        """The row of pixels at or above a baseline: letters stand sharp, and where a rasterised PDF has them."""
        if not self._snaps:
            return at
        return (floor(at * self._zoom[1] + self._start[1] + _ROUNDING) - self._start[1]) / self._zoom[1]

    def middle(self, at: float, width: float, axis: int) -> float:
        """Where the middle of a line has to be so that it covers whole pixels: a pixel's middle for an odd width."""
        if not self._snaps:
            return at
        half = self.width(width) / 2
        return self.edge(at - half, axis) + half

    def box(self, rect: Rect) -> QRectF:
        """A box with its edges, or the middle of its outline, on whole pixels."""
        right, bottom = rect.x + rect.width, rect.y + rect.height
        if rect.outline is not None:
            left, top, right, bottom = (
                self.middle(at, rect.line, axis) for at, axis in ((rect.x, 0), (rect.y, 1), (right, 0), (bottom, 1))
            )
        else:
            left, top = self.edge(rect.x, 0), self.edge(rect.y, 1)
            right, bottom = self.edge(right, 0), self.edge(bottom, 1)
        return QRectF(QPointF(left, top), QPointF(right, bottom))

    def points(self, poly: Poly) -> list[QPointF]:
        """The corners; those of a filled triangle, which is a pointer, stand on edges like the line under it."""
        if poly.fill is None or len(poly.points) != 3:
            return [QPointF(x, y) for x, y in poly.points]
        return [QPointF(self.edge(x, 0), self.edge(y, 1)) for x, y in poly.points]


def _ink(painter: QPainter, shape: Rect | Dot | Poly, colours: Mapping[Tone, QColor], grid: _Grid | None) -> None:
    """Pen and brush of an area."""
    if shape.outline is None:
        painter.setPen(Qt.PenStyle.NoPen)
    else:
        width = grid.width(shape.line) if grid else shape.line
        painter.setPen(_pen(colours[shape.outline].rgba(), width))
    if shape.fill is None:
        painter.setBrush(Qt.BrushStyle.NoBrush)
    else:
        painter.setBrush(colours[shape.fill])


@lru_cache(maxsize=256)
def _pen(rgba: int, width: float, dash: float = 0.0) -> QPen:
    pen = QPen(QColor.fromRgba(rgba), width, Qt.PenStyle.SolidLine, Qt.PenCapStyle.FlatCap, Qt.PenJoinStyle.MiterJoin)
    if dash:
        pen.setDashPattern([dash / width] * 2)  # Qt counts dashes in widths of the pen
    return pen


def _stroke(painter: QPainter, lines: Sequence[Line], colours: Mapping[Tone, QColor], grid: _Grid) -> None:
    """Lines of one look."""
    first, drawn = lines[0], []
    for line in lines:
        if line.x == line.to_x:
            x = grid.middle(line.x, line.width, 0)
            drawn.append(QLineF(x, grid.edge(line.y, 1), x, grid.edge(line.to_y, 1)))
        elif line.y == line.to_y:
            y = grid.middle(line.y, line.width, 1)
            drawn.append(QLineF(grid.edge(line.x, 0), y, grid.edge(line.to_x, 0), y))
        else:
            drawn.append(QLineF(line.x, line.y, line.to_x, line.to_y))
    straight = first.x == first.to_x or first.y == first.to_y
    width = grid.width(first.width) if straight else first.width
    painter.setPen(_pen(colours[first.tone].rgba(), width, first.dash))
    painter.drawLines(drawn)


def _round(painter: QPainter, dots: Sequence[Dot], colours: Mapping[Tone, QColor]) -> None:
    """Dots of one ink."""
    _ink(painter, dots[0], colours, None)
    for dot in dots:
        painter.drawEllipse(QPointF(dot.x, dot.y), dot.radius, dot.radius)


def _outline(painter: QPainter, poly: Poly, grid: _Grid) -> None:
    points = grid.points(poly)
    if poly.fill is not None:
        painter.drawPolygon(QPolygonF(points))
        return
    path = QPainterPath(points[0])
    for point in points[1:]:
        path.lineTo(point)
    painter.drawPath(path)


def _write(painter: QPainter, text: Text, colour: QColor, lettering: Lettering, grid: _Grid) -> None:
    """The text in runs of one typeface each, word by word where the lettering puts them."""
    painter.setPen(colour)
    x, y = text.left(lettering.width(text.text, text.size, text.weight)), grid.baseline(text.y)
    for font, run in lettering.runs(text.text, text.weight):
        size = text.size * font.scale
        pixels = max(1, round(size * grid.zoom))  # of the device: Qt rounds each letter's width to 1/64 of them
        painter.setFont(_font(font.name, pixels))
        for word in _WORDS.findall(run):
            if size == pixels:
                painter.drawText(QPointF(x, y), word)
            else:
                painter.save()
                painter.translate(x, y)
                painter.scale(size / pixels, size / pixels)
                painter.drawText(QPointF(0, 0), word)
                painter.restore()
            x += font.width(word) * text.size / 1000.0


@cache
def _font(name: str, pixels: int) -> QFont:
    """A typeface of the print by its name there: no hinting, no kerning, figures of one width, nothing joined."""
    own = name in {weight.value for weight in Weight}
    font = QFont(FAMILY if own else _second_family(name))
    font.setPixelSize(pixels)
    heavy = QFont.Weight.DemiBold if own else QFont.Weight.Bold
    light = name in (Weight.REGULAR.value, "DejaVuSans")
    font.setWeight(QFont.Weight.Normal if light else heavy)
    font.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
    font.setKerning(False)
    font.setFeature(QFont.Tag.fromString("tnum"), 1)
    for feature in _LEFT_OUT:
        font.setFeature(QFont.Tag.fromString(feature), 0)
    return font


@cache
def _second_family(name: str) -> str:
    """The family of the second typeface, made known to Qt when a text first needs it."""
    number = QFontDatabase.addApplicationFontFromData(read_shipped(f"resources/fonts/{name}.ttf"))
    return next(iter(QFontDatabase.applicationFontFamilies(number)), FAMILY)
