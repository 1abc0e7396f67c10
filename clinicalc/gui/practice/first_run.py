"""What a machine without a library is led through: founding one, joining one, bringing in a bundle, a first file.

How far the machine is stands in its settings and on the disk, and is read whenever the page is shown. What was typed
in a step stays as long as the window does; passphrases are forgotten with every step.
"""

from dataclasses import replace
from pathlib import Path

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseFolder, ChooseOpen, ChooseSave
from clinicalc.gui.practice.bundle_form import BundleForm
from clinicalc.gui.practice.first_file_page import FirstFilePage
from clinicalc.gui.practice.founded_page import FoundedPage
from clinicalc.gui.practice.join_form import JoinForm
from clinicalc.gui.practice.own_key_form import OwnKeyForm
from clinicalc.gui.practice.place_form import PlaceForm
from clinicalc.gui.practice.practice_key_form import PracticeKeyForm
from clinicalc.gui.practice.rule_form import RuleForm
from clinicalc.gui.practice.sheet_page import SheetPage, exchange
from clinicalc.gui.practice.start_page import StartPage
from clinicalc.gui.practice.steps_page import StepsPage
from clinicalc.library.records import Approver
from clinicalc.operations.founding_steps import FoundingPlan, look_at_machine
from clinicalc.operations.practice_founding import Founded

_JOINED = (
    "All 64 digits of its practice key agree. What the practice approved can be chosen on the Patient page, and is "
    "read again before every new patient, print and copy."
)


class FirstRun(QWidget):
    """In the place of the page's right side, while this machine has no library or its library holds no file.

    The page calls `begin` whenever it shows it, and `forget` when it goes out of sight.
    """

    founded = Signal()
    """This machine uses a library now, founded, joined or brought in: settings and library are to be read again."""
    install_asked = Signal(Path)
    """A file was chosen to be the first: the page shows its card and the form of its installation."""

    left = Signal()
    """The ways to another library were left: this machine goes on with the one it has."""

    def __init__(
        self,
        errands: Errands,
        choose_folder: ChooseFolder,
        choose_open: ChooseOpen,
        choose_save: ChooseSave,
    ) -> None:
        super().__init__()
        self._errands = errands
        self._choose_folder, self._choose_open, self._choose_save = choose_folder, choose_open, choose_save
        self.plan = FoundingPlan()
        """What is settled of a founding; no passphrase."""
        self.own_key = ""
        """The key file of whoever founded the library here: a path, so that no form asks for it again."""
        self.page: QWidget | None = None
        """What is shown now."""
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)

    def begin(self) -> None:
        """Show how far this machine is. What stands half-way in a step stays, until something was founded."""
        stands = look_at_machine()
        if stands.has_joined:
            if not isinstance(self.page, FoundedPage | FirstFilePage):
                self.show_first_file()
            return
        if not self.plan.practice:
            self.plan = replace(self.plan, practice=stands.practice)
        if self.page is None or isinstance(self.page, FoundedPage | FirstFilePage):
            self.show_start()

    def focus_first(self) -> None:
        """The focus to the first thing that can be done."""
        if isinstance(self.page, SheetPage | Deedlike):
            self.page.focus_first()

    def forget(self) -> None:
        """Empty every passphrase."""
        if isinstance(self.page, Deedlike):
            self.page.forget()

    def show_start(self) -> None:
        """The ways to a library; Settings lead here too, to those to another one."""
        page = StartPage(look_at_machine())
        page.found_asked.connect(self._go_on)
        page.join_asked.connect(self.show_joining)
        page.bundle_asked.connect(self.show_bundle)
        page.left.connect(self.left)
        self._show(page)

    def show_steps(self) -> None:
        """The founding as a list of steps."""
        page = StepsPage(self.plan)
        page.asked.connect(self.show_step)
        page.left.connect(self.show_start)
        self._show(page)

    def show_step(self, step: int) -> None:
        """One step of the founding, from 0."""
        if step == 0:
            place = PlaceForm(self._errands, self._choose_folder, self.plan)
            place.settled.connect(self._take_place)
            self._show_form(place)
        elif step == 1:
            own = OwnKeyForm(self._errands, self._choose_save, self.plan)
            own.settled.connect(self._take_approver)
            self._show_form(own)
        elif step == 2:
            rule = RuleForm(self._errands, self.plan)
            rule.settled.connect(self._take_rule)
            self._show_form(rule)
        else:
            key = PracticeKeyForm(self._errands, self._choose_save, self.plan)
            key.founded.connect(self._take_founded)
            self._show_form(key)

    def show_joining(self) -> None:
        """The form for a library that was founded elsewhere."""
        stands = look_at_machine()
        form = JoinForm(self._errands, self._choose_folder, None if stands.has_joined else stands.place)
        form.joined.connect(self._take_joined)
        form.left.connect(self.show_start)
        self._show(form)

    def show_bundle(self) -> None:
        """The form for a library in an exported file."""
        form = BundleForm(self._errands, self._choose_open, self._choose_folder)
        form.joined.connect(self._take_joined)
        form.left.connect(self.show_start)
        self._show(form)

    def show_first_file(self) -> None:
        """The files that ship with the program, or one of the practice's own."""
        page = FirstFilePage(self._errands, self._choose_open)
        page.chosen.connect(self.install_asked)
        self._show(page)

    def _go_on(self) -> None:
        """Straight to the first step where nothing is settled, else to the list that says what is."""
        if self.plan.place is None:
            self.show_step(0)
        else:
            self.show_steps()

    def _take_place(self, practice: str, place: str) -> None:
        self.plan = replace(self.plan, practice=practice, place=Path(place))
        self._next()

    def _take_approver(self, approver: Approver, key_file: str) -> None:
        self.plan = replace(self.plan, approver=approver, own_key=key_file)
        self._next()

    def _take_rule(self, author_may_approve: bool) -> None:
        self.plan = replace(self.plan, author_may_approve=author_may_approve)
        self._next()

    def _next(self) -> None:
        """The first step that is not settled, which is the last where all others are."""
        plan = self.plan
        settled = (plan.place is not None, plan.approver is not None, plan.author_may_approve is not None)
        self.show_step(settled.index(False) if False in settled else len(settled))

    def _take_founded(self, founded: Founded) -> None:
        self.own_key = self.plan.own_key
        self.plan = FoundingPlan()
        page = FoundedPage(founded)
        page.next_asked.connect(self.show_first_file)
        self._show(page)
        self.founded.emit()

    def _take_joined(self, practice: str) -> None:
        self._show(SheetPage(f"This machine uses the library of {practice} now", _JOINED))
        self.founded.emit()

    def _show_form(self, form: Deedlike) -> None:
        form.left.connect(self.show_steps)
        self._show(form)

    def _show(self, page: QWidget) -> None:
        before, self.page = self.page, page
        exchange(self._column, before, page)
        if self.isVisible():
            self.focus_first()
