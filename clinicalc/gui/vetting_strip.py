"""The hatched strip over the sheet of a file that nobody has vetted."""

from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QHBoxLayout, QWidget

from clinicalc.gui import theme
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import SHEET_MARGIN
from clinicalc.gui.typeface import BASE

_HEIGHT = 30
_STEP = 6


class VettingStrip(QWidget):
    """Says in words, on a clear plate, that the file is not vetted; the hatching carries no meaning of its own."""

    def __init__(self, words: str) -> None:
        super().__init__()
        self.setFixedHeight(round(_HEIGHT * text_part()))
        self.label = make_line(words, BASE, semibold=True)
        self.label.setObjectName("plate")
        self.label.setIndent(0)
        row = QHBoxLayout(self)
        row.setContentsMargins(SHEET_MARGIN - 10, 3, 0, 3)
        row.addWidget(self.label)
        row.addStretch(1)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Slanted lines over the whole width."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.fillRect(self.rect(), QColor(theme.tokens().sheet))
        painter.setPen(QPen(QColor(theme.tokens().hatch), 1.5))
        height = self.height()
        for x in range(-height, self.width() + height, _STEP):
            painter.drawLine(x, height, x + height, 0)
        painter.end()
