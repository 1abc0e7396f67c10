"""The study of a page and what is done with it: opened, proposed, changed, fitted, packaged, each as an errand.

What is refused leaves what was reached before, with the reason beside it; what is stopped changes nothing.
"""

from collections.abc import Callable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TypeVar

from PySide6.QtCore import QObject, Signal

from clinicalc.errors import ClinicalcError, Stopped
from clinicalc.gui.errands import Errands
from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_errands import (
    begin_from_people,
    change_opened,
    fit_opened,
    open_file,
    package_fit,
)
from clinicalc.gui.study.study_state import MadeFit, OpenedStudy, Refusal, StudyState
from clinicalc.gui.study.validation_state import OpenedValidation
from clinicalc.operations.course import Course
from clinicalc.operations.study_draft import StudyDraft
from clinicalc.settings import PracticePoint

_Result = TypeVar("_Result")


class StudyWork(QObject):
    """One study at a time."""

    changed = Signal(object)
    """The study stands otherwise now: the Step to be shown, None for the one that is shown already."""
    told = Signal(str)
    """A word about what was not done."""
    read = Signal()
    """A file was opened or read again."""

    def __init__(self, errands: Errands, points: Callable[[], Sequence[PracticePoint]] = tuple) -> None:
        """`points` says which decision points the practice has."""
        super().__init__()
        self._errands = errands
        self.points = points
        self.state = StudyState()

    def open_study(self, path: Path) -> None:
        """Open a study or validation file and check its people; one that is refused leaves what is open as it is."""
        points, held = tuple(self.points()), self.state.people_only
        model_file = held.model_file if held is not None and held.path == path else None
        self.run(
            "Opening the study",
            lambda course: open_file(path, model_file, points, course),
            self._take_opened,
            lambda error: self._fail_to_open(path, error),
        )

    def read_again(self) -> None:
        """Read the file that is open and its people again."""
        if not self.keeps_draft() and self.state.path is not None:
            self.open_study(self.state.path)

    def begin_from(self, path: Path) -> None:
        """Propose a study file for a file of people; one that cannot be read leaves everything as it is."""
        self.run(
            "Reading the people",
            lambda course: begin_from_people(path, course),
            self.take_draft,
            lambda error: self._fail_to_open(path, error),
        )

    def change_opened(self, then: Callable[[StudyDraft], None] = lambda _: None) -> None:
        """Begin to change the study file that is open; `then` is called with the draft once it is shown."""
        opened = self.state.opened

        def take(draft: StudyDraft) -> None:
            self.take_draft(draft)
            then(draft)

        if opened is not None:
            self.run(
                "Reading the study file",
                lambda course: change_opened(opened, course),
                take,
                lambda error: self._fail_to_open(opened.path, error),
            )

    def take_draft(self, draft: StudyDraft) -> None:
        """The study file as it is being written now; one that was saved a moment ago is opened."""
        saved = draft.path if draft.is_saved and self.state.draft is not None else None
        kept = self.state.not_opened if self.state.draft is not None and saved is None else None
        self.show(replace(self.state, draft=draft, not_opened=kept))
        if saved is not None:
            self.open_study(saved)

    def leave_draft(self) -> None:
        """What was changed is not to be kept."""
        self.show(replace(self.state, draft=None, not_opened=None))

    def keeps_draft(self) -> bool:
        """Whether a study file is being written that is not saved; it is said, and not lost."""
        draft = self.state.draft
        if draft is None or draft.is_saved:
            return False
        self.told.emit("The study file that is being written is not saved. Save it, or leave the changes, first.")
        return True

    def fit(self) -> None:
        """Fit the study that is open; where that is refused the fit before stays."""
        opened = self.state.opened
        if opened is not None and self.state.may_fit:
            self.run("Fitting", lambda course: fit_opened(opened, course), self._take_fit, self._fail_to_fit)

    def package(self) -> None:
        """Make the coefficient file of the fit, where there is none yet; nothing is written by that."""
        fit, state = self.state.fit, self.state
        is_made = state.package is not None or state.not_packaged is not None
        if fit is None or state.is_stale or is_made or self._errands.is_busy:
            return
        self.run(
            "Working the examples",
            lambda course: package_fit(fit, course),
            lambda package: self.show(replace(self.state, package=package, not_packaged=None)),
            self._fail_to_package,
        )

    def take_written(self, path: Path) -> None:
        """The coefficient file was written."""
        self.show(replace(self.state, written=path))

    def run(
        self,
        title: str,
        work: Callable[[Course], _Result],
        done: Callable[[_Result], None],
        failed: Callable[[ClinicalcError], None],
    ) -> None:
        """Begin an errand; where another one is being done, that is said."""
        if not self._errands.run(title, work, done, failed):
            self.told.emit("Something else is still being done. Wait until it is over, or cancel it.")

    def show(self, state: StudyState, step: Step | None = None) -> None:
        """The study stands so now."""
        self.state = state
        self.changed.emit(step)

    def _take_opened(self, opened: OpenedStudy | OpenedValidation) -> None:
        if isinstance(opened, OpenedStudy):
            self.show(self.state.with_opened(opened), Step.DATA)
        else:
            self.show(self.state.with_people_only(opened), Step.DATA)
        self.told.emit("")
        self.read.emit()

    def _fail_to_open(self, path: Path, error: ClinicalcError) -> None:
        if isinstance(error, Stopped):
            self.told.emit("The reading was stopped. Everything is as it was before.")
            return
        self.show(replace(self.state, not_opened=Refusal(path.name, error)), Step.DATA)

    def _take_fit(self, fit: MadeFit) -> None:
        self.show(self.state.with_fit(fit), Step.FIT)

    def _fail_to_fit(self, error: ClinicalcError) -> None:
        if isinstance(error, Stopped):
            self.told.emit("The fit was stopped. Everything is as it was before.")
            return
        self.show(replace(self.state, not_fitted=error), Step.FIT)

    def _fail_to_package(self, error: ClinicalcError) -> None:
        if isinstance(error, Stopped):
            self.told.emit("It was stopped. Nothing was written.")
            self.show(self.state, Step.FIT)  # beside the step Package it would begin anew
            return
        self.show(replace(self.state, not_packaged=error))
