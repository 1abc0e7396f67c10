"""Studies written as a researcher would, and run from the file of people to the coefficient file."""

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

import numpy as np

from clinicalc.development.package import Package
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study, package_study
from tests.development.describing import Tree, bare_number, linear_terms, plain_model, spell_toml


def write_people(path: Path, columns: Mapping[str, Any]) -> None:
    """A CSV file of people, from columns of one length: numbers with all their digits, NaN as an empty cell."""
    lines = [",".join(columns)]
    lines += [",".join(map(_cell, row)) for row in zip(*columns.values(), strict=True)]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def write_study(folder: Path, tree: Mapping[str, Any]) -> Path:
    """The study in a file of that folder."""
    path = folder / "study.toml"
    path.write_text(spell_toml(tree), encoding="utf-8")
    return path


def plain_study(
    predictors: Sequence[Tree | str],
    outcome: Tree,
    estimate: Tree,
    *,
    horizons: Sequence[Tree] = ({"years": 1},),
    terms: Sequence[Tree] | None = None,
    **more: Any,
) -> Tree:
    """A study with one equation, `all`, of a line in each predictor unless `terms` are given."""
    asked = [bare_number(part) if isinstance(part, str) else part for part in predictors]
    ids = [str(part["id"]) for part in asked]
    equation = {
        "id": "all",
        "competing_events": {"handled": "not_applicable"},
        "horizons": list(horizons),
        "terms": linear_terms(ids) if terms is None else list(terms),
    }
    cohort = {"file": "people.csv", "outcome": outcome}
    return plain_model("A fit in a test.", asked, [equation]) | {"cohort": cohort, "estimate": {"all": estimate}} | more


def timed(unit: str = "d", **more: Any) -> Tree:
    """An outcome in columns `time` and `status`: 1 the event, 0 censored."""
    return {
        "kind": "time_to_event",
        "time": "time",
        "unit": unit,
        "status": "status",
        "event": "1",
        "censored": "0",
    } | more


BINARY = {"kind": "binary", "column": "y", "event": "1", "no_event": "0"}


def run_study(path: Path) -> Package:
    """The package of a study, by the verbs that window and command use."""
    study, course = open_study(path), Course()
    return package_study(fit_study(study, check_data(study, course), course), course)


def _cell(value: object) -> str:
    if isinstance(value, float | np.floating):
        return "" if np.isnan(value) else repr(float(value))
    return str(value)
