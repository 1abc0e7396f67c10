"""What is asked for in the steps Validation and Update, and in the foot beside them: work begun, or a form."""

from functools import partial

from PySide6.QtWidgets import QWidget

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_work import StudyWork
from clinicalc.gui.study.validation_state import MadeValidation
from clinicalc.gui.study.validation_work import ValidationWork

_SAVES = (Ask.VALIDATION_REPORT, Ask.UPDATE_REPORT, Ask.TABLES, Ask.DRAWINGS)
VALIDATING = frozenset((Ask.HOLD_MODEL, Ask.UPDATE, *_SAVES, Ask.HORIZON))
"""What is answered here."""


class ValidatingAsks:
    """`work` does it; what needs a form comes back as one, for the page to show."""

    def __init__(self, work: StudyWork, errands: Errands, choices: FileChoices) -> None:
        self.work = ValidationWork(work)
        self._errands = errands
        self._choices = choices

    def begin(self, what: Next) -> FormDeed | None:
        """A deed of the foot: a form, or None where there is none to be shown."""
        if what is Next.VALIDATE:
            self.work.validate()
        elif what is Next.UPDATE:
            return self._ask_update()
        elif what is Next.WRITE_VERSION:
            return self._ask_place()
        return None

    def answer(self, page: QWidget, ask: Ask, place: int) -> FormDeed | None:
        """A deed of the sheet, in the same way; `page` is what the dialogs of the system stand over."""
        if ask is Ask.HORIZON:
            self.work.choose_horizon(place)
        elif self._errands.is_busy:
            return None
        elif ask is Ask.HOLD_MODEL:
            path = self._choices.which(page, Wanted.COEFFICIENT_FILE)
            if path is not None:
                self.work.hold_model(path)
        elif ask is Ask.UPDATE:
            return self._ask_update()
        elif ask in (Ask.TABLES, Ask.DRAWINGS):
            return self._ask_folder(ask)
        elif ask is Ask.VALIDATION_REPORT:
            return self._ask_report()
        elif ask is Ask.UPDATE_REPORT:
            return self._ask_update_report()
        return None

    def _ask_update(self) -> FormDeed | None:
        from clinicalc.gui.study.update_deed import UpdateDeed

        state = self.work.state
        if state.opened is None or not state.opened.may_validate:
            return None
        before = state.made.validation if state.made is not None and state.is_validated else None
        return UpdateDeed(state.opened, before, self._errands)

    def _ask_place(self) -> FormDeed | None:
        from clinicalc.gui.study.validation_errands import sign_update
        from clinicalc.gui.study.write_deed import WriteDeed

        made = self.work.state.update
        if made is None or made.package is None:
            return None
        folder = made.ground.path.parent
        deed = WriteDeed(made.package, partial(sign_update, made), folder, self._errands, self._choices)
        content = made.package.model.content
        deed.place.edit.setText(str(folder / f"{content.id}-{content.version}.json"))
        return deed

    def _ask_folder(self, ask: Ask) -> FormDeed | None:
        from clinicalc.gui.study.validation_saves import DrawingsDeed, TablesDeed

        made = self.work.state.made
        deed = TablesDeed if ask is Ask.TABLES else DrawingsDeed
        return None if made is None else deed(made, self._errands, self._choices)

    def _ask_report(self) -> FormDeed | None:
        """Of the figures that are shown, with the update of the same people where there is one."""
        from clinicalc.gui.study.validation_saves import ValidationReportDeed

        made, update = self.work.state.made, self.work.state.update
        if made is None:
            return None
        if update is not None and update.ground.digest != made.ground.digest:
            update = None
        return ValidationReportDeed(made, update, self._errands, self._choices)

    def _ask_update_report(self) -> FormDeed | None:
        """Of the update that is shown, with the figures of before."""
        from clinicalc.gui.study.validation_saves import ValidationReportDeed

        update = self.work.state.update
        if update is None:
            return None
        return ValidationReportDeed(MadeValidation(update.before, update.ground), update, self._errands, self._choices)
