"""Derived values of every row, and what is to be said about them: as for one patient, on columns."""

from collections.abc import Mapping

import numpy as np

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.limits import clamp_column, giving_limits, within_column
from clinicalc.assessment.model import Model
from clinicalc.assessment.worked_out import APART, work_out
from clinicalc.covariates.transforms import Column
from clinicalc.scoring.field_texts import FieldColumn, State
from clinicalc.scoring.finding_sets import FindingSets, SaidCode
from clinicalc.scoring.scored import Places, Rows


def work_out_rows(
    model: Model,
    columns: Mapping[str, FieldColumn],
    possible: tuple[Rows, ...],
    sets: FindingSets,
    said: Places,
) -> dict[str, Column]:
    """Each derived value that was worked out because nobody typed it, by id, NaN in other rows, shape (n,).

    Adds to what is `said`. A value is worked out where an equation that may apply needs it, and to be set beside a
    typed one.
    """
    made = {}
    for field in model.derived:
        if any(source not in columns for source in field.sources):
            continue
        rows = np.flatnonzero(_asked(model, field, columns, possible, len(said)))
        if not len(rows):
            continue
        with np.errstate(all="ignore"):
            value = work_out(model, field, {id: columns[id].value[rows] for id in field.sources})
        assert value is not None
        typed = columns.get(field.id)
        beside = np.zeros(len(rows), dtype=np.bool_) if typed is None else typed.usable[rows]
        if typed is not None and beside.any():
            both = rows[beside]
            apart = np.isfinite(value[beside]) & _are_apart(value[beside], typed.value[both])
            sets.add(said, both[apart], SaidCode(Grade.CAUTION, FindingCode.TYPED_AND_COMPUTED, field.id))
        alone = rows[~beside]
        column = np.full(len(said), np.nan)
        column[alone] = _judge(field, value[~beside], alone, sets, said)
        made[field.id] = column
    return made


def _asked(
    model: Model, field: NumberField, columns: Mapping[str, FieldColumn], possible: tuple[Rows, ...], size: int
) -> Rows:
    """Where the value is asked for and all that it is made from is usable, shape (n,)."""
    asked = np.zeros(size, dtype=np.bool_)
    for equation, rows in zip(model.equations, possible, strict=True):
        if field.id in equation.uses:
            asked |= rows
    if field.id in columns:
        asked |= columns[field.id].state != State.EMPTY
    for source in field.sources:
        asked &= columns[source].usable
    return asked


def _are_apart(value: Column, typed: Column) -> Rows:
    apart: Rows = np.abs(value - typed) > APART * np.abs(typed)
    return apart


def _judge(field: NumberField, value: Column, rows: Places, sets: FindingSets, said: Places) -> Column:
    """The values to use, NaN where one is stopped; `check_worked_out` and `check_ranges` for every row."""
    finite = np.isfinite(value)
    sets.add(said, rows[~finite], SaidCode(Grade.STOP, FindingCode.NOT_COMPUTABLE, field.id))
    possible = within_column(value, field.possible)
    sets.add(said, rows[finite & ~possible], SaidCode(Grade.STOP, FindingCode.IMPOSSIBLE, field.id))
    good = finite & possible
    outside = good & ~within_column(value, field.derivation)
    grade = Grade.STOP if field.derivation_stops else Grade.CAUTION
    sets.add(said, rows[outside], SaidCode(grade, FindingCode.OUTSIDE_DERIVATION, field.id))
    if field.derivation_stops:
        good &= ~outside
    unusual = good & ~within_column(value, field.usual)
    sets.add(said, rows[unusual], SaidCode(Grade.CAUTION, FindingCode.UNUSUAL, field.id))
    return np.where(good, clamp_column(value, giving_limits(field)), np.nan)
