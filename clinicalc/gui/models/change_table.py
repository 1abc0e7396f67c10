"""The table of what differs: as high as its rows, read with the arrow keys, painted where it is in sight."""

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QPointF, QRectF, QSize
from PySide6.QtGui import (
    QColor,
    QFont,
    QPainter,
    QPen,
    QTextLayout,
    QTextOption,
)
from PySide6.QtWidgets import QStyledItemDelegate, QStyleOptionViewItem

from clinicalc.gui import theme
from clinicalc.gui.models.change_rows import Cell, ChangeRows, Column
from clinicalc.gui.still_table import StillTable
from clinicalc.gui.typeface import BASE, CAPTION, face

_SHARES = (0.40, 0.28, 0.32)
_ABOVE, _UNDER, _GAP = 4.0, 4.0, 16.0
_FIRST_INSET, _INSET = 3.0, 6.0
_LINE_BREAK = "\u2028"


class ChangeTable(StillTable):
    """Old beside new; what stands alone in its row goes over the whole width."""

    def __init__(self, rows: ChangeRows, name: str) -> None:
        super().__init__(rows, name)
        self._rows = rows
        self._heights: dict[int, list[int]] = {}
        self._delegate = CellPainter(self)
        self.setItemDelegate(self._delegate)
        self.horizontalHeader().hide()
        self.horizontalHeader().setMinimumSectionSize(1)
        self.setWordWrap(True)
        for place, row in enumerate(rows.rows):
            if len(row) == 1:
                self.setSpan(place, 0, 1, len(Column))

    def fit(self, width: int) -> None:
        """Take a width, and the height of all rows at it, worked out once."""
        width = max(width, 3)
        first, second = (round(width * share) for share in _SHARES[:2])
        widths = (first, second, width - first - second)
        heights = self._heights.get(width)
        if heights is None:
            heights = self._heights[width] = [self._height(place, widths) for place in range(len(self._rows.rows))]
        self.take_sizes(widths, heights)

    def line(self, row: int) -> str:
        """A row as text."""
        return self._rows.line(row)

    def _height(self, place: int, widths: tuple[int, ...]) -> int:
        row = self._rows.rows[place]
        room = [sum(widths)] if len(row) == 1 else widths
        return max(self._delegate.height_of(cell, wide) for cell, wide in zip(row, room, strict=True))


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
