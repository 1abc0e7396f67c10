"""A table of facts: as high as its rows, read with the arrow keys; texts wrap, figures stand at the right."""

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QPointF, QRect, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QFont,
    QFontMetrics,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
    QTextLayout,
    QTextOption,
)
from PySide6.QtWidgets import QHeaderView, QStyledItemDelegate, QStyleOptionViewItem

from clinicalc.gui import theme
from clinicalc.gui.still_table import StillTable
from clinicalc.gui.study.fact_rows import FactRows
from clinicalc.gui.typeface import CAPTION, UNIT, face

_ABOVE, _UNDER, _SIDE = 4, 4, 6
_WIDEST, _NARROWEST = 340, 44
_APART = 24
"""By how much a table that ends with figures is spread, at most, where there is room."""
_HEAD_HIGH = 26


class FactTable(StillTable):
    """Texts as wide as they need where there is room; a note goes over the whole width."""

    entered = Signal(int)
    """Enter or a double click at a fact: its place."""

    def __init__(self, rows: FactRows, name: str) -> None:
        super().__init__(rows, name)
        self.rows = rows
        self._delegate = _CellPaint(self)
        self.setItemDelegate(self._delegate)
        self._head = _HeadPaint(self)
        self.setHorizontalHeader(self._head)
        self.viewport().setAutoFillBackground(False)
        for row in range(rows.rowCount()):
            if rows.is_note(row):
                self.setSpan(row, 0, 1, rows.columnCount())
        self._natural = [self._natural_width(column) for column in range(rows.columnCount())]

    @property
    def place(self) -> int:
        """The place of the fact that is gone to, −1 for none."""
        return self.rows.fact_at(self.currentIndex().row()) if self.currentIndex().isValid() else -1

    def go_to(self, fact: int) -> None:
        """Go to a fact, where there is one."""
        if 0 <= fact < len(self.rows.facts):
            self.setCurrentIndex(self.rows.index(self.rows.row_of(fact), 0))

    def fit(self, width: int) -> None:
        """Take a width, and the height of all rows at it."""
        widths = _share(self._natural, [column.is_figures for column in self.rows.columns], width)
        heights = [self._row_height(row, widths) for row in range(self.rows.rowCount())]
        self.take_sizes(widths, heights, _HEAD_HIGH)

    def line(self, row: int) -> str:
        """A row as text."""
        return self.rows.line(row)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Like Enter."""
        super().mouseDoubleClickEvent(event)
        self._enter()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter is told."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self._enter()
        else:
            super().keyPressEvent(event)

    def _enter(self) -> None:
        if self.currentIndex().isValid():
            self.entered.emit(self.place)

    def _row_height(self, row: int, widths: list[int]) -> int:
        if self.rows.is_note(row):
            return self._delegate.height_of(self.rows.text(row, 0), sum(widths), _font(is_note=True))
        cells, font = range(self.rows.columnCount()), _font(is_marked=self.rows.is_marked(row))
        return max(self._delegate.height_of(self.rows.text(row, column), widths[column], font) for column in cells)

    def _natural_width(self, column: int) -> int:
        metrics = {marked: QFontMetrics(_font(is_marked=marked)) for marked in (False, True)}
        texts = [(metrics[fact.is_marked], fact.cells[column]) for fact in self.rows.facts]
        widest = max((by.horizontalAdvance(line) for by, text in texts for line in text.split("\n")), default=0)
        heading = QFontMetrics(face(CAPTION)).horizontalAdvance(self.rows.columns[column].heading)
        limit = 10_000 if self.rows.columns[column].is_figures else _WIDEST
        return min(max(widest, heading) + 2 * _SIDE + 6, max(limit, heading + 2 * _SIDE + 6))


class _HeadPaint(QHeaderView):
    """Headings in small soft letters over a line."""

    def __init__(self, table: FactTable) -> None:
        super().__init__(Qt.Orientation.Horizontal, table)
        self._table = table
        self.setFixedHeight(_HEAD_HIGH)
        self.setMinimumSectionSize(1)
        self.setSectionsClickable(False)
        self.setHighlightSections(False)
        self.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The headings, and nothing beside them."""
        super().paintEvent(event)
        painter = QPainter(self.viewport())
        painter.fillRect(self.viewport().rect().adjusted(self.length(), 0, 0, 0), QColor(theme.tokens().sheet))
        painter.end()

    def paintSection(self, painter: QPainter, rect: QRect, logicalIndex: int) -> None:
        """One heading."""
        column = self._table.rows.columns[logicalIndex]
        side = Qt.AlignmentFlag.AlignRight if column.is_figures else Qt.AlignmentFlag.AlignLeft
        painter.save()
        painter.fillRect(rect, QColor(theme.tokens().sheet))
        painter.fillRect(rect.left(), rect.bottom(), rect.width(), 1, QColor(theme.tokens().edge))
        painter.setFont(face(CAPTION))
        painter.setPen(QColor(theme.tokens().soft))
        room = rect.adjusted(_SIDE, 0, -_SIDE, 0)
        heading = painter.fontMetrics().elidedText(column.heading, Qt.TextElideMode.ElideRight, room.width())
        painter.drawText(room, int(side) | int(Qt.AlignmentFlag.AlignVCenter), heading)
        painter.restore()


class _CellPaint(QStyledItemDelegate):
    """Texts wrapped letter for letter, a thin rule under each fact, the ground of the row gone to."""

    def height_of(self, text: str, width: int, font: QFont) -> int:
        """How high a cell has to be at a width."""
        above = 0 if font == _font(is_note=True) else _ABOVE
        return round(_lay_out(text, width - 2 * _SIDE, font)[1]) + above + _UNDER

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """One cell."""
        table = self.parent()
        assert isinstance(table, FactTable)
        tokens, rows, box = theme.tokens(), table.rows, QRectF(option.rect)
        row, is_note = index.row(), rows.is_note(index.row())
        is_reached = table.hasFocus() and table.place == rows.fact_at(row)
        is_last = row + 1 == rows.rowCount() or not rows.is_note(row + 1)
        painter.save()
        is_marked = rows.is_marked(row)
        is_chosen = is_marked or table.place == rows.fact_at(row)
        painter.fillRect(box, QColor(tokens.sel if is_reached else tokens.wash if is_chosen else tokens.sheet))
        if is_last:
            painter.fillRect(QRectF(box.left(), box.bottom() - 1, box.width(), 1), QColor(tokens.rule))
        painter.setPen(QColor(tokens.soft if is_note and not is_reached else tokens.ink))
        figures = not is_note and rows.columns[index.column()].is_figures
        font = _font(is_note=is_note, is_marked=is_marked)
        layout, _ = _lay_out(rows.text(row, index.column()), box.width() - 2 * _SIDE, font, figures)
        layout.draw(painter, QPointF(box.left() + _SIDE, box.top() + (0 if is_note else _ABOVE)))
        if is_reached and not is_note and index.column() == table.currentIndex().column():
            painter.setPen(QPen(QColor(tokens.accent), 2))
            painter.drawRect(box.adjusted(1, 1, -1, -1))
        painter.restore()

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        """Rows are given their height by the table."""
        return QSize(1, 1)


def _share(natural: list[int], is_figures: list[bool], width: int) -> list[int]:
    """A width for each column: its own where there is room, else words give way before figures do."""
    width = max(width, len(natural))
    spare = width - sum(natural)
    widths = list(natural)
    words = [place for place, figures in enumerate(is_figures) if not figures] or list(range(len(natural)))
    if spare >= 0:
        if not is_figures[-1]:
            widths[-1] += spare  # figures stay near what they are of
            return widths
        more = min(_APART, spare // len(widths))
        return [wide + more for wide in widths]
    while spare < 0:
        widest = max(words, key=lambda place: widths[place])
        if widths[widest] <= _NARROWEST:
            return [width // len(widths)] * len(widths)
        cut = min(-spare, max(1, (widths[widest] - _NARROWEST) // 4))
        widths[widest] -= cut
        spare += cut
    return widths


def _lay_out(text: str, width: float, font: QFont, is_figures: bool = False) -> tuple[QTextLayout, float]:
    """The text in lines that fit, and how high they are; a word that is too long is broken."""
    layout = QTextLayout(text.replace("\n", "\u2028"), font)
    option = QTextOption()
    option.setWrapMode(QTextOption.WrapMode.WrapAtWordBoundaryOrAnywhere)
    if is_figures:
        option.setAlignment(Qt.AlignmentFlag.AlignRight)
    layout.setTextOption(option)
    layout.beginLayout()
    height = 0.0
    while (line := layout.createLine()).isValid():
        line.setLineWidth(max(1.0, width))
        line.setPosition(QPointF(0.0, height))
        height += line.height()
    layout.endLayout()
    return layout, height


def _font(*, is_note: bool = False, is_marked: bool = False) -> QFont:
    return face(CAPTION if is_note else UNIT, semibold=is_marked and not is_note)
