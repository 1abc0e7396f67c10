"""What one version of a model answers to every patient of a grid, in columns, and bit for bit what it answers to each.

The same functions read, check, work out and predict as for one patient; only their results are kept for each text.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import UTC, date, datetime

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.findings import Finding, Grade
from clinicalc.assessment.limits import clamp, giving_limits
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber, take_number
from clinicalc.assessment.questions import TakenAnswer, take_answer
from clinicalc.assessment.relations import check_relations
from clinicalc.assessment.worked_out import check_worked_out, work_out
from clinicalc.coefficients.spans import Span
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.library.standard_patients import Entered, Grid
from clinicalc.prediction.exceedance import place_on_link
from clinicalc.prediction.line import adjustment_of
from clinicalc.prediction.predict import predict

Mask = NDArray[np.bool_]
AT = datetime(9999, 12, 31, tzinfo=UTC)
"""The moment of the invented patients: no text of theirs has a date."""


@dataclass(frozen=True, slots=True, eq=False)
class GridAnswers:
    """For each patient, shape (n,): whether there is a number, the probability, eta, and the width of the band on the
    link scale; not a number (nan) where there is none. `equation` is the place of the one that answers, -1 for none.
    """

    gives: Mask
    probability: Column
    eta: Column
    width: Column
    equation: NDArray[np.int64]
    model: Model

    def is_above(self, point: float) -> Mask:
        """Whether each number lies on or above a decision point, compared on the link scale, shape (n,)."""
        above = np.zeros(self.gives.size, dtype=bool)
        for place, equation in enumerate(self.model.equations):
            here = self.gives & (self.equation == place)
            above[here] = self.eta[here] >= place_on_link(equation.content.link, point)
        return above


@dataclass(frozen=True, slots=True, eq=False)
class _Read:
    """The grid as this model reads it; `taken` has, by id, what became of each text (None: it cannot be used)."""

    taken: Mapping[str, tuple[TakenNumber | TakenAnswer | None, ...]]
    places: Mapping[str, NDArray[np.int64]]
    columns: Mapping[str, Column]
    usable: Mask


def answer_grid(model: Model, grid: Grid, span: Span, recalibration: str | None) -> GridAnswers:
    """The answers at one of the model's horizons. `recalibration` is one that it offers there, or None.

    Raises KeyError or StopIteration for a horizon or recalibration that it does not have.
    """
    read = _read(model, grid)
    rows = len(grid.rows)
    figures = np.full((3, rows), np.nan)
    which = np.full(rows, -1, dtype=np.int64)
    for place, equation in enumerate(model.equations):
        here = np.flatnonzero(read.usable & _applies(equation, read, rows))
        if here.size:
            here, found = _answer(model, equation, read, here, span, recalibration)
            figures[:, here] = found
            which[here] = place
    return GridAnswers(which >= 0, figures[1], figures[0], figures[2], which, model)


def _answer(
    model: Model, equation: ModelEquation, read: _Read, here: NDArray[np.int64], span: Span, recalibration: str | None
) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    """The rows for which there is a number, and their eta, probability and width, shape (3, rows)."""
    here, columns = _with_worked_out(model, equation, read, here)
    if not here.size or not equation.uses <= columns.keys():
        return here[:0], np.empty((3, 0))
    adjustment = None
    if recalibration is not None:
        chosen = next(offer for offer in model.recalibrations_at(span) if offer.id == recalibration)
        adjustment = adjustment_of(chosen.equations[equation.content.id])
    result = predict(equation.line_at(span), design_columns(equation.terms, columns), adjustment=adjustment)
    width = np.full(here.size, np.nan)
    good = np.isfinite(result.eta)
    if result.eta_lower is not None and result.eta_upper is not None:
        width = result.eta_upper - result.eta_lower
        good &= np.isfinite(result.eta_lower) & np.isfinite(result.eta_upper)
    return here[good], np.stack([result.eta, result.probability, width])[:, good]


def _with_worked_out(
    model: Model, equation: ModelEquation, read: _Read, here: NDArray[np.int64]
) -> tuple[NDArray[np.int64], dict[str, Column]]:
    """The rows whose derived values may be used, and their columns with those values."""
    columns = {id: column[here] for id, column in read.columns.items()}
    keep = np.ones(here.size, dtype=bool)
    for field in model.derived:
        if field.id not in equation.uses and field.id not in columns:
            continue
        worked = work_out(model, field, columns)
        if worked is None:
            continue
        if field.id in columns:
            continue  # the typed one counts; beside it the other can only give rise to a caution
        clamped, stopped = _check_each(model, field, worked)
        columns[field.id] = clamped
        keep &= ~stopped
    return here[keep], {id: column[keep] for id, column in columns.items()}


def _check_each(model: Model, field: NumberField, worked: Column) -> tuple[Column, Mask]:
    """Each worked-out value held inside its limits, and whether it is one that stops; both of shape (n,)."""
    values, back = np.unique(worked, return_inverse=True)
    stops = [_stops(check_worked_out(model, field, float(value), None)) for value in values]
    limits = giving_limits(field)
    return np.array([clamp(float(value), limits) for value in values])[back], np.array(stops)[back]


def _read(model: Model, grid: Grid) -> _Read:
    rows = np.array(grid.rows, dtype=np.int64).reshape(len(grid.rows), len(grid.entered))
    known = [(entered, rows[:, at]) for at, entered in enumerate(grid.entered) if entered.id in model.by_id]
    taken: dict[str, tuple[TakenNumber | TakenAnswer | None, ...]] = {}
    places: dict[str, NDArray[np.int64]] = {}
    columns: dict[str, Column] = {}
    usable = np.ones(len(grid.rows), dtype=bool)
    for entered, place in known:
        field = model.by_id[entered.id]
        taken[entered.id] = _take(field, entered)
        places[entered.id] = place
        usable &= np.array([one is not None for one in taken[entered.id]])[place]
        if not isinstance(field, QuestionField) or not field.excludes:
            columns[entered.id] = np.array([_code(one) for one in taken[entered.id]])[place]
    return _Read(taken, places, columns, usable & ~_contradicting(taken, places, len(grid.rows)))


def _take(field: Field, entered: Entered) -> tuple[TakenNumber | TakenAnswer | None, ...]:
    return tuple(_take_one(field, Typed(text), AT.date()) for text in entered.texts)


def _take_one(field: Field, typed: Typed, today: date) -> TakenNumber | TakenAnswer | None:
    """What can be used of one text; None where anything about it stops."""
    findings: tuple[Finding, ...]
    taken: TakenNumber | TakenAnswer | None
    if isinstance(field, QuestionField):
        taken, findings = take_answer(field, typed)
    elif not field.may_be_typed:
        return None
    else:
        taken, findings = take_number(field, typed, today)
    return None if _stops(findings) else taken


def _contradicting(
    taken: Mapping[str, tuple[TakenNumber | TakenAnswer | None, ...]],
    places: Mapping[str, NDArray[np.int64]],
    rows: int,
) -> Mask:
    """Which rows hold two numbers that contradict each other so that they stop."""
    found = np.zeros(rows, dtype=bool)
    numbers = {id: texts for id, texts in taken.items() if any(isinstance(one, TakenNumber) for one in texts)}
    for id, texts in numbers.items():
        for other, others in numbers.items():
            if id >= other:
                continue
            for i, one in enumerate(texts):
                for j, two in enumerate(others):
                    if not isinstance(one, TakenNumber) or not isinstance(two, TakenNumber):
                        continue
                    if _stops(tuple(check_relations({id: one, other: two}))):
                        found |= (places[id] == i) & (places[other] == j)
    return found


def _applies(equation: ModelEquation, read: _Read, rows: int) -> Mask:
    applies = np.ones(rows, dtype=bool)
    for id, wanted in equation.content.applies_when.items():
        texts = read.taken.get(id, ())
        fits = [isinstance(one, TakenAnswer) and one.option.id in wanted for one in texts]
        applies &= np.array(fits)[read.places[id]] if texts else False
    return applies


def _code(taken: TakenNumber | TakenAnswer | None) -> float:
    if taken is None:
        return float("nan")
    return taken.value if isinstance(taken, TakenNumber) else taken.code


def _stops(findings: tuple[Finding, ...]) -> bool:
    return any(finding.grade is Grade.STOP for finding in findings)
