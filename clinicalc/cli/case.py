"""The words that `assess` and `report` share: a file or an approved model, one patient, and the choices."""

import json
from collections.abc import Callable
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import Path
from typing import TypeVar

import click

from clinicalc.assessment.choices import check_level
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.cli.outcome import ExitStatus
from clinicalc.errors import NotInUse, UsageError
from clinicalc.operations.bedside import (
    assess_patient,
    choose_recalibration,
    choose_span,
    open_model,
    take_changes,
    take_texts,
)
from clinicalc.operations.folding import fold
from clinicalc.settings import PracticePoint, read_settings
from clinicalc.units.quoting import quote

_Command = TypeVar("_Command", bound=Callable[..., object])


@dataclass(frozen=True, slots=True)
class CaseWords:
    """What was asked for, as typed."""

    file: str | None
    values: tuple[str, ...]
    years: float | None
    time: str | None
    recalibration: str | None
    level: float
    change: tuple[str, ...] = ()
    matching_age: bool = False
    label: str = ""
    approved: str | None = None
    library: str | None = None


def case_options(command: _Command) -> _Command:
    """Give a command the arguments and options of a case."""
    for decorate in (
        click.option("--level", type=float, default=0.95, show_default=True, help="Level of the band, 0.5 to 0.999."),
        click.option("--recalibration", metavar="ID", help="A recalibration that the file offers."),
        click.option("--time", metavar="SPAN", help='Horizon in another unit of time, such as "90 d".'),
        click.option("--years", type=float, metavar="N", help="Horizon in years, where the file has several."),
        click.option("--matching-age", is_flag=True, help="Say at which age the reference person has this number."),
        click.option("--shares", is_flag=True, help="Say what each value adds against the reference person."),
        click.option(
            "--change",
            multiple=True,
            metavar="FIELD=VALUE",
            help="Compare with this value changed; give it once for each.",
        ),
        click.argument("values", nargs=-1, metavar="[FIELD=VALUE]..."),
        click.option("--library", metavar="PLACE", help="The library’s folder, if not this machine’s own."),
        click.option(
            "--approved",
            metavar="ID-or-FINGERPRINT",
            help="A model that the practice approved, from its library, in place of FILE.",
        ),
        click.argument("file", metavar="FILE", required=False),
    ):
        command = decorate(command)
    return command


def assess_case(words: CaseWords, at: datetime | None = None) -> Assessment:
    """The assessment asked for, as of `at` or now.

    Raises UsageError, CoefficientFileRefused, or LibraryError where an approved model is asked for and not in use.
    """
    check_level(words.level)
    if words.approved is not None:
        return _assess_approved(words, words.approved, at)
    if words.file is None or words.library is not None:
        raise UsageError(
            "no coefficient file is given." if words.file is None else "--library goes with --approved only.",
            do="Name a file first, or a model of the practice’s library with --approved.",
        )
    model = open_model(Path(words.file))
    span = choose_span(model, years=words.years, time=words.time)
    recalibration = choose_recalibration(model, span, words.recalibration)
    return assess_patient(
        model,
        _take_entry(model, words, words.values),
        span=span,
        recalibration=recalibration,
        level=words.level,
        at=at,
        practice_points=take_practice_points(),
        matching_age=words.matching_age,
    )


def tell_not_in_use(fault: NotInUse, as_json: bool, after: str = "") -> int:
    """Say why there is no number, where a result would stand; the exit status that goes with it."""
    if as_json:
        click.echo(json.dumps(_no_number(fault), ensure_ascii=False, indent=2))
    else:
        click.echo("\n".join(part for line in (str(fault), after) if line for part in fold(line)))
    return ExitStatus.STOPPED


def _no_number(fault: NotInUse) -> dict[str, str | None]:
    return {
        "probability": None,
        "complement": None,
        "band": None,
        "vetting": None,
        "standing": fault.standing,
        "because": str(fault),
    }


def _assess_approved(words: CaseWords, named: str, at: datetime | None) -> Assessment:
    """The same with a model of the library: recalibration and decision points are those that were approved."""
    from clinicalc.operations.approved import open_approved  # no file that is named waits for it

    # what stands in the place of a file is the first value then
    values = words.values if words.file is None else (words.file, *words.values)
    if words.file is not None and "=" not in words.file:
        raise UsageError(
            f"{quote(words.file)} and --approved are both given.", do="Name a file, or an approved model, not both."
        )
    approved = open_approved(named, words.library)
    model = approved.model
    span = choose_span(model, years=words.years, time=words.time)
    return assess_patient(
        model,
        _take_entry(model, words, values),
        span=span,
        recalibration=approved.settle_recalibration(words.recalibration),
        level=words.level,
        at=at,
        practice_points=approved.points_at(span),
        matching_age=words.matching_age,
        vetting=approved.vetting,
    )


def _take_entry(model: Model, words: CaseWords, values: tuple[str, ...]) -> PatientEntry:
    return replace(take_texts(model, values, words.label), changes=take_changes(model, words.change))


def take_practice_points() -> tuple[PracticePoint, ...]:
    """The decision points of this practice; what could not be taken of the settings is said on stderr."""
    reading = read_settings()
    for problem in reading.problems:
        click.echo(f"clinicalc: {problem}", err=True)
    return reading.settings.decision_points
