"""The frame that every field stands in: edge, focus ring, and the heavy frame of a stop."""

from PySide6.QtCore import QEvent, QObject, QRectF
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QApplication, QWidget

from clinicalc.gui import theme
from clinicalc.gui.tokens import FRAME_WIDTH, RING, ROW_PITCH


class FieldFrame(QWidget):
    """A frame round one or more controls that shows the focus ring for all of them. Subclasses paint dividers."""

    def __init__(self, width: int = FRAME_WIDTH) -> None:
        super().__init__()
        self._stopped = False
        self.setFixedHeight(ROW_PITCH)
        self.setFixedWidth(width + 2 * RING)

    def watch(self, control: QWidget) -> None:
        """Repaint when `control` gains or loses the focus."""
        control.installEventFilter(self)

    def set_stopped(self, stopped: bool) -> None:
        """Whether the value in the frame stops the number."""
        if stopped != self._stopped:
            self._stopped = stopped
            self.update()

    @property
    def is_stopped(self) -> bool:
        """Whether the heavy frame is shown."""
        return self._stopped

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Qt hands every event of a watched control here first."""
        if event.type() in (QEvent.Type.FocusIn, QEvent.Type.FocusOut):
            self.update()
        return False

    def paintEvent(self, event: QPaintEvent) -> None:
        """Ring, edge and ground."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        body = QRectF(self.rect()).adjusted(RING, RING, -RING, -RING)
        if self._has_focus():
            painter.setPen(QPen(QColor(theme.tokens().accent), 2))
            painter.drawRoundedRect(body.adjusted(-2, -2, 2, 2), 5, 5)
        painter.setBrush(QColor(theme.tokens().field if self.isEnabled() else theme.tokens().ground))
        if self._stopped:
            painter.setPen(QPen(QColor(theme.tokens().ink), 2))
            painter.drawRoundedRect(body.adjusted(1, 1, -1, -1), 3, 3)
        else:
            painter.setPen(QPen(QColor(theme.tokens().edge), 1))
            painter.drawRoundedRect(body.adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)
        self.paint_inside(painter, body)
        painter.end()

    def paint_inside(self, painter: QPainter, body: QRectF) -> None:
        """Dividers and the like; nothing here."""

    def _has_focus(self) -> bool:
        focused = QApplication.focusWidget()
        return focused is not None and self.isAncestorOf(focused)
