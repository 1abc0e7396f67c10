"""A sheet of words and buttons: a title, what it is about, and whatever is added, in a scroll area."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import QBoxLayout, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.gui.labels import make_button, make_label
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE

WIDEST = 780
"""Of a line of words, in pixels."""


class SheetPage(QWidget):
    """Parts are added from top to bottom, which is the order of the tab key too. Escape is the way back, if any."""

    left = Signal()
    """The page was left by its way back."""

    def __init__(self, title: str, says: str, *, leave: str = "") -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.title = make_label(title, TITLE, semibold=True)
        self.says = make_label(says)
        self.says.setMaximumWidth(WIDEST)
        self.first: QWidget | None = None
        """What `focus_first` leads to."""
        self.rows = QVBoxLayout()
        self.rows.setSpacing(10)
        self.foot = QHBoxLayout()
        self.foot.setSpacing(10)
        self.leave = make_button(leave or "&Back")
        if not leave:  # only hidden here: what is shown before it has a parent is a window of its own
            self.leave.hide()
        self._lay_out()
        self.leave.clicked.connect(self.left)
        if leave:
            keys = QKeySequence(Qt.Key.Key_Escape)
            QShortcut(keys, self, self.left.emit, Qt.ShortcutContext.WidgetWithChildrenShortcut)

    def add_words(self, words: str, *, soft: bool = False, semibold: bool = False) -> QLabel:
        """A sentence over the whole width."""
        label = make_label(words, soft=soft, semibold=semibold)
        label.setMaximumWidth(WIDEST)
        self.rows.addWidget(label)
        return label

    def focus_first(self) -> None:
        """The focus to the first thing that can be done."""
        (self.first or self.leave).setFocus(Qt.FocusReason.OtherFocusReason)

    def _lay_out(self) -> None:
        inside = QWidget()
        inside.setObjectName("sheet")
        column = QVBoxLayout(inside)
        column.setContentsMargins(SHEET_MARGIN, 24, SHEET_MARGIN_RIGHT, 12)
        column.setSpacing(12)
        column.addWidget(self.title)
        column.addWidget(self.says)
        column.addLayout(self.rows)
        column.addStretch(1)
        self.scroller = Scroller()
        self.scroller.setAccessibleName(self.title.text())
        self.scroller.setWidgetResizable(True)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.scroller.setWidget(inside)
        self.foot.setDirection(QBoxLayout.Direction.LeftToRight)
        self.foot.setContentsMargins(SHEET_MARGIN, 8, SHEET_MARGIN_RIGHT, 12)
        self.foot.addStretch(1)
        self.foot.addWidget(self.leave)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(0)
        whole.addWidget(self.scroller, 1)
        whole.addLayout(self.foot)


def exchange(column: QVBoxLayout, before: QWidget | None, page: QWidget) -> None:
    """Put a page into the column in the place of the one before, which is gone for good."""
    column.addWidget(page)
    page.show()  # at once: the layout would do it later, and the tab key passes by what cannot be seen
    if before is not None:
        before.hide()
        column.removeWidget(before)
        before.deleteLater()
