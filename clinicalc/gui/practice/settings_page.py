"""The page of settings: each change is taken and written at once, and a refused one is said at its field."""

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QHideEvent, QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QApplication, QHBoxLayout, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.gui.labels import make_button, make_label, make_rule
from clinicalc.gui.practice.file_problems import FileProblems
from clinicalc.gui.practice.library_group import LibraryGroup
from clinicalc.gui.practice.settings_groups import NumbersGroup, PaperGroup, PracticeGroup
from clinicalc.gui.practice.trust_place import TrustPlace
from clinicalc.gui.practice.units_group import UnitsGroup
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE, UNIT

if TYPE_CHECKING:
    from clinicalc.gui.file_choosing import FileChoices

_SAYS = (
    "For this user on this machine. Each change is written when its field is left or Enter pressed. Escape brings back"
    " what was being changed, and then leaves the page."
)
_NARROW_BELOW = 740
_WIDEST = 900
_ALL_BUT_NOTHING = 1000
"""Parts of the width that go to the settings; the last one holds them at the left in a wide window."""


def _no_models() -> Sequence[tuple[str, str]]:
    return ()


class SettingsPage(QWidget):
    """Shows the settings in force and changes them through `preferences`, which tells the window.

    `models` says which models are in use, as (id, title) pairs, for the decision points; `choices` are the dialogs for
    files, those of the system where it is None.
    """

    left = Signal()
    """The page was left, by its button or by Escape."""
    library_asked = Signal()
    """"Join or found…": the Models page has the forms for it."""

    def __init__(
        self,
        preferences: Preferences,
        *,
        models: Callable[[], Sequence[tuple[str, str]]] = _no_models,
        choices: "FileChoices | None" = None,
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(parent)
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._preferences, self._models = preferences, models
        self.problems = FileProblems()
        self.back = make_button("Back")
        self.message = make_label("", UNIT, semibold=True)
        self.scroller = Scroller()
        self._stack = QStackedWidget()
        self.trust = TrustPlace(self._stack, choices, self._return)
        page, column = self._lay_out()
        self.practice, self.numbers = PracticeGroup(preferences), NumbersGroup(preferences)
        self.units, self.paper = UnitsGroup(preferences), PaperGroup(preferences)
        self.library = LibraryGroup()
        self._groups = (self.practice, self.numbers, self.units, self.paper, self.library)
        for part in (make_label("Settings", TITLE, semibold=True), make_label(_SAYS), self.problems, *self._groups):
            column.addWidget(part)
        column.addStretch(1)
        self._connect(page)
        self._show()

    def open(self) -> None:
        """Read the settings file anew and put the focus at the first field; call it whenever the page is shown."""
        self.trust.close()
        self.message.setText("")
        self._preferences.read_again()
        self.numbers.points.offer_models(self._models())
        self._show()
        first = self.problems.agree if self._preferences.problems else self.practice.name.fields[0].edit
        first.setFocus(Qt.FocusReason.OtherFocusReason)

    def show_library(self, practice: str) -> None:
        """Name the practice of the library, once it has been read; "" while nobody knows."""
        self.library.show_practice(practice)

    def leave(self) -> None:
        """The window closes: nobody waits for a key any more, and no passphrase stays."""
        self.trust.leave()

    def hideEvent(self, event: QHideEvent) -> None:
        """Another page is shown: passphrases stay in no form out of sight."""
        super().hideEvent(event)
        if not event.spontaneous() and self.trust.form is not None:
            self.trust.form.forget()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """In a narrow window names stand over their fields."""
        super().resizeEvent(event)
        narrow = event.size().width() < _NARROW_BELOW
        for group in self._groups:
            group.set_narrow(narrow)

    def _lay_out(self) -> tuple[QWidget, QVBoxLayout]:
        """The page that stands in the stack, where a form may take its place, and the column for its parts.

        Containers are placed before they are filled: what is moved takes all inside it along.
        """
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addWidget(self._stack)
        page = QWidget()
        self._stack.addWidget(page)
        whole = QVBoxLayout(page)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(0)
        whole.addWidget(self.scroller, 1)
        whole.addWidget(make_rule())
        foot = QHBoxLayout()
        foot.setContentsMargins(SHEET_MARGIN, 8, SHEET_MARGIN_RIGHT, 12)
        foot.setSpacing(10)
        foot.addWidget(self.message, 1)
        foot.addWidget(self.back)
        whole.addLayout(foot)
        inside, held = QWidget(), QWidget()
        inside.setObjectName("sheet")
        around = QHBoxLayout(inside)
        around.setContentsMargins(SHEET_MARGIN, 24, SHEET_MARGIN_RIGHT, 16)
        around.addWidget(held, _ALL_BUT_NOTHING)
        around.addStretch(1)
        held.setMaximumWidth(_WIDEST)
        self.scroller.setWidgetResizable(True)
        self.scroller.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.scroller.setWidget(inside)
        column = QVBoxLayout(held)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(14)
        return page, column

    def _connect(self, page: QWidget) -> None:
        self._preferences.changed.connect(self._show)
        self._preferences.refused.connect(self._tell)
        self.problems.agreed.connect(self._write_anew)
        self.library.library_asked.connect(self.library_asked)
        self.library.form_asked.connect(self.trust.show)
        self.back.clicked.connect(self.left)
        around = Qt.ShortcutContext.WidgetWithChildrenShortcut
        QShortcut(QKeySequence(Qt.Key.Key_Escape), page, self._escape, around)
        application = QApplication.instance()
        if isinstance(application, QApplication):
            application.focusChanged.connect(self._follow_focus)

    def _show(self) -> None:
        settings = self._preferences.settings
        for group in self._groups:
            group.show_settings(settings)
        self.problems.show_problems(self._preferences.problems)
        if self._preferences.is_kept:
            self.message.setText("")

    def _tell(self, words: str) -> None:
        """Say in the foot why something is not kept, to a screen reader too."""
        self.message.setText(f"{words[:1].upper()}{words[1:]}")
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, self.message.text()))

    def _write_anew(self) -> None:
        self._preferences.write_anew()
        self._show()
        if not self._preferences.problems:
            self.practice.name.fields[0].edit.setFocus(Qt.FocusReason.OtherFocusReason)

    def _escape(self) -> None:
        """Bring back what is in force where something else is being typed; else leave."""
        if not any(group.restore() for group in self._groups):
            self.left.emit()

    def _follow_focus(self, _: QWidget | None, now: QWidget | None) -> None:
        """What the tab key comes to is brought into view."""
        inside = self.scroller.widget()
        if now is not None and inside is not None and inside.isAncestorOf(now):
            self.scroller.ensureWidgetVisible(now, 0, 40)

    def _return(self) -> None:
        """A form was left: back to the buttons that lead to forms."""
        self.library.join.setFocus(Qt.FocusReason.OtherFocusReason)
