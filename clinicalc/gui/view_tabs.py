"""The tabs over the views of a result: words, and a line under those of the view that is open."""

from PySide6.QtCore import QRect, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QTabBar

from clinicalc.gui import theme
from clinicalc.gui.typeface import VALUE, face

PAD = 6
"""How far a tab's edge lies left of its words: the focus ring needs it."""
_BETWEEN, _HEIGHT, _LINE = 18, 36, 3


class ViewTabs(QTabBar):
    """Arrow keys go from view to view. Every tab has the room of its longest words, so that none moves."""

    def __init__(self) -> None:
        super().__init__()
        self._longest: list[str] = []
        self.setDocumentMode(True)
        self.setDrawBase(False)
        self.setExpanding(False)
        self.setUsesScrollButtons(False)
        self.setElideMode(Qt.TextElideMode.ElideNone)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Views")

    def add_view(self, words: str, longest: str) -> None:
        """Another tab at the right, with room for the longest words that it will ever have."""
        self._longest.append(longest)
        self.addTab(words)

    def tabSizeHint(self, index: int) -> QSize:
        """The room of the longest words, which are wider while the view is open."""
        metrics = QFontMetrics(face(VALUE, semibold=True))
        return QSize(metrics.horizontalAdvance(self._longest[index]) + 2 * PAD + _BETWEEN, _HEIGHT)

    def minimumTabSizeHint(self, index: int) -> QSize:
        """Never narrower: words are not cut."""
        return self.tabSizeHint(index)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Words from the left of each tab; the line and, with the focus, the ring go no further than they."""
        tokens = theme.tokens()
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        for index in range(self.count()):
            is_open = index == self.currentIndex()
            font = face(VALUE, semibold=is_open)
            rect = self.tabRect(index)
            words = QRect(rect.left() + PAD, 0, rect.width() - PAD, self.height() - _LINE)
            painter.setFont(font)
            painter.setPen(QColor(tokens.ink if is_open else tokens.soft))
            painter.drawText(words, Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine, self.tabText(index))
            if not is_open:
                continue
            wide = QFontMetrics(font).horizontalAdvance(self.tabText(index))
            painter.fillRect(QRectF(words.left(), self.height() - _LINE, wide, _LINE), QColor(tokens.accent))
            if self.hasFocus():
                painter.setPen(QPen(QColor(tokens.accent), 2))
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.drawRoundedRect(QRectF(rect.left() + 1, 4, wide + 2 * PAD - 2, self.height() - _LINE - 7), 3, 3)
        painter.end()
