"""The guide inside the program: pages at the left, the chosen page at the right, all of it plain text."""

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QRect, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QKeySequence, QPainter, QPaintEvent, QPalette, QPen, QShortcut
from PySide6.QtWidgets import (
    QDialog,
    QFrame,
    QHBoxLayout,
    QLabel,
    QListWidget,
    QScrollArea,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QVBoxLayout,
    QWidget,
)

from clinicalc.gui import theme
from clinicalc.gui.labels import make_button, make_label, make_line
from clinicalc.gui.tokens import ROW_PITCH, SHEET_MARGIN, SHEET_MARGIN_RIGHT, SIDE_MARGIN
from clinicalc.gui.typeface import BASE, HEADLINE, TITLE, face
from clinicalc.operations.guide import Block, BlockKind, Page, read_guide

_NARROWEST = 200
_BESIDE = 36
_LINE_WIDTH = 640
"""Longest line of running text, in pixels; longer ones are hard to follow."""
_MARK_WIDTH = 24
_RING = 2
_ABOVE = {BlockKind.HEADING: 14, BlockKind.PARAGRAPH: 4, BlockKind.ITEM: 0, BlockKind.CODE: 4, BlockKind.TITLE: 0}


class GuideView(QDialog):
    """Opens beside the window and leaves it usable; it knows nothing about any patient."""

    def __init__(self, parent: QWidget | None = None, pages: tuple[Page, ...] | None = None) -> None:
        super().__init__(parent)
        self.guide_pages = read_guide() if pages is None else pages
        self.setObjectName("ground")
        self.setWindowTitle("Guide")
        self.setModal(False)
        self.resize(QSize(1000, 720).boundedTo(self.screen().availableSize()))
        self.list = PageList([page.title for page in self.guide_pages])
        self.reader = Reader()
        self.reader.keep_room(self.guide_pages)
        self.close_button = make_button("&Close")
        self._lay_out()
        self.list.currentRowChanged.connect(self._show_row)
        self.close_button.clicked.connect(self.close)
        QShortcut(QKeySequence(Qt.Key.Key_F6), self).activated.connect(self._go_across)
        QWidget.setTabOrder(self.list, self.reader)
        QWidget.setTabOrder(self.reader, self.close_button)
        self.list.setCurrentRow(0)
        self.list.setFocus(Qt.FocusReason.OtherFocusReason)

    def show_page(self, name: str) -> None:
        """Turn to the page of this name ("keyboard"); a name that is not there changes nothing."""
        names = [page.name for page in self.guide_pages]
        if name in names:
            self.list.setCurrentRow(names.index(name))

    def _lay_out(self) -> None:
        pane = QWidget()
        side = QVBoxLayout(pane)
        side.setContentsMargins(SIDE_MARGIN - PageList.RING, 20, 12, 12)
        side.setSpacing(10)
        heading = make_line("Guide", TITLE, semibold=True)
        heading.setContentsMargins(PageList.RING, 0, 0, 0)
        side.addWidget(heading)
        side.addWidget(self.list, 1)
        below = QHBoxLayout()
        below.setContentsMargins(PageList.RING, 0, 0, 0)
        below.addWidget(self.close_button)
        below.addStretch(1)
        side.addLayout(below)
        border = QFrame()
        border.setObjectName("rule")
        border.setFixedWidth(1)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        row.addWidget(pane)
        row.addWidget(border)
        row.addWidget(self.reader, 1)

    def _show_row(self, place: int) -> None:
        if 0 <= place < len(self.guide_pages):
            self.reader.show_page(self.guide_pages[place])

    def _go_across(self) -> None:
        there = self.list if self.reader.hasFocus() else self.reader
        there.setFocus(Qt.FocusReason.ShortcutFocusReason)


class PageList(QListWidget):
    """The titles; arrow keys and first letters choose one, and choosing shows it."""

    RING = 3

    def __init__(self, titles: list[str]) -> None:
        super().__init__()
        self.setAccessibleName("Pages of the guide")
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setFont(face(BASE))
        metrics = QFontMetrics(face(BASE, semibold=True))
        self.setFixedWidth(max(_NARROWEST, *(metrics.horizontalAdvance(title) + _BESIDE for title in titles)))
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setItemDelegate(_TitleDelegate(self))
        self.viewport().setAutoFillBackground(False)
        self.addItems(titles)


class _TitleDelegate(QStyledItemDelegate):
    """The chosen page by ground, weight and a bar; the focus by a ring."""

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        return QSize(0, max(ROW_PITCH, QFontMetrics(face(BASE)).height() + 12))

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        tokens = theme.tokens()
        state, rect = option.state, QRect(option.rect)
        chosen = bool(state & QStyle.StateFlag.State_Selected)
        body = rect.adjusted(PageList.RING, PageList.RING, -PageList.RING, -PageList.RING)
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if chosen:
            painter.fillRect(body, QColor(tokens.sel))
            painter.fillRect(QRect(body.left(), body.top(), 3, body.height()), QColor(tokens.accent))
        if state & QStyle.StateFlag.State_HasFocus:
            painter.setPen(QPen(QColor(tokens.accent), 2))
            painter.drawRoundedRect(body.adjusted(-2, -2, 2, 2), 5, 5)
        painter.setFont(face(BASE, semibold=chosen))
        painter.setPen(QColor(tokens.ink))
        words = painter.fontMetrics().elidedText(str(index.data()), Qt.TextElideMode.ElideRight, body.width() - 18)
        painter.drawText(body.adjusted(12, 0, -6, 0), Qt.AlignmentFlag.AlignVCenter, words)
        painter.restore()


class Reader(QScrollArea):
    """One page as labels below each other; scrolled by the arrow keys, its text there for a screen reader."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("sheet_scroll")
        self.setWidgetResizable(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)

    def keep_room(self, pages: tuple[Page, ...]) -> None:
        """Never be narrower than the longest word of these pages takes, so that none is cut and none can scroll off."""
        blocks = [block for page in pages for block in page.blocks]
        running = [block.text for block in blocks if block.kind is not BlockKind.HEADING]
        widest = max(
            _longest_word([page.title for page in pages], TITLE, semibold=True),
            _longest_word([block.text for block in blocks if block.kind is BlockKind.HEADING], HEADLINE, semibold=True),
            _longest_word(running, BASE) + max(_MARK_WIDTH, 2 * CodePlate.BESIDE),
        )
        beside = SHEET_MARGIN + SHEET_MARGIN_RIGHT
        beside += self.verticalScrollBar().sizeHint().width() + 2 * self.frameWidth() + 2 * _RING
        self.setMinimumWidth(widest + beside)

    def show_page(self, page: Page) -> None:
        """Show a page from its top."""
        self.setWidget(_make_body(page))
        self.setAccessibleName(page.title)
        self.setAccessibleDescription(page.text)
        self.verticalScrollBar().setValue(0)


def _longest_word(texts: list[str], pixels: int, *, semibold: bool = False) -> int:
    """The width that a label needs so that none of these texts is cut, wherever its lines may break."""
    words = dict.fromkeys(word for text in texts for word in text.split())
    return make_label("\n".join(words), pixels, semibold=semibold).minimumSizeHint().width()


def _make_body(page: Page) -> QWidget:
    body = QWidget()
    body.setObjectName("sheet")
    column = QVBoxLayout(body)
    column.setContentsMargins(SHEET_MARGIN, 20, SHEET_MARGIN_RIGHT, 24)
    column.setSpacing(8)
    column.addWidget(make_label(page.title, TITLE, semibold=True))
    for block in page.blocks:
        column.addSpacing(_ABOVE[block.kind])
        column.addWidget(_make_block(block))
    column.addStretch(1)
    return body


def _make_block(block: Block) -> QWidget:
    if block.kind is BlockKind.HEADING:
        return make_label(block.text, HEADLINE, semibold=True)
    if block.kind is BlockKind.CODE:
        return CodePlate(block.text)
    text = _selectable(make_label(block.text))
    text.setMaximumWidth(_LINE_WIDTH)
    return _make_item(block.mark, text) if block.kind is BlockKind.ITEM else text


def _make_item(mark: str, text: QLabel) -> QWidget:
    item = QWidget()
    text.setMaximumWidth(_LINE_WIDTH - _MARK_WIDTH)
    row = QHBoxLayout(item)
    row.setContentsMargins(0, 0, 0, 0)
    row.setSpacing(0)
    sign = make_line(mark)
    sign.setFixedWidth(_MARK_WIDTH)
    row.addWidget(sign, 0, Qt.AlignmentFlag.AlignTop)
    row.addWidget(text, 1, Qt.AlignmentFlag.AlignTop)
    return item


def _selectable(label: QLabel) -> QLabel:
    label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
    return label


class CodePlate(QWidget):
    """Commands as they are typed, line by line, on a ground of their own."""

    BESIDE = 12

    def __init__(self, text: str) -> None:
        super().__init__()
        self.label = _selectable(make_label(text))
        self.label.setForegroundRole(QPalette.ColorRole.WindowText)
        column = QVBoxLayout(self)
        column.setContentsMargins(self.BESIDE, 8, self.BESIDE, 8)
        column.addWidget(self.label)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The ground and its edge."""
        painter = QPainter(self)
        painter.fillRect(self.rect(), QColor(theme.tokens().wash))
        painter.setPen(QPen(QColor(theme.tokens().rule), 1))
        painter.drawRect(self.rect().adjusted(0, 0, -1, -1))
        painter.end()
