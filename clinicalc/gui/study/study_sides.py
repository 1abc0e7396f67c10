"""The steps beside what is shown, over progress and foot; in a narrow page the steps stand above it in one row."""

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QFrame, QVBoxLayout, QWidget

from clinicalc.gui.labels import make_label
from clinicalc.gui.study.steps_list import StepsList
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import TITLE, UNIT

STEPS_WIDTH = 256
ROW_BELOW = 900
"""Width of the page under which the steps stand in a row: that of the usual window at 200 % text."""
_LARGEST = 16_777_215


class StepsPane(QWidget):
    """The study's name over the list of its steps."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.title = make_label("Study", TITLE, semibold=True)
        self.name = make_label("", UNIT, soft=True)
        self.list = StepsList()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        self._head = QVBoxLayout()
        self._head.setSpacing(2)
        for label in (self.title, self.name):
            self._head.addWidget(label)
        column.addLayout(self._head)
        column.addWidget(self.list)
        self._rest = QWidget()
        column.addWidget(self._rest, 1)
        self.set_row(is_row=False)

    def show_name(self, words: str) -> None:
        """The name of the study's file."""
        self.name.setText(words)

    def set_row(self, *, is_row: bool) -> None:
        """In a row there is no room for the name, which stands over the data too."""
        self.title.setVisible(not is_row and self.parentWidget() is not None)
        self.name.setVisible(not is_row and self.parentWidget() is not None)
        self._rest.setVisible(not is_row and self.parentWidget() is not None)
        self._head.setContentsMargins(*((0, 0, 0, 0) if is_row else (SIDE_MARGIN, 18, 12, 16)))
        self.list.set_row(is_row=is_row)


class StudySides(QWidget):
    """Arranges the parts for its own width."""

    def __init__(self, pane: StepsPane, right: QWidget, below: tuple[QWidget, ...]) -> None:
        super().__init__()
        self._pane = pane
        self._border = QFrame()
        self._border.setObjectName("rule")
        self._sides = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self._sides.setSpacing(0)
        self._sides.addWidget(pane)
        self._sides.addWidget(self._border)
        self._sides.addWidget(right, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(self._sides, 1)
        for widget in below:
            column.addWidget(widget)
        self._is_row: bool | None = None
        self._arrange(is_row=False)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A narrow page has its steps in a row."""
        super().resizeEvent(event)
        self._arrange(is_row=event.size().width() < ROW_BELOW)

    def _arrange(self, *, is_row: bool) -> None:
        if is_row == self._is_row:
            return
        self._is_row = is_row
        way = QBoxLayout.Direction.TopToBottom if is_row else QBoxLayout.Direction.LeftToRight
        self._sides.setDirection(way)
        self._border.setMinimumSize(0, 0)
        self._border.setMaximumSize(_LARGEST, _LARGEST)
        if is_row:
            self._pane.setMinimumWidth(0)
            self._pane.setMaximumWidth(_LARGEST)
            self._border.setFixedHeight(1)
        else:
            self._pane.setFixedWidth(STEPS_WIDTH)
            self._border.setFixedWidth(1)
        self._pane.set_row(is_row=is_row)
