"""The Study page: the steps at the left, the step that is shown at the right, over it a form, under both the foot."""

from collections.abc import Callable, Sequence
from pathlib import Path

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QHideEvent, QKeySequence, QShortcut
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.form_place import FormPlace
from clinicalc.gui.progress_strip import ProgressStrip
from clinicalc.gui.right_stack import RightStack
from clinicalc.gui.study.next_step import GOES_TO, offer_of
from clinicalc.gui.study.report_deed import SavedReport
from clinicalc.gui.study.shown_step import ShownStep
from clinicalc.gui.study.step_lines import name_of, step_lines
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_deeds import report_fit, save_study, write_file
from clinicalc.gui.study.study_foot import Next, StudyFoot
from clinicalc.gui.study.study_sides import StepsPane, StudySides
from clinicalc.gui.study.study_state import StudyState
from clinicalc.gui.study.study_work import StudyWork
from clinicalc.gui.study.validating_asks import VALIDATING, ValidatingAsks
from clinicalc.gui.study.validation_state import MadeUpdate
from clinicalc.operations.study_draft import StudyDraft
from clinicalc.settings import PracticePoint

_PATIENCE = 2.0
"""Seconds that a closing window lets a file be written."""


class StudyPage(QWidget):
    """Shows one study, its `work`, by steps; each step is a sheet that is made anew when the study changes."""

    trial_asked = Signal(object)
    """The Path of a coefficient file that is to be tried out on the patient's page."""
    install_asked = Signal(object)
    """The Path of a coefficient file that is to be looked at on the page of models."""

    def __init__(
        self, choices: FileChoices | None = None, points: Callable[[], Sequence[PracticePoint]] = tuple
    ) -> None:
        """`points` says which decision points the practice has."""
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._choices = choices or FileChoices()
        self.errands = Errands()
        self.work = StudyWork(self.errands, points)
        self.validating = ValidatingAsks(self.work, self.errands, self._choices)
        self.pane = StepsPane()
        self.right = RightStack()
        self.strip = ProgressStrip(self.errands)
        self.foot = StudyFoot()
        self.forms = FormPlace(self.right)
        self._asked: tuple[Ask | None, int] = (None, -1)
        self._told_of: StudyDraft | None = None
        self.sides = StudySides(self.pane, self.right, (self.strip, self.foot))
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.sides)
        self._shown = ShownStep(self.right, self.state, self._ask)
        self._connect()
        self._settle()

    @property
    def state(self) -> StudyState:
        """How the study stands."""
        return self.work.state

    @property
    def sheet(self) -> StepSheet:
        """The sheet of the step that is shown."""
        return self._shown.sheet

    @property
    def step(self) -> Step:
        """The step that is shown."""
        return self.pane.list.step

    def enter(self) -> None:
        """The page comes on screen; nothing is read anew."""
        if self.forms.is_open:
            self.forms.focus()
        else:
            self.pane.list.setFocus(Qt.FocusReason.OtherFocusReason)

    def may_close(self) -> bool:
        """Whether the window may close: not at once over a study file that is not saved; asked again, it may."""
        draft = self.state.draft
        if draft is None or draft.is_saved or draft is self._told_of:
            return True
        self._told_of = draft
        self.strip.say("The study file is not saved. Save it, or close the window again: then it is lost.")
        return False

    def leave(self) -> None:
        """The window closes: nobody waits for what is still being done."""
        self.errands.leave()
        self.errands.wait(_PATIENCE)

    def hideEvent(self, event: QHideEvent) -> None:
        """No passphrase stays typed where nobody sees it."""
        self.forms.forget()
        super().hideEvent(event)

    def ask_study(self) -> None:
        """Ask for a study file and open it."""
        path = None if self.work.keeps_draft() else self._choices.which(self, Wanted.STUDY)
        if path is not None:
            self.work.open_study(path)

    def ask_people(self) -> None:
        """Ask for a file of people, and propose a study file for it."""
        path = None if self.work.keeps_draft() else self._choices.which(self, Wanted.COHORT)
        if path is not None:
            self.work.begin_from(path)

    def show_step(self, step: Step) -> None:
        """Show a step."""
        self.pane.list.choose(step)
        self._show()

    def go_across(self) -> None:
        """Between the steps and what is shown; a form keeps the focus."""
        focused = self.window().focusWidget()
        if self.forms.is_open:
            self.forms.focus()
        elif focused is not None and self.pane.isAncestorOf(focused):
            self.sheet.focus_first()
        else:
            self.pane.list.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def open_deed(self, deed: FormDeed) -> None:
        """Show a form over the step."""
        self.forms.open(deed)
        self._settle()
        deed.focus_first()

    # what is shown

    def _take_change(self, step: Step | None) -> None:
        if step is not None:
            self.pane.list.choose(step)
        self._show()

    def _show(self) -> None:
        """Show the study in the step that is chosen."""
        self._shown.show(self.step, self.state)
        self.pane.show_name(name_of(self.state))
        self.pane.list.show_lines(step_lines(self.state))
        self._settle()
        self._go_on()

    def _settle(self) -> None:
        """The foot as the study stands."""
        is_free, offer = not self.errands.is_busy, offer_of(self.state, self.step)
        self.foot.offer(
            offer.what,
            may=offer.may and is_free,
            also=offer.also,
            again=self.state.path is not None,
            opens=self.state.draft is None,
        )
        self.foot.allow(is_free)
        self.foot.setVisible(not self.forms.is_open)
        self.pane.list.setEnabled(not self.forms.is_open)

    def _go_on(self) -> None:
        """A package is made as soon as its step is looked at."""
        if self.step is Step.PACKAGE and not self.forms.is_open:
            self.work.package()

    # what is asked for

    def _do_next(self, what: Next) -> None:
        step, deed = GOES_TO.get(what), self.validating.begin(what)
        if step is not None:
            self.show_step(step)
        elif deed is not None:
            self.open_deed(deed)
        elif what is Next.INSTALL:
            self.install_asked.emit(self.state.validating.written)
        elif what is Next.FIT:
            self.work.fit()
        elif what is Next.SAVE:
            self._open_if_any(save_study(self.state, self.errands, self._choices))
        elif what is Next.WRITE:
            self._open_if_any(write_file(self.state, self.errands, self._choices))
        elif what is Next.TRY and self.state.written is not None:
            self.trial_asked.emit(self.state.written)

    def _open_if_any(self, deed: FormDeed | None, asked: Ask | None = None, place: int = -1) -> None:
        """Show a form, where there is one; the focus comes back to where it was asked for."""
        if deed is not None:
            self._asked = (asked, place)
            self.open_deed(deed)

    def _ask(self, ask: Ask, place: int) -> None:
        """Something on the sheet was asked for."""
        draft = self.state.draft
        if ask is Ask.CHANGE:
            if self.step is Step.PACKAGE:  # what is said of the file is changed where the model is
                self.show_step(Step.MODEL)
            self.work.change_opened()
        elif ask in (Ask.FIRTH, Ask.RIDGE):
            self._offer_penalty(ask, place)
        elif ask is Ask.REPORT:
            self._open_if_any(report_fit(self.state, self.errands, self._choices), ask)
        elif ask in VALIDATING:
            self._open_if_any(self.validating.answer(self, ask, place), ask, place)
        elif ask is Ask.LEAVE:
            self.work.leave_draft()
            self.sheet.focus_first()
        elif draft is not None:
            self._answer(ask, place, draft)

    def _answer(self, ask: Ask, place: int, draft: StudyDraft) -> None:
        """What is asked for about the study file that is being written."""
        from clinicalc.gui.study.draft_asks import answer

        came = answer(ask, place, draft, self.errands)
        self._asked = (Ask.FITTING if ask in (Ask.FIRTH, Ask.RIDGE) else ask, place)
        if isinstance(came, FormDeed):
            self.open_deed(came)
        elif came is not None:
            self.work.take_draft(came)
            self._return()

    def _offer_penalty(self, ask: Ask, place: int) -> None:
        """The form of a fit with a penalty chosen, in the study file that is being written, or else that is open."""
        if self.errands.is_busy:
            return
        self.show_step(Step.MODEL)
        if self.state.draft is not None:
            self._answer(ask, place, self.state.draft)
        else:
            self.work.change_opened(lambda draft: self._answer(ask, place, draft))

    def _take_result(self, result: object) -> None:
        """What a form brought: a coefficient file that was written, or another draft, perhaps a saved one."""
        if isinstance(result, MadeUpdate):
            self.validating.work.take_update(result)
            self.foot.next.setFocus(Qt.FocusReason.OtherFocusReason)
        elif isinstance(result, Path):
            if self.step is Step.UPDATE:
                self.validating.work.take_written(result)
            else:
                self.work.take_written(result)
            self.foot.next.setFocus(Qt.FocusReason.OtherFocusReason)
        elif isinstance(result, StudyDraft):
            self.work.take_draft(result)
            self._return()
        else:
            self._settle()
            self._return()
            if isinstance(result, SavedReport):
                self.strip.say(f"{result.what} written to {result.path}.")

    def _leave_form(self) -> None:
        self._settle()
        self._return()

    def _return(self) -> None:
        """The focus back to where the form was asked for."""
        ask, place = self._asked
        self._asked = (None, -1)
        self._shown.go_back(ask, place)

    def _connect(self) -> None:
        self.work.changed.connect(self._take_change)
        self.work.told.connect(self.strip.say)
        self.pane.list.chosen.connect(lambda _: self._show())
        self.pane.list.entered.connect(lambda: self.sheet.focus_first())
        self.forms.done.connect(self._take_result)
        self.forms.left.connect(self._leave_form)
        self.foot.open_asked.connect(self.ask_study)
        self.foot.begin_asked.connect(self.ask_people)
        self.foot.again_asked.connect(self.work.read_again)
        self.foot.next_asked.connect(self._do_next)
        self.errands.began.connect(lambda _: self._settle())
        self.errands.ended.connect(self._go_on)
        self.errands.ended.connect(self._settle)
        for keys in ("F6", "Shift+F6"):
            QShortcut(QKeySequence(keys), self).activated.connect(self.go_across)
