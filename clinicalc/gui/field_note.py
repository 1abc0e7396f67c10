"""The foot of the values pane about the field in focus: what the file means by it, and what is stated beside it."""

from collections.abc import Sequence
from math import ceil

from PySide6.QtCore import QRect, Qt
from PySide6.QtWidgets import QHBoxLayout, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.gui.labels import make_label, make_rule
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.stated_entry import StatedEntry
from clinicalc.gui.tokens import RING, ROW_PITCH, SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION

_GAP = 12
_ABOVE_AND_BELOW = 16
_LETTERS_ABOUT_CHANGES = 130
"""Most that is said about a change is not longer; of the rest there is as much as has room."""
_MOST_LINES = 5
"""A meaning longer than this belongs to the file's documentation; a screen reader says all of it."""


class FieldNote(QWidget):
    """Shows one row's note, or nothing. It holds what is stated beside the values of all rows and shows one at most.

    A date alone stands beside the words; with the fields of a mean it stands on a line of its own under them. As high
    as the longest note of the model needs, with and without one: nothing moves when the focus does.
    """

    def __init__(self) -> None:
        super().__init__()
        self._rows: tuple[FieldRow, ...] = ()
        self._shown: FieldRow | None = None
        self._is_narrow = self._is_of_use = False
        self.setObjectName("ground")
        self.words = make_label("", CAPTION, soft=True)
        self._beside, self._under = QStackedWidget(), QStackedWidget()
        row = QHBoxLayout()
        row.setSpacing(_GAP)
        row.addWidget(self.words, 1)
        row.addWidget(self._beside, 0, Qt.AlignmentFlag.AlignVCenter)
        inside = QVBoxLayout()
        inside.setContentsMargins(SIDE_MARGIN, 0, SIDE_MARGIN - RING, 0)
        inside.setSpacing(0)
        inside.addStretch(1)
        inside.addLayout(row)
        inside.addWidget(self._under)
        inside.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(make_rule())
        column.addLayout(inside, 1)
        self.clear()
        self.hide()

    def hold(self, rows: Sequence[FieldRow]) -> None:
        """Take the rows of a model and what is stated beside them, instead of those before."""
        for stack in (self._beside, self._under):
            while stack.count():
                old = stack.currentWidget()
                assert old is not None  # there is one as long as there are any
                stack.removeWidget(old)
                old.deleteLater()
        self._rows = tuple(rows)
        for row in rows:
            if row.stated is not None:
                self._stack_of(row.stated).addWidget(row.stated)
        self.clear()

    def fit(self, width: int) -> None:
        """Settle into `width` pixels; hidden where no field of the model has anything to say."""
        self.setFixedWidth(width)
        room = width - 2 * SIDE_MARGIN + RING
        changes = any(row.is_changeable and row.changes_shown for row in self._rows)
        self._is_of_use = changes or any(row.stated is not None or row.note() for row in self._rows)
        self.setVisible(self._is_of_use and not self._is_narrow)
        heights = [self._height(row, room) for row in self._rows]
        # room for what may be said about a change: nothing moves when it is
        metrics = self.words.fontMetrics()
        lines = ceil(_LETTERS_ABOUT_CHANGES * metrics.averageCharWidth() / max(1, room))
        said = lines * metrics.lineSpacing() if changes else 0
        self.setFixedHeight(max([ROW_PITCH, said, *heights]) + _ABOVE_AND_BELOW)
        if self._shown is not None:
            self.show_row(self._shown)  # where ranges leave the rows, or come back, it says something else

    def set_narrow(self, narrow: bool) -> None:
        """In one column there is no room to spare: the note comes and goes at the lower edge."""
        self._is_narrow = narrow
        self.setVisible(self._is_of_use and not narrow)

    def show_row(self, row: FieldRow) -> None:
        """What there is to say about this field, and the fields for what is stated beside it."""
        self._shown = row
        words = row.note_now()
        self._say(words)
        stated = row.stated_now
        shown = None if stated is None else self._stack_of(stated)
        for stack in (self._beside, self._under):
            stack.setVisible(stack is shown)
        self.words.setVisible(bool(words) or shown is not self._under)
        if shown is not None and stated is not None:
            shown.setCurrentWidget(stated)
        if self._is_narrow:
            self.setVisible(stated is not None or bool(words))

    def clear(self) -> None:
        """No field is in focus."""
        self._shown = None
        self.words.setText("")
        self._beside.hide()
        self._under.hide()
        if self._is_narrow:
            self.hide()

    def _say(self, words: str) -> None:
        """As many of the words as there is room for; a screen reader says all of them, and so does the comparison."""
        self.words.setAccessibleName(words)
        box = QRect(0, 0, max(1, self.width() - 2 * SIDE_MARGIN + RING), 10_000)
        shown, room = words, self.height() - _ABOVE_AND_BELOW
        while self.words.fontMetrics().boundingRect(box, Qt.TextFlag.TextWordWrap, shown).height() > room:
            shown = f"{shown.rstrip('… ').rpartition(' ')[0]} …"
        self.words.setText(shown)

    def _stack_of(self, stated: StatedEntry) -> QStackedWidget:
        return self._beside if stated.averaged is None else self._under

    def _height(self, row: FieldRow, room: int) -> int:
        """What one row needs in a note of this width: its words, of which too many are cut, and its fields."""
        under = row.stated is not None and row.stated.averaged is not None
        beside = 0 if row.stated is None or under else row.stated.sizeHint().width() + _GAP
        box = QRect(0, 0, max(1, room - beside), 10_000)
        words = self.words.fontMetrics().boundingRect(box, Qt.TextFlag.TextWordWrap, row.note()).height()
        words = min(words, _MOST_LINES * self.words.fontMetrics().lineSpacing()) if row.note() else 0
        return words + ROW_PITCH if under else max(ROW_PITCH, words)
