"""The foot of the Models page: what can be done with the library, and at the right with the model that is shown."""

from datetime import date

from PySide6.QtCore import QPoint, Qt, Signal
from PySide6.QtGui import QAction, QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QMenu, QVBoxLayout, QWidget

from clinicalc.gui.figure_view import text_part
from clinicalc.gui.labels import CommandButton, make_button, make_rule
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.until_field import UntilField
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import UNIT, face
from clinicalc.operations.model_card import Deed

_DEEDS = {
    Deed.COMMENT: "Re&mark…",
    Deed.WITHDRAW: "&Withdraw…",
    Deed.HOLD: "H&old here…",
    Deed.RELEASE: "R&elease here…",
    Deed.EXTEND: "E&xtend…",
    Deed.APPROVE: "&Approve…",
    Deed.INSTALL: "I&nstall…",
}
"""In their order from left to right."""
_AGAIN = "&Approve again…"
"""Where an approval stands already, a new one is a lesser deed like the others."""
_ROOM = 960
"""From this width on the day stands beside "Approve…"; the form has it in any case."""
_PRIMARY = frozenset({Deed.APPROVE, Deed.INSTALL})
_OF_THE_LIBRARY = {
    LibraryDeed.PEOPLE: "&People of the practice…",
    LibraryDeed.HISTORY: "&History of the library…",
    LibraryDeed.EXPORT: "&Export…",
    LibraryDeed.BRING_IN: "&Bring in an exported library…",
}


class ModelsFoot(QWidget):
    """Buttons and a menu; it does nothing itself. A deed that the model does not allow has no button."""

    asked = Signal(object, bool)
    """The Deed or LibraryDeed, and whether it is about the model that is shown."""
    check_asked = Signal()
    """Every file of the library is to be read and checked."""
    back_asked = Signal()
    """From the model back to the list, where only one of them is on screen."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.back = make_button("Back to the &list")
        self.install = make_button("&Install file…")
        self.history = make_button("&History…")
        self.library = make_button("&Library…")
        self.deeds: dict[Deed, CommandButton] = {
            deed: make_button(words, name="primary" if deed in _PRIMARY else "") for deed, words in _DEEDS.items()
        }
        self.until = UntilField()
        self.more = make_button("&More…")
        self._of_list = (self.install, self.library)
        self._may: frozenset[Deed] = frozenset()
        self._has_model = self._narrow = self._is_right = self._is_first = False
        self._proposed_for = ""
        self._make_menu()
        self._make_more()
        self._lay_out()
        self.more.clicked.connect(self.open_more)
        self.back.clicked.connect(self.back_asked)
        self.install.clicked.connect(lambda: self.asked.emit(Deed.INSTALL, False))
        self.history.clicked.connect(lambda: self.asked.emit(LibraryDeed.HISTORY, True))
        self.library.clicked.connect(self.open_menu)
        for deed, button in self.deeds.items():
            button.clicked.connect(lambda _=False, deed=deed: self.asked.emit(deed, True))
        self.offer(frozenset(), has_model=False)

    def offer(self, may: frozenset[Deed], *, has_model: bool) -> None:
        """Buttons for what the model on screen allows; its history where it is one of the library."""
        self._may, self._has_model = may, has_model
        approve = self.deeds[Deed.APPROVE]
        again = Deed.EXTEND in may
        approve.setText(_AGAIN if again else _DEEDS[Deed.APPROVE])
        approve.setObjectName("" if again else "primary")
        approve.style().unpolish(approve)
        approve.style().polish(approve)
        self._arrange()

    def propose(self, fingerprint: str, until: date) -> None:
        """A day for the review of this model, unless another one was typed for it."""
        if fingerprint != self._proposed_for:
            self._proposed_for = fingerprint
            self.until.fill(until)

    def review_until(self) -> date | None:
        """The day beside "Approve…", None where it does not stand there. Raises UsageError where it is none."""
        return None if self.until.isHidden() else self.until.day()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The day takes no room from the buttons."""
        super().resizeEvent(event)
        self._arrange()

    def show_first(self, first: bool) -> None:
        """Whether the page leads to a first file itself, so that no button need."""
        self._is_first = first
        self._arrange()

    def allow(self, allowed: bool) -> None:
        """Whether anything can be done with the library: not while it is not read."""
        for button in self._of_list:
            button.setEnabled(allowed)

    def show_side(self, *, narrow: bool, is_right: bool) -> None:
        """In one column the buttons of the list and those of the model take turns, and the lesser deeds are a menu."""
        self._narrow, self._is_right = narrow, is_right
        self._arrange()

    def open_menu(self) -> None:
        """Show the menu of the library over its button, with its first entry chosen."""
        _pop_up(self.menu, self.library)

    def open_more(self) -> None:
        """Show the menu of the lesser deeds over its button."""
        _pop_up(self.more_menu, self.more)

    def _arrange(self) -> None:
        is_list, is_card = not (self._narrow and self._is_right), not self._narrow or self._is_right
        self.library.setVisible(is_list)
        self.install.setVisible(is_list and not self._is_first)
        self.back.setVisible(not is_list)
        self.history.setVisible(self._has_model and not self._narrow)
        first_time = Deed.APPROVE in self._may and not self._may & {Deed.EXTEND, Deed.INSTALL}
        self.until.setVisible(first_time and not self._narrow and self.width() >= _ROOM * text_part())
        for deed, button in self.deeds.items():
            button.setVisible(deed in self._may and is_card and (deed in _PRIMARY or not self._narrow))
            self._lesser[deed].setVisible(deed in self._may and deed not in _PRIMARY)
        self._lesser_history.setVisible(self._has_model)
        self.more.setVisible(self._narrow and self._is_right and (self._has_model or bool(self._may - _PRIMARY)))

    def _make_menu(self) -> None:
        self.menu = QMenu("Library", self)
        self.menu.setFont(face(UNIT))
        check = QAction("&Check all files", self.menu)
        check.triggered.connect(lambda: self.check_asked.emit())
        self.menu.addAction(check)
        for deed, words in _OF_THE_LIBRARY.items():
            action = QAction(words, self.menu)
            action.triggered.connect(lambda _=False, deed=deed: self.asked.emit(deed, False))
            self.menu.addAction(action)

    def _make_more(self) -> None:
        self.more_menu = QMenu("More", self)
        self.more_menu.setFont(face(UNIT))
        self._lesser_history = QAction("&History…", self.more_menu)
        self._lesser_history.triggered.connect(lambda: self.asked.emit(LibraryDeed.HISTORY, True))
        self.more_menu.addAction(self._lesser_history)
        self._lesser: dict[Deed, QAction] = {}
        for deed, words in _DEEDS.items():
            action = QAction(words, self.more_menu)
            action.triggered.connect(lambda _=False, deed=deed: self.asked.emit(deed, True))
            self.more_menu.addAction(action)
            self._lesser[deed] = action

    def _lay_out(self) -> None:
        row = QHBoxLayout()
        row.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN + 4, 8)
        row.setSpacing(10)
        for button in (self.back, self.install, self.history, self.library):
            row.addWidget(button)
        row.addStretch(1)
        row.addWidget(self.more)
        for deed, button in self.deeds.items():
            if deed is Deed.APPROVE:
                row.addWidget(self.until)
            row.addWidget(button)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(make_rule())
        column.addLayout(row)


def _pop_up(menu: QMenu, button: QWidget) -> None:
    menu.setActiveAction(next(action for action in menu.actions() if action.isVisible()))
    menu.popup(button.mapToGlobal(QPoint(0, -menu.sizeHint().height())))
