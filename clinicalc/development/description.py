"""The description of a model in TOML: the coefficient file's own fields, and tables for what comes from elsewhere."""

import os
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Annotated, Literal, TypeVar

import msgspec
from msgspec import UNSET, Meta, UnsetType

from clinicalc.coefficients.file_types import Count, FileStruct, Id, Label, Level, Positive, Text
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.toml_reading import Fault, parse_toml, read_text
from clinicalc.errors import DescriptionRefused, Problem

OPEN_END = "open"
_NOT_THE_MODELS = ("fit", "patients", "reconstruct")
_OF_A_STUDY = ("cohort", "estimate")
_LEFT_OUT: Mapping[str, object] = {
    "unconfirmed": [],
    "derived": [],
    "exclusions": [],
    "recalibration_required": False,
    "recalibrations": [],
    "decision_points": [],
    "population": None,
    "documentation": [],
}
"""What a description may leave out, and what the file then says."""


_Table = TypeVar("_Table", bound=FileStruct)


class PrintedLimits(FileStruct, frozen=True):
    """How limits beside a printed survival were made: R's conf.type, and their level."""

    scale: Literal["log-log", "log"]
    level: Level


class FitTable(FileStruct, frozen=True):
    """Where the figures of one equation come from; file names are taken from the description's folder."""

    kind: Literal["logistic", "cloglog", "cox", "fine-gray"]
    coefficients: Text
    covariance: Text | UnsetType = UNSET
    covariance_kind: Literal["model", "robust"] | UnsetType = UNSET
    baseline: Text | UnsetType = UNSET
    reference: dict[str, float] | Literal["zero"] | UnsetType = UNSET
    names: dict[str, Id] | UnsetType = UNSET
    intercept: Text | UnsetType = UNSET
    times: Annotated[tuple[Positive, ...], Meta(min_length=1)] | UnsetType = UNSET
    interval: PrintedLimits | UnsetType = UNSET


class PatientTable(FileStruct, frozen=True):
    """A person for a worked example; figures only where other software printed them."""

    values: dict[Id, Annotated[str, Meta(max_length=80)]]
    probability: float | UnsetType = UNSET
    lower: float | UnsetType = UNSET
    upper: float | UnsetType = UNSET
    tolerance: Positive | UnsetType = UNSET
    source: Text | UnsetType = UNSET
    years: Positive | UnsetType = UNSET
    time: Positive | UnsetType = UNSET
    unit: Label | UnsetType = UNSET
    recalibration: Id | UnsetType = UNSET


class ReconstructEquation(FileStruct, frozen=True):
    """What is printed about one equation beside its intervals; by term id, on the link scale."""

    people: Annotated[int, Meta(ge=1)] | UnsetType = UNSET
    standard_errors: dict[Id, Positive] | UnsetType = UNSET
    means: dict[Id, float] | UnsetType = UNSET


class ReconstructPatient(FileStruct, frozen=True):
    """A patient for whom other assumptions are tried: what to call the patient, and values in the file's units."""

    words: Text
    values: dict[Id, float | str]


class ReconstructTable(FileStruct, frozen=True):
    """How the bands of a published model are to be rebuilt from printed intervals.

    `rows` is a CSV table of reference people, a column for each predictor in the file's units: yes/no as 1 and 0, a
    choice as the place of its answer, from 0.
    """

    seed: Count
    people: Annotated[int, Meta(ge=1)] | UnsetType = UNSET
    survival_limits: Literal["log-log", "log", "plain"] | UnsetType = UNSET
    remarks: tuple[Text, ...] | UnsetType = UNSET
    equations: dict[Id, ReconstructEquation] | UnsetType = UNSET
    rows: Text | UnsetType = UNSET
    rows_source: Text | UnsetType = UNSET
    patients: tuple[ReconstructPatient, ...] | UnsetType = UNSET


class _Beside(FileStruct, frozen=True):
    fit: dict[Id, FitTable] = msgspec.field(default_factory=dict)
    patients: tuple[PatientTable, ...] = ()
    reconstruct: ReconstructTable | UnsetType = UNSET


@dataclass(frozen=True, slots=True)
class Description:
    """A description as it was read.

    `fits` has None where a [fit] table is wrong, which is among the `problems`. `model` is the tree of the coefficient
    file's "model" so far, with JSON's types; what comes from fits is not in it, nor are the worked examples. Names of
    tables are looked for in `folder`. `rebuilds` says that there is a [reconstruct] table, right or wrong.
    """

    name: str
    folder: Path
    model: dict[str, object]
    fits: Mapping[str, FitTable | None]
    patients: tuple[PatientTable, ...]
    reconstruct: ReconstructTable | None = None
    rebuilds: bool = False
    problems: tuple[Problem, ...] = ()

    @property
    def equations(self) -> list[dict[str, object]]:
        """The tables of its equations, as far as they are tables."""
        found = self.model.get("equations")
        return [entry for entry in found if isinstance(entry, dict)] if isinstance(found, list) else []


def read_description(path: Path) -> Description:
    """The description at `path`; its problems are in it. Raises DescriptionRefused where it is no TOML at all."""
    text = read_text(path)
    if isinstance(text, Fault):
        raise DescriptionRefused(path.name or os.fspath(path), (Problem("", text.message),))
    return take_description(text, path.name, path.parent)


def take_description(text: str, name: str, folder: Path) -> Description:
    """The same from a text; tables are looked for in `folder`."""
    tree, problems = parse_description(text, name)
    for key in _OF_A_STUDY:
        if tree.pop(key, None) is not None:
            message = f"a table [{key}] belongs to a study, from which a model is fitted: clinicalc fit {name}."
            problems = (*problems, Problem(f"/{key}", message))
    return describe(tree, name, folder, problems)


def parse_description(text: str, name: str) -> tuple[dict[str, object], tuple[Problem, ...]]:
    """The tree of a text in TOML, with JSON's types, and what in it has no such type. Raises DescriptionRefused."""
    parsed = parse_toml(text, "a description")
    if parsed.tree is None:
        raise DescriptionRefused(name, parsed.problems)
    return parsed.tree, parsed.problems


def describe(tree: Mapping[str, object], name: str, folder: Path, said: tuple[Problem, ...] = ()) -> Description:
    """The description of a parsed tree; problems `said` before stand first among its own."""
    problems = list(said)
    beside = {key: value for key, value in tree.items() if key in _NOT_THE_MODELS}
    _spell_values(beside)
    problems += find_shape_problems(beside, _Beside)
    model = {key: value for key, value in tree.items() if key not in _NOT_THE_MODELS}
    if model.pop("worked_examples", None) is not None:
        problems.append(Problem("/worked_examples", "worked examples are made here: describe people as [[patients]]."))
    return Description(
        name=name,
        folder=folder,
        model=_complete(model),
        fits=_take_fits(beside),
        patients=_take_patients(beside),
        reconstruct=_take(beside.get("reconstruct"), ReconstructTable),
        rebuilds="reconstruct" in beside,
        problems=tuple(problems),
    )


def _take_fits(beside: Mapping[str, object]) -> dict[str, FitTable | None]:
    found = beside.get("fit")
    return {id: _take(table, FitTable) for id, table in found.items()} if isinstance(found, dict) else {}


def _take_patients(beside: Mapping[str, object]) -> tuple[PatientTable, ...]:
    found = beside.get("patients")
    taken = [_take(table, PatientTable) for table in found] if isinstance(found, list) else []
    patients = tuple(patient for patient in taken if patient is not None)
    return patients if len(patients) == len(taken) else ()  # some would stand under another's number


def _take(value: object, kind: type[_Table]) -> _Table | None:
    """The table, or None where it is not there or not of its shape, which is said with all that is wrong."""
    try:
        return msgspec.convert(value, kind)
    except msgspec.ValidationError:
        return None


def _complete(model: dict[str, object]) -> dict[str, object]:
    """The model's tree with what a description may leave out, and open ends of ranges as the file writes them."""
    whole = {**{key: value for key, value in _LEFT_OUT.items() if key not in model}, **model}
    equations = whole.get("equations")
    for equation in equations if isinstance(equations, list) else []:
        if isinstance(equation, dict):
            equation.setdefault("applies_when", {})
    for kind in ("predictors", "derived"):
        parts = whole.get(kind)
        for part in parts if isinstance(parts, list) else []:
            for name in ("derivation", "possible", "usual"):
                if isinstance(part, dict) and isinstance(ends := part.get(name), list):
                    part[name] = [None if end == OPEN_END else end for end in ends]
    return whole


def _spell_values(beside: dict[str, object]) -> None:
    """Values of patients may stand as numbers or truths; a worked example holds what would be typed."""
    patients = beside.get("patients")
    for patient in patients if isinstance(patients, list) else []:
        values = patient.get("values") if isinstance(patient, dict) else None
        if isinstance(values, dict):
            values.update({name: _spell_value(value) for name, value in values.items()})


def _spell_value(value: object) -> object:
    if isinstance(value, bool):
        return "yes" if value else "no"
    return format(Decimal(repr(value)), "f") if isinstance(value, int | float) else value
