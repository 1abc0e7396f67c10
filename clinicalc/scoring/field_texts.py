"""What every distinct text of one field's column comes to: read once, looked up for each cell."""

import re
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.assess import read_entry
from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.findings import FindingCode
from clinicalc.assessment.limits import giving_limits
from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import Limits
from clinicalc.covariates.transforms import Column
from clinicalc.scoring.cell_texts import TextPlaces, code_cells
from clinicalc.scoring.finding_sets import FindingSets, codes_of
from clinicalc.scoring.scored import Cells, CodedTexts, Places, Rows
from clinicalc.units.conversion import conversion

MOST_KEPT = 200_000
"""Distinct texts of a field that are kept from block to block; beyond, they are read anew."""

_MANY = 256
"""New texts from which it pays to look for plain decimals among them."""

_PLAIN = re.compile(r"[0-9]{1,15}(?:\.([0-9]{1,15}))?")
_RANGE_CODES = frozenset({FindingCode.UNUSUAL, FindingCode.OUTSIDE_DERIVATION})


class State(IntEnum):
    """What a cell holds."""

    EMPTY = 0
    USABLE = 1
    UNUSABLE = 2
    OPEN = 3


TEXT_RECORD = np.dtype(
    [
        ("state", np.int8),
        ("value", np.float64),
        ("number", np.float64),
        ("half", np.float64),
        ("unit", np.int8),
        ("whole_years", np.bool_),
        ("ranged", np.bool_),
        ("said", np.intp),
    ]
)
"""What a text comes to. `value`: in the file's unit, or an answer's code, NaN where nothing is usable; `number`: the
reading in the unit it was taken in, whose place among the units met is `unit`; `half`: half a unit of its last digit,
in the file's unit; `whole_years`: completed years of age; `ranged`: out of the usual or derivation range; `said`: the
place of what is said of it among the finding sets."""


@dataclass(frozen=True, slots=True, eq=False)
class TextTable:
    """The distinct texts of a field so far, shape (texts,) each: what they come to, and the units met among them."""

    texts: Sequence[str]
    units: tuple[str, ...]
    state: NDArray[np.int8]
    value: Column
    number: Column
    half: Column
    unit: NDArray[np.int8]
    whole_years: Rows
    ranged: Rows
    said: Places

    @property
    def usable_everywhere(self) -> bool:
        """Whether every text met so far holds a value that can be used."""
        return bool((self.state == State.USABLE).all())


@dataclass(frozen=True, slots=True, eq=False)
class FieldColumn:
    """One field's cells: for each its text's place in the table, its state, and its value (NaN: none), shape (n,)."""

    field: Field
    table: TextTable
    at: Places
    state: NDArray[np.int8]
    value: Column

    @property
    def usable(self) -> Rows:
        """Whether each cell holds a value that can be used."""
        usable: Rows = self.state == State.USABLE
        return usable


class FieldTexts:
    """Reads one field's columns, block after block."""

    def __init__(
        self,
        model: Model,
        field: Field,
        sets: FindingSets,
        *,
        unit: str | None,
        answers: Mapping[str, str],
        missing: Collection[str],
        at: datetime,
    ) -> None:
        """`unit` is the UCUM code of the column (None: the file's); `answers` and `missing` as for a `Scorer`."""
        self.field = field
        self._model = model
        self._sets = sets
        self._unit = unit
        self._answers = dict(answers)
        self._missing = frozenset(missing)
        self._at = at
        self._forget()

    def read(self, cells: Cells) -> FieldColumn:
        """The column of these cells."""
        if len(self._places.texts) > MOST_KEPT:
            self._forget()
        coded = code_cells(cells)
        if isinstance(coded, CodedTexts):
            own = np.fromiter(map(self._places.__getitem__, (*coded.distinct, "")), np.intp, len(coded.distinct) + 1)
            at = own[np.asarray(coded.at)]
        else:
            at = np.fromiter(map(self._places.__getitem__, coded), np.intp, len(coded))
        table = self._table = self._grown()
        return FieldColumn(self.field, table, at, table.state[at], table.value[at])

    def typed(self, text: str) -> Typed | None:
        """What stands for a text in a patient's entry, None where it is an empty cell."""
        trimmed = text.strip()
        if not trimmed or trimmed in self._missing:
            return None
        return Typed(self._answers.get(trimmed, text), self._unit)

    def _forget(self) -> None:
        self._places = TextPlaces()
        self._units: list[str] = []
        self._table = self._table_of(np.zeros(0, dtype=TEXT_RECORD))
        self._records = np.zeros(0, dtype=TEXT_RECORD)

    def _grown(self) -> TextTable:
        """The table with the texts that are new."""
        texts = self._places.texts
        known = len(self._records)
        if known == len(texts):
            return self._table
        more = np.zeros(len(texts) - known, dtype=TEXT_RECORD)
        done = self._read_plain(texts[known:], more) if len(more) >= _MANY else np.zeros(len(more), dtype=np.bool_)
        for place in np.flatnonzero(~done).tolist():
            self._read_one(texts[known + place], more, place)
        self._records = np.concatenate([self._records, more])
        return self._table_of(self._records)

    def _table_of(self, records: NDArray[np.void]) -> TextTable:
        columns = {name: np.ascontiguousarray(records[name]) for name in TEXT_RECORD.names or ()}
        return TextTable(texts=self._places.texts, units=tuple(self._units), **columns)

    def _read_one(self, text: str, into: NDArray[np.void], place: int) -> None:
        """One text, read as an entry of which it is all."""
        typed = self.typed(text)
        into["value"][place] = np.nan
        if typed is None:
            into["state"][place] = State.EMPTY
            return
        taken = read_entry(self._model, PatientEntry({self.field.id: typed}), self._at)
        into["said"][place] = self._sets.place_of(codes_of(taken.findings))
        into["ranged"][place] = any(finding.code in _RANGE_CODES for finding in taken.findings)
        into["state"][place] = State.OPEN if taken.open else State.UNUSABLE
        for answer in taken.answers.values():
            into["state"][place], into["value"][place] = State.USABLE, answer.code
        for number in taken.numbers.values():
            into["state"][place], into["value"][place] = State.USABLE, number.value
            into["number"][place], into["half"][place] = number.reading.number, number.half
            into["unit"][place] = self._place_of_unit(number.unit)
            into["whole_years"][place] = number.counts_completed_years

    def _read_plain(self, texts: Sequence[str], into: NDArray[np.void]) -> Rows:
        """The plain decimals of which nothing is to be said, all at once; tells which texts these were.

        Digits are turned into a float as `read_value` does it, and limits are met with room to spare.
        """
        field = self.field
        found = [_PLAIN.fullmatch(text) for text in texts]
        done = np.array([match is not None for match in found])
        if not isinstance(field, NumberField) or not field.may_be_typed:
            return np.zeros(len(texts), dtype=np.bool_)
        done &= np.array([text not in self._missing and text not in self._answers for text in texts])
        plain = np.flatnonzero(done)
        code = self._unit or field.unit
        into_file = conversion(field.quantity, code, field.unit, field.factor)
        number = np.array([float(texts[place]) + 0.0 for place in plain.tolist()])
        decimals = np.array([len(match[1] or "") for match in found if match is not None], dtype=np.intp)
        decimals = decimals[done[[place for place, match in enumerate(found) if match is not None]]]
        value = np.asarray(into_file.apply(number))
        inside = np.ones(len(plain), dtype=np.bool_)
        for limits in (field.possible, field.usual, field.derivation, giving_limits(field)):
            inside &= _well_within(value, limits)
        plain, number, value, decimals = plain[inside], number[inside], value[inside], decimals[inside]
        last = np.array([float(f"1e-{k}") for k in range(16)])[decimals]
        into["state"][plain], into["value"][plain], into["number"][plain] = State.USABLE, value, number
        into["half"][plain] = abs(into_file.scale) * 0.5 * last
        into["unit"][plain] = self._place_of_unit(code)
        into["whole_years"][plain] = (field.quantity.id == "age") & (decimals == 0)
        done[:] = False
        done[plain] = True
        return done

    def _place_of_unit(self, code: str) -> int:
        if code not in self._units:
            self._units.append(code)
        return self._units.index(code)


def _well_within(column: Column, limits: Limits) -> Rows:
    low, high = limits
    inside = np.ones(len(column), dtype=np.bool_)
    if low is not None:
        inside &= column >= low
    if high is not None:
        inside &= column <= high
    return inside
