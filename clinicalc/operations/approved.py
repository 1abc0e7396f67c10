"""A model of the practice's library for one patient: what was approved is what is used, with the choices made then."""

from dataclasses import dataclass
from datetime import datetime

from clinicalc.assessment.model import Model
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.schema import DecisionPoint
from clinicalc.coefficients.spans import Span
from clinicalc.errors import LibraryError, NotInUse, UsageError
from clinicalc.library.bedside import load_approved, vetting_of
from clinicalc.library.finding import find_state
from clinicalc.library.machine import this_machine
from clinicalc.library.opening import OpenedLibrary, open_for_bedside, open_library
from clinicalc.library.standing import ModelState, Standing
from clinicalc.operations.library_words import say_standing
from clinicalc.settings import PracticePoint
from clinicalc.units.quoting import quote


@dataclass(frozen=True, slots=True)
class ApprovedModel:
    """A proved model with the approval under which it is used, and the practice's decision points in it."""

    model: Model
    vetting: Vetting
    decision_points: tuple[DecisionPoint, ...]

    def points_at(self, span: Span) -> tuple[PracticePoint, ...]:
        """The decision points of the approval, which hold at every horizon of the model."""
        return tuple(
            PracticePoint(self.model.content.id, span.time, span.unit, point.probability, point.label, point.source)
            for point in self.decision_points
        )

    def settle_recalibration(self, asked: str | None) -> str | None:
        """The recalibration that was approved. Raises UsageError where another one is asked for."""
        approved = self.vetting.recalibration
        if asked is None or asked == approved:
            return approved
        how = "without a recalibration" if approved is None else f"with the recalibration {approved}"
        raise UsageError(
            f"{quote(asked)} cannot be chosen: the practice approved this model {how}.",
            do="Leave --recalibration out, or have the model approved with another one.",
        )


def open_approved(words: str, place: str | None = None, now: datetime | None = None) -> ApprovedModel:
    """The model that an id or a fingerprint names, from this machine's library or the one at `place`.

    Raises NotInUse with the reason where it gives no number, LibraryError where no one model is meant or the library
    cannot be used.
    """
    moment = now or datetime.now().astimezone()
    machine = this_machine(place)
    opened = open_for_bedside(machine, moment)
    if not _is_in_use(opened, words):
        # why not may stand with a model that is left out at the bedside, and so may another one of that name
        opened = open_library(machine, moment)
    return take_approved(opened, words, moment)


def _is_in_use(opened: OpenedLibrary, words: str) -> bool:
    """Whether exactly one model in use is meant; whatever else the library holds of that name, it is the one."""
    try:
        return find_state(opened.models, words, (Standing.IN_USE,)).standing is Standing.IN_USE
    except LibraryError:
        return False


def take_approved(opened: OpenedLibrary, words: str, now: datetime) -> ApprovedModel:
    """The same from a library that is open."""
    state = find_state(opened.models, words, (Standing.IN_USE,))
    if state.standing is not Standing.IN_USE or state.approval is None:
        raise NotInUse(
            f"No number. {say_standing(state)}",
            where=f"{state.title or state.id} {state.version}".strip(),
            do=_do(state),
            standing=state.standing.value,
        )
    model = load_approved(opened, state.fingerprint, now)
    return ApprovedModel(model, vetting_of(opened, state.fingerprint), state.approval.decision_points)


def _do(state: ModelState) -> str:
    standing = state.standing
    if standing is Standing.WAITING:
        return "" if state.reason else "An approver of the practice approves it first."
    if standing is Standing.REVIEW_OVERDUE:
        return "An approver of the practice reviews it and extends its approval."
    if standing is Standing.HELD:
        return "Whoever held it, or an approver, says when it may be used again."
    return "Ask an approver of the practice."
