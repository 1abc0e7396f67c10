"""What a value is the mean of: how many visits, and how many readings on each, as two small fields of its row."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QWheelEvent
from PySide6.QtWidgets import QHBoxLayout, QSizePolicy, QSpinBox, QWidget

from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import CAPTION, UNIT, face
from clinicalc.units.averaged import MOST_AVERAGED, Averaged

_WIDTH = 34
_GAP = 4


class CountField(QSpinBox):
    """A whole number from 1 on: typed, or moved by the arrow keys."""

    entered = Signal()

    def __init__(self, name: str, described: str) -> None:
        super().__init__()
        self.setRange(1, MOST_AVERAGED)
        self.setFont(face(UNIT))
        self.setFrame(False)
        self.setButtonSymbols(QSpinBox.ButtonSymbols.NoButtons)
        self.setAlignment(Qt.AlignmentFlag.AlignHCenter)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Expanding)
        self.setAccessibleName(name)
        self.setAccessibleDescription(described)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter goes on to the next field, as it does everywhere."""
        super().keyPressEvent(event)
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.entered.emit()

    def wheelEvent(self, event: QWheelEvent) -> None:
        """A turn of the wheel on its way elsewhere never changes a count."""
        event.ignore()

    def put(self, count: int) -> None:
        """Show a count, without history and without telling anybody."""
        line = self.lineEdit()
        if (
            self.value() == count
            and self.text() == str(count)
            and not (line.isUndoAvailable() or line.isRedoAvailable())
        ):
            return
        blocked = self.blockSignals(True)
        self.setValue(count)
        line.setText(str(count))  # forgets the undo history, and what was half typed
        self.blockSignals(blocked)


class AveragedEntry(QWidget):
    """Two counts in a sentence: “mean of 2 visits of 3 readings”. One of one is the usual value and states nothing."""

    changed = Signal()
    entered = Signal()

    def __init__(self, label: str) -> None:
        super().__init__()
        self.visits = CountField(f"{label}, visits", f"Of how many visits the value is the mean, 1 to {MOST_AVERAGED}")
        self.readings = CountField(
            f"{label}, readings of each visit", f"How many readings were taken on each visit, 1 to {MOST_AVERAGED}"
        )
        self._opening = make_line("mean of", CAPTION, soft=True)
        self._row = QHBoxLayout(self)
        self._row.setContentsMargins(0, 0, 0, 0)
        self._row.setSpacing(_GAP)
        self._row.addWidget(self._opening)
        self._row.addWidget(_framed(self.visits))
        self._row.addWidget(make_line("visits of", CAPTION, soft=True))
        self._row.addWidget(_framed(self.readings))
        self._row.addWidget(make_line("readings", CAPTION, soft=True))
        for count in (self.visits, self.readings):
            count.valueChanged.connect(self.changed)
            count.entered.connect(self.entered)

    @property
    def averaged(self) -> Averaged | None:
        """What the fields say; None for one reading of one visit."""
        stated = Averaged(self.visits.value(), self.readings.value())
        return None if stated.is_single else stated

    def set_compact(self, compact: bool) -> None:
        """Compact leaves the opening words out."""
        self._opening.setVisible(not compact)
        self._row.invalidate()
        self.updateGeometry()

    def fill(self, averaged: Averaged | None) -> None:
        """Show what a value is the mean of, without telling anybody."""
        stated = averaged or Averaged()
        self.visits.put(stated.visits)
        self.readings.put(stated.readings)


def _framed(count: CountField) -> FieldFrame:
    frame = FieldFrame(_WIDTH)
    frame.watch(count)
    inside = QHBoxLayout(frame)
    inside.setContentsMargins(RING + 3, RING + 2, RING + 3, RING + 2)
    inside.addWidget(count)
    return frame
