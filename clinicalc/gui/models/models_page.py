"""The page of the models: the list at the left; one model, a deed or the first run at the right; the foot."""

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QHideEvent, QKeySequence, QShortcut
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError, LibraryError, Stopped, UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices
from clinicalc.gui.models.card_place import CardPlace
from clinicalc.gui.models.card_prints import CardPrints
from clinicalc.gui.models.deed_place import DeedPlace
from clinicalc.gui.models.deeds.given import Given, LibraryDeed
from clinicalc.gui.models.deeds.review_dates import a_year_after
from clinicalc.gui.models.first_place import FirstPlace
from clinicalc.gui.models.library_reading import LibraryReading
from clinicalc.gui.models.library_side import LibrarySide
from clinicalc.gui.models.models_foot import ModelsFoot
from clinicalc.gui.models.two_sides import TwoSides
from clinicalc.gui.right_stack import RightStack
from clinicalc.gui.window_words import sentence_of
from clinicalc.library.opening import OpenedLibrary
from clinicalc.operations.library_view import LibraryView, ModelRow
from clinicalc.operations.model_card import Deed, ModelCard
from clinicalc.operations.vetting_desk import VettingDesk

_PATIENCE = 2.0
"""Seconds that a closing window lets a record be written."""


class ModelsPage(QWidget):
    """`desk` says which machine and library it is about. Everything is read in errands, on entry and after a deed."""

    changed = Signal()
    """Something was decided here or read anew: what the patient's page uses is to be read again."""
    founded = Signal()
    """This machine uses a library from now on."""

    def __init__(self, desk: VettingDesk, choices: FileChoices | None = None) -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        choices = choices or FileChoices()
        self._desk = desk
        self.errands = Errands()
        self.reading = LibraryReading(desk, self.errands)
        self.side = LibrarySide(self.errands)
        self.right = RightStack()
        self.foot = ModelsFoot()
        self.card = CardPlace(self.right, self.reading)
        self.deeds = DeedPlace(self.right, desk, self.errands, choices)
        self.prints = CardPrints(self.card.view, self.errands, choices.where, self._opened)
        self.first = FirstPlace(self.right, self.errands, choices)
        self._due: Callable[[], None] | None = None
        self._wants_list = False
        self.sides = TwoSides(self.side, self.right, self.foot)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.sides)
        self._connect()
        self._listen_for_keys()

    def enter(self) -> None:
        """The page comes on screen: the library is read again, unless a form is open, which then goes on."""
        if self.deeds.is_open:
            self.deeds.focus()
            return
        self._wants_list = self.reading.view is None
        self.read_again()
        if not self.first.is_shown:
            self._focus_list()

    def show_ways(self) -> None:
        """The ways to a library, on a machine that has one too; an open form stays where it is."""
        if not self.deeds.is_open:
            self.first.show_ways()
            self._settle()
        self._go_right()

    def leave(self) -> None:
        """The window closes: nobody waits for what is still being done."""
        self._due = None
        self.reading.forget()
        self.deeds.forget()
        self.errands.leave()
        self.errands.wait(_PATIENCE)

    def read_again(self) -> None:
        """Read the library again; on a machine that has joined none, show how one is founded or joined."""
        try:
            self._desk.machine()
        except LibraryError:
            self._begin_first()
        except ClinicalcError as error:
            self._lose_view(error)
        else:
            self.reading.read()

    def hideEvent(self, event: QHideEvent) -> None:
        """No passphrase stays typed where nobody sees it."""
        self.deeds.forget()
        self.first.forget()
        super().hideEvent(event)

    def go_across(self) -> None:
        """Between the list and the right side; beside an open form there is no list to go to."""
        if self.deeds.is_open:
            self._go_right()
        elif self.sides.is_at_right:
            self._go_left()
        else:
            self._go_right()

    def open_deed(self, deed: Deed | LibraryDeed, is_about_model: bool) -> None:
        """Open a form, as soon as nothing is being read any more."""
        if self.errands.is_busy:
            self._due = lambda: self.open_deed(deed, is_about_model)
            return
        card = self.card.shown if is_about_model else None
        if is_about_model and card is None:
            return
        self.side.strip.say("")
        try:
            until = self.foot.review_until() if deed is Deed.APPROVE else None
        except UsageError as error:
            self.side.strip.say(sentence_of(error))
            self.foot.until.edit.setFocus(Qt.FocusReason.OtherFocusReason)
            return
        given = Given() if card is None else replace(self.card.given(), review_until=until)
        self.deeds.begin(deed, card, given)
        self._settle()
        self.sides.turn(is_right=True)

    # what was read

    def _take_view(self, view: LibraryView) -> None:
        self.side.show_view(view)
        self.changed.emit()
        is_free = not self.card.is_candidate and not self.first.is_asked
        if not view.rows and is_free:
            self._show_first()
        elif is_free:
            models = self.side.list
            if not models.fingerprint:
                models.choose(models.first())
            self._show_model(models.fingerprint)
            if self._wants_list and self.isVisible():
                self._focus_list()
        self._wants_list = False
        self._settle()

    def _lose_view(self, error: ClinicalcError) -> None:
        if isinstance(error, Stopped) and self.reading.view is not None:
            self.side.strip.say("It was stopped. The list is as it was read before.")
            return
        self.side.show_error(error)
        if not self.first.is_asked:  # a way to another library is wanted most where this one cannot be used
            self.card.show_words("", "")

    def _begin_first(self) -> None:
        self.reading.forget()
        self.side.show_sentence("This machine uses no model library yet. At the right one can be founded or joined.")
        self._show_first()

    def _show_first(self) -> None:
        had_focus = self.isVisible() and not self.deeds.is_open
        self.first.show()
        self._settle()
        if had_focus:
            self._go_right()

    def _show_model(self, fingerprint: str) -> None:
        """A model of the list, as soon as it is read."""
        row = None if self.reading.view is None else self.reading.view.row(fingerprint)
        if row is not None:
            self.card.want(row)
            self._settle()

    def _show_candidate(self, card: ModelCard) -> None:
        """A file that is not in the library, or the row of one that is."""
        if card.row is not None and Deed.INSTALL not in card.may:
            self.side.strip.say("This file is in the library already.")
            self.side.list.choose(card.fingerprint)
            self._show_model(card.fingerprint)
        else:
            self.side.list.choose("")
            self.card.show_candidate(card)
        self._settle()
        self._go_right()

    def _refuse_candidate(self, name: str, error: ClinicalcError) -> None:
        self.side.list.choose("")
        self.card.show_error(f"{name} cannot be installed", error)
        self._go_right()

    # what was done

    def _end_deed(self, row: object) -> None:
        if isinstance(row, ModelRow):
            self.card.leave_candidate()
            self.side.list.choose(row.fingerprint)
            self.side.strip.say(f"{row.title} {row.version}: {row.says}.")
        self._settle()
        self._wants_list = not self.side.list.entries.rows  # the first file: there is no list to go to yet
        self._go_left()
        self.changed.emit()
        self.read_again()

    def _leave_deed(self) -> None:
        self._settle()
        if self.first.is_shown or self.card.is_candidate:
            self._go_right()
        else:
            self._go_left()

    def _read_behind(self) -> None:
        self.changed.emit()
        self.reading.read()

    def _keep_library(self) -> None:
        """Nobody wants another library any more."""
        self.first.leave()
        self.read_again()
        self._go_left()

    def _found(self) -> None:
        self.first.leave()
        self.deeds.remember_key(self.first.own_key)
        self.founded.emit()
        self.side.strip.say("This machine uses the library now.")
        self.read_again()

    def _go_on(self) -> None:
        """An errand is over; what waited for it comes next."""
        due, self._due = self._due, None
        if due is not None and not self.errands.is_busy:
            due()
        elif due is not None:
            self._due = due

    # where the focus and the parts are

    def _settle(self) -> None:
        """Foot and list as what is shown allows."""
        card = self.card.shown
        is_free = not self.deeds.is_open
        may = card.may if card is not None and is_free and not self.first.is_shown else frozenset()
        has_model = is_free and card is not None and card.state is not None and not self.first.is_shown
        self.foot.offer(may, has_model=has_model)
        if card is not None:
            self.foot.propose(card.fingerprint, a_year_after(self._desk.clock().date()))
        self.foot.show_first(self.first.is_shown)
        self.foot.allow(self.reading.view is not None)
        has_deeds = self.reading.view is not None or not self.first.is_shown
        self.foot.setVisible(is_free and has_deeds)  # a form has buttons and letters of its own
        self.side.set_free(is_free)

    def _focus_list(self) -> None:
        """The focus to the list; where only the right side is on screen, to that."""
        if self.side.isVisibleTo(self):
            self.side.focus_list()
        else:
            self._go_right()

    def _go_left(self) -> None:
        self.sides.turn(is_right=False)
        self.side.focus_list()

    def _go_right(self) -> None:
        self.sides.turn(is_right=True)
        if self.deeds.is_open:
            self.deeds.focus()
        elif self.first.is_shown:
            self.first.focus()
        else:
            self.card.focus()

    def _connect(self) -> None:
        self.reading.view_read.connect(self._take_view)
        self.reading.view_failed.connect(self._lose_view)
        self.reading.looked_at.connect(self._show_candidate)
        self.reading.look_failed.connect(self._refuse_candidate)
        self.card.came.connect(self._settle)
        self.prints.told.connect(self.side.strip.say)
        self.card.left.connect(self._go_left)
        self.side.list.chosen.connect(self._choose)
        self.side.list.entered.connect(self._go_right)
        self.deeds.done.connect(self._end_deed)
        self.deeds.left.connect(self._leave_deed)
        self.deeds.written.connect(self._read_behind)
        self.deeds.card_ready.connect(self._show_candidate)
        self.first.founded.connect(self._found)
        self.first.install_asked.connect(self._look_at)
        self.first.left.connect(self._keep_library)
        self.foot.asked.connect(self.open_deed)
        self.foot.check_asked.connect(self.reading.read_all)
        self.foot.back_asked.connect(self._go_left)
        self.errands.ended.connect(self._go_on)

    def _opened(self) -> OpenedLibrary | None:
        return None if self.reading.view is None else self.reading.view.opened

    def _choose(self, fingerprint: str) -> None:
        self._due = None
        self.first.leave()
        self.side.strip.say("")
        self.card.leave_candidate()
        self._show_model(fingerprint)

    def look_at(self, path: Path) -> None:
        """A file that may be installed is looked at; a form that is open, or the lack of a library, comes first."""
        try:
            self._desk.machine()
        except ClinicalcError:  # what is to be done about it is on the page
            return
        if self.deeds.is_open:
            self.side.strip.say(f"{path.name} is looked at once the form is left: “Install file…”.")
            return
        self._look_at(path)

    def _look_at(self, path: Path) -> None:
        self.first.leave()
        self.reading.look_at(path)

    def _listen_for_keys(self) -> None:
        for keys, verb in (("F6", self.go_across), ("Shift+F6", self.go_across), ("Ctrl+F", self._go_to_filter)):
            QShortcut(QKeySequence(keys), self).activated.connect(verb)

    def _go_to_filter(self) -> None:
        if not self.deeds.is_open:
            self.sides.turn(is_right=False)
            self.side.focus_filter()
