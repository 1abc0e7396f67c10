"""A button of the bars: words without a frame, the key that presses it in small letters beside them."""

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPaintEvent, QPen

from clinicalc.gui import theme
from clinicalc.gui.labels import CommandButton
from clinicalc.gui.tokens import FRAME_HEIGHT, RING
from clinicalc.gui.typeface import CAPTION, UNIT, face

_GAP = 6
_SIDE = 7


class FlatButton(CommandButton):
    """Paints its words itself; the key is part of what a screen reader says."""

    def __init__(self, words: str, key: str = "") -> None:
        super().__init__()
        self._words, self._key = words, key
        self.setAutoDefault(False)
        self.setAccessibleName(words)
        self.setAccessibleDescription(f"Key: {key}" if key else "")
        self.setFixedSize(self.sizeHint())

    def sizeHint(self) -> QSize:
        """As wide as its words and its key."""
        key = QFontMetrics(face(CAPTION)).horizontalAdvance(self._key) + _GAP if self._key else 0
        width = QFontMetrics(face(UNIT)).horizontalAdvance(self._words) + key + 2 * _SIDE
        return QSize(width, FRAME_HEIGHT + 2 * RING)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Soft words, ink while it has the focus, with the ring."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        colours = theme.tokens()
        if self.isDown():
            painter.fillRect(self.rect().adjusted(RING, RING, -RING, -RING), QColor(colours.sel))
        if self.hasFocus():
            painter.setPen(QPen(QColor(colours.accent), 2))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(2, 4, -2, -4), 5, 5)
        painter.setPen(QColor(colours.ink if self.hasFocus() else colours.soft))
        level = Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine
        painter.setFont(face(UNIT))
        painter.drawText(self.rect().adjusted(_SIDE, 0, 0, 0), level, self._words)
        painter.setFont(face(CAPTION))
        painter.drawText(self.rect().adjusted(0, 0, -_SIDE, 0), level | Qt.AlignmentFlag.AlignRight, self._key)
        painter.end()
