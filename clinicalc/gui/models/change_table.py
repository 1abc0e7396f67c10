"""The table of what differs: as high as its rows, read with the arrow keys, painted where it is in sight."""

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QFont,
    QGuiApplication,
    QKeyEvent,
    QKeySequence,
    QPainter,
    QPen,
    QResizeEvent,
    QTextLayout,
    QTextOption,
    QWheelEvent,
)
from PySide6.QtWidgets import QAbstractItemView, QStyledItemDelegate, QStyleOptionViewItem, QTableView

from clinicalc.gui import theme
from clinicalc.gui.models.change_rows import Cell, ChangeRows, Column
from clinicalc.gui.typeface import BASE, CAPTION, face

_SHARES = (0.40, 0.28, 0.32)
_ABOVE, _UNDER, _GAP = 4.0, 4.0, 16.0
_FIRST_INSET, _INSET = 3.0, 6.0
_LINE_BREAK = "\u2028"


class ChangeTable(QTableView):
    """Takes no scroll bars of its own: the card scrolls, and is told which row is gone to."""

    row_reached = Signal(int, int)
    """Top and height of the row that an arrow key led to, from the top of the table."""

    def __init__(self, rows: ChangeRows, name: str) -> None:
        super().__init__()
        self._rows = rows
        self._heights: dict[int, list[int]] = {}
        self.setModel(rows)
        self._delegate = CellPainter(self)
        self.setItemDelegate(self._delegate)
        self.setAccessibleName(name)
        self.setFrameShape(QTableView.Shape.NoFrame)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.horizontalHeader().hide()
        self.verticalHeader().hide()
        self.horizontalHeader().setMinimumSectionSize(1)
        self.verticalHeader().setMinimumSectionSize(1)
        self.setWordWrap(True)
        for place, row in enumerate(rows.rows):
            if len(row) == 1:
                self.setSpan(place, 0, 1, len(Column))
        self.selectionModel().currentChanged.connect(self._tell)

    def fit(self, width: int) -> None:
        """Take a width, and the height of all rows at it."""
        width = max(width, 3)
        first, second = (round(width * share) for share in _SHARES[:2])
        widths = (first, second, width - first - second)
        for column, wide in enumerate(widths):
            self.setColumnWidth(column, wide)
        heights = self._heights.get(width)
        if heights is None:
            heights = self._heights[width] = [self._height(place, widths) for place in range(len(self._rows.rows))]
        header = self.verticalHeader()
        blocked = header.blockSignals(True)
        for place, height in enumerate(heights):
            header.resizeSection(place, height)
        header.blockSignals(blocked)
        self.setFixedHeight(sum(heights))
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
        """Leave the wheel to the card."""
        event.ignore()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Copy takes the row as text."""
        if event.matches(QKeySequence.StandardKey.Copy) and self.currentIndex().isValid():
            QGuiApplication.clipboard().setText(self._rows.line(self.currentIndex().row()))
            return
        super().keyPressEvent(event)

    def _height(self, place: int, widths: tuple[int, ...]) -> int:
        row = self._rows.rows[place]
        room = [sum(widths)] if len(row) == 1 else widths
        return max(self._delegate.height_of(cell, wide) for cell, wide in zip(row, room, strict=True))

    def _tell(self, current: QModelIndex, _: QModelIndex) -> None:
        if current.isValid():
            self.row_reached.emit(self.rowViewportPosition(current.row()), self.rowHeight(current.row()))


class CellPainter(QStyledItemDelegate):
    """Texts wrapped letter for letter, a thin rule under each row, the ring of the cell gone to."""

    def height_of(self, cell: Cell, width: float) -> int:
        """How high a cell has to be at a width, in whole pixels."""
        return round(_lay_out(cell, width)[1] + _ABOVE + _UNDER)

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """One cell."""
        table = self.parent()
        rows = index.model()
        assert isinstance(table, ChangeTable)
        assert isinstance(rows, ChangeRows)
        colours, cell, box = theme.tokens(), rows.cell(index), QRectF(option.rect)
        has_focus = table.hasFocus()
        is_reached = has_focus and table.currentIndex().row() == index.row()
        painter.save()
        ground = colours.sel if is_reached else colours.wash if cell.is_marked else colours.sheet
        painter.fillRect(box, QColor(ground))
        painter.fillRect(QRectF(box.left(), box.bottom() - 1, box.width(), 1), QColor(colours.rule))
        painter.setPen(QColor(colours.soft if cell.is_soft else colours.ink))
        layout, _ = _lay_out(cell, box.width())
        layout.draw(painter, QPointF(box.left() + (_INSET if index.column() else _FIRST_INSET), box.top() + _ABOVE))
        if is_reached and table.currentIndex().column() == index.column():
            painter.setPen(QPen(QColor(colours.accent), 2))
            painter.drawRect(box.adjusted(1, 1, -1, -1))
        painter.restore()

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        """Rows are given their height by the table."""
        return QSize(1, 1)


def _lay_out(cell: Cell, width: float) -> tuple[QTextLayout, float]:
    """The text in lines that fit, and how high they are; a word that is too long is broken."""
    layout = QTextLayout(cell.text.replace("\n", _LINE_BREAK), _font(cell))
    option = QTextOption()
    option.setWrapMode(QTextOption.WrapMode.WrapAtWordBoundaryOrAnywhere)
    layout.setTextOption(option)
    layout.beginLayout()
    height = 0.0
    while (line := layout.createLine()).isValid():
        line.setLineWidth(max(1.0, width - _GAP))
        line.setPosition(QPointF(0.0, height))
        height += line.height()
    layout.endLayout()
    return layout, height


def _font(cell: Cell) -> QFont:
    return face(CAPTION if cell.is_soft else BASE, semibold=cell.is_semibold)
