"""The history of a model in words: every record, oldest first, with who signed it and when."""

from collections.abc import Iterator
from datetime import date, datetime

from msgspec import UNSET

from clinicalc.assessment.numerals import percent
from clinicalc.library.records import Approved, Commented, Installed, KnownBy, Withdrawn
from clinicalc.library.standing import ModelState, SealedRecord
from clinicalc.units.days import day_words

_TYPED = "its whole fingerprint, which was typed"
_SIGNED = "the signature of a publisher trusted there"
KNOWN_BY: dict[KnownBy, str] = {
    "fingerprint": _TYPED,
    "signature": _SIGNED,
    "fingerprint_and_signature": f"{_TYPED}, and by {_SIGNED}",
}
"""By what the approver's machine knew the file for the publisher's own, to go on after "known by"."""


def tell_history(state: ModelState) -> tuple[str, ...]:
    """A line for each record, an indented one for each thing that was chosen; a record that does not count says so."""
    return tuple(line for sealed in state.records for line in _tell(sealed, state))


def _tell(sealed: SealedRecord, state: ModelState) -> Iterator[str]:
    record = sealed.record
    # counted in the zone of this machine, as every day that a person is told
    day = day_words(datetime.fromisoformat(record.written).astimezone())
    yield f"{day}, {record.name} ({record.role}): {_say(sealed)}"
    if isinstance(record.statement, Approved):
        yield from (f"    {line}" for line in _choices(record.statement))
    for fault in state.faults:
        if fault.record == sealed.digest:  # one that does not stop the model says itself what became of the record
            yield f"    {'Does not count: ' if fault.stops else ''}{fault.sentence}"


def _say(sealed: SealedRecord) -> str:
    match sealed.record.statement:
        case Installed(came_from=origin, signatures=signatures):
            signed = "unsigned" if not signatures else "signed once" if len(signatures) == 1 else "signed"
            return f"installed ({signed}), from {origin}"
        case Approved(reason=reason, review_until=until):
            return f"approved until {day_words(date.fromisoformat(until))}: {reason}"
        case Withdrawn(reason=reason):
            return f"withdrawn: {reason}"
        case Commented(text=text):
            return f"remark: {text}"
    return "a record that does not belong here"


def _choices(approved: Approved) -> Iterator[str]:
    if approved.recalibration is not None:
        yield f"Recalibration {approved.recalibration}"
    for point in approved.decision_points:
        yield f"Decision point {percent(point.probability)}: {point.label} ({point.source})"
    for one in approved.compared:
        yield f"{one.at or 'whole model'} was compared with its source by {one.by}"
    if approved.known_by is not UNSET:
        yield f"The file was known by {KNOWN_BY[approved.known_by]}"
    if approved.by_author:
        yield "Approved by its author, who made or brought the file, as the policy of the time allowed"
