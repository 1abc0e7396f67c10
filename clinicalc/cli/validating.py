"""`validate`: does a model hold in these people, whose outcome is known?"""

import json
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.case import take_practice_points
from clinicalc.cli.outcome import ExitStatus
from clinicalc.cli.undone import undone_if_refused
from clinicalc.operations.course import Course

if TYPE_CHECKING:
    from clinicalc.operations.approved import ApprovedModel
    from clinicalc.operations.validating import CheckedPeople
    from clinicalc.operations.validation_report import ReportedUpdate
    from clinicalc.validation.validated import Validation

# the rooms that this needs are imported inside the functions, so that no other command waits for them


@dataclass(frozen=True, slots=True)
class Written:
    """What is to be written, and where; None for what is not."""

    report: Path | None = None
    tables: Path | None = None
    figures: Path | None = None

    @property
    def anything(self) -> bool:
        """Whether there is something to write."""
        return any(place is not None for _, _, place in self.named())

    def named(self) -> tuple[tuple[str, str, Path | None], ...]:
        """The name of each in a record, what it is called in a sentence, and its place."""
        return (
            ("report", "Report of the validation", self.report),
            ("tables", "Tables", self.tables),
            ("figures", "Figures", self.figures),
        )


@click.command(short_help="Find out whether a model holds in people whose outcome is known.")
@click.argument("file", metavar="VALIDATION.toml")
@click.option("--model", metavar="FILE.json", help="The coefficient file, in place of the one that is named there.")
@click.option("--approved", metavar="ID-or-FINGERPRINT", help="A model that the practice approved, from its library.")
@click.option("--library", metavar="PLACE", help="The library’s folder, if not this machine’s own.")
@click.option("--report", metavar="FILE.pdf", help="The report of the validation to write, a PDF.")
@click.option("--tables", metavar="FOLDER", help="The folder to write all numbers to, as CSV files.")
@click.option("--figures", metavar="FOLDER", help="The folder to write the drawings to, a PDF each.")
@click.option("--check", is_flag=True, help="Only read the file and its people, and say what is wrong with them.")
@click.option("--replace", is_flag=True, help="Replace files that are there already.")
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
def validate(
    file: str,
    model: str | None,
    approved: str | None,
    library: str | None,
    report: str | None,
    tables: str | None,
    figures: str | None,
    check: bool,
    replace: bool,
    as_json: bool,
) -> int:
    """Hold a model against people whose outcome is known.

    The validation file names the coefficient file, the file of people and what its columns mean; a study file does for
    the people, with --model beside it. The verdict comes first, then where everybody went, then each figure with its
    interval. An approved model is looked at with the recalibration of its approval.

    With --check nothing is worked out: exit status 0 where it may be, 4 where not.
    """
    from clinicalc.operations.validating import check_people, open_validation
    from clinicalc.operations.validating import validate as hold_against

    written = Written(*(None if name is None else Path(name) for name in (report, tables, figures)))
    _require_sense(model, approved, library, check, written.anything, replace)
    _require_places(written, replace)
    chosen = Path(model) if model is not None else None if approved is None else _open_approved(approved, library)
    course = Course()
    people = check_people(open_validation(Path(file), chosen), course)
    if check or people.cohort.stops:
        return tell_checked(people, as_json, "The model may be held against these people.")
    found = hold_against(people, course)
    with undone_if_refused(written.report):
        _write(written, people, found, course, replace)
    _tell(people, found, written, as_json)
    return ExitStatus.ASSESSED


def _require_sense(
    model: str | None, approved: str | None, library: str | None, check: bool, writes: bool, replace: bool
) -> None:
    if model is not None and approved is not None:
        raise click.UsageError("--model and --approved are both given: name a file, or an approved model.")
    if library is not None and approved is None:
        raise click.UsageError("--library goes with --approved only.")
    if check and (writes or replace):
        raise click.UsageError(
            "With --check nothing is written: leave out --report, --tables, --figures and --replace."
        )
    if replace and not writes:
        raise click.UsageError(
            "Nothing is written: say --report FILE.pdf, --tables FOLDER or --figures FOLDER beside --replace."
        )


def _require_places(written: Written, replace: bool) -> None:
    """Refuse what could not be written, before long work is done for it."""
    if written.tables is not None and written.figures is not None and _same_place(written.tables, written.figures):
        raise click.UsageError("--tables and --figures name the same folder: each needs one of its own.")
    if written.report is not None:
        from clinicalc.operations.study_prints import require_report_place

        require_report_place(written.report, replace=replace)
    if written.tables is not None:
        from clinicalc.operations.validation_tables import require_tables_place

        require_tables_place(written.tables, replace=replace)
    if written.figures is not None:
        from clinicalc.operations.validation_figures import require_figures_place

        require_figures_place(written.figures, replace=replace)


def _same_place(one: Path, other: Path) -> bool:
    return one.resolve() == other.resolve()


def _open_approved(named: str, library: str | None) -> "ApprovedModel":
    from clinicalc.operations.approved import open_approved

    return open_approved(named, library)


def write_report(
    path: Path,
    people: "CheckedPeople",
    found: "Validation",
    course: Course,
    replace: bool,
    updated: "ReportedUpdate | None" = None,
) -> None:
    """The report of a validation at `path`, and of the update that was made of it."""
    from clinicalc.operations.validation_prints import write_validation_report
    from clinicalc.operations.validation_report import ReportedValidation

    own = people.model.content.id
    points = tuple(point.probability for point in take_practice_points() if point.model == own)
    reported = ReportedValidation(found, people.model, people.file, points, updated)
    write_validation_report(path, reported, course, replace=replace)


def _write(written: Written, people: "CheckedPeople", found: "Validation", course: Course, replace: bool) -> None:
    if written.report is not None:
        write_report(written.report, people, found, course, replace)
    if written.tables is not None:
        from clinicalc.operations.validation_tables import write_validation_tables

        write_validation_tables(written.tables, found, replace=replace)
    if written.figures is not None:
        from clinicalc.operations.validation_figures import write_validation_figures

        write_validation_figures(written.figures, found, people.model, replace=replace)


def tell_checked(people: "CheckedPeople", as_json: bool, fine: str) -> int:
    """Say what was found of the people alone, and `fine` where nothing stops; the exit status that goes with it."""
    from clinicalc.operations.study_record import record_data
    from clinicalc.operations.study_words import tell_data

    stops = len(people.cohort.stops)
    if as_json:
        click.echo(json.dumps({"data": record_data(people.cohort)}, ensure_ascii=False))
        return ExitStatus.FILE_REFUSED if stops else ExitStatus.ASSESSED
    for line in tell_data(people.file, people.cohort):
        click.echo(line)
    if stops:
        what = "1 of them is a stop" if stops == 1 else f"{stops} of them are stops"
        click.echo(f"Nothing is worked out of these people and nothing was written: {what}.")
        return ExitStatus.FILE_REFUSED
    click.echo(fine)
    return ExitStatus.ASSESSED


def _tell(people: "CheckedPeople", found: "Validation", written: Written, as_json: bool) -> None:
    from clinicalc.operations.study_record import record_data
    from clinicalc.operations.study_words import tell_data
    from clinicalc.operations.validation_lines import tell_validation
    from clinicalc.operations.validation_record import record_validation

    if as_json:
        said: dict[str, object] = {"validation": record_validation(found), "data": record_data(people.cohort)}
        said |= {name: str(place) for name, _, place in written.named() if place is not None}
        click.echo(json.dumps(said, ensure_ascii=False, allow_nan=False))
        return
    for line in (*tell_validation(found), "", *tell_data(people.file, people.cohort)):
        click.echo(line)
    for _, words, place in written.named():
        if place is not None:
            click.echo(f"{words}: written to {place}")
