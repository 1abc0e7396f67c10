"""What is on screen as values, and the one assessment that belongs to them."""

from collections.abc import Mapping, Sequence
from dataclasses import replace
from types import MappingProxyType
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import QObject, Signal

from clinicalc.assessment.choices import DEFAULT_LEVEL
from clinicalc.assessment.decision import DecisionPoint, points_for
from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.spans import Span
from clinicalc.operations.bedside import assess_patient
from clinicalc.settings import PracticePoint

if TYPE_CHECKING:
    from clinicalc.operations.approved import ApprovedModel


class Assess(Protocol):
    """The verb that answers for one entry."""

    def __call__(
        self,
        model: Model,
        entry: PatientEntry,
        *,
        span: Span | None,
        recalibration: str | None,
        practice_points: Sequence[PracticePoint],
        matching_age: bool,
        vetting: Vetting | None,
        level: float,
    ) -> Assessment: ...


class EntryState(QObject):
    """Model, choices and entry; each change makes one assessment and one signal.

    Listeners read `assessment` when they are told: between `blanked` and the next change it is None, and then nothing
    may show a number.
    """

    model_changed = Signal()
    """Another model, or another patient's entry: every field is to be filled anew."""
    assessed = Signal(object)
    """The new Assessment."""
    blanked = Signal(str)
    """There is no assessment any more; the sentence says why."""
    approval_changed = Signal()
    """The approval of the model in use says something else, or no longer holds."""

    def __init__(self, assess: Assess = assess_patient) -> None:
        super().__init__()
        self._assess = assess
        self._entry = PatientEntry()
        self.model: Model | None = None
        self.approved: ApprovedModel | None = None
        self.withheld = ""
        self.span: Span | None = None
        self.recalibration: str | None = None
        self.assessment: Assessment | None = None
        self.practice_points: tuple[PracticePoint, ...] = ()
        self.level = DEFAULT_LEVEL
        self.matching_age = False

    @property
    def decision_points(self) -> tuple[DecisionPoint, ...]:
        """The decision points that hold for the model at the chosen horizon; the file's alone while none is chosen."""
        if self.model is None:
            return ()
        if self.span is None:
            return points_for(self.model, self.model.spans[0])
        return points_for(self.model, self.span, self._points_in_force())

    @property
    def entry(self) -> PatientEntry:
        """Everything typed about the patient."""
        return self._entry

    @property
    def vetting(self) -> Vetting | None:
        """The approval under which the model is used; None for a file that is tried out."""
        return None if self.approved is None else self.approved.vetting

    def use_model(
        self, model: Model, entry: PatientEntry | None = None, approved: "ApprovedModel | None" = None
    ) -> None:
        """Take another model, with nothing typed or with a whole entry. Open choices stay open.

        `approved`: the approval under which it is used; its choices are made.
        """
        self.assessment = None
        self.model = model
        self.approved = approved
        self.withheld = ""
        self.span = model.spans[0] if len(model.spans) == 1 else None
        self.recalibration = None if approved is None else approved.vetting.recalibration
        self.matching_age = False
        self._entry = entry or PatientEntry()
        self.model_changed.emit()
        self.reassess()

    def leave_model(self) -> None:
        """No model any more, and nothing typed."""
        self.assessment = self.model = self.approved = self.span = self.recalibration = None
        self.withheld = ""
        self.matching_age = False
        self._entry = PatientEntry()
        self.model_changed.emit()
        self.blank("")

    def vouch(self, vetting: Vetting) -> None:
        """The library stands behind the model in use, as before or in other words."""
        if self.approved is None or (vetting == self.approved.vetting and not self.withheld):
            return
        self.approved = replace(self.approved, vetting=vetting)
        self.withheld = ""
        self.approval_changed.emit()
        self.reassess()

    def withhold(self, sentence: str) -> None:
        """The library no longer stands behind the model in use: no number until it does, whatever is typed."""
        if sentence == self.withheld and self.assessment is None:
            return
        self.withheld = sentence
        self.blank(sentence)
        self.approval_changed.emit()

    def choose_span(self, span: Span | None) -> None:
        """Choose a horizon, or leave it open; a recalibration that is not offered there is let go.

        One that was approved stays: where it is not offered, the model gives no number.
        """
        self.span = span
        if self.approved is not None:
            self.reassess()
            return
        offered = () if self.model is None or span is None else self.model.recalibrations_at(span)
        if self.recalibration not in [recalibration.id for recalibration in offered]:
            self.recalibration = None
        self.reassess()

    def choose_recalibration(self, id: str | None) -> None:
        """Choose one of the recalibrations offered, or none; in an approved model it is chosen."""
        if self.approved is None:
            self.recalibration = id
        self.reassess()

    def type_value(self, id: str, typed: Typed | None) -> None:
        """A field was changed, or emptied (None)."""
        self._entry = self._entry.with_typed(id, typed)
        self.reassess()

    def type_change(self, id: str, typed: Typed | None) -> None:
        """A value of the comparison was changed, or taken out of it (None)."""
        self._entry = self._entry.with_change(id, typed)
        self.reassess()

    def type_both(self, id: str, typed: Typed | None, change: Typed | None) -> None:
        """A value and its change were read anew in one act, as by an offered unit; one assessment."""
        self._entry = self._entry.with_typed(id, typed).with_change(id, change)
        self.reassess()

    def ask_matching_age(self, asked: bool) -> None:
        """Ask for the matching age of this patient, or no longer."""
        self.matching_age = asked
        self.reassess()

    def use_practice_points(self, points: Sequence[PracticePoint]) -> None:
        """Take the practice's own decision points; the same ones again change nothing."""
        if tuple(points) != self.practice_points:
            self.practice_points = tuple(points)
            self.reassess()

    def use_level(self, level: float) -> None:
        """Take another level of the band; the same one again changes nothing."""
        if level != self.level:
            self.level = level
            self.reassess()

    def replace_values(self, typed: Mapping[str, Typed], changes: Mapping[str, Typed]) -> None:
        """Take the same values and changes in the form in which the fields show them; no new assessment."""
        self._entry = replace(self._entry, typed=MappingProxyType(dict(typed)), changes=MappingProxyType(dict(changes)))

    def type_label(self, label: str) -> None:
        """The name or number for the print was changed."""
        self._entry = replace(self._entry, label=label)
        self.reassess()

    def begin_new_patient(self) -> None:
        """Forget everything typed; the model and the choices about it stay."""
        self.assessment = None
        self.matching_age = False
        self._entry = PatientEntry()
        self.model_changed.emit()
        self.reassess()

    def reassess(self) -> None:
        """Assess what is on screen. An exception leaves no assessment behind, and goes on to whoever explains it."""
        if self.model is None:
            return
        self.assessment = None
        if self.withheld:
            self.blank(self.withheld)
            return
        try:
            assessment = self._assess(
                self.model,
                self._entry,
                span=self.span,
                recalibration=self.recalibration,
                practice_points=self._points_in_force(),
                matching_age=self.matching_age,
                vetting=self.vetting,
                level=self.level,
            )
        except BaseException:
            self.blank("")
            raise
        self.assessment = assessment
        self.assessed.emit(assessment)

    def blank(self, sentence: str) -> None:
        """Take every number off the screen, then say why."""
        self.assessment = None
        self.blanked.emit(sentence)

    def _points_in_force(self) -> tuple[PracticePoint, ...]:
        """The practice's decision points: those of the approval, or this machine's for a file that is tried out."""
        if self.approved is None:
            return self.practice_points
        return () if self.span is None else self.approved.points_at(self.span)
