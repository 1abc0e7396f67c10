"""The theme in force: who chose it, its colours, and a signal when they change.

Painters ask `tokens()` at every paint; style sheet and palette are set anew for the whole application. With
`ThemeChoice.SYSTEM` the window follows the system's light or dark, also while it is open, and is light where the system
does not say.
"""

from collections.abc import Mapping
from functools import cache

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QApplication

from clinicalc.gui.painting import colours_of
from clinicalc.gui.tokens import DARK, LIGHT, Tokens, make_palette, make_style_sheet
from clinicalc.report.shapes import Tone
from clinicalc.settings import ThemeChoice

_SCHEMES = {
    ThemeChoice.SYSTEM: Qt.ColorScheme.Unknown,
    ThemeChoice.LIGHT: Qt.ColorScheme.Light,
    ThemeChoice.DARK: Qt.ColorScheme.Dark,
}


class Theme(QObject):
    """One for the whole program; `changed` comes after palette, style sheet and `tokens` are the new ones."""

    changed = Signal()

    def __init__(self) -> None:
        super().__init__()
        self._application: QApplication | None = None
        self._choice = ThemeChoice.SYSTEM
        self._system = Qt.ColorScheme.Unknown
        self._tokens = LIGHT

    @property
    def tokens(self) -> Tokens:
        """The colours in force."""
        return self._tokens

    @property
    def choice(self) -> ThemeChoice:
        """What was chosen: the system's, light or dark."""
        return self._choice

    @property
    def is_dark(self) -> bool:
        """Whether the dark colours are in force, chosen or the system's."""
        return self._tokens is DARK

    def apply_to(self, application: QApplication) -> None:
        """Colour this application now and at every later change."""
        hints = application.styleHints()
        if application is not self._application:
            self._application = application
            hints.colorSchemeChanged.connect(self._follow_system)
        self._system = hints.colorScheme()
        self._tokens = self._due_tokens()
        self._colour()

    def choose(self, choice: ThemeChoice) -> None:
        """Take the system's colours, or always light or dark; window frames and system dialogs are asked to follow."""
        self._choice = ThemeChoice(choice)
        if self._application is not None:
            hints = self._application.styleHints()
            hints.setColorScheme(_SCHEMES[self._choice])  # Unknown hands the matter back to the system
            self._system = hints.colorScheme()
        self._settle()

    def _follow_system(self, scheme: Qt.ColorScheme) -> None:
        self._system = scheme
        self._settle()

    def _settle(self) -> None:
        due = self._due_tokens()
        if due is self._tokens:
            return
        self._tokens = due
        self._colour()
        self.changed.emit()

    def _due_tokens(self) -> Tokens:
        if self._choice is ThemeChoice.SYSTEM:
            return DARK if self._system == Qt.ColorScheme.Dark else LIGHT
        return DARK if self._choice is ThemeChoice.DARK else LIGHT

    def _colour(self) -> None:
        if self._application is None:
            return
        self._application.setPalette(make_palette(self._tokens))
        self._application.setStyleSheet(make_style_sheet(self._tokens))  # Qt then paints every widget again


@cache
def current() -> Theme:
    """The program's one theme."""
    return Theme()


def tokens() -> Tokens:
    """The colours in force, for a painter."""
    return current().tokens


def choose(choice: ThemeChoice) -> None:
    """Take another theme now; keeping it for the next start is for the settings."""
    current().choose(choice)


@cache
def colours(tokens: Tokens) -> Mapping[Tone, QColor]:
    """The colour of every ink of a figure, made once a theme."""
    return colours_of(tokens)
