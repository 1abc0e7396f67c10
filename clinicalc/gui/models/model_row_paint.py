"""Paints the rows of the list of models: group headings, and models with spine, title, version and state in words."""

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QRect, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPen
from PySide6.QtWidgets import QStyle, QStyledItemDelegate, QStyleOptionViewItem

from clinicalc.gui import theme
from clinicalc.gui.models import spine
from clinicalc.gui.models.list_entries import ENTRY, GroupHeading
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import BASE, CAPTION, UNIT, face
from clinicalc.library.standing import Standing
from clinicalc.operations.library_view import ModelRow
from clinicalc.operations.library_words import Shelf

CHOSEN_LEFT, CHOSEN_RIGHT = 12, 20
"""How far a chosen row stays from the edges of the list."""
_SPINE_LEFT, _TEXT_LEFT, _TEXT_RIGHT = SIDE_MARGIN + 3, 54, 28
_BAR, _GAP = 3, 10
_ABOVE, _BETWEEN, _BELOW = 8, 0, 7
"""With letters of 15 and 14 pixels a row is 54 high."""
_HEADING_ABOVE, _HEADING_BELOW = 12, 5
_QUIET = frozenset({Standing.IN_USE, Standing.WITHDRAWN})
"""States whose words stay in the background: nothing is to be done about them."""
_LEVEL = Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine


class ModelRowPaint(QStyledItemDelegate):
    """Measures with the font in force at its making; colours are read at every paint."""

    def __init__(self) -> None:
        super().__init__()
        self._title, self._strong = QFontMetrics(face(BASE)), QFontMetrics(face(BASE, semibold=True))
        self._state, self._small = QFontMetrics(face(UNIT)), QFontMetrics(face(CAPTION, semibold=True))
        self.row_height = _ABOVE + self._title.height() + _BETWEEN + self._state.height() + _BELOW
        self.heading_height = _HEADING_ABOVE + self._small.height() + _HEADING_BELOW

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        """As high as its lines; the width is that of the list."""
        is_heading = isinstance(index.data(ENTRY), GroupHeading)
        return QSize(0, self.heading_height if is_heading else self.row_height)

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """One row."""
        entry = index.data(ENTRY)
        rect, state = _rect_of(option), _state_of(option)
        if isinstance(entry, GroupHeading):
            self._paint_heading(painter, rect, entry.words)
        elif isinstance(entry, ModelRow):
            chosen = bool(state & QStyle.StateFlag.State_Selected)
            focused = chosen and bool(state & QStyle.StateFlag.State_HasFocus)
            self._paint_row(painter, rect, entry, chosen=chosen, focused=focused)

    def _paint_heading(self, painter: QPainter, rect: QRect, words: str) -> None:
        tokens = theme.tokens()
        line = QRect(SIDE_MARGIN, rect.top() + _HEADING_ABOVE, rect.width(), self._small.height())
        painter.setFont(face(CAPTION, semibold=True))
        painter.setPen(QColor(tokens.ink))
        painter.drawText(line, _LEVEL, words)
        left = SIDE_MARGIN + self._small.horizontalAdvance(words) + _GAP
        painter.fillRect(left, line.center().y(), rect.width() - CHOSEN_RIGHT - left, 1, QColor(tokens.rule))

    def _paint_row(self, painter: QPainter, rect: QRect, row: ModelRow, *, chosen: bool, focused: bool) -> None:
        tokens = theme.tokens()
        if chosen:
            _paint_choice(painter, rect, focused=focused)
        spine.paint_spine(painter, _SPINE_LEFT, rect.top() + (rect.height() - spine.HEIGHT) // 2, row.standing, tokens)
        soft = QColor(tokens.soft)
        metrics = self._strong if chosen else self._title
        right = rect.width() - _TEXT_RIGHT
        first = QRect(_TEXT_LEFT, rect.top() + _ABOVE, right - _TEXT_LEFT, self._title.height())
        painter.setFont(face(BASE))
        is_out = row.shelf is Shelf.OUT_OF_USE and not chosen
        painter.setPen(soft if is_out else QColor(tokens.ink))
        painter.drawText(first, _LEVEL | Qt.AlignmentFlag.AlignRight, row.version)
        room = first.width() - self._title.horizontalAdvance(row.version) - _GAP
        painter.setFont(face(BASE, semibold=chosen))
        painter.drawText(first, _LEVEL, metrics.elidedText(row.title, Qt.TextElideMode.ElideRight, room))
        second = QRect(_TEXT_LEFT, first.bottom() + 1 + _BETWEEN, first.width(), self._state.height())
        painter.setFont(face(UNIT))
        painter.setPen(soft if row.standing in _QUIET and not chosen else QColor(tokens.ink))
        says = self._state.elidedText(row.says, Qt.TextElideMode.ElideRight, second.width())
        painter.drawText(second, _LEVEL, says)


def _paint_choice(painter: QPainter, rect: QRect, *, focused: bool) -> None:
    """The ground of the chosen row, the bar at its left, and the ring while the list has the focus."""
    tokens = theme.tokens()
    body = rect.adjusted(CHOSEN_LEFT, 1, -CHOSEN_RIGHT, -1)
    painter.fillRect(body, QColor(tokens.sel))
    painter.fillRect(body.left(), body.top(), _BAR, body.height(), QColor(tokens.accent))
    if focused:
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(QColor(tokens.accent), 2))
        painter.drawRoundedRect(QRectF(body).adjusted(1, 1, -1, -1), 3, 3)
        painter.restore()


def _rect_of(option: QStyleOptionViewItem) -> QRect:
    rect: QRect = option.rect
    return rect


def _state_of(option: QStyleOptionViewItem) -> QStyle.StateFlag:
    state: QStyle.StateFlag = option.state
    return state
