"""The words that `assess` and `report` share: a file, one patient's values, changes, horizon, recalibration, level."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import Path
from typing import TypeVar

import click

from clinicalc.assessment.choices import check_level
from clinicalc.assessment.result import Assessment
from clinicalc.operations.bedside import (
    assess_patient,
    choose_recalibration,
    choose_span,
    open_model,
    take_changes,
    take_texts,
)
from clinicalc.settings import PracticePoint, read_settings

_Command = TypeVar("_Command", bound=Callable[..., object])


@dataclass(frozen=True, slots=True)
class CaseWords:
    """What was asked for, as typed."""

    file: str
    values: tuple[str, ...]
    years: float | None
    time: str | None
    recalibration: str | None
    level: float
    change: tuple[str, ...] = ()
    matching_age: bool = False
    label: str = ""


def case_options(command: _Command, *, file_required: bool = True) -> _Command:
    """Give a command the arguments and options of a case; `file_required` is False where a call may have none."""
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
        click.argument("file", metavar="FILE", required=file_required),
    ):
        command = decorate(command)
    return command


def assess_case(words: CaseWords, at: datetime | None = None) -> Assessment:
    """The assessment asked for, as of `at` or now. Raises UsageError or CoefficientFileRefused."""
    check_level(words.level)
    model = open_model(Path(words.file))
    span = choose_span(model, years=words.years, time=words.time)
    recalibration = choose_recalibration(model, span, words.recalibration)
    entry = replace(take_texts(model, words.values, words.label), changes=take_changes(model, words.change))
    return assess_patient(
        model,
        entry,
        span=span,
        recalibration=recalibration,
        level=words.level,
        at=at,
        practice_points=take_practice_points(),
        matching_age=words.matching_age,
    )


def take_practice_points() -> tuple[PracticePoint, ...]:
    """The decision points of this practice; what could not be taken of the settings is said on stderr."""
    reading = read_settings()
    for problem in reading.problems:
        click.echo(f"clinicalc: {problem}", err=True)
    return reading.settings.decision_points
