"""The tables of a print of the library, in small type: long ones go on over pages under repeated headings."""

from collections.abc import Iterable, Iterator, Sequence

from clinicalc.report.contents import Column, NotedCell, Row, Table, TypedCell
from clinicalc.report.vetting_sheet import DayRow, DifferenceRow, DigestRow, ExampleRow, OpenFigureRow, RecordRow

ABSENT = "—"
"""Where a version says nothing."""

_DIFFERENCE = (("what", 0.0, 196.0), ("old", 204.0, 149.0), ("new", 361.0, 149.0))
_LONGEST_VERSION = 20
"""Letters for which there is certainly room."""
_EXAMPLES = (("patient", 0.0, 282.0), ("stated", 290.0, 82.0), ("old", 380.0, 61.0), ("new", 449.0, 61.0))
_RECORDS = (
    ("", 0.0, 24.0),
    ("when, by whom", 30.0, 124.0),
    ("what and why", 162.0, 252.0),
    ("key, record", 422.0, 88.0),
)
_OPEN = (("figure", 0.0, 158.0), ("as the file has it", 166.0, 82.0), ("why, and compare with", 256.0, 148.0),
         ("compared by", 412.0, 98.0))  # fmt: skip
_DIGESTS = (("record", 0.0, 156.0), ("digest (SHA-256)", 163.0, 347.0))
_DAYS = (("model", 0.0, 176.0), ("a number", 184.0, 54.0), ("why, and what was said that day", 246.0, 264.0))


def lay_difference(rows: Iterable[DifferenceRow], old: str = "", new: str = "") -> Table:
    """What, old and new; what the rows are about stands over them, held to the first.

    `old` and `new` are the versions, which stand in the heads as far as they are short enough.
    """
    versions = {"old": old, "new": new}
    heads = ((_head(name, versions.get(name, "")), at, width) for name, at, width in _DIFFERENCE)
    return _table(heads, _difference(rows))


def _head(name: str, version: str) -> str:
    return f"{name}, {version}" if 0 < len(version) <= _LONGEST_VERSION else name


def lay_examples(rows: Iterable[ExampleRow]) -> Table:
    """Patients with the number that is stated, and that of each version."""
    return _table(
        _EXAMPLES,
        (Row((NotedCell(row.values, row.notes), _under(row.stated), row.old, row.new)) for row in rows),
    )


def lay_records(rows: Sequence[RecordRow]) -> Table:
    """Records numbered from 1; each fault stands below its record in bold, held to it."""
    return _table(_RECORDS, _records(rows))


def lay_open_figures(rows: Iterable[OpenFigureRow]) -> Table:
    """Unconfirmed figures, and who compared each with what."""
    return _table(
        _OPEN,
        (
            Row((
                NotedCell(row.what, (row.place,) if row.place else ()),
                row.figure,
                NotedCell(row.why, (row.source,)),
                TypedCell(row.by) if row.by else TypedCell("", "nobody yet"),
            ))
            for row in rows
        ),
    )  # fmt: skip


def lay_digests(rows: Iterable[DigestRow]) -> Table:
    """Records with their whole digests."""
    return _table(_DIGESTS, (Row((NotedCell(row.what, (row.who,)), row.digest)) for row in rows))


def lay_days(rows: Iterable[DayRow]) -> Table:
    """Models at the end of a day."""
    return _table(
        _DAYS,
        (
            Row((
                NotedCell(row.name, tuple(filter(None, (row.id, row.fingerprint)))),
                TypedCell(row.answered),
                NotedCell(row.because, row.notes),
            ))
            for row in rows
        ),
    )  # fmt: skip


def _under(texts: Sequence[str]) -> NotedCell:
    """Texts under each other."""
    return NotedCell(texts[0], tuple(texts[1:]))


def _table(columns: Iterable[tuple[str, float, float]], rows: Iterable[Row]) -> Table:
    return Table(tuple(Column(*column) for column in columns), tuple(rows), small=True)


def _difference(rows: Iterable[DifferenceRow]) -> Iterator[Row]:
    aspect = ""
    for row in rows:
        if row.aspect != aspect:
            aspect = row.aspect
            yield Row((TypedCell(aspect), "", ""), keep=True)
        notes = (row.place,) if row.place else ()
        yield Row((NotedCell(row.what, notes), row.old or ABSENT, row.new or ABSENT))


def _records(rows: Sequence[RecordRow]) -> Iterator[Row]:
    for number, row in enumerate(rows, 1):
        written = NotedCell(row.day, (*((row.time,) if row.time else ()), row.who))
        why = (f"Why: {row.why}",) if row.why else ()
        yield Row(
            (f"{number}.", written, NotedCell(row.what, why), NotedCell(row.key, (row.digest,))),
            keep=bool(row.faults),
        )
        for place, fault in enumerate(row.faults, 1):
            yield Row(("", "", TypedCell(f"Fault: {fault}"), ""), keep=place < len(row.faults))
