"""`update`: a model that does not hold in these people becomes the next version of its coefficient file."""

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
from clinicalc.cli.validating import tell_checked, write_report
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.course import Course
from clinicalc.operations.folding import fold
from clinicalc.operations.inspection import count_examples

if TYPE_CHECKING:
    from clinicalc.development.package import Package
    from clinicalc.library.keys import SigningKey
    from clinicalc.operations.validating import CheckedPeople
    from clinicalc.validation.updated import Update
    from clinicalc.validation.validated import Validation

METHODS = ("closed_test", "intercept", "intercept_slope", "refit", "two_scale")


@dataclass(frozen=True, slots=True)
class _Made:
    """What was found, what came of it (None where the model is kept), and what was written where.

    `after` is how the new version does in the same people.
    """

    validation: "Validation"
    updated: "Update"
    package: "Package | None"
    after: "Validation | None"
    file: Path | None
    report: Path | None


@click.command(short_help="Make the next version of a model that does not hold in these people.")
@click.argument("file", metavar="VALIDATION.toml")
@click.option("-o", "--out", metavar="NEW.json", help="The coefficient file to write; without it nothing is written.")
@click.option("--model", metavar="FILE.json", help="The coefficient file, in place of the one that is named there.")
@click.option("--method", type=click.Choice(METHODS), help="How to update, in place of what the file says.")
@click.option("--version", metavar="X", help="The version of the new file, in place of what the file says.")
@click.option("--report", metavar="FILE.pdf", help="The report of the validation and the update to write, a PDF.")
@click.option("--replace", is_flag=True, help="Replace a file that is there already.")
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
@click.option("--sign-key", "key_file", metavar="KEY", help="Sign the file with the private key in this file.")
@passphrase_option
def update(
    file: str,
    out: str | None,
    model: str | None,
    method: str | None,
    version: str | None,
    report: str | None,
    replace: bool,
    as_json: bool,
    key_file: str | None,
    passphrase_file: str | None,
) -> int:
    """Update a model to the people of a validation file and make the next version of its coefficient file.

    The model as it is, is held against them first. The new version names its parent and the people, is proved by worked
    examples, and has to be approved as any other file. Where the tests see no need to change the model there is no new
    version: exit status 3.
    """
    from clinicalc.operations.study import require_place, write_study
    from clinicalc.operations.validating import (
        check_people,
        choose_wish,
        name_version,
        open_validation,
        package_new_version,
        validate,
        validate_new_version,
    )
    from clinicalc.operations.validating import update as update_to
    from clinicalc.validation.updated import UpdateMethod

    _require_sense(out, report, replace, key_file)
    place, report_place = (None if name is None else Path(name) for name in (out, report))
    if place is not None:
        require_place(place, replace=replace)
    _require_report_place(report_place, replace)
    settled = open_validation(Path(file), None if model is None else Path(model))
    wish = choose_wish(settled, None if method is None else UpdateMethod(method))
    new = name_version(settled, version or "")
    key = None if key_file is None else _open_key(Path(key_file), passphrase_file)
    course = Course()
    people = check_people(settled, course)
    if people.cohort.stops:
        return tell_checked(people, as_json, "")
    validation = validate(people, course)
    updated = update_to(people, wish, course)
    package = None if updated.keeps else package_new_version(people, updated, new, course, validation, key)
    after = None if package is None else validate_new_version(people, package, course)
    made = _Made(validation, updated, package, after, None if package is None else place, report_place)
    with undone_if_refused(report_place):
        # first, because what cannot be printed is only found now, and then nothing is to be written
        _write_report(people, made, course, replace)
        if made.file is not None and package is not None:
            write_study(package, made.file, replace=replace)
    _tell(people, made, place, as_json)
    return ExitStatus.STOPPED if package is None else ExitStatus.ASSESSED


def _require_sense(out: str | None, report: str | None, replace: bool, key_file: str | None) -> None:
    if out is None and report is None and replace:
        raise click.UsageError("Nothing is written: say -o NEW.json or --report FILE.pdf beside --replace.")
    if out is None and key_file is not None:
        raise click.UsageError("Without -o no coefficient file is written: say -o NEW.json beside --sign-key.")
    if out is not None and report is not None and Path(out) == Path(report):
        raise click.UsageError(
            "-o and --report name the same file: a coefficient file ends in .json, a report in .pdf."
        )


def _require_report_place(path: Path | None, replace: bool) -> None:
    from clinicalc.operations.study_prints import require_report_place

    if path is not None:
        require_report_place(path, replace=replace)


def _write_report(people: "CheckedPeople", made: _Made, course: Course, replace: bool) -> None:
    from clinicalc.operations.validation_report import ReportedUpdate

    if made.report is not None:
        name = "" if made.file is None else made.file.name
        update = ReportedUpdate(made.updated, made.package, name, made.after)
        write_report(made.report, people, made.validation, course, replace, update)


def _open_key(key_file: Path, passphrase_file: str | None) -> "SigningKey":
    from clinicalc.operations.signing_keys import take_key

    return take_key(key_file, lambda _: ask_passphrase(passphrase_file))


def _tell(people: "CheckedPeople", made: _Made, wanted: Path | None, as_json: bool) -> None:
    from clinicalc.operations.study_record import record_data, record_package
    from clinicalc.operations.study_words import tell_data
    from clinicalc.operations.updating_lines import tell_after, tell_update
    from clinicalc.operations.updating_record import record_update
    from clinicalc.operations.validation_lines import tell_validation
    from clinicalc.operations.validation_record import record_after, record_validation

    if as_json:
        said: dict[str, object] = {"update": record_update(made.updated)}
        said |= {"file": None} if made.package is None else record_package(made.package, made.file)
        if made.report is not None:
            said["report"] = str(made.report)
        said["after"] = None if made.after is None else record_after(made.after)
        said |= {"validation": record_validation(made.validation), "data": record_data(people.cohort)}
        click.echo(json.dumps(said, ensure_ascii=False, allow_nan=False))
        return
    blocks = [tell_validation(made.validation), tell_data(people.file, people.cohort), tell_update(made.updated)]
    if made.after is not None:
        blocks.append(tell_after(made.after))
    for block in blocks:
        for line in (*block, ""):
            click.echo(line)
    for line in _tell_made(made, wanted):
        click.echo(line)


def _tell_made(made: _Made, wanted: Path | None) -> Iterator[str]:
    if made.package is None:
        nothing = "" if wanted is None else f" {wanted} was not written."
        yield from fold(f"The model is kept as it is, and there is no new version of it.{nothing}")
    else:
        yield from _tell_package(made.package, made.file, made.updated.remarks)
    if made.report is not None:
        yield f"Report: written to {made.report}"
    if made.package is not None and made.file is None:
        yield "No coefficient file was written. Say -o NEW.json to keep it."
    elif made.file is not None:
        yield f"Read it through before anyone uses it: clinicalc inspect {shlex.quote(str(made.file))}"


def _tell_package(package: "Package", out: Path | None, said: tuple[str, ...]) -> Iterator[str]:
    content, grouped = package.model.content, group_fingerprint(package.model.fingerprint)
    done = "made, and not written" if out is None else f"written to {out}"
    yield f"{content.title}, version {content.version}: {done}"
    yield f"Fingerprint {grouped[:39]}"
    yield f"            {grouped[40:]}"
    yield f"Worked examples, each recomputed from the file: {count_examples(package.model)}."
    for remark in package.remarks:
        if remark not in said:
            yield from fold(remark)
