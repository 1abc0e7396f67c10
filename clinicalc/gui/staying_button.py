"""A button that stays down until it is pressed again, painted as a segment is."""

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPaintEvent, QPen

from clinicalc.gui import theme
from clinicalc.gui.labels import CommandButton
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import UNIT, face

_HEIGHT = 26
_SIDE = 8


class StayingButton(CommandButton):
    """Paints its words itself; a screen reader says whether it is pressed."""

    def __init__(self, words: str) -> None:
        super().__init__()
        self._words = words
        self.setCheckable(True)
        self.setAutoDefault(False)
        self.setFont(face(UNIT, semibold=True))
        self.setAccessibleName(words)
        self.setFixedSize(self.sizeHint())

    def sizeHint(self) -> QSize:
        """As wide as its words in their heaviest form, so that nothing moves when it is pressed."""
        width = QFontMetrics(face(UNIT, semibold=True)).horizontalAdvance(self._words)
        return QSize(width + 2 * (_SIDE + RING), _HEIGHT + 2 * RING)

    def show_pressed(self, pressed: bool) -> None:
        """Put it down or up without telling anybody."""
        blocked = self.blockSignals(True)
        self.setChecked(pressed)
        self.blockSignals(blocked)

    def paintEvent(self, event: QPaintEvent) -> None:
        """As a segment is painted: pressed has ground, frame and weight, else a thin frame and soft text."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        colours = theme.tokens()
        body = QRectF(self.rect()).adjusted(RING, RING, -RING, -RING)
        if self.hasFocus():
            painter.setPen(QPen(QColor(colours.accent), 2))
            painter.drawRoundedRect(body.adjusted(-2, -2, 2, 2), 5, 5)
        pressed = self.isChecked()
        painter.setBrush(QColor(colours.sel if pressed or self.isDown() else colours.field))
        painter.setPen(QPen(QColor(colours.accent if pressed else colours.edge), 1.5 if pressed else 1))
        inset = 0.75 if pressed else 0.5
        painter.drawRoundedRect(body.adjusted(inset, inset, -inset, -inset), 3, 3)
        painter.setFont(face(UNIT, semibold=pressed))
        painter.setPen(QColor(colours.ink if pressed else colours.soft))
        painter.drawText(self.rect(), Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextSingleLine, self._words)
        painter.end()
