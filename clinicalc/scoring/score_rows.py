"""Rows of cells to numbers, bands and findings, each what `assess` gives for that row: the same bits, the same codes.

`Scorer(model, ...)` settles what holds for the whole run; `scorer.score(cells)` scores a block of any size, keeping
what it learnt about texts for the next one.
"""

from collections.abc import Collection, Mapping
from datetime import datetime

import numpy as np

from clinicalc.assessment.assess import assess
from clinicalc.assessment.choices import DEFAULT_LEVEL, check_level, settle_choices
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from clinicalc.scoring.contradicting_rows import say_contradictions
from clinicalc.scoring.field_texts import FieldColumn, FieldTexts, State
from clinicalc.scoring.finding_sets import FindingSets, codes_of
from clinicalc.scoring.missing_rows import possible_in_rows, say_missing
from clinicalc.scoring.numbered_rows import Numbered, NumberedRows
from clinicalc.scoring.said_once import is_said_once, said_once
from clinicalc.scoring.scored import Cells, Places, Rows, SaidOnce, ScoredBlock
from clinicalc.scoring.worked_out_rows import work_out_rows
from clinicalc.units.conversion import conversion

_MOST_REMEMBERED = 20_000
"""Rows assessed one by one whose results are kept for rows of the same texts."""


class Scorer:
    """Scores blocks of rows with one model, horizon, recalibration and level."""

    def __init__(
        self,
        model: Model,
        *,
        span: Span | None = None,
        recalibration: str | None = None,
        level: float = DEFAULT_LEVEL,
        units: Mapping[str, str] | None = None,
        answers: Mapping[str, Mapping[str, str]] | None = None,
        missing: Collection[str] = (),
        at: datetime | None = None,
    ) -> None:
        """`span` may stay None where the model has one horizon; `units` are UCUM codes of columns by field id.

        `answers` says for a field which text (trimmed) stands for which: {"sex": {"1": "male", "2": "female"}}; other
        texts are read as they stand. `missing` are the texts, trimmed, that stand for an empty cell. Raises UsageError
        where horizon, recalibration or level is not on offer or a field is not the model's, and UnitError where a unit
        is not one of the field's.
        """
        self.model = model
        self.span = _settle_span(model, span)
        self.level = check_level(level)
        self._at = at or datetime.now().astimezone()
        chosen, unsettled = settle_choices(model, self.span, recalibration)
        for finding in unsettled:
            raise UsageError(finding.message)
        self.recalibration = chosen
        units, answers = units or {}, answers or {}
        _refuse_foreign(model, {**units, **answers})
        for id, code in units.items():
            _refuse_unit(model, id, code)
        self._sets = FindingSets(field.id for field in model.fields)
        self._texts = {
            field.id: FieldTexts(
                model,
                field,
                self._sets,
                unit=units.get(field.id),
                answers=answers.get(field.id, {}),
                missing=missing,
                at=self._at,
            )
            for field in model.fields
        }
        self._numbered = NumberedRows(model, self.span, chosen, level, self._at, self._sets)
        self._assessed: dict[tuple[str, ...], Assessment] = {}

    @property
    def said_once(self) -> SaidOnce:
        """What goes with every number of this run and is not repeated in each row."""
        return said_once(self.model, self.span, self.recalibration, self.level)

    def score(self, cells: Mapping[str, Cells]) -> ScoredBlock:
        """The block of n rows; `cells` by field id, a field that is not there is unanswered in every row.

        Raises UsageError for a field that the model does not have, and where columns differ in length.
        """
        _refuse_foreign(self.model, cells)
        columns = {id: self._texts[id].read(cells[id]) for id in self._texts if id in cells}
        size = _size_of(columns)
        said = np.zeros(size, dtype=np.intp)
        for column in columns.values():
            if column.table.said.any():
                more = column.table.said[column.at]
                rows = np.flatnonzero(more)
                self._sets.join(said, rows, more[rows])
        possible = possible_in_rows(self.model, columns, size)
        say_contradictions(columns, self._sets, said)
        made = work_out_rows(self.model, columns, possible, self._sets, said)
        say_missing(self.model, columns, possible, self._sets, said)
        equation = _equation_of(possible, size)
        alone = _open_rows(columns, size)
        going = ~self._sets.stops[said] & (equation >= 0) & ~alone
        numbered = self._numbered.predict(
            columns, made, np.where(going, equation, -1), said, lambda row: self._entry_of(columns, row)
        )
        alone[numbered.undecided] = True
        for row in np.flatnonzero(alone):
            self._assess_row(columns, int(row), numbered, said)
        used, place = self._sets.used(said)
        return ScoredBlock(
            probability=numbered.probability,
            lower=numbered.lower,
            upper=numbered.upper,
            equation=equation,
            equations=tuple(one.content.id for one in self.model.equations),
            said=place,
            findings=used,
        )

    def _entry_of(self, columns: Mapping[str, FieldColumn], row: int) -> PatientEntry:
        """One row as somebody would have typed it."""
        typed = {id: self._texts[id].typed(column.table.texts[column.at[row]]) for id, column in columns.items()}
        return PatientEntry({id: text for id, text in typed.items() if text is not None})

    def _assess_row(self, columns: Mapping[str, FieldColumn], row: int, numbered: Numbered, said: Places) -> None:
        """One row by `assess` itself."""
        key = (*columns, *(column.table.texts[column.at[row]] for column in columns.values()))
        result = self._assessed.get(key)
        if result is None:
            if len(self._assessed) >= _MOST_REMEMBERED:
                self._assessed.clear()
            result = self._assessed[key] = assess(
                self.model,
                self._entry_of(columns, row),
                span=self.span,
                recalibration=None if self.recalibration is None else self.recalibration.id,
                level=self.level,
                at=self._at,
                number_only=True,
            )
        once = self.said_once
        said[row] = self._sets.place_of(codes_of(f for f in result.findings if not is_said_once(f, once)))
        estimate = result.estimate
        band = None if estimate is None else estimate.band
        numbered.probability[row] = np.nan if estimate is None else estimate.probability
        numbered.lower[row] = np.nan if band is None else band.lower
        numbered.upper[row] = np.nan if band is None else band.upper


def _settle_span(model: Model, span: Span | None) -> Span:
    if span is None and len(model.spans) == 1:
        return model.spans[0]
    for finding in settle_choices(model, span, None)[1]:
        if finding.code is FindingCode.HORIZON:
            raise UsageError(finding.message)
    assert span is not None
    return span


def _refuse_foreign(model: Model, named: Collection[str]) -> None:
    for id in named:
        if id not in model.by_id:
            raise UsageError(
                f"{id!r} is not a value of this model.",
                why=f"It takes {', '.join(field.id for field in model.fields)}.",
            )


def _refuse_unit(model: Model, id: str, code: str) -> None:
    field = model.by_id[id]
    if not isinstance(field, NumberField):
        raise UsageError(f"{field.label} is a question and has no unit.", do=f"Leave out the unit {code!r}.")
    conversion(field.quantity, code, field.unit, field.factor)


def _size_of(columns: Mapping[str, FieldColumn]) -> int:
    sizes = {id: len(column.at) for id, column in columns.items()}
    if not sizes:
        raise UsageError("there is no column to score.", do="Name a column for at least one value of the model.")
    if len(set(sizes.values())) > 1:
        raise UsageError(
            "the columns differ in length.", why=", ".join(f"{id}: {size}" for id, size in sizes.items()) + "."
        )
    return next(iter(sizes.values()))


def _equation_of(possible: tuple[Rows, ...], size: int) -> Places:
    """The place of the only equation that may apply to a row, −1 where there are several or none, shape (n,)."""
    count = np.zeros(size, dtype=np.int64)
    found = np.full(size, -1, dtype=np.intp)
    for place, rows in enumerate(possible):
        count += rows
        found[rows] = place
    return np.where(count == 1, found, -1)


def _open_rows(columns: Mapping[str, FieldColumn], size: int) -> Rows:
    """The rows in which a value is said not to have been measured: an average is made one by one."""
    found = np.zeros(size, dtype=np.bool_)
    for column in columns.values():
        if (column.table.state == State.OPEN).any():
            found |= column.state == State.OPEN
    return found
