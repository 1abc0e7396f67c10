"""Values of one person that contradict each other, by the cross-checks of the quantity table."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import quoted
from clinicalc.cohort.measure import Measure
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers
from clinicalc.cohort.sightings import Lines, Mask, name_column, see
from clinicalc.errors import UnitError
from clinicalc.units.conversion import conversion
from clinicalc.units.quantity import CrossCheck, cross_checks


@dataclass(frozen=True, slots=True, eq=False)
class MeasuredColumn:
    """Values of a number predictor in its own unit, with the name of the column they come from."""

    column: str
    measure: Measure
    values: Numbers


def find_contradictions(columns: Sequence[MeasuredColumn], lines: Lines) -> Iterator[DataProblem]:
    """A problem for each pair of columns of which the first may not exceed the second, and does in some line."""
    by_quantity: Mapping[str, list[MeasuredColumn]] = {one.measure.field.quantity.id: [] for one in columns}
    for one in columns:
        by_quantity[one.measure.field.quantity.id].append(one)
    for check in cross_checks():
        for lower in by_quantity.get(check.lower, []):
            for upper in by_quantity.get(check.upper, []):
                low, high = _in_base(lower, check.lower), _in_base(upper, check.upper)
                if low is not None and high is not None:
                    yield from _tell(check, lower, upper, _breaks(check, low, high), lines)


def _in_base(one: MeasuredColumn, id: str) -> Numbers | None:
    """The values in the base unit of their quantity, None where the unit does not lead there."""
    field = one.measure.field
    try:
        into = conversion(field.quantity, field.unit, field.quantity.unit, field.factor)
    except UnitError:
        return None
    return np.asarray(into.apply(one.values), dtype=np.float64)


def _breaks(check: CrossCheck, low: Numbers, high: Numbers) -> Mask:
    """Where the two do not stand in order; those near to each other are compared to nine digits, as at the bedside."""
    broken: Mask = low > high * (1.0 + 1e-8)
    near = np.flatnonzero(np.abs(low - high) <= 1e-8 * np.abs(high))
    broken[near] = [not check.holds(float(low[row]), float(high[row])) for row in near]
    return broken


def _tell(
    check: CrossCheck, lower: MeasuredColumn, upper: MeasuredColumn, broken: Mask, lines: Lines
) -> Iterator[DataProblem]:
    if not broken.any():
        return
    seen = see(broken, lines)
    low, high = float(lower.values[seen.first]), float(upper.values[seen.first])
    sentence = (
        f"{name_column(lower.column, lower.measure.field.label)} is {quoted(float(f'{low:.6g}'))} "
        f"{_unit(lower)}and {name_column(upper.column, upper.measure.field.label)[:1].lower()}"
        f"{name_column(upper.column, upper.measure.field.label)[1:]} {quoted(float(f'{high:.6g}'))} "
        f"{_unit(upper)}in line {seen.lines[0]}; {seen.words} they contradict each other. {check.message}"
    )
    yield DataProblem(Grade(check.grade), lower.column, ProblemCode.CONTRADICTION, seen.count, seen.lines, sentence)


def _unit(one: MeasuredColumn) -> str:
    spelling = one.measure.field.spelling
    return f"{spelling} " if spelling else ""
