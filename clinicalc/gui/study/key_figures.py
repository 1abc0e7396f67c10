"""Figures to be seen first: each with its name over it and its interval under it, side by side as room allows."""

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtGui import QPainter, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QVBoxLayout

from clinicalc.gui import theme
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.typeface import CAPTION, UNIT, VALUE
from clinicalc.report.key_figures import KeyFigure

_LARGE = 32
_LEAST = 132
"""The least width of a figure with what belongs to it, at the usual text size."""
_GAP, _END, _BELOW = 16, 10, 12


class KeyFigureRow(Block):
    """All of them in rows of equal width, a thin rule between those that stand side by side."""

    def __init__(self, figures: Sequence[KeyFigure]) -> None:
        super().__init__()
        self.cells = [_Cell(figure) for figure in figures]
        self._columns = 0
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 4, 0, 4)
        self._grid.setHorizontalSpacing(0)
        self._grid.setVerticalSpacing(_BELOW)
        self._arrange(len(self.cells))

    def resizeEvent(self, event: QResizeEvent) -> None:
        """As many side by side as have room."""
        super().resizeEvent(event)
        columns = max(1, min(len(self.cells), event.size().width() // round(_LEAST * text_part())))
        self._arrange(columns)
        room = event.size().width() // columns - _GAP - _END
        high = max((cell.name.heightForWidth(room) for cell in self.cells), default=0)
        for cell in self.cells:
            cell.name.setFixedHeight(high)  # one name in two lines leaves the figures in one row

    def _arrange(self, columns: int) -> None:
        if columns == self._columns:
            return
        for place in range(self._columns):
            self._grid.setColumnStretch(place, 0)
        self._columns = columns
        for place, cell in enumerate(self.cells):
            cell.is_first = place % columns == 0
            self._grid.addWidget(cell, place // columns, place % columns, Qt.AlignmentFlag.AlignTop)
        for place in range(columns):
            self._grid.setColumnStretch(place, 1)


class _Cell(Block):
    def __init__(self, figure: KeyFigure) -> None:
        super().__init__()
        self.is_first = True
        unit_words = f" {figure.unit}" if figure.unit else ""
        sentence = f"{figure.name}: {figure.figure}{unit_words}, {figure.under}"
        self.name = make_label(figure.name, CAPTION, soft=True)
        self.name.setAlignment(Qt.AlignmentFlag.AlignBottom)
        large = make_line(figure.figure, _LARGE)
        unit = make_line(figure.unit, VALUE)
        under = make_label(figure.under, UNIT, soft=True)
        under.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        large.setAccessibleName(sentence)
        row = QHBoxLayout()
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(5)
        row.addWidget(large, 0, Qt.AlignmentFlag.AlignBaseline)
        row.addWidget(unit, 0, Qt.AlignmentFlag.AlignBaseline)
        row.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, _END, 0)
        column.setSpacing(0)
        column.addWidget(self.name)
        column.addLayout(row)
        column.addWidget(under)
        self._column = column

    def resizeEvent(self, event: QResizeEvent) -> None:
        """One that stands beside another is set off from it."""
        super().resizeEvent(event)
        self._column.setContentsMargins(0 if self.is_first else _GAP, 0, _END, 0)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The thin rule."""
        if self.is_first:
            return
        painter = QPainter(self)
        painter.fillRect(0, 2, 1, self.height() - 4, theme.tokens().rule)
        painter.end()
