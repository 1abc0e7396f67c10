"""A history as the contents of a print: every record in chain order, and the digests that fix all of it."""

from collections.abc import Iterator

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.history import History, HistoryRow
from clinicalc.library.history_table import NOT_PROVED
from clinicalc.library.opening import OpenedLibrary
from clinicalc.operations.vetting_furniture import furnish, say_reading, say_written
from clinicalc.report.contents import Prose, Section
from clinicalc.report.phrases import count_words
from clinicalc.report.vetting_sheet import DigestRow, RecordRow, VettingSheet
from clinicalc.report.vetting_tables import lay_digests, lay_records

_FIXED = (
    "Every record names those it follows by their whole digests. These are the newest ones here; whoever has them can"
    " tell whether anything before them was changed, added or left out."
)


def compose_history(opened: OpenedLibrary, history: History, about: str) -> VettingSheet:
    """The history of the model that `about` names, "" for the library with all its models."""
    practice = opened.authority.practice
    of = about or f"the library of {practice}".rstrip()
    rows = history.rows
    return VettingSheet(
        kind="History",
        title=f"History of {of}",
        about=f"History of {of}",
        lines=(*say_reading(opened), NOT_PROVED),
        says=_counted(history),
        sections=(
            *_faults(history),
            Section("Records in chain order", (lay_records(tuple(_row(row, about) for row in rows)),)),
            *_newest(rows),
        ),
        furniture=furnish(
            f"History of {of}",
            practice,
            model=about or f"Library of {practice}",
            identity=f"library {group_fingerprint(opened.library, 3)}",
        ),
    )


def _counted(history: History) -> str:
    faults = len(history.faults) + sum(len(row.faults) for row in history.rows)
    wrong = f"{count_words(faults, 'thing')} found wrong or to be known" if faults else "nothing found wrong"
    return f"{count_words(len(history.rows), 'record')}, {wrong}."


def _row(row: HistoryRow, about: str) -> RecordRow:
    day, time = say_written(row.written)
    whose = "" if about else f"{row.model or 'Library'}: "
    return RecordRow(
        day=day,
        time=time,
        who=f"{row.name}, {row.role}",
        what=f"{whose}{row.what}",
        why=row.why,
        key=f"key {group_fingerprint(row.key, 3)}",
        digest=f"{group_fingerprint(row.digest, 3)}",
        faults=row.faults,
    )


def _faults(history: History) -> Iterator[Section]:
    """What is wrong with none of the records, before them: whoever reads on has to know it."""
    said = tuple(f"{'Fault' if fault.stops else 'To know'}: {fault.sentence}" for fault in history.faults)
    if said:
        yield Section("Found wrong besides the records", (Prose(said),))


def _newest(rows: tuple[HistoryRow, ...]) -> Iterator[Section]:
    """The records that no other one here follows."""
    before = {digest for row in rows for digest in row.follows}
    newest = [(number, row) for number, row in enumerate(rows, 1) if row.digest not in before]
    if newest:
        table = lay_digests(
            DigestRow(f"{number}. {row.kind.replace('_', ' ')}", row.name, group_fingerprint(row.digest))
            for number, row in newest
        )
        yield Section("What fixes this history", (Prose((_FIXED,)), table))
