"""The column of a number predictor: taken into its unit, and everything that is wrong with its cells."""

from collections.abc import Iterator

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.limits import is_within
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.schema import Limits
from clinicalc.cohort.measure import Measure
from clinicalc.cohort.missing_cells import MISSING_CODES, find_missing, stray_codes
from clinicalc.cohort.number_cells import NumberCells, take_numbers, tell_texts
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Lines, Mask, name_column, see
from clinicalc.cohort.unit_heaps import Heaps, find_better_unit, find_heaps
from clinicalc.units.fitting import fitting_units
from clinicalc.units.unit import unit

_MANY_UNUSUAL = 0.01


def take_number_column(
    raw: RawColumn, missing: tuple[str, ...], measure: Measure, lines: Lines
) -> tuple[Numbers, Mask, tuple[DataProblem, ...]]:
    """The values in the predictor's unit (NaN where missing or impossible), which were missing, and the problems."""
    cells = take_numbers(raw, missing)
    with np.errstate(over="ignore"):
        # what overflows lies beyond every limit, and is told as that
        values = np.ascontiguousarray(measure.into.apply(cells.numbers), dtype=np.float64)
    values, impossible = _hold(values, measure.field.possible)
    problems = tuple(_find_problems(raw, cells, values, impossible, measure, lines))
    return np.where(impossible, np.nan, values), find_missing(raw, missing), problems


def _find_problems(
    raw: RawColumn, cells: NumberCells, values: Numbers, impossible: Mask, measure: Measure, lines: Lines
) -> Iterator[DataProblem]:
    texts = tell_texts(raw, cells, lines, measure.field.label)
    if texts is not None:
        yield texts
    better = find_better_unit(cells.numbers, measure)
    if better:
        yield _tell_better(raw.name, cells.numbers, impossible, better, measure, lines)
        return
    heaps = find_heaps(cells.numbers, measure)
    if heaps is not None:
        # where the other heap is possible in this unit too, it may be people who are just so
        gravity = Grade.STOP if (heaps.other & impossible).any() else Grade.CAUTION
        yield _tell_heaps(raw.name, cells.numbers, heaps, measure, lines, gravity)
        impossible = impossible & ~heaps.other
    if impossible.any():
        yield _tell_impossible(raw.name, cells.numbers, impossible, measure, lines)
    codes = stray_codes(cells.numbers[np.isfinite(cells.numbers) & ~impossible])
    if codes:
        yield _tell_codes(raw.name, cells.numbers, codes, measure, lines)
    _, unusual = _hold(values, measure.field.usual)
    unusual &= ~impossible & np.isfinite(values)
    unusual &= ~np.isin(cells.numbers, codes)
    if heaps is not None:
        unusual &= ~heaps.other
    if unusual.any():
        yield _tell_unusual(raw.name, cells.numbers, unusual, measure, lines)


def _hold(values: Numbers, limits: Limits) -> tuple[Numbers, Mask]:
    """The values, those that miss a limit by their last bits moved onto it; and which lie outside."""
    low, high = limits
    outside = np.zeros(len(values), dtype=np.bool_)
    if low is not None:
        outside |= values < low
    if high is not None:
        outside |= values > high
    if not outside.any():
        return values, outside
    distinct, back = np.unique(values[outside], return_inverse=True)
    beyond = np.array([not is_within(float(value), limits) for value in distinct])
    held = values.copy()
    held[outside] = np.where(beyond, distinct, np.clip(distinct, low, high))[back]
    outside[outside] = beyond[back]
    return held, outside


def _tell_better(
    column: str, numbers: Numbers, impossible: Mask, better: str, measure: Measure, lines: Lines
) -> DataProblem:
    first = numbers[np.isfinite(numbers)][:3]
    seen = see(impossible if impossible.any() else np.isfinite(numbers), lines)
    sentence = (
        f"{name_column(column, measure.field.label)} is said to be in {measure.spelling or 'no unit'}, and its values, "
        f"such as {listed(quoted(float(number)) for number in first)}, are usual in {unit(better).spelling} instead. "
        f'Correct the unit of the column (unit = "{better}"), or the values.'
    )
    gravity = Grade.STOP if impossible.any() else Grade.CAUTION
    return DataProblem(gravity, column, ProblemCode.UNIT, seen.count, seen.lines, sentence)


def _tell_heaps(
    column: str, numbers: Numbers, heaps: Heaps, measure: Measure, lines: Lines, gravity: Grade
) -> DataProblem:
    own, other = see(heaps.own, lines), see(heaps.other, lines)
    sentence = (
        f"{name_column(column, measure.field.label)} seems to mix two units: {own.count} values fit "
        f"{measure.spelling}, such as {quoted(float(numbers[own.first]))} in line {own.lines[0]}, and "
        f"{other.count} fit {unit(heaps.code).spelling}, such as {quoted(float(numbers[other.first]))} in line "
        f"{other.lines[0]}. "
        "Write the whole column in one unit, where it is known which cell is in which."
    )
    return DataProblem(gravity, column, ProblemCode.UNIT_MIXTURE, other.count, other.lines, sentence)


def _tell_impossible(column: str, numbers: Numbers, where: Mask, measure: Measure, lines: Lines) -> DataProblem:
    seen = see(where, lines)
    example = float(numbers[seen.first])
    after = f" {measure.spelling}" if measure.spelling else ""
    limits = measure.limit_words(measure.field.possible)
    verb = "is not possible" if len(np.unique(numbers[where])) == 1 else "and others are not possible"
    sentence = (
        f"{name_column(column, measure.field.label)}: {quoted(example)}{after} {verb}, {seen.words}; the possible "
        f"range is {limits}.{_remedy(numbers[where], example, measure)}"
    )
    return DataProblem(Grade.STOP, column, ProblemCode.IMPOSSIBLE, seen.count, seen.lines, sentence)


def _remedy(numbers: Numbers, example: float, measure: Measure) -> str:
    codes = [code for code in MISSING_CODES if (numbers == code).any()]
    said = ""
    if codes:
        texts = ", ".join(f'"{code:g}"' for code in codes)
        lines = int(np.isin(numbers, codes).sum())
        said += f" {listed(quoted(code) for code in codes)} ({lines} of them) may mean that nothing was measured: "
        said += f"then name it, missing = [{texts}]."
    others = fitting_units(measure.field.quantity, example, measure.code, measure.field.factor)
    if others and example not in codes:
        said += f" {quoted(example)} {listed([unit(code).spelling for code in others], 'or')} would be believable."
    return f"{said} Correct the cells, or leave them empty." if not said or not codes else said


def _tell_codes(column: str, numbers: Numbers, codes: tuple[float, ...], measure: Measure, lines: Lines) -> DataProblem:
    seen = see(np.isin(numbers, codes), lines)
    texts = ", ".join(f'"{code:g}"' for code in codes)
    sentence = (
        f"{name_column(column, measure.field.label)}: {listed(quoted(code) for code in codes)} {seen.words}, far from "
        f"all other values. If that means that nothing was measured, name it: missing = [{texts}]."
    )
    return DataProblem(Grade.CAUTION, column, ProblemCode.MISSING_CODE, seen.count, seen.lines, sentence)


def _tell_unusual(column: str, numbers: Numbers, where: Mask, measure: Measure, lines: Lines) -> DataProblem:
    seen = see(where, lines)
    many = seen.count > _MANY_UNUSUAL * int(np.isfinite(numbers).sum())
    sentence = (
        f"{name_column(column, measure.field.label)}: {quoted(float(numbers[seen.first]))} lies outside the usual "
        f"range {measure.limit_words(measure.field.usual)}, {seen.words}. Such values carry far: look at them."
    )
    gravity = Grade.CAUTION if many else Grade.NOTE
    return DataProblem(gravity, column, ProblemCode.UNUSUAL, seen.count, seen.lines, sentence)
