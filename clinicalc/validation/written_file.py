"""A validation file, or the people of a study file, as it was written: before its model is known."""

import os
from collections.abc import Iterator, Mapping
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

import msgspec
from msgspec import UnsetType

from clinicalc.coefficients.pointers import point, quoted, suggest
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.spans import TIME_UNITS, span_of
from clinicalc.coefficients.toml_reading import Fault, parse_toml, read_text
from clinicalc.cohort.cohort_tables import TimeToEventTable
from clinicalc.errors import Problem, ValidationRefused
from clinicalc.validation.validation_tables import HorizonTable, ValidationCohortTable, ValidationTables

_OF_A_STUDY = ("estimate", "equations", "predictors")


@dataclass(frozen=True, slots=True, eq=False)
class ValidationFile:
    """A validation file as it was read.

    `model_file` is where the coefficient file should be (None where none is named: a call has to). `of_study` says that
    this is a study file, of which only its people are taken. `tables` are as they stand, stand-ins in the place of what
    has not its shape. `problems` are all that can be said without the model; `settle_validation` raises them together
    with the rest, `refuse` without.
    """

    name: str
    folder: Path
    model_file: Path | None
    tables: ValidationTables
    of_study: bool
    problems: tuple[Problem, ...]

    def refuse(self) -> None:
        """Raises ValidationRefused with the problems so far, if there are any."""
        if self.problems:
            raise ValidationRefused(self.name, self.problems)


def read_validation_file(path: Path) -> ValidationFile:
    """The file at `path`, a validation file or a study file; its problems are in it.

    Raises ValidationRefused where it cannot be read or is no TOML at all.
    """
    text = read_text(path)
    if isinstance(text, Fault):
        raise ValidationRefused(path.name or os.fspath(path), (Problem("", text.message),))
    return take_validation(text, path.name, path.parent)


def take_validation(text: str, name: str, folder: Path) -> ValidationFile:
    """The same from a text; model and people are looked for in `folder`."""
    parsed = parse_toml(text, "a validation file")
    if parsed.tree is None:
        raise ValidationRefused(name, parsed.problems)
    tree = parsed.tree
    of_study = any(key in tree for key in _OF_A_STUDY)
    if of_study:
        tree = {key: value for key, value in tree.items() if key == "cohort"}
    said = [*parsed.problems, *_find_problems(tree)]
    model = tree.get("model")
    return ValidationFile(
        name=name,
        folder=folder,
        model_file=folder / model if isinstance(model, str) and model else None,
        tables=_take_tables(tree),
        of_study=of_study,
        problems=tuple(Problem(spell_place(one.path), one.message) for one in said),
    )


def spell_place(path: str) -> str:
    """A pointer into the file as a reader finds it there: cohort.columns.age, horizons 2."""
    words: list[str] = []
    for part in path.split("/")[1:]:
        key = part.replace("~1", "/").replace("~0", "~")
        if key.isdigit() and words:
            words[-1] += f" {int(key) + 1}"
        else:
            words.append(key)
    return ".".join(words)


def _take_tables(tree: Mapping[str, object]) -> ValidationTables:
    """The tables, so that what is right of them can be held against the model; the rest has been found wrong."""
    taken: dict[str, object] = {"cohort": _take_cohort(tree.get("cohort"))}
    for field in msgspec.structs.fields(ValidationTables):
        if field.encode_name in tree and field.name != "cohort":
            with suppress(msgspec.ValidationError):
                taken[field.name] = msgspec.convert(tree[field.encode_name], field.type)
    return ValidationTables(**taken)  # type: ignore[arg-type]


def _take_cohort(tree: object) -> ValidationCohortTable:
    taken: dict[str, object] = {"file": "-", "outcome": TimeToEventTable(status="-", event="1", time="-", unit="a")}
    for field in msgspec.structs.fields(ValidationCohortTable):
        if isinstance(tree, dict) and field.encode_name in tree:
            with suppress(msgspec.ValidationError):
                taken[field.name] = msgspec.convert(tree[field.encode_name], field.type)
    return ValidationCohortTable(**taken)  # type: ignore[arg-type]


def _find_problems(tree: Mapping[str, object]) -> Iterator[Problem]:
    known = [field.encode_name for field in msgspec.structs.fields(ValidationTables)]
    if isinstance(tree.get("cohort"), str):
        yield Problem("/cohort", 'who these people are stands in the table: [cohort], words = "…".')
        tree = {**tree, "cohort": {"file": "-", "outcome": {"kind": "binary", "column": "-", "event": "1"}}}
    for key in tree:
        if key not in known:
            yield Problem(point("", key), f"the field {quoted(key)} is not known here.{suggest(key, known)}")
    yield from find_shape_problems({key: value for key, value in tree.items() if key in known}, ValidationTables)
    horizons = tree.get("horizons")
    for place, entry in enumerate(horizons if isinstance(horizons, list) else []):
        try:
            table = msgspec.convert(entry, HorizonTable)
        except msgspec.ValidationError:
            continue
        if span_of(table) is None or (not isinstance(table.unit, UnsetType) and table.unit not in TIME_UNITS):
            units = ", ".join(quoted(code) for code in TIME_UNITS)
            said = f"a horizon is years = ..., or time = ... with unit = one of {units}."
            yield Problem(point("/horizons", place), said)
