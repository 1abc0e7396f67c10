"""The fingerprint of a coefficient file: sixteen groups of four on a plate, to be read aloud and compared."""

from PySide6.QtCore import QSize
from PySide6.QtGui import QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QSizePolicy, QVBoxLayout, QWidget

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.labels import make_line
from clinicalc.gui.plate import paint_plate
from clinicalc.gui.typeface import CAPTION, VALUE

PLATE_WIDTH = 400
_HEADING, _FOOT = "Fingerprint, SHA-256", "The first three groups stand on every print."
_FIRST = 14
"""Letters of the first three groups."""
_IN_A_PART = 4
_TWO_PARTS, _ONE_PART = 376, 210
"""Widths that take two parts beside each other, and one."""


class FingerprintPlate(QWidget):
    """Two lines of two parts, read line by line; the first three groups in semibold."""

    def __init__(self, fingerprint: str) -> None:
        super().__init__()
        grouped = group_fingerprint(fingerprint)
        self.setAccessibleName(f"{_HEADING}: {grouped}")
        self.setMaximumWidth(round(PLATE_WIDTH * text_part()))
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self._parts: list[QWidget] = []
        self._columns = 0
        groups = grouped.split(" ")
        parts = [" ".join(groups[at : at + _IN_A_PART]) for at in range(0, len(groups), _IN_A_PART)]
        grid = self._grid = QGridLayout()
        grid.setHorizontalSpacing(16)
        grid.setVerticalSpacing(0)
        for place, part in enumerate(parts):
            cell = QHBoxLayout()
            cell.setContentsMargins(0, 0, 0, 0)
            cell.setSpacing(0)
            if place == 0:
                cell.addWidget(make_line(part[:_FIRST], VALUE, semibold=True))
                part = part[_FIRST:]
            cell.addWidget(make_line(part, VALUE), 1)
            part_box = QWidget()
            part_box.setLayout(cell)
            self._parts.append(part_box)
        self._place(columns=2)
        rows = QVBoxLayout(self)
        rows.setContentsMargins(16, 9, 16, 7)
        rows.setSpacing(1)
        rows.addWidget(make_line(_HEADING, CAPTION, soft=True))
        rows.addLayout(grid)
        rows.addWidget(make_line(_FOOT, CAPTION, soft=True))

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Where there is no room for two parts beside each other, they stand under each other."""
        super().resizeEvent(event)
        self._place(columns=2 if event.size().width() >= _TWO_PARTS * text_part() else 1)

    def minimumSizeHint(self) -> QSize:
        """One part."""
        return QSize(round(_ONE_PART * text_part()), super().minimumSizeHint().height())

    def _place(self, *, columns: int) -> None:
        if columns == self._columns:
            return
        self._columns = columns
        for part in self._parts:
            self._grid.removeWidget(part)
        for place, part in enumerate(self._parts):
            self._grid.addWidget(part, place // columns, place % columns)
        for column in (0, 1):
            self._grid.setColumnStretch(column, 1 if column < columns else 0)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Wash with an edge round it."""
        paint_plate(self)
