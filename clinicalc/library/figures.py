"""Everything a coefficient file states, one figure or text after the other in page order, each with a name of its own.

The walk follows the structs of the schema, so that a field added to the format is never left out of a comparison; only
the words come from tables. Two versions are set against each other by the names (ids, horizons, labels), not by places.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace

import msgspec
from msgspec import UnsetType

from clinicalc.coefficients.file_types import FileStruct
from clinicalc.coefficients.pointers import point
from clinicalc.coefficients.schema import (
    Equation,
    ModelContent,
    Population,
    RecalibrationLine,
    Term,
)
from clinicalc.covariates.term_words import say_term
from clinicalc.library.aspects import Aspect, aspect_of, field_words
from clinicalc.library.naming import name_items, said_by_name


@dataclass(frozen=True, slots=True)
class Ends:
    """Lower and upper end of a range; None leaves a side open."""

    low: float | None
    high: float | None


@dataclass(frozen=True, slots=True)
class Order:
    """The names of the parts of a list, as they follow each other."""

    names: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Texts:
    """A list of texts."""

    items: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Table:
    """A matrix; `cells` gives each figure by the names of its row and its column."""

    rows: tuple[str, ...]
    columns: tuple[str, ...]
    cells: dict[tuple[str, str], float]


Value = str | float | bool | None | Ends | Order | Texts | Table


@dataclass(frozen=True, slots=True)
class Figure:
    """One statement: `key` is the same in every version, `what` says it in words, `path` is its JSON Pointer."""

    key: tuple[str, ...]
    aspect: Aspect
    what: str
    path: str
    value: Value


@dataclass(frozen=True, slots=True)
class _Place:
    key: tuple[str, ...]
    aspect: Aspect
    what: str
    path: str
    names: tuple[str, ...] = ()
    """Of the estimated terms, or of the described numbers: what the rows of a matrix below are about."""

    def below(self, key: str, words: str, aspect: Aspect, *steps: str | int) -> "_Place":
        what = f"{self.what}: {words}" if self.what and words else self.what or words
        return _Place((*self.key, key), aspect, what, point(self.path, *steps), self.names)

    def figure(self, value: Value) -> Figure:
        return Figure(self.key, self.aspect, self.what, self.path, value)


_RANGES = frozenset({"possible", "usual", "derivation"})
_PAGE_ORDER = (
    "id",
    "version",
    "title",
    "outcome",
    "exclusions",
    "predictors",
    "derived",
    "equations",
    "recalibration_required",
    "recalibrations",
    "decision_points",
    "use",
    "source",
    "ancestry",
    "unconfirmed",
    "worked_examples",
    "population",
    "documentation",
)


def list_figures(content: ModelContent) -> tuple[Figure, ...]:
    """Every figure and text of the file in page order, exclusions and questions first; paths begin with "/model"."""
    return tuple(_walk_struct(content, _Place((), Aspect.IDENTITY, "", "/model")))


def _walk(value: object, place: _Place) -> Iterator[Figure]:
    match value:
        case UnsetType():
            return
        case FileStruct():
            yield from _walk_struct(value, place)
        case dict():
            for name in sorted(value):
                yield from _walk(value[name], place.below(name, name, place.aspect, name))
        case tuple():
            yield from _walk_list(value, place)
        case int() if not isinstance(value, bool):
            yield place.figure(float(value))
        case str() | float() | bool() | None:
            yield place.figure(value)
        case _:
            raise TypeError(value)


def _walk_struct(value: FileStruct, place: _Place) -> Iterator[Figure]:
    tag = value.__struct_config__.tag
    if isinstance(tag, str):
        yield place.below("kind", "kind", aspect_of(value, "kind", place.aspect)).figure(tag.replace("_", " "))
    if isinstance(value, Term):
        yield place.below("of", "what it is multiplied with", Aspect.COEFFICIENTS).figure(say_term(value))
    place = replace(place, names=_names_below(value) or place.names)
    said = said_by_name(value)
    for name, encoded in _fields(value):
        if name in said or (isinstance(value, Term) and name in ("product", "sum")):
            continue
        member = getattr(value, name)
        aspect = aspect_of(value, encoded, place.aspect)
        below = place.below(encoded, field_words(value, encoded), aspect, encoded)
        if name in _RANGES and isinstance(member, tuple):
            yield below.figure(Ends(*member))
        else:
            yield from _walk(member, below)


def _walk_list(value: tuple[object, ...], place: _Place) -> Iterator[Figure]:
    if not value:
        return
    if all(isinstance(item, str) for item in value):
        yield place.figure(Texts(tuple(str(item) for item in value)))
    elif all(isinstance(item, FileStruct) for item in value):
        items = [item for item in value if isinstance(item, FileStruct)]
        named = name_items(items)
        yield place.below("order", "order", place.aspect).figure(Order(tuple(key for key, _ in named)))
        for index, (item, (key, words)) in enumerate(zip(items, named, strict=True)):
            above = replace(place, what=place.what.rpartition(": ")[0])
            yield from _walk(item, above.below(key, words, place.aspect, index))
    else:
        yield place.figure(_table_of(value, place))


def _table_of(value: tuple[object, ...], place: _Place) -> Table:
    """The matrix, or the one row, that a list of figures is; rows and columns by name where they have one."""
    matrix = [row if isinstance(row, tuple) else (row,) for row in value]
    width = max((len(row) for row in matrix), default=0)
    columns = _names_or_places(place.names, width) if width > 1 else ("",)
    draws = place.key[-1] in ("coefficients", "baselines") and "uncertainty" in place.key
    rows = _names_or_places((), len(matrix)) if draws else _names_or_places(place.names, len(matrix))
    if draws and place.key[-1] == "baselines":
        columns = _names_or_places((), width)
    cells = {
        (rows[i], columns[j]): float(figure)
        for i, row in enumerate(matrix)
        for j, figure in enumerate(row)
        if isinstance(figure, int | float)
    }
    return Table(rows, columns, cells)


def _names_or_places(names: tuple[str, ...], size: int) -> tuple[str, ...]:
    return names if len(names) == size else tuple(str(place + 1) for place in range(size))


def _names_below(value: FileStruct) -> tuple[str, ...]:
    """What the rows of the matrices below a part of the file are about."""
    if isinstance(value, Equation):
        return tuple(term.id for term in value.terms if term.fixed is not True)
    if isinstance(value, Population):
        return tuple(number.id for number in value.numbers)
    return ("intercept", "slope") if isinstance(value, RecalibrationLine) else ()


def _fields(value: FileStruct) -> list[tuple[str, str]]:
    """Attribute and name in the file of each field, in file order; the model's own in page order."""
    fields = [(field.name, field.encode_name) for field in msgspec.structs.fields(value)]
    if isinstance(value, ModelContent):
        fields.sort(key=lambda field: _PAGE_ORDER.index(field[1]) if field[1] in _PAGE_ORDER else len(_PAGE_ORDER))
    return fields
