"""Values of a row that contradict each other: `check_relations` for every row at once."""

from collections.abc import Mapping

import numpy as np

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.covariates.transforms import Column
from clinicalc.errors import UnitError
from clinicalc.scoring.field_texts import FieldColumn
from clinicalc.scoring.finding_sets import FindingSets, SaidCode
from clinicalc.scoring.scored import Places, Rows
from clinicalc.units.conversion import conversion
from clinicalc.units.quantity import cross_checks

# far more than rounding to 9 significant digits can move a value
_DOUBTFUL = 1e-7


def say_contradictions(columns: Mapping[str, FieldColumn], sets: FindingSets, said: Places) -> None:
    """Adds to what is `said` a finding for each pair of values of which the first may not exceed the second."""
    numbers = [column for column in columns.values() if isinstance(column.field, NumberField)]
    for check in cross_checks():
        code = {id: SaidCode(Grade(check.grade), FindingCode.CROSS_CHECK, id) for id in columns}
        for lower in (column for column in numbers if _quantity(column) == check.lower):
            for upper in (column for column in numbers if _quantity(column) == check.upper):
                rows = np.flatnonzero(_exceeds(lower, upper, check.may_equal))
                sets.add(said, rows, code[lower.field.id])


def _quantity(column: FieldColumn) -> str:
    assert isinstance(column.field, NumberField)
    return column.field.quantity.id


def _exceeds(lower: FieldColumn, upper: FieldColumn, may_equal: bool) -> Rows:
    """Whether both values of a row are usable and the lower one exceeds the upper, shape (n,)."""
    both = lower.usable & upper.usable
    if len(lower.table.units) == 1 and len(upper.table.units) == 1:
        return both & _above(lower, upper, 0, 0, np.arange(len(both)), may_equal)
    found = np.zeros(len(both), dtype=np.bool_)
    one, other = lower.table.unit[lower.at], upper.table.unit[upper.at]
    for low in range(len(lower.table.units)):
        for high in range(len(upper.table.units)):
            rows = np.flatnonzero(both & (one == low) & (other == high))
            found[rows] = _above(lower, upper, low, high, rows, may_equal)
    return found


def _above(lower: FieldColumn, upper: FieldColumn, low: int, high: int, rows: Places, may_equal: bool) -> Rows:
    """The comparison in these rows, whose values were typed in these units: in the upper one's, to 9 digits."""
    field = lower.field
    assert isinstance(field, NumberField)
    one, other = lower.table.units[low], upper.table.units[high]
    numbers: Column = lower.table.number
    if one != other:
        try:
            numbers = np.asarray(conversion(field.quantity, one, other, field.factor).apply(numbers))
        except UnitError:
            # not to be compared, as for one patient
            return np.zeros(len(rows), dtype=np.bool_)
    a, b = numbers[lower.at[rows]], upper.table.number[upper.at[rows]]
    above = a > b
    # equal ones among them
    for row in np.flatnonzero(np.abs(a - b) <= _DOUBTFUL * np.abs(b)):
        first, second = float(f"{float(a[row]):.9g}"), float(f"{float(b[row]):.9g}")
        above[row] = first > second or (first == second and not may_equal)
    return above
