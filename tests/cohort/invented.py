"""Invented people and predictors for the tests of this room."""

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

from msgspec import UNSET

from clinicalc.coefficients.schema import Choice, ChoicePredictor, Limits, NumberPredictor, Predictor, YesNoPredictor
from clinicalc.cohort.checked import CheckedCohort
from clinicalc.cohort.checking import check_cohort
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, OutcomeKind, OutcomePlan
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import RawTable
from clinicalc.cohort.table import read_table

TIMED = OutcomePlan(OutcomeKind.TIME_TO_EVENT, time="days", status="status", event=("1",), censored=("0",))
COMPETING = replace(TIMED, competing=("2",))
BINARY = OutcomePlan(OutcomeKind.BINARY, column="dead", event=("1",), no_event=("0",))


def number(id: str, label: str, quantity: str, unit: str, possible: Limits | None = None) -> NumberPredictor:
    """A number predictor with the ranges of the quantity table, or its own."""
    return NumberPredictor(
        id=id,
        label=label,
        quantity=quantity,
        unit=unit,
        group="Values",
        possible=UNSET if possible is None else possible,
    )


AGE = number("age", "Age", "age", "a")
CHOLESTEROL = number("total_cholesterol", "Total cholesterol", "total_cholesterol", "mg/dL")
HDL = number("hdl", "HDL cholesterol", "hdl_cholesterol", "mg/dL")
SYSTOLIC = number("systolic_bp", "Systolic blood pressure", "systolic_bp", "mm[Hg]")
SCORE = number("frailty", "Frailty", "number", "1")
SEX = ChoicePredictor(
    id="sex",
    label="Sex",
    group="Person",
    choices=(Choice(id="female", label="Female"), Choice(id="male", label="Male")),
)
SMOKING = ChoicePredictor(
    id="smoking",
    label="Smoking",
    group="Person",
    choices=tuple(Choice(id=id, label=id.capitalize()) for id in ("never", "former", "current")),
)
DIABETES = YesNoPredictor(id="diabetes", label="Diabetes", group="Person")


def write(folder: Path, lines: Sequence[str], name: str = "tarnwick.csv", encoding: str = "utf-8") -> Path:
    """A text table of these lines."""
    path = folder / name
    path.write_bytes("\n".join([*lines, ""]).encode(encoding))
    return path


def table_of(folder: Path, **columns: Sequence[object]) -> RawTable:
    """The table read back from a CSV file with these columns."""
    rows = zip(*columns.values(), strict=True)
    return read_table(write(folder, [",".join(columns), *(",".join(map(str, row)) for row in rows)]))


def checked(
    table: RawTable,
    predictors: tuple[Predictor, ...],
    *entries: ColumnEntry,
    outcome: OutcomePlan = TIMED,
    person: str = "",
    cluster: str = "",
) -> CheckedCohort:
    """The table checked; a predictor without an entry stands in a column of its own id."""
    return check_cohort(table, DataDictionary(table.file, outcome, entries, person, cluster), predictors)


def only(cohort: CheckedCohort, code: ProblemCode) -> DataProblem:
    """The one problem of that kind."""
    (problem,) = [problem for problem in cohort.problems if problem.code is code]
    return problem


def codes(cohort: CheckedCohort) -> set[ProblemCode]:
    """The kinds of problems that were found."""
    return {problem.code for problem in cohort.problems}
