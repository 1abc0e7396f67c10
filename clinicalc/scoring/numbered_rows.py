"""The rows that get a number: the number, its band, and the findings that come with it."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from clinicalc.assessment.cautions import COMPETING_AGE
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.estimate import say_imprecise_recalibration
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.rows import predict_rows
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.covariates.transforms import Column
from clinicalc.scoring.field_texts import FieldColumn
from clinicalc.scoring.finding_sets import FindingSets, SaidCode, codes_of
from clinicalc.scoring.near_cut_rows import CutRows, say_near_cuts
from clinicalc.scoring.rare_rows import say_rare
from clinicalc.scoring.said_once import is_imprecise, is_said_once, said_once
from clinicalc.scoring.scored import Places, Rows
from clinicalc.scoring.unconfirmed_rows import UnconfirmedRows


@dataclass(frozen=True, slots=True, eq=False)
class Numbered:
    """Probability and band of each row, NaN where there is none, shape (n,), and the rows left undecided."""

    probability: Column
    lower: Column
    upper: Column
    undecided: Places


class NumberedRows:
    """Predicts with one horizon, recalibration and level."""

    def __init__(
        self,
        model: Model,
        span: Span,
        recalibration: Recalibration | None,
        level: float,
        at: datetime,
        sets: FindingSets,
    ) -> None:
        """All of a run that a number can hang on."""
        self._model = model
        self._span = span
        self._recalibration = recalibration
        self._level = level
        self._sets = sets
        self._unconfirmed = [UnconfirmedRows(model, equation, span, recalibration, at) for equation in model.equations]

    def predict(
        self,
        columns: Mapping[str, FieldColumn],
        made: Mapping[str, Column],
        equation: Places,
        said: Places,
        entry_of: Callable[[int], PatientEntry],
    ) -> Numbered:
        """The numbers of rows by the place of their equation (−1: none); adds to what is `said`.

        `made` holds the values that were worked out. Undecided are rows whose result is not finite and rows in which
        the last digits of a distance decide: `assess` answers for them, and what is said of them here does not count.
        """
        values, given = self._values(columns, made)
        result = predict_rows(
            self._model,
            values,
            self._span,
            recalibration=self._recalibration,
            level=self._level,
            equation=equation,
        )
        undecided = [np.flatnonzero((equation >= 0) & np.isnan(result.probability))]
        for one in self._model.equations:
            rows = np.flatnonzero((equation == one.place) & ~np.isnan(result.probability))
            if not len(rows):
                continue
            cut = CutRows(self._model, one, rows, values, {id: g for id, g in given.items() if id in one.uses})
            say_near_cuts(cut, columns, self._sets, said)
            behind = self._unconfirmed[one.place].behind(cut, columns, entry_of)
            self._sets.add(said, rows[behind], SaidCode(Grade.CAUTION, FindingCode.UNCONFIRMED))
            self._say_competing(one, columns, rows, said)
            self._say_imprecise(one, rows, said)
            if one.people is not None:
                undecided.append(say_rare(one.people, columns, rows, self._sets, said))
        return Numbered(result.probability, result.lower, result.upper, np.concatenate(undecided))

    def _values(
        self, columns: Mapping[str, FieldColumn], made: Mapping[str, Column]
    ) -> tuple[dict[str, Column], dict[str, Rows]]:
        """Every value by id, worked-out ones filled in, and for each derived one where it was typed, shape (n,)."""
        values = {id: column.value for id, column in columns.items()}
        given: dict[str, Rows] = {}
        for id, column in made.items():
            typed = columns.get(id)
            given[id] = np.zeros(len(column), dtype=np.bool_) if typed is None else typed.usable
            values[id] = column if typed is None else np.where(typed.usable, typed.value, column)
        for field in self._model.derived:
            if field.id in columns and field.id not in given:
                given[field.id] = columns[field.id].usable
        return values, given

    def _say_competing(
        self, equation: ModelEquation, columns: Mapping[str, FieldColumn], rows: Places, said: Places
    ) -> None:
        """The caution of old patients where the fit censored other events, at the first of their ages."""
        if equation.content.competing_events.handled != "censored":
            return
        for field in self._model.fields:
            if isinstance(field, NumberField) and field.quantity.id == "age" and field.id in columns:
                old = columns[field.id].value[rows] > COMPETING_AGE
                self._sets.add(said, rows[old], SaidCode(Grade.CAUTION, FindingCode.COMPETING_EVENTS, field.id))
                rows = rows[~old]

    def _say_imprecise(self, equation: ModelEquation, rows: Places, said: Places) -> None:
        note = say_imprecise_recalibration()
        once = said_once(self._model, self._span, self._recalibration, self._level)
        if is_imprecise(equation, self._span, self._recalibration, self._level) and not is_said_once(note, once):
            self._sets.join(said, rows, self._sets.place_of(codes_of([note])))
