"""Two columns of parts, beside each other where there is room, else one under the other."""

from collections.abc import Sequence

from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QVBoxLayout, QWidget

from clinicalc.gui.figure_view import text_part
from clinicalc.gui.held_layouts import Block

_BETWEEN = 44
_LEAST = 900
"""Width under which the columns stand under each other, at the usual text size."""
_SHARES = (11, 14)
"""How the width is shared."""


class SideBySide(Block):
    """The first column is read first, and comes first for the tab key."""

    def __init__(self, left: Sequence[QWidget], right: Sequence[QWidget]) -> None:
        super().__init__()
        self._columns = tuple(_Column(parts) for parts in (left, right))
        self._box = QBoxLayout(QBoxLayout.Direction.TopToBottom, self)
        self._box.setContentsMargins(0, 0, 0, 0)
        self._box.setSpacing(16)
        for column, share in zip(self._columns, _SHARES, strict=True):
            self._box.addWidget(column, share)
        self._is_beside = False

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Arranged for the width."""
        super().resizeEvent(event)
        is_beside = event.size().width() >= _LEAST * text_part()
        if is_beside != self._is_beside:
            self._is_beside = is_beside
            way = QBoxLayout.Direction.LeftToRight if is_beside else QBoxLayout.Direction.TopToBottom
            self._box.setDirection(way)
            self._box.setSpacing(_BETWEEN if is_beside else 16)


class _Column(QWidget):
    """No block: one whose parts have a height of their own has to be asked for it."""

    def __init__(self, parts: Sequence[QWidget]) -> None:
        super().__init__()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(8)
        for part in parts:
            column.addWidget(part)
        column.addStretch(1)
