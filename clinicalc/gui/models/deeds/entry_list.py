"""Entries under each other, as many as there are, read with the arrow keys; nothing in them can be changed."""

from collections.abc import Sequence

from PySide6.QtCore import QAbstractListModel, QModelIndex, QPersistentModelIndex, QRect, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetrics, QPainter, QPen, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QListView, QStyle, QStyledItemDelegate, QStyleOptionViewItem

from clinicalc.gui import theme
from clinicalc.gui.models.deeds.history_entries import HistoryEntry
from clinicalc.gui.typeface import BASE, UNIT, face

_Index = QModelIndex | QPersistentModelIndex
_PAD = 8
_SPACE = 12
_WRAP = int(Qt.TextFlag.TextWordWrap) | int(Qt.AlignmentFlag.AlignLeft) | int(Qt.AlignmentFlag.AlignTop)
_ENTRY = Qt.ItemDataRole.UserRole


class _Entries(QAbstractListModel):
    def __init__(self) -> None:
        super().__init__()
        self.entries: tuple[HistoryEntry, ...] = ()

    def take(self, entries: Sequence[HistoryEntry]) -> None:
        self.beginResetModel()
        self.entries = tuple(entries)
        self.endResetModel()

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 Qt's signature
        return 0 if parent.isValid() else len(self.entries)

    def data(self, index: _Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        entry = self.entries[index.row()]
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole):
            return entry.text
        return entry if role == _ENTRY else None


class _Painter(QStyledItemDelegate):
    """An entry as a block: head and time, lines under it, and each fault with its word before it."""

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: _Index) -> None:
        entry: HistoryEntry = index.data(_ENTRY)
        tokens = theme.tokens()
        painter.save()
        room: QRect = option.rect
        chosen = bool(option.state & QStyle.StateFlag.State_Selected)
        if chosen:
            painter.fillRect(room, QColor(tokens.sel))
            painter.fillRect(QRect(room.left(), room.top(), 3, room.height()), QColor(tokens.accent))
        if option.state & QStyle.StateFlag.State_HasFocus:
            painter.setPen(QPen(QColor(tokens.accent), 2))
            painter.drawRect(room.adjusted(1, 1, -1, -1))
        painter.setPen(QPen(QColor(tokens.rule), 1))
        painter.drawLine(room.left(), room.bottom(), room.right(), room.bottom())
        for text, font, rect in _layout(entry, room.width()):
            soft = font.pixelSize() == UNIT and font.weight() == QFont.Weight.Normal
            painter.setFont(font)
            painter.setPen(QColor(tokens.soft if soft and not chosen else tokens.ink))
            painter.drawText(rect.translated(room.topLeft()), _WRAP, text)
        painter.restore()

    def sizeHint(self, option: QStyleOptionViewItem, index: _Index) -> QSize:
        view = self.parent()
        width = view.viewport().width() if isinstance(view, QListView) else 600
        last = _layout(index.data(_ENTRY), width)[-1][2]
        return QSize(width, last.bottom() + 1 + _PAD)


class EntryList(QListView):
    """The list. The arrow keys go from one to the next, and a screen reader says the whole of each."""

    def __init__(self, name: str) -> None:
        super().__init__()
        self._entries = _Entries()
        self.setModel(self._entries)
        self.setItemDelegate(_Painter(self))
        self.setAccessibleName(name)
        self.setObjectName("sheet")
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFrameShape(QListView.Shape.NoFrame)
        self.setUniformItemSizes(False)

    def show_entries(self, entries: Sequence[HistoryEntry]) -> None:
        """Show these in place of what stood there, from the first."""
        self._entries.take(entries)
        if entries:
            self.setCurrentIndex(self._entries.index(0))
        self.scrollToTop()

    @property
    def entries(self) -> tuple[HistoryEntry, ...]:
        """What is shown."""
        return self._entries.entries

    @property
    def place(self) -> int:
        """The place of the entry that is chosen, −1 for none."""
        return self.currentIndex().row()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Another width is another height of every entry."""
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self.scheduleDelayedItemsLayout()


def _layout(entry: HistoryEntry, width: int) -> list[tuple[str, QFont, QRect]]:
    """Each text with its font and its place in a block that begins at nought."""
    bold, small = face(BASE, semibold=True), face(UNIT)
    room = max(120, width - 2 * _PAD - 4)
    left, top = _PAD + 4, _PAD
    aside = QFontMetrics(small).horizontalAdvance(entry.when) + 2 if entry.when else 0
    beside = bool(aside) and aside + 260 <= room
    placed: list[tuple[str, QFont, QRect]] = []
    head = _measured(entry.head, bold, room - aside - _SPACE if beside else room).translated(left, top)
    placed.append((entry.head, bold, head))
    bottom = head.bottom() + 3
    if entry.when:
        when = _measured(entry.when, small, max(aside, 40) if beside else room)
        at = (left + room - aside, top + 1) if beside else (left, bottom)
        placed.append((entry.when, small, when.translated(*at)))
        bottom = max(bottom, placed[-1][2].bottom() + 3) if not beside else bottom
    said = [(line, small) for line in entry.lines]
    said += [(f"Fault: {fault}", face(UNIT, semibold=True)) for fault in entry.faults]
    for text, font in said:
        rect = _measured(text, font, room).translated(left, bottom)
        placed.append((text, font, rect))
        bottom = rect.bottom() + 3
    # the last is the lowest: a size is taken from it
    return sorted(placed, key=lambda one: one[2].bottom())


def _measured(text: str, font: QFont, width: int) -> QRect:
    found = QFontMetrics(font).boundingRect(QRect(0, 0, width, 100_000), _WRAP, text)
    return QRect(0, 0, width, found.height())
