"""The list and the model side by side over the foot; in a narrow window they take turns."""

from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.gui.models.library_side import LibrarySide
from clinicalc.gui.models.models_foot import ModelsFoot
from clinicalc.gui.right_stack import RightStack
from clinicalc.gui.tokens import COMPACT_BELOW

LIST_WIDTH, LIST_WIDTH_COMPACT = 400, 320
ONE_COLUMN_BELOW = 900
"""Width under which list and model take turns: that of the usual window at 200 % text."""
_LARGEST = 16_777_215
"""What Qt calls no limit to a width."""


class TwoSides(QWidget):
    """Arranges both for its own width."""

    def __init__(self, side: LibrarySide, right: RightStack, foot: ModelsFoot) -> None:
        super().__init__()
        self._side, self._right, self._foot = side, right, foot
        self._is_narrow = self._is_right = False
        self._border = QFrame()
        self._border.setObjectName("rule")
        self._border.setFixedWidth(1)
        sides = QHBoxLayout()
        sides.setSpacing(0)
        sides.addWidget(side)
        sides.addWidget(self._border)
        sides.addWidget(right, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(sides, 1)
        column.addWidget(foot)

    @property
    def is_at_right(self) -> bool:
        """Whether the right side has the focus, or in a narrow window is what is shown."""
        if self._is_narrow:
            return self._is_right
        focused = self.window().focusWidget()
        return focused is not None and self._right.isAncestorOf(focused)

    def turn(self, *, is_right: bool) -> None:
        """Show the right side, or the list, where there is room for one of them only."""
        self._is_right = is_right
        self._arrange()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Smaller windows have a smaller list."""
        super().resizeEvent(event)
        self._is_narrow = event.size().width() < ONE_COLUMN_BELOW
        self._arrange()

    def _arrange(self) -> None:
        if self._is_narrow:
            self._side.setMinimumWidth(0)
            self._side.setMaximumWidth(_LARGEST)
        else:
            self._side.setFixedWidth(LIST_WIDTH_COMPACT if self.width() < COMPACT_BELOW else LIST_WIDTH)
        self._side.setVisible(not (self._is_narrow and self._is_right))
        self._border.setVisible(not self._is_narrow)
        self._right.setVisible(self._is_right or not self._is_narrow)
        self._foot.show_side(narrow=self._is_narrow, is_right=self._is_right)
