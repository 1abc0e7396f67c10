"""Many patients at once: from columns of usable values to the number and band of each, bit for bit as `assess`.

Nothing is read or judged here: values come in the file's units, answers as their places, NaN where there is none.
"""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.limits import clamp_column, giving_limits
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.worked_out import work_out
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.covariates.design import answer_codes, design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import adjustment_of
from clinicalc.prediction.predict import predict

Places = NDArray[np.int64]
Rows = NDArray[np.bool_]

NO_EQUATION = -1


@dataclass(frozen=True, slots=True, eq=False)
class PredictedRows:
    """For each of n rows, shape (n,): its equation's place (−1: none), eta, g(eta), 1 − g(eta), the band's ends.

    NaN where there is no number: no equation, a value missing, or a result that is not finite. `eta` is after the
    recalibration. `lower` and `upper` are NaN too where there is no band.
    """

    equation: Places
    eta: Column
    probability: Column
    complement: Column
    lower: Column
    upper: Column


def predict_rows(
    model: Model,
    columns: Mapping[str, Column],
    span: Span,
    *,
    recalibration: Recalibration | None = None,
    level: float = 0.95,
    band: bool = True,
    equation: Places | None = None,
) -> PredictedRows:
    """The numbers of n rows at one horizon; `columns` by predictor id, each of shape (n,), at least one.

    A derived value is worked out where it has no column of its own, and where that column is NaN. `equation` holds the
    place of each row's equation where the caller found them; rows with −1 are left without a number. Values beyond the
    limits within which the model gives a number must have been taken out (NaN) or moved onto them before, as `assess`
    does with what is typed.
    """
    size = len(next(iter(columns.values())))
    if equation is None:
        equation = find_equations(model, columns, size)
    out = np.full((5, size), np.nan)
    for one in model.equations:
        rows = np.flatnonzero(equation == one.place)
        if len(rows):
            out[:, rows] = _predict_equation(model, one, columns, rows, span, recalibration, level, band)
    return PredictedRows(equation, *out)


def find_equations(model: Model, columns: Mapping[str, Column], size: int) -> Places:
    """The place of the equation that applies to each row, (n,); −1 where none does, or what decides it is NaN."""
    codes = answer_codes(model.content)
    found = np.full(size, NO_EQUATION, dtype=np.int64)
    for one in model.equations:
        applies = np.ones(size, dtype=np.bool_)
        for id, answers in one.content.applies_when.items():
            applies &= _is_any(columns.get(id), [codes[id][answer] for answer in answers], size)
        found[applies] = one.place
    return found


def complete_columns(
    model: Model, equation: ModelEquation, columns: Mapping[str, Column], rows: Places
) -> dict[str, Column]:
    """The values that one equation uses in these rows, by id, derived ones worked out where they were not given."""
    made_of = {id for field in model.derived if field.id in equation.uses for id in field.sources}
    wanted = equation.uses | made_of
    whole = len(rows) == len(next(iter(columns.values())))
    own = {
        id: np.ascontiguousarray(column if whole else column[rows]) for id, column in columns.items() if id in wanted
    }
    for field in model.derived:
        given = own.get(field.id)
        if field.id not in equation.uses or (given is not None and not np.isnan(given).any()):
            continue
        with np.errstate(all="ignore"):
            made = work_out(model, field, own)
        if made is None:
            continue
        made = clamp_column(made, giving_limits(field))
        own[field.id] = made if given is None else np.where(np.isnan(given), made, given)
    return {id: column for id, column in own.items() if id in equation.uses}


def _is_any(column: Column | None, codes: list[float], size: int) -> Rows:
    found = np.zeros(size, dtype=np.bool_)
    if column is not None:
        for code in codes:
            found |= column == code
    return found


def _predict_equation(
    model: Model,
    equation: ModelEquation,
    columns: Mapping[str, Column],
    rows: Places,
    span: Span,
    recalibration: Recalibration | None,
    level: float,
    band: bool,
) -> Column:
    """Eta, probability, complement and the band's ends of the rows of one equation, shape (5, rows)."""
    own = complete_columns(model, equation, columns, rows)
    out = np.full((5, len(rows)), np.nan)
    if not own.keys() >= equation.uses:
        return out
    adjustment = None if recalibration is None else adjustment_of(recalibration.equations[equation.content.id])
    result = predict(
        equation.line_at(span), design_columns(equation.terms, own), adjustment=adjustment, level=level, band=band
    )
    out[0], out[1], out[2] = result.eta, result.probability, result.complement
    unknown = np.zeros(len(rows), dtype=np.bool_)
    for column in own.values():
        unknown |= np.isnan(column)
    finite = np.isfinite(result.eta)
    if result.lower is not None and result.upper is not None:
        out[3], out[4] = result.lower, result.upper
        assert result.eta_lower is not None
        assert result.eta_upper is not None
        finite &= np.isfinite(result.eta_lower) & np.isfinite(result.eta_upper)
    out[:, unknown | ~finite] = np.nan
    return out
