"""A study file: a description whose equations are fitted to a file of people, instead of naming tables of a fit."""

import os
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TypeVar

import msgspec
from msgspec import UnsetType

from clinicalc.coefficients.pointers import point, quoted, suggest
from clinicalc.coefficients.schema import ModelContent
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.cohort.cohort_tables import BinaryTable, CohortTable, ColumnTable
from clinicalc.cohort.dictionary import DataDictionary
from clinicalc.cohort.dictionary_tables import find_cohort_problems, make_dictionary
from clinicalc.development.description import Description, describe, parse_description
from clinicalc.development.fit import FitKind
from clinicalc.development.package import check_before_fits
from clinicalc.development.places import spell_place
from clinicalc.development.study_equations import find_equation_problems
from clinicalc.development.study_strata import FitPlan, find_strata_problems, spread_strata
from clinicalc.development.study_tables import (
    BootstrapTable,
    EstimateTable,
    ImputationTable,
    StudyTables,
)
from clinicalc.development.study_terms import (
    Tree,
    answers_of,
    find_shorthand_problems,
    parts,
    stand_in_knots,
    write_out,
)
from clinicalc.development.tables import Fault, read_text
from clinicalc.errors import DescriptionRefused, Problem

_TABLES = ("cohort", "estimate", "imputation", "bootstrap")

_Table = TypeVar("_Table", ImputationTable, BootstrapTable)


@dataclass(frozen=True, slots=True, eq=False)
class Study:
    """A study without a fault of its own; what is in its people nobody has looked at yet.

    `description` is the model as far as the study says it: an equation for each stratum, shorthands of terms still as
    they stand. `content` is the same in the file's shape, with stand-ins for what is fitted. `fits` are what is to be
    fitted, `dictionary` what the columns of `cohort_file` mean.
    """

    name: str
    description: Description
    content: ModelContent
    dictionary: DataDictionary
    cohort_file: Path
    fits: tuple[FitPlan, ...]
    imputation: ImputationTable | None = None
    bootstrap: BootstrapTable | None = None


def read_study(path: Path) -> Study:
    """The study at `path`. Raises DescriptionRefused with every problem, each at its place in the file."""
    text = read_text(path)
    if isinstance(text, Fault):
        raise DescriptionRefused(path.name or os.fspath(path), (Problem("", text.message),))
    return take_study(text, path.name, path.parent)


def take_study(text: str, name: str, folder: Path) -> Study:
    """The same from a text; the file of people is looked for in `folder`."""
    tree, problems = parse_description(text, name)
    said = [*problems, *_find_strange_tables(tree)]
    beside = {key: tree[key] for key in _TABLES if key in tree}
    known = (*_model_fields(), "patients")
    model = {key: value for key, value in tree.items() if key in known}
    description = describe(model, name, folder)
    said += find_shape_problems(beside, StudyTables)
    cohort, tables = _take_cohort(beside), _take_estimates(beside)
    shorthands = list(find_shorthand_problems(description.model))
    said += shorthands
    answers = answers_of(description.model)
    said += find_equation_problems(description.model, tables, cohort, beside)
    said += find_strata_problems(description.model, tables, answers)
    said += find_cohort_problems(cohort or _take_columns(beside), _all_answers(description.model))
    placed = [Problem(spell_place(problem.path, description.model), problem.message) for problem in said]
    spread, plans = spread_strata(_with_links(description.model, tables), tables, answers)
    description = replace(description, model=spread)
    content, found = check_before_fits(_stood_in(description, answers))
    # an equation whose terms could not be written out has none left, which is no other problem
    placed += [problem for problem in found if not (shorthands and problem.message.startswith('the field "terms"'))]
    if placed or content is None or cohort is None:
        raise DescriptionRefused(name, tuple(dict.fromkeys(placed)))
    ids = tuple(predictor.id for predictor in content.predictors)
    dictionary = make_dictionary(cohort, ids, _cluster_of(tables))
    return Study(
        name=name,
        description=description,
        content=content,
        dictionary=dictionary,
        cohort_file=folder / cohort.file,
        fits=plans,
        imputation=_take_table(beside, "imputation", ImputationTable),
        bootstrap=_take_table(beside, "bootstrap", BootstrapTable),
    )


def _stood_in(description: Description, answers: Mapping[str, tuple[str, ...]]) -> Description:
    """The description with its shorthands written out by stand-in knots, and all fits still to come."""
    equations = description.model.get("equations")
    model = dict(description.model)
    if isinstance(equations, list):
        model["equations"] = [
            write_out(equation, answers, stand_in_knots) if isinstance(equation, dict) else equation
            for equation in equations
        ]
    ids = [str(equation.get("id")) for equation in description.equations]
    return replace(description, model=model, fits=dict.fromkeys(ids))


def _find_strange_tables(tree: Mapping[str, object]) -> Iterator[Problem]:
    known = [*_model_fields(), *_TABLES, "patients"]
    for key in tree:
        if key == "fit":
            yield Problem("/fit", "a study is fitted here: say how in [estimate.…], or use clinicalc package.")
        elif key == "reconstruct":
            yield Problem("/reconstruct", "a study has a band of its own, and nothing is rebuilt. Leave this out.")
        elif key == "worked_examples":
            yield Problem("/worked_examples", "worked examples are made here: describe people as [[patients]].")
        elif key not in known:
            yield Problem(point("", key), f"the field {quoted(key)} is not known here.{suggest(key, known)}")


def _model_fields() -> tuple[str, ...]:
    return tuple(field.encode_name for field in msgspec.structs.fields(ModelContent) if field.name != "worked_examples")


def _take_cohort(beside: Mapping[str, object]) -> CohortTable | None:
    try:
        return msgspec.convert(beside.get("cohort"), CohortTable)
    except msgspec.ValidationError:  # said with all that is wrong of its shape
        return None


def _take_table(beside: Mapping[str, object], name: str, kind: type[_Table]) -> _Table | None:
    """A table that may be left out; its faults have been said."""
    return msgspec.convert(beside[name], kind) if name in beside else None


def _take_columns(beside: Mapping[str, object]) -> CohortTable:
    """The columns of a [cohort] that has another fault, with no outcome that anything could be said of."""
    cohort = beside.get("cohort")
    tables = cohort.get("columns") if isinstance(cohort, dict) else None
    try:
        columns = msgspec.convert(tables or {}, dict[str, ColumnTable])
    except msgspec.ValidationError:
        columns = {}
    return CohortTable(file="-", outcome=BinaryTable(column="-", event="1"), columns=columns)


def _take_estimates(beside: Mapping[str, object]) -> dict[str, EstimateTable]:
    found = beside.get("estimate")
    taken = {}
    for id, table in (found if isinstance(found, dict) else {}).items():
        try:
            taken[id] = msgspec.convert(table, EstimateTable)
        except msgspec.ValidationError:
            continue
    return taken


def _all_answers(model: Mapping[str, object]) -> dict[str, tuple[str, ...] | None]:
    answers = answers_of(model)
    return {str(part["id"]): answers.get(str(part["id"])) for part in parts(model, "predictors") if "id" in part}


def _with_links(model: Mapping[str, object], tables: Mapping[str, EstimateTable]) -> Tree:
    """The model with the link of each fit; one that is said otherwise has been found."""
    equations = model.get("equations")
    if not isinstance(equations, list):
        return dict(model)
    filled: list[object] = []
    for equation in equations:
        table = tables.get(str(equation.get("id"))) if isinstance(equation, dict) else None
        filled.append(equation if table is None else {**equation, "link": FitKind(table.kind).link})
    return {**model, "equations": filled}


def _cluster_of(tables: Mapping[str, EstimateTable]) -> str:
    return next((table.cluster for table in tables.values() if not isinstance(table.cluster, UnsetType)), "")
