"""Values so close to a cut of the model that their rounding decides the side."""

from collections.abc import Iterator, Mapping

import numpy as np

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.assessment.numerals import percent, plain
from clinicalc.assessment.worked_out import work_out
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Line
from clinicalc.prediction.predict import predict
from clinicalc.units.conversion import conversion

# the rounded-up end itself is no longer what was typed; far enough inside for comparing at 9 significant digits
_INSIDE = 0.9999


def columns_with(model: Model, columns: Mapping[str, Column], typed_derived: frozenset[str]) -> dict[str, Column]:
    """The columns with every derived value added that can be worked out and was not typed, shape (n,) each."""
    full = dict(columns)
    for field in model.derived:
        if field.id not in typed_derived:
            column = work_out(model, field, columns)
            if column is not None:
                full[field.id] = column
    return full


def find_near_cuts(
    model: Model,
    equation: ModelEquation,
    line: Line,
    adjustment: Adjustment | None,
    columns: Mapping[str, Column],
    numbers: Mapping[str, TakenNumber],
) -> Iterator[Finding]:
    """A caution for each typed number whose rounding reaches across a cut, naming the result on the other side.

    `columns` holds one row: the values as used, without those that were worked out.
    """
    if not any(factor.cuts for term in equation.terms for factor in term.factors):
        return
    # completed years are not rounded years: a person of 49 is not possibly 50
    near = [n for n in numbers.values() if not (n.field.quantity.id == "age" and n.reading.decimals == 0)]
    rows = 1 + 2 * len(near)
    wide = {id: np.full(rows, column[0]) for id, column in columns.items()}
    for place, number in enumerate(near):
        wide[number.field.id][1 + 2 * place] -= _INSIDE * number.half
        wide[number.field.id][2 + 2 * place] += _INSIDE * number.half
    typed_derived = frozenset(n.field.id for n in numbers.values() if n.field.formula is not None)
    full = columns_with(model, wide, typed_derived)
    crossed = _crossed(equation, full, rows)
    result = predict(line, design_columns(equation.terms, full), adjustment=adjustment)
    for place, number in enumerate(near):
        row = next((row for row in (1 + 2 * place, 2 + 2 * place) if crossed[row]), None)
        if row is not None:
            yield Finding(
                Grade.CAUTION,
                FindingCode.NEAR_CUT,
                number.field.id,
                f"{number.field.label} {number.shown} lies within its rounding of a cut of this model: at"
                f" {_in_typed_unit(number, float(wide[number.field.id][row]))} the result would be"
                f" {percent(float(result.probability[row]), float(result.complement[row]))}.",
            )


def _crossed(
    equation: ModelEquation, columns: Mapping[str, Column], rows: int
) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """For each row, whether a cut that counts falls otherwise than in the first row, shape (rows,)."""
    crossed = np.zeros(rows, dtype=np.bool_)
    for term in equation.terms:
        value = term.values(columns)
        for factor in term.factors:
            if factor.cuts:
                side = factor.values(columns)
                crossed |= (side != side[0]) & (value != value[0])
    return crossed


def _in_typed_unit(number: TakenNumber, value: float) -> str:
    back = conversion(number.field.quantity, number.field.unit, number.unit, number.field.factor)
    shifted = round(back.apply(value), number.reading.decimals + 2)
    text = plain(shifted, 6)
    return text if number.unit == "1" else f"{text} {number.shown.split(' ', 1)[1]}"
