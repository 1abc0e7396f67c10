"""The tabs of the pages in the bar at the top, each with its key; a line stands under the page that is shown."""

from enum import IntEnum

from PySide6.QtCore import QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPaintEvent, QPen, QWheelEvent
from PySide6.QtWidgets import QTabBar

from clinicalc.gui import theme
from clinicalc.gui.typeface import CAPTION, VALUE, face

BAR_HEIGHT = 45
"""With the rule under it, 46."""
PAD = 6
"""How far a tab's edge lies left of its words: the focus ring needs it."""
_GAP, _BETWEEN, _LINE = 7, 18, 3


class Page(IntEnum):
    """The pages of a window, in the order of their tabs; the settings have none."""

    PATIENT = 0
    MODELS = 1
    STUDY = 2
    SETTINGS = 3


_KEYS = {Page.PATIENT: "F2", Page.MODELS: "F3", Page.STUDY: "F4"}
_NAMES = {Page.MODELS: "Models", Page.STUDY: "Study", Page.SETTINGS: "Settings"}
"""What the pages beside the patient's are called, whichever window they are in."""


class PageTabs(QTabBar):
    """Tells which page is wanted; the window shows it, and then says so with `show_page`."""

    asked = Signal(object)
    """The Page."""

    def __init__(self) -> None:
        super().__init__()
        self._shown = Page.PATIENT
        self.setDocumentMode(True)
        self.setDrawBase(False)
        self.setExpanding(False)
        self.setUsesScrollButtons(False)
        self.setElideMode(Qt.TextElideMode.ElideNone)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Pages")
        for page in _KEYS:
            self.addTab(_NAMES.get(page, page_name(1)))
            self._name(page)
        self.setFixedHeight(BAR_HEIGHT)
        self.currentChanged.connect(self._ask)
        self.tabBarClicked.connect(self._ask)  # the chosen tab too: it leads back from the settings

    def show_number(self, number: int) -> None:
        """Tell this window from others of the program; the first has no number."""
        self.setTabText(Page.PATIENT, page_name(number))
        self._name(Page.PATIENT)

    def show_page(self, page: Page) -> None:
        """Underline the tab of the page that is shown; none where it has no tab."""
        self._shown = page
        if page in _KEYS:
            self.setCurrentIndex(page)
        self.update()

    def tabSizeHint(self, index: int) -> QSize:
        """The room of words and key, which are wider while the page is shown."""
        wide = QFontMetrics(face(VALUE, semibold=True)).horizontalAdvance(self.tabText(index))
        key = QFontMetrics(face(CAPTION)).horizontalAdvance(_KEYS[Page(index)])
        return QSize(wide + _GAP + key + 2 * PAD + _BETWEEN, BAR_HEIGHT)

    def minimumTabSizeHint(self, index: int) -> QSize:
        """Never narrower: words are not cut."""
        return self.tabSizeHint(index)

    def wheelEvent(self, event: QWheelEvent) -> None:
        """A page is not left because a wheel turned over its tab."""
        event.ignore()

    def paintEvent(self, event: QPaintEvent) -> None:
        """The words, the key in small letters, the line under the words; with the focus a ring round both."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        for page in _KEYS:
            self._paint_tab(painter, page)
        painter.end()

    def _paint_tab(self, painter: QPainter, page: Page) -> None:
        tokens, is_shown = theme.tokens(), page is self._shown
        font = face(VALUE, semibold=is_shown)
        rect = self.tabRect(page).adjusted(PAD, 0, 0, 0)
        level = Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine
        wide = QFontMetrics(font).horizontalAdvance(self.tabText(page))
        painter.setFont(font)
        painter.setPen(QColor(tokens.ink if is_shown else tokens.soft))
        painter.drawText(rect, level, self.tabText(page))
        painter.setFont(face(CAPTION))
        painter.setPen(QColor(tokens.soft))
        painter.drawText(rect.adjusted(wide + _GAP, 1, 0, 1), level, _KEYS[page])
        if is_shown:
            painter.fillRect(QRectF(rect.left(), self.height() - _LINE, wide, _LINE), QColor(tokens.accent))
        if self.hasFocus() and page == self.currentIndex():
            whole = wide + _GAP + QFontMetrics(face(CAPTION)).horizontalAdvance(_KEYS[page]) + 2 * PAD
            painter.setPen(QPen(QColor(tokens.accent), 2))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRoundedRect(QRectF(rect.left() - PAD + 1, 7, whole - 2, self.height() - _LINE - 13), 3, 3)

    def _name(self, page: Page) -> None:
        self.setAccessibleTabName(page, f"{self.tabText(page)}, key {_KEYS[page]}")

    def _ask(self, index: int) -> None:
        if index in tuple(_KEYS) and Page(index) is not self._shown:
            self.asked.emit(Page(index))


def page_name(number: int) -> str:
    """What the window is called: "Patient", and "Patient 2" for the second that is open."""
    return "Patient" if number == 1 else f"Patient {number}"


def title_of(page: Page, number: int, model: str) -> str:
    """The title of the window: page, window, and on the patient's page the title of the model."""
    if page is Page.PATIENT:
        return f"{page_name(number)}: {model}" if model else page_name(number)
    return _NAMES[page] if number == 1 else f"{_NAMES[page]}, window {number}"
