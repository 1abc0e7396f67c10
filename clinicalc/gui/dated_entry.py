"""The day a value was measured: a small field that belongs to the value's row."""

from datetime import date

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLineEdit, QSizePolicy, QWidget

from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import CAPTION, UNIT, face

_WIDTH = 104


class DatedEntry(QWidget):
    """A day as year, month and day; empty means that none is stated, and anything else is never quietly dropped."""

    changed = Signal()
    entered = Signal()

    def __init__(self, label: str) -> None:
        super().__init__()
        self.edit = QLineEdit()
        self.edit.setFont(face(UNIT))
        self.edit.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.edit.setMaxLength(40)
        self.edit.setPlaceholderText("yyyy-mm-dd")
        self.edit.setAccessibleName(f"{label}, date")
        self.edit.setAccessibleDescription("The day it was measured: year, month and day, such as 2026-10-02")
        self.edit.setInputMethodHints(Qt.InputMethodHint.ImhNoPredictiveText | Qt.InputMethodHint.ImhDate)
        self.frame = FieldFrame(_WIDTH)
        self.frame.watch(self.edit)
        inside = QHBoxLayout(self.frame)
        inside.setContentsMargins(RING + 7, RING + 1, RING + 4, RING + 1)
        inside.addWidget(self.edit)
        self._row = QHBoxLayout(self)
        self._row.setContentsMargins(0, 0, 0, 0)
        self._row.setSpacing(5)
        self._caption = make_line("measured on", CAPTION, soft=True)
        self._row.addWidget(self._caption)
        self._row.addWidget(self.frame)
        self.edit.textChanged.connect(self.changed)
        self.edit.returnPressed.connect(self.entered)

    @property
    def day(self) -> date | None:
        """The day stated, None where there is none or it is not one."""
        try:
            return date.fromisoformat(self.text) if len(self.text) == len("2026-10-02") else None
        except ValueError:
            return None

    @property
    def text(self) -> str:
        """What is typed, without spaces at its ends."""
        return self.edit.text().strip()

    def set_compact(self, compact: bool) -> None:
        """Compact leaves the caption out."""
        self._caption.setVisible(not compact)
        self._row.invalidate()
        self.updateGeometry()

    def fill(self, day: date | None) -> None:
        """Show a day or none, without history and without telling anybody."""
        text = "" if day is None else day.isoformat()
        if self.edit.text() == text and not (self.edit.isUndoAvailable() or self.edit.isRedoAvailable()):
            return
        blocked = self.edit.blockSignals(True)
        self.edit.setText(text)
        self.edit.blockSignals(blocked)
