"""Which column of the table holds which field of the model, in which unit, and which columns are kept."""

from collections.abc import Mapping, Sequence, Set
from dataclasses import dataclass, field

from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.coefficients.pointers import listed, quoted, suggest
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.errors import UnitError, UsageError
from clinicalc.scoring.cell_reading import CellReading, reading_of
from clinicalc.scoring.output_forms import RESULT_NAMES
from clinicalc.scoring.row_blocks import Wanted
from clinicalc.units.conversion import conversion
from clinicalc.units.unit import find_close_spellings, find_unit


@dataclass(frozen=True, slots=True)
class ColumnWishes:
    """What was asked for, by field id: the names of columns, units as typed, and what a study says of its columns.

    `same` are texts that hold in every row, for fields that have no column, as they would be typed for `assess`.
    `missing` are texts that stand for an empty cell in every column; `keep` None is the table's first column.
    """

    columns: Mapping[str, str] = field(default_factory=dict)
    units: Mapping[str, str] = field(default_factory=dict)
    entries: Mapping[str, ColumnEntry] = field(default_factory=dict)
    same: Mapping[str, str] = field(default_factory=dict)
    missing: tuple[str, ...] = ()
    keep: tuple[str, ...] | None = None


@dataclass(frozen=True, slots=True)
class ChosenColumns:
    """What is read and kept; `units` are UCUM codes of columns that do not stand in the file's own.

    `without` are the fields that no column holds, unanswered in every row.
    """

    wanted: Wanted
    units: Mapping[str, str]
    readings: Mapping[str, CellReading]
    same: Mapping[str, str]
    without: tuple[str, ...]

    @property
    def words(self) -> tuple[tuple[str, str], ...]:
        """What is said of each field's column, by field id: to be compared with that of another run."""
        return tuple(
            (id, f"{name} [{self.units.get(id, '')}] {self.readings[id].words}")
            for id, name in sorted(self.wanted.fields.items())
        ) + tuple(sorted(self.same.items()))


def choose_columns(model: Model, file: str, names: Sequence[str], decimal: str, wishes: ColumnWishes) -> ChosenColumns:
    """The columns of a table that has these names.

    Raises UsageError for a field, a column or a unit that there is not, a unit that the field does not take, and where
    no row could have a number because a column is lacking.
    """
    fields = _find_columns(model, file, names, wishes)
    _require_enough(model, file, names, {*fields, *wishes.same})
    keep = wishes.keep if wishes.keep is not None else tuple(names[:1])
    _require_kept(file, names, keep)
    given = {id: entry.unit for id, entry in wishes.entries.items() if entry.unit} | dict(wishes.units)
    units = {id: _find_code(model, id, text) for id, text in given.items() if id in fields}
    readings = {id: reading_of(model.by_id[id], wishes.entries.get(id), decimal, wishes.missing) for id in fields}
    held = {*fields, *wishes.same, *(one.id for one in model.derived)}
    without = tuple(one.id for one in model.fields if one.id not in held)
    return ChosenColumns(Wanted(fields, keep), units, readings, wishes.same, without)


def _find_columns(model: Model, file: str, names: Sequence[str], wishes: ColumnWishes) -> dict[str, str]:
    known = [one.id for one in model.fields]
    for id in (*wishes.columns, *wishes.units, *wishes.entries, *wishes.same):
        if id not in known:
            raise UsageError(
                f"{quoted(id)} is not a field of this model.{suggest(id, known)}",
                do=f"Its fields are {', '.join(known)}.",
            )
    asked = {id: entry.column for id, entry in wishes.entries.items()} | dict(wishes.columns)
    for id, name in asked.items():
        if name not in names and (id in wishes.columns or id not in wishes.same):
            raise UsageError(
                f"{file} has no column {quoted(name)}, which should hold {id}.{suggest(name, names)}",
                do=f"Its columns are {listed(map(quoted, names))}.",
            )
    for id in wishes.same:
        if id in wishes.columns:
            raise UsageError(f"{id} is given a column and a value for all rows.", do="Give one of the two.")
    open = [id for id in known if id not in wishes.same]
    found = {id: asked.get(id, id) for id in open if asked.get(id, id) in names}
    for id in wishes.units:
        if id not in found:
            raise UsageError(
                f"a unit is given for {id}, and {file} has no column for it.", do=f"Say --column {id}=NAME, too."
            )
    return found


def _require_enough(model: Model, file: str, names: Sequence[str], held: Set[str]) -> None:
    """Nothing where some equation may have all that it needs."""
    unasked = [one.id for one in model.exclusions if one.id not in held]
    lacking = [[*unasked, *_find_lacking(model, equation, held)] for equation in model.equations]
    if all(lacking):
        least = min(lacking, key=len)
        first = least[0]
        value = "no" if first in unasked else "VALUE"
        raise UsageError(
            f"{file} has no column for {listed(map(quoted, least))}, without which this model gives no number."
            f"{suggest(first, names)}",
            do=f"Name its column, --column {first}=NAME, or say {first}={value} where that holds for everybody.",
        )


def _find_lacking(model: Model, equation: ModelEquation, held: Set[str]) -> list[str]:
    lacking: dict[str, None] = {}
    derived = {one.id: one for one in model.derived}
    for id in sorted({*equation.uses, *equation.content.applies_when} - held):
        sources = derived[id].sources if id in derived else ()
        lacking |= dict.fromkeys([one for one in sources if one not in held] if sources else [id])
    return list(lacking)


def _require_kept(file: str, names: Sequence[str], keep: Sequence[str]) -> None:
    for name in keep:
        if name not in names:
            raise UsageError(
                f"{file} has no column {quoted(name)} that could be kept.{suggest(name, names)}",
                do=f"Its columns are {listed(map(quoted, names))}.",
            )
        if name in RESULT_NAMES:
            raise UsageError(
                f"a column called {quoted(name)} cannot be kept beside the new one of that name.",
                do="Rename it in the table, or leave it out.",
            )
        if list(keep).count(name) > 1:
            raise UsageError(f"the column {quoted(name)} is kept twice.", do="Name each column once.")


def _find_code(model: Model, id: str, text: str) -> str:
    """The UCUM code of a unit as typed. Raises UsageError and UnitError."""
    of = model.by_id[id]
    if isinstance(of, QuestionField):
        raise UsageError(f"{id} is a question, and its answers have no unit.", do="Leave the unit out.")
    assert isinstance(of, NumberField)
    unit = find_unit(text)
    if unit is None:
        close = find_close_spellings(text)
        hint = f" Did you mean {' or '.join(close)}?" if close else ""
        raise UsageError(
            f"{quoted(text)}, the unit of {id}, is not known.{hint}",
            do=f"This field takes {', '.join(of.quantity.units)}.",
        )
    try:
        conversion(of.quantity, unit.code, of.unit, of.factor)
    except UnitError as refusal:
        raise UsageError(f"the column of {id} cannot be taken in {quoted(text)}.", why=str(refusal)) from refusal
    return unit.code
