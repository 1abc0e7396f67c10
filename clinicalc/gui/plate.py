"""The plate on which groups of digits stand that are to be read aloud."""

from PySide6.QtCore import QRectF
from PySide6.QtGui import QColor, QPainter, QPen
from PySide6.QtWidgets import QWidget

from clinicalc.gui import theme


def paint_plate(widget: QWidget) -> None:
    """A wash with an edge round it over the whole widget; to be called while it is painted."""
    painter = QPainter(widget)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(QColor(theme.tokens().edge), 1))
    painter.setBrush(QColor(theme.tokens().wash))
    painter.drawRoundedRect(QRectF(widget.rect()).adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)
    painter.end()
