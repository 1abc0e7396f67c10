"""What is being done, how far it is, and a button that cancels it; or a word of what was done."""

from PySide6.QtCore import QTimer, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QColor, QPainter, QPaintEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.gui import theme
from clinicalc.gui.errands import Errands
from clinicalc.gui.labels import make_button, make_label
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import UNIT
from clinicalc.operations.course import Progress

PATIENCE = 300
"""Milliseconds before anything is said: what is over sooner would only flicker."""
_HIGH = 3


class ProgressLine(QWidget):
    """A thin line, filled as far as the work is; a rule of its whole length where nobody can know."""

    def __init__(self) -> None:
        super().__init__()
        self._part = 0.0
        self.setFixedHeight(_HIGH)

    def show_part(self, part: float) -> None:
        """From 0 to 1."""
        self._part = min(1.0, max(0.0, part))
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """The whole in edge, what is done in accent."""
        tokens = theme.tokens()
        painter = QPainter(self)
        painter.fillRect(0, 1, self.width(), 1, QColor(tokens.edge))
        painter.fillRect(0, 0, round(self.width() * self._part), _HIGH, QColor(tokens.accent))
        painter.end()


class ProgressStrip(QWidget):
    """Follows the errands of a page; it takes room only while it says something."""

    cancelled = Signal()
    """The button was pressed; the errand was asked to stop."""

    def __init__(self, errands: Errands) -> None:
        super().__init__()
        self._errands = errands
        self._title = ""
        self._is_new = False
        self.words = make_label("", UNIT, semibold=True)
        self.line = ProgressLine()
        self.cancel = make_button("Cancel", pixels=UNIT)
        row = QHBoxLayout()
        row.setSpacing(10)
        row.addWidget(self.words, 1)
        row.addWidget(self.cancel)
        column = QVBoxLayout(self)
        column.setContentsMargins(SIDE_MARGIN, 6, SIDE_MARGIN - 4, 8)
        column.setSpacing(6)
        column.addWidget(self.line)
        column.addLayout(row)
        self._wait = QTimer(self)
        self._wait.setSingleShot(True)
        self._wait.setInterval(PATIENCE)
        self._wait.timeout.connect(self._show_work)
        self.cancel.clicked.connect(self._cancel)
        errands.began.connect(self._begin)
        errands.moved.connect(self._move)
        errands.ended.connect(self._end)
        self.hide()

    def say(self, words: str) -> None:
        """Say what was done, or why not, until work is shown again; "" says nothing.

        The reading that follows a deed does not take its words away, however long it is shown.
        """
        self._title, self._is_new = words, bool(words)
        if not self._errands.is_busy:
            self._show_words()
        if words:
            QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, words))

    def _begin(self, title: str) -> None:
        self.words.setText(f"{title}…")
        self.line.show_part(0.0)
        self.cancel.setEnabled(True)
        self._wait.start()

    def _move(self, progress: Progress) -> None:
        count = f", {progress.done} of {progress.of}" if progress.of else ""
        self.words.setText(f"{progress.words}{count}")
        self.line.show_part(progress.done / progress.of if progress.of else 0.0)

    def _end(self) -> None:
        if self._errands.is_busy:  # another one began at once
            return
        self._wait.stop()
        self._is_new = False
        self._show_words()

    def _show_work(self) -> None:
        if self._errands.is_busy:
            if not self._is_new:
                self._title = ""
            self.line.show()
            self.cancel.show()
            self.show()

    def _show_words(self) -> None:
        self.line.hide()
        self.cancel.hide()
        self.words.setText(self._title)
        self.setVisible(bool(self._title))

    def _cancel(self) -> None:
        self.cancel.setEnabled(False)
        self.words.setText("Stopping…")
        self._errands.stop()
        self.cancelled.emit()
