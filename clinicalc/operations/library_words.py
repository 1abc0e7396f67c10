"""Where the models of a library stand, in words that command line and window share."""

from datetime import timedelta
from enum import StrEnum

from clinicalc.library.machine import read_moment
from clinicalc.library.memory import Hold
from clinicalc.library.records import Approved, Installed, Statement, Withdrawn
from clinicalc.library.standing import FaultKind, ModelState, SealedRecord, Standing
from clinicalc.units.days import day_words

_REFUSALS = {
    FaultKind.MISSING_FILE: "its file is missing",
    FaultKind.MISNAMED_RECORD: "its records are of another model",
    FaultKind.UNREADABLE_RECORD: "a record cannot be read",
    FaultKind.BAD_SIGNATURE: "a record was changed or made up",
    FaultKind.UNKNOWN_SIGNER: "a record by somebody who may not approve",
    FaultKind.OTHER_LIBRARY: "a record of another library",
    FaultKind.MISSING_RECORD: "a record is missing",
    FaultKind.NOT_DESCENDED: "a record is out of its place",
    FaultKind.OTHER_PRACTICE_KEY: "not the practice’s key",
    FaultKind.FROM_THE_FUTURE: "a record from the future",
    FaultKind.LACKS_WHAT_WAS_SEEN: "a record seen here is gone",
    FaultKind.CLOCK_SET_BACK: "this computer’s clock was set back",
    FaultKind.OUT_OF_REACH: "the library is out of reach",
    FaultKind.NOT_A_FILE: "no file where its file should be",
}

_OF_A_RECORD = {
    FaultKind.CHANGED_FILE: "a record was changed",
    FaultKind.NOT_A_FILE: "no file where a record should be",
}
"""The same of what befell a record, and not the model's own file."""


class Shelf(StrEnum):
    """The three groups of a list of models."""

    IN_USE = "In use"
    WAITING = "Waiting for approval"
    OUT_OF_USE = "Out of use"


def shelf_of(state: ModelState) -> Shelf:
    """The group in which a model is listed; one past its review date gives no number, so it is out of use."""
    if state.standing is Standing.IN_USE:
        return Shelf.IN_USE
    return Shelf.WAITING if state.standing is Standing.WAITING else Shelf.OUT_OF_USE


def say_standing(state: ModelState) -> str:
    """Where a model stands, as a sentence with who said so, or why it gives no number."""
    approval = state.approval
    because = f": {state.reason}" if state.reason else ""
    match state.standing:
        case Standing.IN_USE if approval is not None:
            also = ", who also made or brought the file," if approval.by_author else ""
            return f"Approved by {approval.name} ({approval.role}){also} until {day_words(approval.review_until)}."
        case Standing.REVIEW_OVERDUE if approval is not None:
            return (
                f"Review overdue: approved by {approval.name} ({approval.role}) until"
                f" {day_words(approval.review_until)}. It gives no number."
            )
        case Standing.WAITING:
            return _ended(f"Waiting for approval{because}")
        case Standing.WITHDRAWN:
            return _ended(state.reason or "Withdrawn")
        case Standing.HELD:
            return _ended(state.reason or "Held on this machine")
    return _ended(f"Refused{because}")


def say_shortly(state: ModelState, hold: Hold | None = None) -> str:
    """The same in a few words for a list, without a full stop; `hold` is this machine's own on the model."""
    approval = state.approval
    match state.standing:
        case Standing.IN_USE if approval is not None:
            return f"Approved until {day_words(approval.review_until)}"
        case Standing.REVIEW_OVERDUE if approval is not None:
            return f"Review overdue since {day_words(approval.review_until + timedelta(days=1))}"
        case Standing.WAITING:
            return _waiting(state)
        case Standing.WITHDRAWN:
            found = _last(state, Withdrawn)
            return "Withdrawn" if found is None else f"Withdrawn {_day(found)}, {found.record.name}"
        case Standing.HELD:
            return "Held here" if hold is None else f"Held here since {day_words(read_moment(hold.since).astimezone())}"
    return f"Refused: {_refusal(state)}"


def _waiting(state: ModelState) -> str:
    installed = _last(state, Installed)
    since = "" if installed is None else f", installed {_day(installed)}"
    if not state.reason:
        return f"Not vetted{since}"
    kinds = {fault.kind for fault in state.faults}
    return f"Not vetted: {'its approvals differ' if FaultKind.FORK in kinds else 'its approval counts no more'}"


def _refusal(state: ModelState) -> str:
    stop = next((fault for fault in state.faults if fault.stops and fault.sentence == state.reason), None)
    if stop is None:
        return "something is wrong with the whole library"
    if stop.record and stop.kind in _OF_A_RECORD:
        return _OF_A_RECORD[stop.kind]
    if stop.kind is FaultKind.CHANGED_FILE:
        return "changed after approval" if _last(state, Approved) else "its file was changed"
    if stop.kind is FaultKind.NOT_DESCENDED and not state.records:
        return "no record says who brought it"
    return _REFUSALS.get(stop.kind, "something is wrong with its records")


def _last(state: ModelState, kind: type[Statement]) -> SealedRecord | None:
    """The newest record of this kind that counts."""
    void = {fault.record for fault in state.faults if fault.kind is not FaultKind.FORK and fault.record}
    found = [s for s in state.records if isinstance(s.record.statement, kind) and s.digest not in void]
    return found[-1] if found else None


def _day(sealed: SealedRecord) -> str:
    """The day on which a record was written, in the zone of this machine."""
    return day_words(read_moment(sealed.record.written).astimezone())


def _ended(sentence: str) -> str:
    return sentence if sentence.endswith((".", "?", "!")) else f"{sentence}."
