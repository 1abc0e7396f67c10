"""Which columns may hold the outcome: time, status, entry, dates, and who the line is about; with the reasons."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.dates import take_dates
from clinicalc.cohort.dictionary import ColumnEntry, OutcomeKind, OutcomePlan, Role
from clinicalc.cohort.matching import match_cells
from clinicalc.cohort.missing_cells import find_missing
from clinicalc.cohort.name_likeness import words_of
from clinicalc.cohort.people import number_groups
from clinicalc.cohort.proposed_value import head_of
from clinicalc.cohort.raw import RawColumn

_NAMES = {
    Role.BORN: {"born", "birth", "dob", "birthdate", "birthday"},
    Role.START: {"start", "entry", "enrol", "enrolment", "baseline", "index", "begin", "from", "inclusion"},
    Role.END: {"end", "exit", "last", "stop", "until", "death", "followup", "fu", "censoring"},
    Role.TIME: {
        "time",
        "days",
        "day",
        "months",
        "weeks",
        "years",
        "futime",
        "followup",
        "fu",
        "survtime",
        "tte",
        "dtime",
    },
    Role.ENTRY: {"entry", "tstart", "start", "delayed", "entered"},
    Role.STATUS: {
        "status",
        "event",
        "died",
        "dead",
        "death",
        "outcome",
        "fustat",
        "cens",
        "censor",
        "censored",
        "state",
    },
    Role.PERSON: {"person", "id", "patient", "pid", "subject", "ptid", "patid", "participant", "patientid"},
    Role.CLUSTER: {"practice", "centre", "center", "site", "hospital", "clinic", "cluster", "region"},
}
_UNITS = {
    "d": ("day", "days"),
    "wk": ("week", "weeks"),
    "mo": ("month", "months", "mo"),
    "a": ("year", "years", "yr", "yrs"),
}
_EVENT = {"1", "yes", "true", "dead", "died", "death", "event", "relapse", "deceased"}
_NO_EVENT = {"0", "no", "false", "alive", "censored", "none", "no event", "event-free", "living"}


@dataclass(frozen=True, slots=True)
class OutcomeProposal:
    """The plan, and an entry with its reason for every column that it uses, and for person and cluster."""

    plan: OutcomePlan
    entries: tuple[ColumnEntry, ...]

    def column(self, role: Role) -> str:
        """The name of the column in a role, "" for none."""
        return next((entry.column for entry in self.entries if entry.role is role), "")


def propose_outcome(columns: Sequence[RawColumn]) -> OutcomeProposal:
    """The outcome among columns that are no predictor's; a plan without names where nothing looks like one."""
    entries: list[ColumnEntry] = []
    for role in (Role.PERSON, Role.BORN, Role.START, Role.END, Role.TIME, Role.ENTRY, Role.STATUS, Role.CLUSTER):
        used = {entry.column for entry in entries}
        free = [raw for raw in columns if raw.name not in used]
        entries += _best(role, free, {entry.role for entry in entries})
    timed = any(entry.role in (Role.TIME, Role.END) for entry in entries)
    by_role = {entry.role: entry for entry in entries}
    status = by_role.get(Role.STATUS)
    texts = next((_texts(raw) for raw in columns if status and raw.name == status.column), [])
    event, nothing, competing = _sort_texts(texts)
    if status:
        said = f"{status.reason} Taken for the event: {listed(map(quoted, event))}."
        said += f" For a competing event: {listed(map(quoted, competing))}." if competing else ""
        role = Role.STATUS if timed else Role.OUTCOME
        by_role[Role.STATUS] = ColumnEntry(status.column, role, reason=said)
    name = {role: entry.column for role, entry in by_role.items()}
    if not timed:
        plan = OutcomePlan(OutcomeKind.BINARY, name.get(Role.STATUS, ""), event=event, no_event=nothing + competing)
        return OutcomeProposal(plan, tuple(by_role.values()))
    plan = OutcomePlan(
        OutcomeKind.TIME_TO_EVENT,
        time=name.get(Role.TIME, ""),
        status=name.get(Role.STATUS, ""),
        entry=name.get(Role.ENTRY, ""),
        start=name.get(Role.START, ""),
        end=name.get(Role.END, ""),
        born=name.get(Role.BORN, ""),
        unit=next((by_role[Role.TIME].unit for _ in range(1) if Role.TIME in by_role), "d"),
        event=event,
        censored=nothing,
        competing=competing,
    )
    return OutcomeProposal(plan, tuple(by_role.values()))


def _best(role: Role, columns: Sequence[RawColumn], roles: set[Role]) -> Iterator[ColumnEntry]:
    """The first column whose name and cells are those of a role, where the role has a place beside those there."""
    if role in (Role.TIME, Role.ENTRY) and {Role.START, Role.END} <= roles:
        return
    if (role is Role.END and Role.START not in roles) or (role is Role.ENTRY and Role.TIME not in roles):
        return
    for raw in columns:
        named = set(words_of(raw.name)) & _NAMES[role]
        why = _suits(role, head_of(raw)) if named else ""
        if why:
            unit = _time_unit(raw) if role in (Role.TIME, Role.ENTRY) else ""
            said = f'The name has "{min(named)}" in it, and {why}.'
            said += f" Counted in {Span(2, unit).words[2:]}, unless you say otherwise." if unit else ""
            yield ColumnEntry(raw.name, role, unit=unit, reason=said)
            return


def _suits(role: Role, raw: RawColumn) -> str:
    """Why the cells suit a role, "" where they do not."""
    if role in (Role.BORN, Role.START, Role.END):
        days = take_dates(raw)
        known = np.isfinite(days.days).sum()
        return "it holds dates" if known and known >= 10 * days.odd.sum() else ""
    groups = number_groups(raw)
    distinct, known = len(np.unique(groups[groups >= 0])), int((groups >= 0).sum())
    if role is Role.PERSON:
        return "nearly every line has another text there" if known and distinct >= 0.95 * known else ""
    if role is Role.CLUSTER:
        return f"its {distinct} texts stand in many lines each" if 2 <= distinct <= known / 4 else ""
    if role is Role.STATUS:
        return f"it holds {listed(map(quoted, sorted(_texts(raw))))}" if 1 < distinct <= 5 else ""
    numbers = raw.numbers[np.isfinite(raw.numbers)]
    is_time = len(numbers) > 0.5 * len(raw.numbers) and distinct > 5 and float(np.median(numbers)) >= 0
    return "it holds many different numbers" if is_time or (role is Role.ENTRY and len(numbers)) else ""


def _time_unit(raw: RawColumn) -> str:
    words = set(words_of(raw.name))
    named = [code for code, spellings in _UNITS.items() if words & set(spellings)]
    numbers = raw.numbers[np.isfinite(raw.numbers)]
    return named[0] if named else "a" if len(numbers) and float(numbers.max()) <= 40 else "d"


def _texts(raw: RawColumn) -> list[str]:
    return [text for text, _ in match_cells(raw, {}, find_missing(raw)).found]


def _sort_texts(texts: Sequence[str]) -> tuple[tuple[str, ...], tuple[str, ...], tuple[str, ...]]:
    """Which texts mean the event, none, and a competing event."""
    if set(texts) == {"1", "2"}:
        return ("2",), ("1",), ()
    event = tuple(text for text in texts if text.casefold() in _EVENT)
    nothing = tuple(text for text in texts if text.casefold() in _NO_EVENT)
    competing = tuple(text for text in texts if text not in event and text not in nothing)
    return event, nothing, competing if event and nothing else ()
