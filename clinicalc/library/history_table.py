"""A history as lines of text, as CSV for a spreadsheet, and as plain objects for JSON."""

import csv
import io
from collections.abc import Iterator, Mapping

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.history import History, HistoryRow

_FORMULA = ("=", "+", "-", "@", "\t", "\r", "\n")
_COLUMNS = (
    "place", "model", "about", "kind", "what", "why", "name", "role", "written", "key", "record", "follows", "faults",
)  # fmt: skip
NOT_PROVED = "Names, roles and times are as the writers stated them; the order is that of the chain."


def say_history(history: History) -> Iterator[str]:
    """A block of lines for each record, the faults with it, and then those that are about none."""
    for place, row in enumerate(history.rows, 1):
        yield f"{place}. {row.written}  {row.model or 'library'}: {row.what}"
        yield f"    by {row.name}, {row.role}; key {group_fingerprint(row.key, 3)}…, record {row.digest[:12]}…"
        if row.why:
            yield f"    because: {row.why}"
        yield from (f"    FAULT: {fault}" for fault in row.faults)
    yield from (f"{'FAULT' if fault.stops else 'To know'}: {fault.sentence}" for fault in history.faults)
    yield ""
    yield f"{len(history.rows)} records. {NOT_PROVED}"


def write_history_csv(history: History) -> bytes:
    """The history as CSV (RFC 4180: CRLF, quotes doubled), UTF-8 with a byte order mark.

    The mark is for spreadsheets, which take a file without one for the alphabet of their own country. A text that a
    spreadsheet would compute as a formula gets an apostrophe before it. Faults about no record stand in rows of their
    own at the end, without a place.
    """
    text = io.StringIO(newline="")
    writer = csv.writer(text, lineterminator="\r\n")
    writer.writerow(_COLUMNS)
    for place, row in enumerate(history.rows, 1):
        writer.writerow([str(place), *(defuse(cell) for cell in _cells(row))])
    for fault in history.faults:
        empty = [""] * (len(_COLUMNS) - 5)
        cells = ["", "", fault.about, "fault", *empty, fault.sentence]
        writer.writerow([defuse(cell) for cell in cells])
    return b"\xef\xbb\xbf" + text.getvalue().encode("utf-8")


def defuse(cell: str) -> str:
    """The text as no spreadsheet takes it for a formula: with an apostrophe where it begins like one."""
    return f"'{cell}" if cell.startswith(_FORMULA) else cell


def record_history(history: History) -> Mapping[str, object]:
    """The history as plain objects, texts as they stand in the records."""
    return {
        "records": [
            {
                "record": row.digest,
                "about": row.about,
                "model": row.model or None,
                "kind": row.kind,
                "what": row.what,
                "why": row.why or None,
                "name": row.name,
                "role": row.role,
                "written": row.written,
                "key": row.key,
                "follows": list(row.follows),
                "faults": list(row.faults),
            }
            for row in history.rows
        ],
        "faults": [
            {
                "kind": fault.kind.value,
                "about": fault.about,
                "record": fault.record or None,
                "says": fault.sentence,
                "stops": fault.stops,
            }
            for fault in history.faults
        ],
        "says": NOT_PROVED,
    }


def _cells(row: HistoryRow) -> tuple[str, ...]:
    return (
        row.model,
        row.about,
        row.kind,
        row.what,
        row.why,
        row.name,
        row.role,
        row.written,
        row.key,
        row.digest,
        " ".join(row.follows),
        " ".join(row.faults),
    )
