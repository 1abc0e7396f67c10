"""Which models would have answered on a day that is past, from the records as they stood at the end of that day.

The chain is cut: a record counts as there when it and everything it follows say that they were written by then. So no
record with an early date can stand before what it follows. The dates themselves are the writers' own.
"""

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta

from clinicalc.library.authority import replay_authority
from clinicalc.library.history import followed, in_chain_order, say_statement
from clinicalc.library.model_chain import replay_model
from clinicalc.library.moments import moment_written
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.standing import Authority, Fault, ModelState, SealedRecord, Standing

DATES_ARE_THE_WRITERS_OWN = (
    "The dates are those that the writers of the records stated; the chain proves only what came after what."
)


@dataclass(frozen=True, slots=True)
class ThatDay:
    """One model as it stood at the end of the day.

    `during` has what was said about it on the day itself, time and words. `since` names faults that stop and were found
    since in records that counted then: what was in force that day may not have been rightly so.
    """

    state: ModelState
    during: tuple[tuple[datetime, str], ...]
    since: tuple[Fault, ...]

    @property
    def answered(self) -> bool:
        """Whether the model gave numbers at the end of that day."""
        return self.state.standing is Standing.IN_USE


@dataclass(frozen=True, slots=True)
class AsOf:
    """The library at the end of a day; `founded` is False where its first record is later."""

    day: date
    founded: bool
    models: tuple[ThatDay, ...]


def look_back(
    records: Iterable[SealedRecord], library: str, practice_key: str, day: date, faults: Iterable[Fault]
) -> AsOf:
    """The library at the end of `day` on this machine's clock; `faults` are those that are known today.

    Models in the order of id and version. A model that was installed later is left out.
    """
    began = datetime.combine(day, time()).astimezone()
    ended = datetime.combine(day + timedelta(days=1), time()).astimezone() - timedelta(seconds=1)
    there = _written_by(records, ended)
    about_library = [sealed for sealed in there if sealed.record.about == ABOUT_THE_LIBRARY]
    authority = replay_authority(about_library, library, practice_key)
    known = [fault for fault in faults if fault.stops and fault.record]
    found = []
    for fingerprint in {sealed.record.about for sealed in there} - {ABOUT_THE_LIBRARY}:
        mine = [sealed for sealed in there if sealed.record.about == fingerprint]
        found.append(_that_day(fingerprint, mine, authority, began, ended, known))
    found.sort(key=lambda one: (one.state.id, [int(part) for part in one.state.version.split(".") if part]))
    founded = any(sealed.digest == library for sealed in there)
    return AsOf(day, founded, tuple(found))


def _that_day(
    fingerprint: str,
    records: list[SealedRecord],
    authority: Authority,
    began: datetime,
    ended: datetime,
    known: list[Fault],
) -> ThatDay:
    state = replay_model(fingerprint, records, authority, ended)
    during = tuple(
        (at.astimezone(began.tzinfo), f"{sealed.record.name}: {say_statement(sealed.record.statement)[0]}")
        for sealed in in_chain_order(records)
        if began <= (at := moment_written(sealed)) <= ended
    )
    digests = {sealed.digest for sealed in records} | {sealed.digest for sealed in authority.records}
    then = {fault.record for fault in (*state.faults, *authority.faults)}
    since = tuple(fault for fault in known if fault.record in digests and fault.record not in then)
    return ThatDay(state, during, since)


def _written_by(records: Iterable[SealedRecord], ended: datetime) -> list[SealedRecord]:
    """The records that were there: they and all that they follow were written by then, as they say."""
    there: dict[str, SealedRecord] = {}
    later: set[str] = set()
    for sealed in in_chain_order(records):
        if not _possible(sealed) or moment_written(sealed) > ended or later.intersection(followed(sealed)):
            later.add(sealed.digest)
        else:
            there[sealed.digest] = sealed
    return list(there.values())


def _possible(sealed: SealedRecord) -> bool:
    """Whether its time exists in a calendar."""
    try:
        moment_written(sealed)
    except ValueError:
        return False
    return True
