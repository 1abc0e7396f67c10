"""The times and days that a record states, and those that cannot be."""

from collections.abc import Iterable, Iterator
from datetime import date, datetime

from clinicalc.library.ordering import named
from clinicalc.library.records import Approved
from clinicalc.library.standing import Fault, FaultKind, SealedRecord


def moment_written(sealed: SealedRecord) -> datetime:
    """When the record says that it was written, in UTC. Raises ValueError for a moment that does not exist."""
    return datetime.fromisoformat(sealed.record.written)


def last_day(approved: Approved) -> date:
    """The last day on which the model may be used. Raises ValueError for a day that does not exist."""
    return date.fromisoformat(approved.review_until)


def find_impossible(sealed: SealedRecord) -> Fault | None:
    """A fault for a record with a day or time that no calendar has; None where all are possible."""
    statement = sealed.record.statement
    field, text = "written", sealed.record.written
    try:
        moment_written(sealed)
        if isinstance(statement, Approved):
            field, text = "review_until", statement.review_until
            last_day(statement)
    except ValueError:
        sentence = f"{named(sealed)} states a day or time that does not exist: {field} is {text}. Ask who wrote it."
        return Fault(FaultKind.UNREADABLE_RECORD, sealed.record.about, sentence, sealed.digest)
    return None


def find_future(records: Iterable[SealedRecord], latest: datetime) -> Iterator[Fault]:
    """A fault for each record that says it was written after `latest`; it stops until that time has come.

    The records' own times must exist (`find_impossible`).
    """
    for sealed in records:
        if moment_written(sealed) > latest:
            hour = f"{moment_written(sealed).astimezone():%H:%M}"  # by this machine's clock, as the day
            sentence = (
                f"{named(sealed)} says it was written at {hour} on that day, later "
                "than this machine’s clock. Set the clock right, here or where it was written."
            )
            yield Fault(FaultKind.FROM_THE_FUTURE, sealed.record.about, sentence, sealed.digest)
