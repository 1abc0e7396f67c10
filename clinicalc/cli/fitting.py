"""`fit`: a study, one file of people and one that says what they are, becomes a coefficient file."""

import json
import shlex
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.outcome import ExitStatus
from clinicalc.cli.passphrase import ask_passphrase, passphrase_option
from clinicalc.cli.undone import undone_if_refused
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.course import Course
from clinicalc.operations.folding import fold
from clinicalc.operations.inspection import count_examples

if TYPE_CHECKING:
    from clinicalc.cohort.checked import CheckedCohort
    from clinicalc.development.estimating import FittedStudy
    from clinicalc.development.package import Package
    from clinicalc.library.keys import SigningKey


@click.command(short_help="Fit a model to people and make its coefficient file.")
@click.argument("study", metavar="STUDY.toml")
@click.option("-o", "--out", metavar="FILE.json", help="The coefficient file to write; without it nothing is written.")
@click.option("--report", metavar="FILE.pdf", help="The report of the fit to write, a PDF, with or without -o.")
@click.option("--check", is_flag=True, help="Only read the study and its people, and say what is wrong with them.")
@click.option("--replace", is_flag=True, help="Replace a file that is there already.")
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
@click.option("--sign-key", "key_file", metavar="KEY", help="Sign the file with the private key in this file.")
@passphrase_option
def fit(
    study: str,
    out: str | None,
    report: str | None,
    check: bool,
    replace: bool,
    as_json: bool,
    key_file: str | None,
    passphrase_file: str | None,
) -> int:
    """Fit the equations of a study to its people and make one coefficient file, proved by worked examples.

    Everything that is wrong is said at once. A file is put in place whole or not at all; one that is there already
    stays until the new one is complete. With --report a PDF says who the people were, what was fitted and how far to
    believe it. With --check no model is fitted: exit status 0 where one may be, 4 where not.
    """
    # here, so that no other command waits for it
    from clinicalc.operations.study import check_data, fit_study, open_study, package_study, require_place, write_study

    _require_sense(out, report, check, replace, key_file)
    place, report_place = (None if name is None else Path(name) for name in (out, report))
    if place is not None:
        require_place(place, replace=replace)
    if report_place is not None:
        _require_report_place(report_place, replace)
    key = None if key_file is None else _open_key(Path(key_file), passphrase_file)
    read, course = open_study(Path(study)), Course()
    cohort = check_data(read, course)
    if check or cohort.stops:
        return _tell_checked(read.dictionary.file, cohort, as_json)
    fitted = fit_study(read, cohort, course)
    package = package_study(fitted, course, key)
    with undone_if_refused(report_place):
        # first, because what cannot be printed is only found now, and then nothing is to be written
        if report_place is not None:
            _write_report(report_place, fitted, package, course, replace)
        if place is not None:
            write_study(package, place, replace=replace)
    _tell(read.dictionary.file, cohort, fitted, package, _Written(place, report_place), as_json)
    return ExitStatus.ASSESSED


@dataclass(frozen=True, slots=True)
class _Written:
    """What was written where; None for nothing."""

    file: Path | None
    report: Path | None


def _require_sense(out: str | None, report: str | None, check: bool, replace: bool, key_file: str | None) -> None:
    if check and (out is not None or report is not None or replace or key_file is not None):
        raise click.UsageError("With --check nothing is written: leave out -o, --report, --replace and --sign-key.")
    if out is None and report is None and replace:
        raise click.UsageError("Nothing is written: say -o FILE.json or --report FILE.pdf beside --replace.")
    if out is None and key_file is not None:
        raise click.UsageError("Without -o no coefficient file is written: say -o FILE.json beside --sign-key.")
    if out is not None and report is not None and Path(out) == Path(report):
        raise click.UsageError(
            "-o and --report name the same file: a coefficient file ends in .json, a report in .pdf."
        )


def _require_report_place(path: Path, replace: bool) -> None:
    from clinicalc.operations.study_prints import require_report_place

    require_report_place(path, replace=replace)


def _write_report(path: Path, fitted: "FittedStudy", package: "Package", course: Course, replace: bool) -> None:
    from clinicalc.operations.study_prints import write_study_report

    write_study_report(path, fitted, package, course, replace=replace)


def _open_key(key_file: Path, passphrase_file: str | None) -> "SigningKey":
    from clinicalc.operations.signing_keys import take_key

    return take_key(key_file, lambda _: ask_passphrase(passphrase_file))


def _tell_checked(file: str, cohort: "CheckedCohort", as_json: bool) -> int:
    from clinicalc.operations.study_record import record_data
    from clinicalc.operations.study_words import tell_data

    stops = len(cohort.stops)
    if as_json:
        click.echo(json.dumps({"data": record_data(cohort)}, ensure_ascii=False))
        return ExitStatus.FILE_REFUSED if stops else ExitStatus.ASSESSED
    for line in tell_data(file, cohort):
        click.echo(line)
    if stops:
        what = "1 of them is a stop" if stops == 1 else f"{stops} of them are stops"
        click.echo(f"Nothing is fitted to these people and nothing was written: {what}.")
        return ExitStatus.FILE_REFUSED
    click.echo("A model may be fitted to these people.")
    return ExitStatus.ASSESSED


def _tell(
    file: str,
    cohort: "CheckedCohort",
    fitted: "FittedStudy",
    package: "Package",
    written: _Written,
    as_json: bool,
) -> None:
    from clinicalc.operations.study_record import record_data, record_fits, record_package
    from clinicalc.operations.study_words import tell_data, tell_fits

    if as_json:
        said = {"data": record_data(cohort), "fits": record_fits(fitted), **record_package(package, written.file)}
        if written.report is not None:
            said["report"] = str(written.report)
        click.echo(json.dumps(said, ensure_ascii=False))
        return
    for line in (*tell_data(file, cohort), *tell_fits(fitted), "", *_tell_package(package, written)):
        click.echo(line)


def _tell_package(package: "Package", written: _Written) -> Iterator[str]:
    out = written.file
    title, grouped = package.model.content.title, group_fingerprint(package.model.fingerprint)
    yield f"{title}: {'made, and not written' if out is None else f'written to {out}'}"
    yield f"Fingerprint {grouped[:39]}"
    yield f"            {grouped[40:]}"
    yield f"Worked examples, each recomputed from the file: {count_examples(package.model)}."
    for remark in package.remarks:
        yield from fold(remark)
    if written.report is not None:
        yield f"Report of the fit: written to {written.report}"
    if out is None:
        nothing = "Nothing was written" if written.report is None else "No coefficient file was written"
        yield f"{nothing}. Say -o FILE.json to keep it."
    else:
        yield f"Read it through before anyone uses it: clinicalc inspect {shlex.quote(str(out))}"
