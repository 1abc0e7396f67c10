"""Figures on screen: painted at once from the shapes that a print is made of, and said in words."""

from collections.abc import Sequence
from functools import cache
from typing import assert_never

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent
from PySide6.QtWidgets import QWidget

from clinicalc.gui import theme
from clinicalc.gui.painting import paint
from clinicalc.gui.typeface import BASE, face
from clinicalc.report.fonts import Lettering, read_lettering
from clinicalc.report.shapes import Dot, Figure, Line, Poly, Rect, Shape, Text

_PIXELS = 2.0
"""Lines and edges are moved onto whole pixels."""


@cache
def lettering() -> Lettering:
    """The lettering that figures are measured with, read once."""
    return read_lettering()


def text_part() -> float:
    """How large text is by its usual size; figures follow it, the widths of their lines do not."""
    return face(BASE).pixelSize() / BASE


class FigureView(QWidget):
    """Shows one figure, or nothing. Its accessible name is the figure's sentence, its description the figure's table.

    The figure stands `inset` to the right and its baseline, or else its top, at `drop`.
    """

    def __init__(self, inset: float = 0.0, drop: float = 0.0) -> None:
        super().__init__()
        self._figure: Figure | None = None
        self._reaches: list[QRectF] = []
        self._place = (inset, drop)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)

    @property
    def figure_shown(self) -> Figure | None:
        """The figure on screen."""
        return self._figure

    def show_figure(self, figure: Figure | None) -> None:
        """Show another figure; the same one again asks for no paint, so that a paint that fails does so once."""
        if figure == self._figure:
            return
        size = self.sizeHint()
        before, self._figure = self._figure, figure
        reaches, self._reaches = self._reaches, []
        self.setAccessibleName("" if figure is None else figure.sentence)
        self.setAccessibleDescription("" if figure is None else "; ".join(table_lines((figure,))))
        if self.sizeHint() != size:
            self.updateGeometry()
        changed = None
        if figure is not None:
            self._reaches, changed = _reaches_of(figure, before, reaches)
        if changed is None or figure is None:
            self.update()
        else:
            self.update(changed.translated(*self._start_of(figure)).toAlignedRect())

    def sizeHint(self) -> QSize:
        """What the figure takes, in whole pixels."""
        if self._figure is None:
            return QSize(0, 0)
        inset, drop = self._place
        return QSize(int(self._figure.width + inset) + 1, int(self._figure.height + drop) + 1)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The figure from its shapes, all that reach into what is to be painted."""
        if self._figure is None:
            return
        start, shapes = self._start_of(self._figure), self._figure.shapes
        if event.rect() != self.rect():
            asked = QRectF(event.rect()).translated(-start[0], -start[1])
            pairs = zip(shapes, self._reaches, strict=True)
            shapes = tuple(shape for shape, at in pairs if at.intersects(asked))
        painter = QPainter(self)
        try:
            painter.translate(*start)
            paint(painter, shapes, theme.colours(theme.tokens()), lettering())
        finally:
            painter.end()

    def _start_of(self, figure: Figure) -> tuple[float, float]:
        """Where the figure's origin stands."""
        inset, drop = self._place
        return inset, drop - self.anchor_of(figure)

    def anchor_of(self, figure: Figure) -> float:
        """The y of the figure that stands at `drop`."""
        return 0.0


def _reaches_of(figure: Figure, before: Figure | None, known: list[QRectF]) -> tuple[list[QRectF], QRectF | None]:
    """The boxes round a figure's shapes, and what it differs in from the drawing before it, whose boxes are known.

    None for the difference where it cannot be told from the shapes, as where sizes differ.
    """
    if before is None or _size(before) != _size(figure):
        return [_reach(shape) for shape in figure.shapes], None
    reaches: list[QRectF] = []
    changed = QRectF()
    for old, new, at in zip(before.shapes, figure.shapes, known, strict=True):
        if old is new or old == new:
            reaches.append(at)
            continue
        now = _reach(new)
        reaches.append(now)
        changed = changed.united(at).united(now)
    return reaches, changed


def _size(figure: Figure) -> tuple[float, float, float, int]:
    return figure.width, figure.height, figure.baseline, len(figure.shapes)


def _reach(shape: Shape) -> QRectF:
    """A box round all that a shape inks, with room for whole pixels; letters and their accents may reach out by one."""
    match shape:
        case Text():
            width = lettering().width(shape.text, shape.size, shape.weight)
            left = shape.left(width)
            right, top, bottom = left + width, shape.y - shape.size, shape.y
            around = shape.size
        case Line():
            (left, right), (top, bottom) = sorted((shape.x, shape.to_x)), sorted((shape.y, shape.to_y))
            around = shape.width / 2
        case Rect():
            left, top, right, bottom = shape.x, shape.y, shape.x + shape.width, shape.y + shape.height
            around = shape.line
        case Dot():
            left, right = shape.x - shape.radius, shape.x + shape.radius
            top, bottom = shape.y - shape.radius, shape.y + shape.radius
            around = shape.line
        case Poly():
            xs, ys = zip(*shape.points, strict=True)
            left, top, right, bottom = min(xs), min(ys), max(xs), max(ys)
            around = 4 * shape.line  # a mitred corner reaches further than the line is wide
        case _:
            assert_never(shape)
    around += _PIXELS
    return QRectF(left - around, top - around, right - left + 2 * around, bottom - top + 2 * around)


def table_lines(figures: Sequence[Figure]) -> list[str]:
    """The tables of figures, one line a row: "Probability: 12.2 %"."""
    return [": ".join(row) for figure in figures for row in figure.table]
