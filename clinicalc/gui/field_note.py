"""The line at the foot of the values pane about the field in focus: what the file means by it, and its date."""

from collections.abc import Sequence

from PySide6.QtCore import QRect, Qt
from PySide6.QtWidgets import QHBoxLayout, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.gui.labels import make_label, make_rule
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.tokens import RING, ROW_PITCH, SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION

_GAP = 12
_ABOVE_AND_BELOW = 16
_MOST_LINES = 5
"""A meaning longer than this belongs to the file's documentation; a screen reader says all of it."""


class FieldNote(QWidget):
    """Shows one row's note, or nothing. It holds the date fields of all rows and shows one of them at most.

    As high as the longest note of the model needs, with and without one: nothing moves when the focus does.
    """

    def __init__(self) -> None:
        super().__init__()
        self._rows: tuple[FieldRow, ...] = ()
        self._is_narrow = self._is_of_use = False
        self.setObjectName("ground")
        self.words = make_label("", CAPTION, soft=True)
        self._dates = QStackedWidget()
        row = QHBoxLayout()
        row.setContentsMargins(SIDE_MARGIN, 0, SIDE_MARGIN - RING, 0)
        row.setSpacing(_GAP)
        row.addWidget(self.words, 1)
        row.addWidget(self._dates, 0, Qt.AlignmentFlag.AlignVCenter)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(make_rule())
        column.addLayout(row, 1)
        self.clear()
        self.hide()

    def hold(self, rows: Sequence[FieldRow]) -> None:
        """Take the rows of a model and their date fields, instead of those before."""
        while self._dates.count():
            old = self._dates.currentWidget()
            assert old is not None  # there is one as long as there are any
            self._dates.removeWidget(old)
            old.deleteLater()
        self._rows = tuple(rows)
        for row in rows:
            if row.dated is not None:
                self._dates.addWidget(row.dated)
        self.clear()

    def fit(self, width: int) -> None:
        """Settle into `width` pixels; hidden where no field of the model has anything to say."""
        self.setFixedWidth(width)
        room = width - 2 * SIDE_MARGIN + RING
        self._is_of_use = any(row.dated is not None or row.note() for row in self._rows)
        self.setVisible(self._is_of_use and not self._is_narrow)
        lines = max((self._height(row, room) for row in self._rows), default=0)
        most = _MOST_LINES * self.words.fontMetrics().lineSpacing()
        self.setFixedHeight(max(ROW_PITCH, min(lines, most)) + _ABOVE_AND_BELOW)

    def set_narrow(self, narrow: bool) -> None:
        """In one column there is no room to spare: the note comes and goes at the lower edge."""
        self._is_narrow = narrow
        self.setVisible(self._is_of_use and not narrow)

    def show_row(self, row: FieldRow) -> None:
        """What there is to say about this field, and its date field where the file asks for a date."""
        self.words.setText(row.note())
        self._dates.setVisible(row.dated is not None)
        if row.dated is not None:
            self._dates.setCurrentWidget(row.dated)
        if self._is_narrow:
            self.setVisible(row.dated is not None or bool(row.note()))

    def clear(self) -> None:
        """No field is in focus."""
        self.words.setText("")
        self._dates.hide()
        if self._is_narrow:
            self.hide()

    def _height(self, row: FieldRow, room: int) -> int:
        beside = 0 if row.dated is None else row.dated.sizeHint().width() + _GAP
        box = QRect(0, 0, max(1, room - beside), 10_000)
        return self.words.fontMetrics().boundingRect(box, Qt.TextFlag.TextWordWrap, row.note()).height()
