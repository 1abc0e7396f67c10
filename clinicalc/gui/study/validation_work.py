"""Holding a model against people and updating it: what the Study page begins as errands beside the study's own."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

from PySide6.QtCore import QObject

from clinicalc.errors import ClinicalcError, Stopped
from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_work import StudyWork
from clinicalc.gui.study.validation_errands import open_people, validate_opened
from clinicalc.gui.study.validation_state import MadeUpdate, MadeValidation, OpenedValidation, ValidationState


class ValidationWork(QObject):
    """Changes only the validating part of what the study has come to; what is refused leaves what was reached."""

    def __init__(self, work: StudyWork) -> None:
        super().__init__()
        self._work = work
        work.read.connect(self._follow)

    @property
    def state(self) -> ValidationState:
        """How it stands."""
        return self._work.state.validating

    def hold_model(self, model_file: Path) -> None:
        """Hold another model against the people that are open; one that is refused leaves the one before."""
        self._hold(model_file, self._take_model, self._fail_to_open)

    def validate(self) -> None:
        """Make the figures; where that is refused those of before stay."""
        opened = self.state.opened
        if opened is not None and opened.may_validate:
            self._work.run(
                "Validating", lambda course: validate_opened(opened, course), self._take_made, self._fail_to_make
            )

    def take_update(self, made: MadeUpdate) -> None:
        """An update was made."""
        self._show(self.state.with_update(made), Step.UPDATE)

    def take_written(self, path: Path) -> None:
        """The new version was written."""
        self._show(replace(self.state, written=path), None)

    def choose_horizon(self, place: int) -> None:
        """Another horizon is shown; nothing else changes."""
        self._work.state = replace(self._work.state, validating=replace(self.state, horizon=place))

    def _show(self, state: ValidationState, step: Step | None) -> None:
        self._work.show(replace(self._work.state, validating=state), step)

    def _hold(
        self,
        model_file: Path,
        done: Callable[[OpenedValidation], None],
        failed: Callable[[ClinicalcError], None],
    ) -> None:
        path, points = self._work.state.path, tuple(self._work.points())
        if path is not None:
            self._work.run(
                "Reading the model", lambda course: open_people(path, model_file, points, course), done, failed
            )

    def _follow(self) -> None:
        """The people of a study were read again: the model that was held against them is held against these.

        The step that is shown stays; where the model cannot be read any more none is held.
        """
        opened, study = self.state.opened, self._work.state.opened
        if study is not None and opened is not None and opened.model_file is not None:
            self._hold(
                opened.model_file,
                lambda now: self._show(self.state.with_opened(now), None),
                lambda error: self._show(replace(self.state, opened=None, not_opened=error), None),
            )

    def _take_model(self, opened: OpenedValidation) -> None:
        self._work.told.emit("")
        self._show(self.state.with_opened(opened), Step.VALIDATION)

    def _fail_to_open(self, error: ClinicalcError) -> None:
        if isinstance(error, Stopped):
            self._work.told.emit("The reading was stopped. Everything is as it was before.")
            return
        self._show(replace(self.state, not_opened=error), Step.VALIDATION)

    def _take_made(self, made: MadeValidation) -> None:
        self._show(self.state.with_made(made), Step.VALIDATION)

    def _fail_to_make(self, error: ClinicalcError) -> None:
        if isinstance(error, Stopped):
            self._work.told.emit("The validation was stopped. Everything is as it was before.")
            return
        self._show(replace(self.state, not_made=error), Step.VALIDATION)
