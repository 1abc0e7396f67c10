"""Figures on screen: painted at once from the shapes that a print is made of, and said in words."""

from collections.abc import Sequence
from functools import cache

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent
from PySide6.QtWidgets import QWidget

from clinicalc.gui import theme
from clinicalc.gui.painting import paint
from clinicalc.gui.typeface import BASE, face
from clinicalc.report.fonts import Lettering, read_lettering
from clinicalc.report.shapes import Figure


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
        self._figure = figure
        self.setAccessibleName("" if figure is None else figure.sentence)
        self.setAccessibleDescription("" if figure is None else "; ".join(table_lines((figure,))))
        self.updateGeometry()
        self.update()

    def sizeHint(self) -> QSize:
        """What the figure takes, in whole pixels."""
        if self._figure is None:
            return QSize(0, 0)
        inset, drop = self._place
        return QSize(int(self._figure.width + inset) + 1, int(self._figure.height + drop) + 1)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The whole figure, from its shapes."""
        if self._figure is None:
            return
        inset, drop = self._place
        painter = QPainter(self)
        try:
            painter.translate(inset, drop - self.anchor_of(self._figure))
            paint(painter, self._figure.shapes, theme.colours(theme.tokens()), lettering())
        finally:
            painter.end()

    def anchor_of(self, figure: Figure) -> float:
        """The y of the figure that stands at `drop`."""
        return 0.0


def table_lines(figures: Sequence[Figure]) -> list[str]:
    """The tables of figures, one line a row: "Probability: 12.2 %"."""
    return [": ".join(row) for figure in figures for row in figure.table]
