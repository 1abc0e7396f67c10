"""`library history` and `as-of`: who said what and when, and what was in use on a day that is past."""

import re
from collections.abc import Iterator
from datetime import date
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.library_print import choose_print, print_options
from clinicalc.cli.library_session import library_options, now, tell
from clinicalc.cli.outcome import ExitStatus
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import UsageError
from clinicalc.units.days import day_words
from clinicalc.units.quoting import quote

if TYPE_CHECKING:
    from clinicalc.library.as_of import AsOf, ThatDay
    from clinicalc.library.opening import OpenedLibrary


@click.command(short_help="Who said what of a model or of the library, in chain order.")
@click.argument("id", metavar="[MODEL]", required=False)
@click.option("--csv", "csv_file", metavar="FILE", help="Write it as CSV (UTF-8 with a byte order mark) as well.")
@print_options
@library_options
def history(
    id: str | None,
    csv_file: str | None,
    pdf_file: str | None,
    paper: str,
    replace: bool,
    place: str | None,
    as_json: bool,
) -> int:
    """Give every record about a model (all versions of an id, or a fingerprint), or about the library and all models.

    Each with who, role, what, when, why, key, and everything that is wrong with it. Exit status 6 where a fault stops.
    """
    from clinicalc.library.history import tell_history
    from clinicalc.library.history_table import record_history, say_history, write_history_csv
    from clinicalc.library.written_files import put_file
    from clinicalc.operations.library_reading import find_versions, gather
    from clinicalc.operations.vetting_prints import name_models, write_history_pdf

    opened = _open_all(place)
    records, faults = gather(opened)
    wanted = None if id is None else find_versions(opened, id)
    told = tell_history(records, faults, wanted)
    lines = list(say_history(told))
    if csv_file is not None:
        put_file(Path(csv_file), write_history_csv(told), "the history", may_replace=replace)
        lines.append(f"Written to {csv_file}.")
    if pdf_file is not None:
        about = "" if wanted is None else name_models(opened, wanted)
        write_history_pdf(Path(pdf_file), opened, told, about, choose_print(paper), replace=replace)
        lines.append(f"Printed to {pdf_file}.")
    tell(as_json, record_history(told), lines)
    stops = any(fault.stops for fault in faults if wanted is None or fault.about in wanted)
    return ExitStatus.LIBRARY if stops else ExitStatus.ASSESSED


@click.command("as-of", short_help="Which models were in use on a day that is past.")
@click.argument("day", metavar="DATE")
@print_options
@library_options
def as_of(day: str, pdf_file: str | None, paper: str, replace: bool, place: str | None, as_json: bool) -> int:
    """Say which model, in which version and approved by whom, answered at the end of DATE (such as 2026-10-02).

    The dates are those that the writers of the records stated; the chain proves only what came after what.
    """
    from clinicalc.operations.library_reading import check_past, look_back_on
    from clinicalc.operations.vetting_prints import write_as_of_pdf

    wanted = check_past(_read_day(day), now())
    opened = _open_all(place)
    found = look_back_on(opened, wanted)
    notices = [f"{'FAULT' if fault.stops else 'To know'}: {fault.sentence}" for fault in opened.faults]
    lines = [*notices, *_say(found)]
    if pdf_file is not None:
        write_as_of_pdf(Path(pdf_file), opened, found, choose_print(paper), replace=replace)
        lines.append(f"Printed to {pdf_file}.")
    tell(as_json, {**_describe(found), "notices": notices}, lines)
    return ExitStatus.LIBRARY if any(fault.stops for fault in opened.faults) else ExitStatus.ASSESSED


def _open_all(place: str | None) -> "OpenedLibrary":
    """The library with every file read."""
    from clinicalc.library.machine import this_machine
    from clinicalc.library.opening import verify_all

    return verify_all(this_machine(place), now())


def _read_day(text: str) -> date:
    try:
        found = date.fromisoformat(text) if re.fullmatch(r"\d{4}-\d{2}-\d{2}", text, re.ASCII) else None
    except ValueError:
        found = None
    if found is None:
        raise UsageError(f"{quote(text)} is not a day.", do="Write year, month and day, such as 2026-10-02.")
    return found


def _say(found: "AsOf") -> Iterator[str]:
    from clinicalc.library.as_of import DATES_ARE_THE_WRITERS_OWN

    yield f"At the end of {day_words(found.day)}"
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
    by = f"approved by {approval.name} ({approval.role}) until {day_words(approval.review_until)}{choice}"
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
