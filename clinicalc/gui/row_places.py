"""The places of a row: label, frame, remark column and mark on the first line, and lines of their own under it."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QGridLayout, QWidget

from clinicalc.gui.tokens import COLUMN_GAP, RING

_LABEL, _GAP_BEFORE_FRAME, _FRAME, _GAP_BEFORE_REMARK, _REMARK, _MARK = range(6)


class RowPlaces(QGridLayout):
    """The arrangement of one row. What stands beside or under the frame may change its place."""

    def __init__(self, row: QWidget, label: QWidget, frame: QWidget, mark: QWidget) -> None:
        super().__init__(row)
        self._lines: dict[QWidget, int] = {}
        self.setContentsMargins(0, 0, 0, 0)
        self.setHorizontalSpacing(0)
        self.setVerticalSpacing(0)
        self.setColumnMinimumWidth(_GAP_BEFORE_FRAME, COLUMN_GAP)
        self.setColumnMinimumWidth(_GAP_BEFORE_REMARK, RING)
        self.setColumnStretch(_REMARK, 1)
        self.addWidget(label, 0, _LABEL)
        self.addWidget(frame, 0, _FRAME)
        self.addWidget(mark, 0, _MARK, Qt.AlignmentFlag.AlignVCenter)

    def place(self, widget: QWidget, line: int, *, indent: int = 0, below: int = 0) -> bool:
        """Beside the frame (line 0), or on a line of its own under it; whether it stood elsewhere before.

        `indent` and `below` are the margins of a line of its own, in pixels.
        """
        if self._lines.get(widget) == line:
            return False
        self._lines[widget] = line
        self.removeWidget(widget)
        if line:
            self.addWidget(widget, line, _FRAME, 1, _MARK - _FRAME + 1)
        else:
            self.addWidget(widget, 0, _REMARK, 1, 1, Qt.AlignmentFlag.AlignVCenter)
        widget.setContentsMargins(indent if line else 0, 0, 0, below if line else 0)
        return True

    def place_caption(self, caption: QWidget, line: int) -> None:
        """Words at the left of a line under the frame."""
        self.addWidget(caption, line, _LABEL, Qt.AlignmentFlag.AlignVCenter)
