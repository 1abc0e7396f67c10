"""The one way from the library to the bedside: an approved model, its bytes verified again and its examples proved."""

from datetime import datetime

from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model_bytes
from clinicalc.assessment.vetting import Vetting
from clinicalc.errors import LibraryError
from clinicalc.library.holds import hold_on
from clinicalc.library.labels import find_other_name
from clinicalc.library.memory import read_memory
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.recollection import CLOCK_TOLERANCE
from clinicalc.library.standing import Approval, Fault, ModelState, Standing

_WORDS = {
    Standing.WAITING: "it waits for an approval",
    Standing.REVIEW_OVERDUE: "its review is overdue",
    Standing.WITHDRAWN: "it was withdrawn",
    Standing.HELD: "it is held on this machine",
    Standing.REFUSED: "the library refuses it",
}


def load_approved(opened: OpenedLibrary, fingerprint: str, now: datetime | None = None) -> Model:
    """The proved model of the very bytes that were approved; `now` is the time of the opening where none is given.

    Raises LibraryError where the model is not in use on this machine, the opening is too old for `now`, or the file
    changed since, and CoefficientFileRefused where the model does not prove itself.
    """
    state, approval = _approved(opened, fingerprint)
    name = f"{state.id} {state.version}"
    if now is not None and not opened.opened_at - CLOCK_TOLERANCE <= now < opened.good_until:
        raise _not_given(name, "The library was opened at another time than now.", "Open it again.")
    memory = read_memory(opened.machine, opened.library)
    if memory is None:
        raise _not_given(name, "This machine has lost its memory of the library.", "Open the library again.")
    if (found := hold_on(memory, fingerprint)) is not None:
        raise _not_given(name, f"It is held on this machine: {found.why}", "Open the library again.")
    content = opened.source.model(fingerprint)
    if isinstance(content, Fault):
        raise _not_given(name, content.sentence, "")
    if (other := find_other_name(state, content)) is not None:
        raise _not_given(name, other.sentence, "")
    # a library keeps the fingerprinted bytes only; a coefficient file has a list of signatures after them
    model = load_model_bytes(content[:-1] + b',"signatures":[]}', f"{name} of the library")
    offered = {recalibration.id for recalibration in model.content.recalibrations}
    if model.fingerprint != fingerprint or (approval.recalibration or None) not in {None, *offered}:
        raise _not_given(name, "Its approval names a recalibration that it does not have.", "Ask its approver.")
    return model


def vetting_of(opened: OpenedLibrary, fingerprint: str) -> Vetting:
    """The approval under which the model is used. Raises LibraryError where it is not in use on this machine."""
    _, approval = _approved(opened, fingerprint)
    return Vetting(
        practice=opened.authority.practice,
        approved_by=approval.name,
        role=approval.role,
        approved_on=approval.written.astimezone().date(),
        review_until=approval.review_until,
        by_author=approval.by_author,
        fingerprint=fingerprint,
        library=opened.library,
        recalibration=approval.recalibration,
        compared=tuple((one.at, one.by) for one in approval.compared),
        caution=opened.caution,
    )


def _approved(opened: OpenedLibrary, fingerprint: str) -> tuple[ModelState, Approval]:
    state = opened.state(fingerprint)
    if state is None:
        raise _not_given(f"model {fingerprint[:12]}…", "It is not in the library.", "Have it installed and approved.")
    if state.standing is not Standing.IN_USE or state.approval is None:
        why = f"{_WORDS.get(state.standing, 'it has no approval').capitalize()}."
        raise _not_given(f"{state.id} {state.version}", f"{why} {state.reason}".strip(), "")
    return state, state.approval


def _not_given(name: str, why: str, do: str) -> LibraryError:
    return LibraryError("this model gives no number here.", where=name, why=why, do=do)
