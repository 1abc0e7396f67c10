"""`library history` and `as-of`: who said what and when, and what was in use on a day that is past."""

import re
from collections.abc import Iterator
from datetime import date
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.library_session import library_options, now, tell
from clinicalc.cli.outcome import ExitStatus
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import FileNotWritten, UsageError
from clinicalc.units.quoting import quote

if TYPE_CHECKING:
    from clinicalc.library.as_of import AsOf, ThatDay
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.library.standing import Fault, SealedRecord


@click.command(short_help="Who said what of a model or of the library, in chain order.")
@click.argument("id", metavar="[MODEL]", required=False)
@click.option("--csv", "csv_file", metavar="FILE", help="Write it as CSV (UTF-8 with a byte order mark) as well.")
@click.option("--replace", is_flag=True, help="Replace a file that is there already.")
@library_options
def history(id: str | None, csv_file: str | None, replace: bool, place: str | None, as_json: bool) -> int:
    """Give every record about a model (all versions of an id, or a fingerprint), or about the library and all models.

    Each with who, role, what, when, why, key, and everything that is wrong with it. Exit status 6 where a fault stops.
    """
    from clinicalc.library.history import tell_history
    from clinicalc.library.history_table import record_history, say_history, write_history_csv

    opened = _open_all(place)
    records, faults = _gather(opened)
    wanted = None if id is None else _meant(opened, id)
    told = tell_history(records, faults, wanted)
    lines = list(say_history(told))
    if csv_file is not None:
        _put(Path(csv_file), write_history_csv(told), replace)
        lines.append(f"Written to {csv_file}.")
    tell(as_json, record_history(told), lines)
    stops = any(fault.stops for fault in faults if wanted is None or fault.about in wanted)
    return ExitStatus.LIBRARY if stops else ExitStatus.ASSESSED


@click.command("as-of", short_help="Which models were in use on a day that is past.")
@click.argument("day", metavar="DATE")
@library_options
def as_of(day: str, place: str | None, as_json: bool) -> int:
    """Say which model, in which version and approved by whom, answered at the end of DATE (such as 2026-10-02).

    The dates are those that the writers of the records stated; the chain proves only what came after what.
    """
    from clinicalc.library.as_of import look_back

    wanted = _read_day(day)
    opened = _open_all(place)
    records, faults = _gather(opened)
    found = look_back(records, opened.library, opened.machine.practice_key, wanted, faults)
    notices = [f"{'FAULT' if fault.stops else 'To know'}: {fault.sentence}" for fault in opened.faults]
    tell(as_json, {**_describe(found), "notices": notices}, (*notices, *_say(found)))
    return ExitStatus.LIBRARY if any(fault.stops for fault in opened.faults) else ExitStatus.ASSESSED


def _open_all(place: str | None) -> "OpenedLibrary":
    """The library with every file read."""
    from clinicalc.library.machine import this_machine
    from clinicalc.library.opening import verify_all

    return verify_all(this_machine(place), now())


def _gather(opened: "OpenedLibrary") -> tuple[list["SealedRecord"], list["Fault"]]:
    """Every record that can be read, and every fault of the library and of its models."""
    records: list[SealedRecord] = []
    faults = list(opened.faults)
    for state in opened.models:
        faults += state.faults
    for about, digests in opened.source.contents().records.items():
        gathered = opened.source.records(about, digests, freshly=False)
        records += gathered.records
        faults += gathered.faults
    return records, list(dict.fromkeys(faults))


def _meant(opened: "OpenedLibrary", words: str) -> frozenset[str]:
    """The fingerprints of every version of a model id, or of the one model that the words name."""
    from clinicalc.library.finding import find_state

    versions = frozenset(state.fingerprint for state in opened.models if state.id == words.strip())
    return versions or frozenset({find_state(opened.models, words).fingerprint})


def _put(path: Path, content: bytes, replace: bool) -> None:
    from clinicalc.replacement import replace_file

    if path.exists() and not replace:
        raise FileNotWritten(
            "there is a file with this name already; it was left as it is.",
            where=str(path),
            do="Choose another name, or give --replace.",
        )
    try:
        replace_file(path, content)
    except (OSError, ValueError) as fault:
        why = getattr(fault, "strerror", None) or "its name cannot be a file name"
        raise FileNotWritten(
            "the history could not be written.",
            where=str(path),
            why=f"The computer says: {why}.",
            do="Choose another folder, or make room on this one. Nothing was left behind.",
        ) from None


def _read_day(text: str) -> date:
    try:
        found = date.fromisoformat(text) if re.fullmatch(r"\d{4}-\d{2}-\d{2}", text, re.ASCII) else None
    except ValueError:
        found = None
    if found is None:
        raise UsageError(f"{quote(text)} is not a day.", do="Write year, month and day, such as 2026-10-02.")
    today = now().astimezone().date()
    if found > today:
        raise UsageError(f"{text} is still to come; today is {today.isoformat()}.", do="Give a day that is past.")
    return found


def _say(found: "AsOf") -> Iterator[str]:
    from clinicalc.library.as_of import DATES_ARE_THE_WRITERS_OWN

    yield f"At the end of {found.day.isoformat()}"
    if not found.founded:
        yield "  There was no library yet."
    for one in found.models:
        yield f"  {_heading(one)}"
        yield f"      fingerprint {group_fingerprint(one.state.fingerprint, 3)}…"
        yield from (f"      on that day, {at:%H:%M}: {words}" for at, words in one.during)
        yield from (f"      found since: {fault.sentence}" for fault in one.since)
    if found.founded and not found.models:
        yield "  No model had been installed."
    yield ""
    yield DATES_ARE_THE_WRITERS_OWN


def _heading(one: "ThatDay") -> str:
    state, approval = one.state, one.state.approval
    name = f"{state.id} {state.version}" if state.id else "unnamed model"
    if approval is None:
        said = state.standing.value.replace("_", " ")
        return f"{name}: no number ({said}{f'; {state.reason}' if state.reason else ''})"
    choice = f", recalibration {approval.recalibration}" if approval.recalibration else ""
    by = f"approved by {approval.name} ({approval.role}) until {approval.review_until.isoformat()}{choice}"
    return f"{name}: {'answered' if one.answered else 'no number, its review was overdue'}; {by}"


def _describe(found: "AsOf") -> dict[str, object]:
    from clinicalc.cli.library_session import describe_state
    from clinicalc.library.as_of import DATES_ARE_THE_WRITERS_OWN

    return {
        "day": found.day.isoformat(),
        "founded": found.founded,
        "models": [
            {
                **describe_state(one.state),
                "answered": one.answered,
                "during": [{"at": at.isoformat(), "says": words} for at, words in one.during],
                "found_since": [fault.sentence for fault in one.since],
            }
            for one in found.models
        ],
        "says": DATES_ARE_THE_WRITERS_OWN,
    }
