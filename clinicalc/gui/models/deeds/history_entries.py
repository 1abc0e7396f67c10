"""A history, or a day that is past, as entries to be read one after the other: a head, lines, what is wrong."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.window_words import replace_commands
from clinicalc.library.as_of import AsOf, ThatDay
from clinicalc.library.history import History, HistoryRow
from clinicalc.library.machine import read_moment
from clinicalc.operations.library_words import say_standing
from clinicalc.report.phrases import moment_words


@dataclass(frozen=True, slots=True)
class HistoryEntry:
    """One record, or one model on a day. `when` stands at the right of the head; `faults` are sentences."""

    head: str
    when: str
    lines: tuple[str, ...]
    faults: tuple[str, ...] = ()

    @property
    def text(self) -> str:
        """All of it, as a screen reader says it."""
        head = f"{self.head}, {self.when}" if self.when else self.head
        return "\n".join((head, *self.lines, *(f"Fault: {fault}" for fault in self.faults)))


def entries_of_history(history: History) -> tuple[HistoryEntry, ...]:
    """Every record in chain order; then what is wrong and is about none of them."""
    others = tuple(replace_commands(fault.sentence) for fault in history.faults if fault.stops)
    notes = tuple(replace_commands(fault.sentence) for fault in history.faults if not fault.stops)
    found = [_of_row(place, row) for place, row in enumerate(history.rows, 1)]
    if others:
        found.append(HistoryEntry("Found besides", "", (), others))
    if notes:
        found.append(HistoryEntry("To know", "", notes))
    return tuple(found)


def entries_of_day(found: AsOf) -> tuple[HistoryEntry, ...]:
    """Each model as it stood at the end of the day, those that answered first."""
    models = sorted(found.models, key=lambda one: not one.answered)
    return tuple(_of_model(one) for one in models)


def _of_row(place: int, row: HistoryRow) -> HistoryEntry:
    lines = [
        f"by {row.name}, {row.role}; key {group_fingerprint(row.key, 3)}, record {group_fingerprint(row.digest, 3)}"
    ]
    if row.why:
        lines.insert(0, f"because: {row.why}")
    faults = tuple(replace_commands(fault) for fault in row.faults)
    return HistoryEntry(f"{place}. {_head(row)}", _moment(row.written), tuple(lines), faults)


def _head(row: HistoryRow) -> str:
    """What was said, and of which model where the words do not name it themselves."""
    if row.model and row.what.startswith(f"installed {row.model}, "):
        return f"{row.what[:1].upper()}{row.what[1:]}"
    return f"{row.model or 'Library'}: {row.what}"


def _of_model(one: ThatDay) -> HistoryEntry:
    state = one.state
    name = f"{state.title or state.id or 'A file without a name'} {state.version}".strip()
    head = f"{name}: {'answered' if one.answered else 'gave no number'}"
    since = tuple(f"Found since: {replace_commands(fault.sentence)}" for fault in one.since)
    return HistoryEntry(head, "", tuple(_lines_of_day(one)), since)


def _lines_of_day(one: ThatDay) -> Iterator[str]:
    yield replace_commands(say_standing(one.state))
    approval = one.state.approval
    if approval is not None and approval.recalibration:
        yield f"Recalibration {approval.recalibration}"
    yield f"Fingerprint {group_fingerprint(one.state.fingerprint, 3)}…"
    yield from (f"On that day, {at:%H:%M}: {words}" for at, words in one.during)


def _moment(written: str) -> str:
    """The writer's time on this machine's clock, or as it stands where it is no time."""
    try:
        at: datetime = read_moment(written)
    except ValueError:
        return written
    return moment_words(at.astimezone())
