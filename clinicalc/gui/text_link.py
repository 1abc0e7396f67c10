"""Quiet buttons that look like words, and the plain text that one of them opens in place."""

from math import ceil

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QColor, QKeyEvent, QPainter, QPaintEvent, QPen, QResizeEvent
from PySide6.QtWidgets import QPlainTextEdit, QToolButton

from clinicalc.gui import theme
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.typeface import CAPTION, face

LINK_PADDING = 4
"""How far a link's edge lies left of its words: the focus ring needs it."""
_LINK_HEIGHT = 24
_AROUND_TEXT = 30
"""Frame, padding and margins of the text, above and below together."""


class TextLink(QToolButton):
    """A quiet button that looks like words: underlined, with a ring when it has the focus."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.setFont(face(CAPTION))
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.say(text)

    def say(self, text: str) -> None:
        """Other words, and the width they take."""
        self.setText(text)
        width = self.fontMetrics().horizontalAdvance(text) + 2 * LINK_PADDING
        self.setFixedSize(QSize(width, round(_LINK_HEIGHT * text_part())))

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter like the space bar."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.click()
            return
        super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Words, their line, the ring."""
        tokens = theme.tokens()
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self.hasFocus():
            painter.setPen(QPen(QColor(tokens.accent), 2))
            painter.drawRoundedRect(self.rect().adjusted(1, 1, -1, -1), 3, 3)
        font = face(CAPTION)
        font.setUnderline(True)
        painter.setFont(font)
        painter.setPen(QColor(tokens.ink))
        painter.drawText(self.rect(), Qt.AlignmentFlag.AlignCenter, self.text())
        painter.end()


class OpenedText(QPlainTextEdit):
    """Plain text to be read and copied, as high as it needs at its width; closed it holds nothing."""

    def __init__(self, name: str) -> None:
        super().__init__()
        self.setReadOnly(True)
        self.setAccessibleName(name)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setTabChangesFocus(True)
        self.hide()

    def show_lines(self, lines: list[str]) -> None:
        """Show these lines, one a row; the same ones again keep what is selected."""
        text = "\n".join(lines)
        if text != self.toPlainText():
            self.setPlainText(text)
        self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Lines break elsewhere."""
        super().resizeEvent(event)
        self._fit()

    def _fit(self) -> None:
        rows = self.document().size().height()  # in lines: that is how documents of plain text are measured
        height = ceil(self.fontMetrics().lineSpacing() * rows) + _AROUND_TEXT
        if height != self.height():
            self.setFixedHeight(height)
