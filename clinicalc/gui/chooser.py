"""A flat drop-down chooser that stands inside a field frame."""

from collections.abc import Sequence

from PySide6.QtCore import QPointF, QRect, Qt, Signal
from PySide6.QtGui import QColor, QKeyEvent, QPainter, QPaintEvent, QPen, QWheelEvent
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QSizePolicy

from clinicalc.gui import theme
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import UNIT, face

_ARROW_ROOM = 24


class Chooser(QComboBox):
    """A chooser without a frame of its own. Turning the wheel over it never changes it: that would go unnoticed."""

    entered = Signal()

    def __init__(self, *, soft: bool = True) -> None:
        super().__init__()
        self._soft = soft
        self.setFont(face(UNIT))
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setMinimumContentsLength(1)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)

    def show_place(self, place: int) -> None:
        """Show an entry without telling anybody; every other change of the entry is somebody's choice."""
        blocked = self.blockSignals(True)
        self.setCurrentIndex(place)
        self.blockSignals(blocked)
        self.update()

    def offer(self, entries: Sequence[tuple[str, str | None]], place: int) -> None:
        """Replace all entries (text, data) and show one of them, without telling anybody."""
        blocked = self.blockSignals(True)
        self.clear()
        for text, data in entries:
            self.addItem(text, data)
        self.blockSignals(blocked)
        self.show_place(place)

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Leave the wheel to the pane."""
        event.ignore()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter goes on to the next field."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.entered.emit()
            return
        super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Text and a small chevron."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setFont(self.font())
        painter.setPen(QColor(theme.tokens().soft if self._soft else theme.tokens().ink))
        room = QRect(7, 0, self.width() - _ARROW_ROOM - 7, self.height())
        text = painter.fontMetrics().elidedText(self.currentText(), Qt.TextElideMode.ElideRight, room.width())
        painter.drawText(room, Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine, text)
        painter.setPen(QPen(QColor(theme.tokens().ink), 1.5))
        x, y = self.width() - 13.0, self.height() / 2 - 2
        painter.drawPolyline([QPointF(x - 4, y), QPointF(x, y + 4), QPointF(x + 4, y)])
        painter.end()


class FramedChooser(FieldFrame):
    """A chooser in a field frame of its own."""

    def __init__(self, width: int) -> None:
        super().__init__(width)
        self.chooser = Chooser(soft=False)
        self.watch(self.chooser)
        row = QHBoxLayout(self)
        row.setContentsMargins(RING + 1, RING + 1, RING + 1, RING + 1)
        row.addWidget(self.chooser)
