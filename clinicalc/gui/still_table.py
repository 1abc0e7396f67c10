"""A table without scroll bars of its own: as high as its rows, read with the arrow keys, on a page that scrolls."""

from collections.abc import Sequence

from PySide6.QtCore import QAbstractItemModel, QModelIndex, QSize, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent, QKeySequence, QResizeEvent, QWheelEvent
from PySide6.QtWidgets import QAbstractItemView, QTableView


class StillTable(QTableView):
    """What it shows and how wide its columns are is for each kind of table; the page is told which row is gone to."""

    row_reached = Signal(int, int)
    """Top and height of the row that an arrow key led to, from the top of the table."""

    def __init__(self, rows: QAbstractItemModel, name: str) -> None:
        super().__init__()
        self._above = 0
        self.setModel(rows)
        self.setAccessibleName(name)
        self.setFrameShape(QTableView.Shape.NoFrame)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.verticalHeader().hide()
        self.verticalHeader().setMinimumSectionSize(1)
        self.selectionModel().currentChanged.connect(self._tell)

    def fit(self, width: int) -> None:
        """Take a width, and the height of all rows at it."""
        raise NotImplementedError

    def line(self, row: int) -> str:
        """A row as text, for the clipboard."""
        raise NotImplementedError

    def take_sizes(self, widths: Sequence[int], heights: Sequence[int], head: int = 0) -> None:
        """Give columns and rows their sizes, and the table the height of all rows and of its head."""
        self._above = head
        for column, wide in enumerate(widths):
            self.setColumnWidth(column, wide)
        header = self.verticalHeader()
        blocked = header.blockSignals(True)
        for row, height in enumerate(heights):
            header.resizeSection(row, height)
        header.blockSignals(blocked)
        self.setFixedHeight(sum(heights) + head)
        self.updateGeometries()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Lines break elsewhere."""
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self.fit(event.size().width())

    def sizeHint(self) -> QSize:
        """As wide as there is room."""
        return QSize(1, self.height())

    def minimumSizeHint(self) -> QSize:
        """As narrow as must be."""
        return QSize(1, 1)

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Leave the wheel to the page."""
        event.ignore()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Copy takes the row as text."""
        if event.matches(QKeySequence.StandardKey.Copy) and self.currentIndex().isValid():
            QGuiApplication.clipboard().setText(self.line(self.currentIndex().row()))
            return
        super().keyPressEvent(event)

    def _tell(self, current: QModelIndex, _: QModelIndex) -> None:
        if current.isValid():
            top = self.rowViewportPosition(current.row()) + self._above
            self.row_reached.emit(top, self.rowHeight(current.row()))
