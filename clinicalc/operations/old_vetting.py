"""The approval in the record of an old print: taken as it stands, and set against the library's own records."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import date
from typing import TYPE_CHECKING

from clinicalc.assessment.vetting import Vetting
from clinicalc.errors import ClinicalcError
from clinicalc.library.records import Approved
from clinicalc.library.standing import FaultKind, ModelState, SealedRecord
from clinicalc.operations.differences import NOTHING, Difference, unless_same
from clinicalc.operations.library_words import say_standing
from clinicalc.operations.old_record import Record, RecordedVetting
from clinicalc.units.days import stated_day
from clinicalc.units.quoting import visible

if TYPE_CHECKING:
    from clinicalc.library.opening import OpenedLibrary  # most checks name a file


def vetting_of(record: Record, name: str) -> Vetting | None:
    """The approval that the record states, None for none; `name` is that of the print.

    Raises ClinicalcError where one of its dates is none.
    """
    stated = record.vetting
    if stated is None:
        return None
    try:
        approved_on, review_until = (date.fromisoformat(day) for day in (stated.approved_on, stated.review_until))
    except ValueError:
        raise ClinicalcError(
            f"the record says that its model was approved on {stated.approved_on} until {stated.review_until}.",
            where=name,
            why="One of the two is no date. The record was changed, or another program wrote it.",
            do="Give the PDF as this program saved it.",
        ) from None
    return Vetting(
        practice=stated.practice,
        approved_by=stated.by,
        role=stated.role,
        approved_on=approved_on,
        review_until=review_until,
        by_author=stated.by_author,
        fingerprint=record.model.fingerprint,
        library=stated.library,
        recalibration=record.recalibration,
        compared=tuple((one.at, one.by) for one in stated.compared),
        caution=stated.caution or "",
    )


def compare_vetting(record: Record, library: OpenedLibrary) -> Iterator[Difference]:
    """What the library does not bear out of the approval that a record states; nothing where it states none."""
    stated = record.vetting
    if stated is None:
        return
    yield from unless_same("Library of the approval", stated.library, library.authority.library)
    yield from unless_same("Practice of the approval", stated.practice, library.authority.practice)
    state = next((state for state in library.models if state.fingerprint == record.model.fingerprint), None)
    approvals = [] if state is None else list(approvals_of(state))
    if not any(_is_stated(sealed, stated, record.recalibration) for sealed in approvals):
        days = f"on {stated_day(stated.approved_on)} until {stated_day(stated.review_until)}"
        said = f"by {stated.by} ({stated.role}) {days}"
        yield Difference("Approval", said, "no such approval in the library" if approvals else NOTHING)


def say_approval(record: Record, library: OpenedLibrary | None) -> list[str]:
    """What the print says of an approval, whether the library bore it out, and where the model stands there today."""
    stated = record.vetting
    if stated is None:
        said = ["The print says that the file was not vetted."]
    elif library is None:
        said = [
            f"The print says that {visible(stated.by)} approved the file until"
            f" {visible(stated_day(stated.review_until))}. That was"
            " not compared with the library, since a file was named: leave --model out for that."
        ]
    elif list(compare_vetting(record, library)):
        said = []
    else:
        until = stated_day(stated.review_until)
        said = [f"The library holds the approval by {stated.by} until {until} that the print states."]
    state = None if library is None else library.state(record.model.fingerprint)
    return said if state is None else [*said, f"Today in the library: {say_standing(state)}"]


def approvals_of(state: ModelState) -> Iterator[SealedRecord]:
    """The approvals of a model that count, oldest first, in force or not."""
    named = {fault.record for fault in state.faults if fault.kind is not FaultKind.FORK}
    return (s for s in state.records if isinstance(s.record.statement, Approved) and s.digest not in named)


def _is_stated(sealed: SealedRecord, stated: RecordedVetting, recalibration: str | None) -> bool:
    """Whether this is the approval; its day may differ by one, since another machine may lie in another zone."""
    record, approved = sealed.record, sealed.record.statement
    if not isinstance(approved, Approved):
        return False
    days = date.fromisoformat(record.written[:10]) - date.fromisoformat(stated.approved_on)
    return (
        abs(days.days) <= 1
        and (record.name, record.role) == (stated.by, stated.role)
        and (approved.review_until, approved.by_author) == (stated.review_until, stated.by_author)
        and approved.recalibration == recalibration
        and {(one.at, one.by) for one in approved.compared} == {(one.at, one.by) for one in stated.compared}
    )
