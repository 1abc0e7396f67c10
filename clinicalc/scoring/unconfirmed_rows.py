"""Whether unconfirmed figures stand behind the number of each row, asked once for every pattern that can matter."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from clinicalc.assessment.assess import read_entry
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.unconfirmed import Basis, unconfirmed_behind
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.scoring.field_texts import FieldColumn
from clinicalc.scoring.near_cut_rows import CutRows
from clinicalc.scoring.row_patterns import find_patterns
from clinicalc.scoring.scored import Rows


@dataclass(frozen=True, slots=True)
class Mentioned:
    """What of a row an equation's unconfirmed figures can hang on: places of terms, predictors, derived values."""

    terms: tuple[int, ...]
    predictors: tuple[str, ...]
    derived: bool


class UnconfirmedRows:
    """Answers for the rows of one equation, horizon and recalibration; remembers every pattern."""

    def __init__(
        self, model: Model, equation: ModelEquation, span: Span, recalibration: Recalibration | None, at: datetime
    ) -> None:
        """`at` is the moment of the run, by which dated values are judged."""
        self._model = model
        self._equation = equation
        self._span = span
        self._recalibration = recalibration
        self._at = at
        self._known: dict[tuple[int, ...], bool] = {}
        self._mentioned = _mentioned(model, equation)
        # figures behind every result, whoever the patient is
        self._always = self._is_behind(PatientEntry(), frozenset(), frozenset())

    def behind(self, cut: CutRows, columns: Mapping[str, FieldColumn], entry_of: Callable[[int], PatientEntry]) -> Rows:
        """Whether unconfirmed figures are behind each row's number, shape (rows,); `entry_of` gives a row as typed."""
        mentioned = self._mentioned
        if self._always or mentioned == Mentioned((), (), derived=False):
            return np.full(len(cut.rows), self._always)
        values = {id: column[cut.rows] for id, column in cut.values.items()}
        with np.errstate(all="ignore"):
            terms = [self._equation.terms[place].values(values) != 0 for place in mentioned.terms]
        parts = [term.astype(np.int64) for term in terms]
        for id in mentioned.predictors:
            parts += _parts_of(columns.get(id), cut)
        if mentioned.derived:
            parts += [given[cut.rows].astype(np.int64) for given in cut.given.values()]
        first, at = find_patterns(parts, len(cut.rows))
        found = [
            self._of_pattern(tuple(int(part[row]) for part in parts), terms, row, cut, entry_of)
            for row in first.tolist()
        ]
        return np.array(found, dtype=np.bool_)[at]

    def _of_pattern(
        self,
        pattern: tuple[int, ...],
        terms: list[Rows],
        row: int,
        cut: CutRows,
        entry_of: Callable[[int], PatientEntry],
    ) -> bool:
        known = self._known.get(pattern)
        if known is None:
            counted = zip(self._mentioned.terms, terms, strict=True)
            nonzero = frozenset(place for place, term in counted if term[row])
            at = int(cut.rows[row])
            made = frozenset(id for id, given in cut.given.items() if not given[at])
            known = self._known[pattern] = self._is_behind(entry_of(at), nonzero, made)
        return known

    def _is_behind(self, entry: PatientEntry, terms: frozenset[int], worked_out: frozenset[str]) -> bool:
        taken = read_entry(self._model, entry, self._at)
        basis = Basis(
            equation=self._equation,
            span=self._span,
            recalibration=self._recalibration,
            numbers=taken.numbers,
            answers=taken.answers,
            terms=terms,
            worked_out=worked_out,
        )
        return bool(unconfirmed_behind(self._model, basis))


def _mentioned(model: Model, equation: ModelEquation) -> Mentioned:
    terms, predictors, derived = set[int](), set[int](), False
    for entry in model.content.unconfirmed:
        match entry.at.split("/")[1:]:
            case ["equations", place, "terms", term, *_] if int(place) == equation.place:
                terms.add(int(term))
            case ["predictors", place, *rest]:
                predictors.add(int(place))
                # a factor also counts where a worked-out value takes the number in another unit
                derived |= rest[:1] == ["factor"]
            case ["derived", _, *_]:
                derived = True
    ids = tuple(model.content.predictors[place].id for place in sorted(predictors))
    return Mentioned(tuple(sorted(terms)), ids, derived)


def _parts_of(column: FieldColumn | None, cut: CutRows) -> list[np.ndarray[tuple[int], np.dtype[np.int64]]]:
    """Whether a predictor is there, and which answer or which unit it is."""
    if column is None:
        return []
    usable = column.usable[cut.rows].astype(np.int64)
    if isinstance(column.field, NumberField):
        own = [unit == column.field.unit for unit in column.table.units]
        other = ~np.array([*own, True])[column.table.unit[column.at[cut.rows]]]
        return [usable, (other & (usable == 1)).astype(np.int64)]
    return [np.where(usable == 1, column.value[cut.rows] + 1.0, 0.0).astype(np.int64)]
