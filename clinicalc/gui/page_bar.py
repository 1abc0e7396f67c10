"""The bar at the top: the mark, the pages, the practice, menu and guide."""

from PySide6.QtCore import QPoint, QSize, Signal
from PySide6.QtGui import QAction, QActionGroup, QColor, QKeySequence, QPainter, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QMenu, QWidget

from clinicalc.gui import theme
from clinicalc.gui.flat_button import FlatButton
from clinicalc.gui.labels import make_line
from clinicalc.gui.page_tabs import BAR_HEIGHT, PAD, PageTabs
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import UNIT, face
from clinicalc.settings import ThemeChoice

_TICKS = ((0, 4), (5, 3), (10, 8), (15, 3), (20, 5))
"""Place and half height of the ticks of the mark; the tall one is this patient's."""
_BESIDE = 2 * SIDE_MARGIN + 80
"""What mark, margins and gaps take."""
_THEMES = {ThemeChoice.SYSTEM: "As the &system", ThemeChoice.LIGHT: "&Light", ThemeChoice.DARK: "&Dark"}


class TickMark(QWidget):
    """The program's mark: a piece of the ruler with one value on it. Decoration."""

    def __init__(self) -> None:
        super().__init__()
        self.setFixedSize(QSize(22, 20))

    def paintEvent(self, event: QPaintEvent) -> None:
        """Five ticks on one line, the tall one in accent."""
        painter = QPainter(self)
        colours = theme.tokens()
        for x, half in _TICKS:
            tall = half == max(h for _, h in _TICKS)
            colour = QColor(colours.accent if tall else colours.ink)
            painter.fillRect(x, 10 - half, 2 if tall else 1, 2 * half, colour)
        painter.end()


class PageBar(QWidget):
    """Tells what was chosen in its menu; it changes nothing itself."""

    theme_chosen = Signal(object)
    """The ThemeChoice."""

    def __init__(self, choice: ThemeChoice) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.setFixedHeight(BAR_HEIGHT)
        self.tabs = PageTabs()
        self.practice = make_line("", UNIT)
        self.menu_button = FlatButton("Menu", "F10")
        self.guide = FlatButton("Guide", "F1")
        self._make_menu(choice)
        row = QHBoxLayout(self)
        row.setContentsMargins(SIDE_MARGIN, 0, SIDE_MARGIN - 3, 0)
        row.setSpacing(0)
        row.addWidget(TickMark())
        row.addSpacing(22 - PAD)
        row.addWidget(self.tabs)
        row.addStretch(1)
        row.addWidget(self.practice)
        row.addSpacing(14)
        row.addWidget(self.menu_button)
        row.addSpacing(8)
        row.addWidget(self.guide)
        self.menu_button.clicked.connect(self.open_menu)

    def show_practice(self, name: str) -> None:
        """The practice's name, where there is room for the whole of it; it stands in Settings too."""
        self.practice.setText(name)
        self._fit(self.width())

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The practice gives way before the pages do."""
        super().resizeEvent(event)
        self._fit(event.size().width())

    def open_menu(self) -> None:
        """Show the menu under its button, with its first entry chosen, so that the arrow keys go on from there."""
        self.menu.setActiveAction(self.menu.actions()[0])
        self.menu.popup(self.menu_button.mapToGlobal(QPoint(0, self.menu_button.height())))

    def show_theme(self, choice: ThemeChoice) -> None:
        """Mark another theme as the chosen one, without telling anybody."""
        self.theme = choice
        self.themes.actions()[list(_THEMES).index(choice)].setChecked(True)

    def _fit(self, width: int) -> None:
        others = (self.tabs, self.menu_button, self.guide)
        taken = sum(part.sizeHint().width() for part in others) + _BESIDE
        self.practice.setVisible(taken + self.practice.sizeHint().width() <= width)

    def _make_menu(self, choice: ThemeChoice) -> None:
        self.menu = QMenu("Menu", self)
        self.menu.setFont(face(UNIT))
        # entries are made here and then added: one that Qt makes may be taken by PySide for an object that is gone
        self.themes = QMenu("&Theme", self.menu)
        self.themes.setFont(face(UNIT))
        self.menu.addMenu(self.themes)
        group = QActionGroup(self.themes)
        for option, words in _THEMES.items():
            action = QAction(words, self.themes)
            self.themes.addAction(action)
            action.setCheckable(True)
            action.setChecked(option is choice)
            action.triggered.connect(lambda _=False, option=option: self.theme_chosen.emit(option))
            group.addAction(action)
        self.theme = choice
        self.settings = QAction("&Settings…", self.menu)
        self.settings.setShortcut(QKeySequence("Ctrl+,"))
        self.menu.addAction(self.settings)
        self.about = QAction("&About", self.menu)
        self.menu.addAction(self.about)
