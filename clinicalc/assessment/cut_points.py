"""Values so close to a cut or a limit of the model that their rounding decides the side."""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import clamp, giving_limits, is_within
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.assessment.numerals import percent, plain
from clinicalc.assessment.worked_out import work_out
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Line
from clinicalc.prediction.predict import predict
from clinicalc.units.conversion import conversion
from clinicalc.units.unit import unit

# the rounded-up end itself is no longer what was typed; far enough inside for comparing at 9 significant digits
INSIDE = 0.9999

Rows = NDArray[np.bool_]

ResultAt = Callable[[str, float], str]
"""The result in words with one of the typed numbers moved, where it is an average over values not measured."""


@dataclass(frozen=True, slots=True, eq=False)
class _Shifted:
    """The values as used in row 0, then for each number in `near` a row with it lowered and a row with it raised.

    `outside` says in which rows a value left the limits within which the model gives a number; in `columns` it was
    moved back onto them, since the steps have a value only inside.
    """

    near: tuple[TakenNumber, ...]
    moved: tuple[tuple[float, float], ...]
    columns: Mapping[str, Column]
    outside: Rows

    def rows_of(self, place: int) -> tuple[int, int]:
        """The two rows in which the number at this place was moved."""
        return 1 + 2 * place, 2 + 2 * place


def find_near_cuts(
    model: Model,
    equation: ModelEquation,
    line: Line,
    adjustment: Adjustment | None,
    columns: Mapping[str, Column],
    numbers: Mapping[str, TakenNumber],
    result_at: ResultAt | None = None,
) -> Iterator[Finding]:
    """A caution for each typed number whose rounding reaches across a cut or a limit, saying what lies beyond.

    `columns` holds one row: the values as used, without those that were worked out. `result_at` answers where values
    were not measured; a cut in such a value is no cut, since the number is averaged over both sides.
    """
    shifted = _shift(model, equation, columns, tuple(n for n in numbers.values() if not n.counts_completed_years))
    crossed = _crossed(equation, shifted.columns)
    if result_at is None and crossed.any():
        result = predict(line, design_columns(equation.terms, shifted.columns), adjustment=adjustment, band=False)
    for place, number in enumerate(shifted.near):
        named = f"{number.field.label} {number.shown} lies within its rounding of a"
        said: dict[str, None] = {}
        for row, value in zip(shifted.rows_of(place), shifted.moved[place], strict=True):
            at = _in_typed_unit(number, value)
            if shifted.outside[row]:
                said[f"{named} limit of this model: at {at} it would give no number."] = None
            elif crossed[row]:
                if result_at is None:
                    there = percent(float(result.probability[row]), float(result.complement[row]))
                else:
                    there = result_at(number.field.id, float(shifted.columns[number.field.id][row]))
                said[f"{named} cut of this model: at {at} the result would be {there}."] = None
        yield from (_near(number, message) for message in said)


def _near(number: TakenNumber, message: str) -> Finding:
    return Finding(Grade.CAUTION, FindingCode.NEAR_CUT, number.field.id, message)


def _shift(
    model: Model, equation: ModelEquation, columns: Mapping[str, Column], near: tuple[TakenNumber, ...]
) -> _Shifted:
    wide = {id: np.full(1 + 2 * len(near), column[0]) for id, column in columns.items()}
    moved = []
    for place, number in enumerate(near):
        low, high = number.value - INSIDE * number.half, number.value + INSIDE * number.half
        wide[number.field.id][1 + 2 * place], wide[number.field.id][2 + 2 * place] = low, high
        moved.append((low, high))
    outside = np.zeros(1 + 2 * len(near), dtype=np.bool_)
    for number in near:
        wide[number.field.id] = _keep_inside(number.field, wide[number.field.id], outside)
    for field in model.derived:
        # a worked-out value that this equation does not use stops nobody
        if field.id in equation.uses and field.id not in wide:
            with np.errstate(all="ignore"):
                column = work_out(model, field, wide)
            if column is not None:
                wide[field.id] = _keep_inside(field, column, outside)
    return _Shifted(near, tuple(moved), wide, outside)


def _keep_inside(field: NumberField, column: Column, outside: Rows) -> Column:
    """The column clamped to the limits of its field; marks the rows that lay outside them, or had no value at all."""
    limits = giving_limits(field)
    values = column.tolist()
    outside |= np.array([not is_within(value, limits) for value in values])
    return np.array([clamp(value, limits) if value == value else column[0] for value in values])


def _crossed(equation: ModelEquation, columns: Mapping[str, Column]) -> Rows:
    """For each row, whether a cut that counts falls otherwise than in the first row, shape (rows,)."""
    crossed = np.zeros(next(iter(columns.values())).size, dtype=np.bool_)
    for term in equation.terms:
        for factor in term.factors:
            if factor.cuts and factor.of in columns:
                side = factor.values(columns)
                elsewhere = side != side[0]
                if elsewhere.any() and all(other.of in columns for other in term.factors):
                    value = term.values(columns)
                    elsewhere &= value != value[0]
                crossed |= elsewhere
    return crossed


def _in_typed_unit(number: TakenNumber, value: float) -> str:
    back = conversion(number.field.quantity, number.field.unit, number.unit, number.field.factor)
    text = plain(round(back.apply(value), number.reading.decimals + 2), 6)
    return text if number.unit == "1" else f"{text} {unit(number.unit).spelling}"
