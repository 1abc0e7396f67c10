"""The number as large text, or the empty seats of its digits."""

from PySide6.QtCore import QPointF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetricsF, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QWidget

from clinicalc.gui.tokens import LIGHT
from clinicalc.gui.typeface import NUMBER, PERCENT_SIGN, face

_BASELINE = 72
_SEATS = ((0, 36), (44, 36), (96, 36))
_POINT_AT = 88


class NumberFace(QWidget):
    """Shows one percentage on a fixed baseline, so that nothing moves when it comes or goes."""

    def __init__(self) -> None:
        super().__init__()
        self._figure = ""
        self._vetted = False
        self.setFixedSize(QSize(240, 92))
        self.setAccessibleName("No number")

    @property
    def figure(self) -> str:
        """The figure on screen without its sign, "" when there is none."""
        return self._figure

    def show_percentage(self, percentage: str, sentence: str, *, vetted: bool) -> None:
        """Show a percentage such as "12.2 %"; a screen reader says `sentence`. Soft ink for a file not vetted."""
        self._figure = percentage.removesuffix("%").strip()
        self._vetted = vetted
        self.setAccessibleName(f"{percentage}. {sentence}")
        self.update()

    def clear(self) -> None:
        """Show the empty seats."""
        if not self._figure:  # painted so already; a paint that failed must not ask for the next one
            return
        self._figure = ""
        self.setAccessibleName("No number")
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """Figure and sign on one baseline, or seats and a faint sign."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self._figure:
            ink = QColor(LIGHT.accent if self._vetted else LIGHT.soft)
            painter.setPen(ink)
            painter.setFont(face(NUMBER))
            painter.drawText(QPointF(-3, _BASELINE), self._figure)
            after = QFontMetricsF(face(NUMBER)).horizontalAdvance(self._figure) + 6
        else:
            painter.setPen(QPen(QColor(LIGHT.edge), 2))
            for x, width in _SEATS:
                painter.drawLine(x, _BASELINE - 1, x + width, _BASELINE - 1)
            painter.setBrush(QColor(LIGHT.edge))
            painter.setPen(Qt.PenStyle.NoPen)
            painter.drawEllipse(QPointF(_POINT_AT, _BASELINE - 2), 2.5, 2.5)
            painter.setPen(QColor(LIGHT.edge))
            after = 142.0
        painter.setFont(face(PERCENT_SIGN))
        painter.drawText(QPointF(after, _BASELINE), "%")
        painter.end()
