"""The words that `assess` and `report` share: a file, one patient's values, horizon, recalibration, level."""

from collections.abc import Callable
from dataclasses import dataclass
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
    take_texts,
)

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
    label: str = ""


def case_options(command: _Command, *, file_required: bool = True) -> _Command:
    """Give a command the arguments and options of a case; `file_required` is False where a call may have none."""
    for decorate in (
        click.option("--level", type=float, default=0.95, show_default=True, help="Level of the band, 0.5 to 0.999."),
        click.option("--recalibration", metavar="ID", help="A recalibration that the file offers."),
        click.option("--time", metavar="SPAN", help='Horizon in another unit of time, such as "90 d".'),
        click.option("--years", type=float, metavar="N", help="Horizon in years, where the file has several."),
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
    entry = take_texts(model, words.values, words.label)
    return assess_patient(model, entry, span=span, recalibration=recalibration, level=words.level, at=at)
