"""Values so close to a cut or a limit that their rounding decides the side: `find_near_cuts` for every row."""

from collections.abc import Mapping, Set
from dataclasses import dataclass

import numpy as np

from clinicalc.assessment.cut_points import INSIDE
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.limits import clamp_column, giving_limits, within_column
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.worked_out import work_out
from clinicalc.covariates.design import DesignFactor
from clinicalc.covariates.transforms import Column
from clinicalc.scoring.field_texts import FieldColumn, TextTable
from clinicalc.scoring.finding_sets import FindingSets, SaidCode
from clinicalc.scoring.scored import Places, Rows


@dataclass(frozen=True, slots=True, eq=False)
class CutRows:
    """The rows of one equation that have a number, and the values of them that it uses.

    `values` holds columns of whole blocks by id, derived values completed; `given` says of each derived value of the
    equation where it was typed, shape (n,).
    """

    model: Model
    equation: ModelEquation
    rows: Places
    values: Mapping[str, Column]
    given: Mapping[str, Rows]


def say_near_cuts(cut: CutRows, columns: Mapping[str, FieldColumn], sets: FindingSets, said: Places) -> None:
    """Adds to what is `said` a caution for each number whose rounding reaches across a cut or a limit."""
    for column in columns.values():
        if not isinstance(column.field, NumberField):
            continue
        derived = [d for d in cut.model.derived if d.id in cut.equation.uses and column.field.id in d.sources]
        touchy = touchy_texts(cut.equation, column.field, column.table)
        if derived:
            rows = cut.rows[column.usable[cut.rows] & ~column.table.whole_years[column.at[cut.rows]]]
        elif touchy.any():
            rows = cut.rows[touchy[column.at[cut.rows]]]
        else:
            continue
        near = _are_near(cut, column, derived, rows)
        sets.add(said, rows[near], SaidCode(Grade.CAUTION, FindingCode.NEAR_CUT, column.field.id))


def touchy_texts(equation: ModelEquation, field: NumberField, table: TextTable) -> Rows:
    """Which texts of a number may be near a limit or a cut in the number itself, shape (texts,).

    In a row another factor may still be nought, and the cut then changes nothing.
    """
    known = ~np.isnan(table.value) & ~table.whole_years
    touchy = np.zeros(len(known), dtype=np.bool_)
    for moved in _moved(table.value, table.half):
        touchy |= known & ~within_column(moved, giving_limits(field))
        kept = clamp_column(moved, giving_limits(field))
        for factor in _cutting_factors(equation, {field.id}):
            with np.errstate(all="ignore"):
                before, after = (factor.values({field.id: values}) for values in (table.value, kept))
            touchy |= known & (before != after)
    return touchy


def _moved(value: Column, half: Column) -> tuple[Column, Column]:
    return value - INSIDE * half, value + INSIDE * half


def _cutting_factors(equation: ModelEquation, ids: Set[str]) -> list[DesignFactor]:
    return [factor for term in equation.terms for factor in term.factors if factor.cuts and factor.of in ids]


def _are_near(cut: CutRows, column: FieldColumn, derived: list[NumberField], rows: Places) -> Rows:
    """Whether in each of these rows a limit or a cut lies within the rounding of one number, shape (rows,)."""
    field = column.field
    assert isinstance(field, NumberField)
    values = {id: values[rows] for id, values in cut.values.items()}
    values[field.id] = column.value[rows]
    near = np.zeros(len(rows), dtype=np.bool_)
    for moved in _moved(values[field.id], column.table.half[column.at[rows]]):
        near |= ~within_column(moved, giving_limits(field))
        there = values | {field.id: clamp_column(moved, giving_limits(field))}
        for made in derived:
            own = {id: there[id] for id in made.sources}
            with np.errstate(all="ignore"):
                value = work_out(cut.model, made, own)
            assert value is not None
            alone = ~cut.given[made.id][rows]
            near |= alone & ~within_column(value, giving_limits(made))
            value = np.where(np.isnan(value), values[made.id], clamp_column(value, giving_limits(made)))
            there[made.id] = np.where(alone, value, values[made.id])
        near |= _crossed(cut.equation, {field.id, *(made.id for made in derived)}, values, there)
    return near


def _crossed(
    equation: ModelEquation, moved: Set[str], values: Mapping[str, Column], there: Mapping[str, Column]
) -> Rows:
    """Whether in each row a cut that counts falls otherwise for the values `there`, of which some were moved."""
    crossed = np.zeros(len(next(iter(there.values()))), dtype=np.bool_)
    with np.errstate(all="ignore"):
        for term in equation.terms:
            for factor in term.factors:
                if factor.cuts and factor.of in moved:
                    elsewhere = factor.values(there) != factor.values(values)
                    if elsewhere.any():
                        crossed |= elsewhere & (term.values(there) != term.values(values))
    return crossed
