"""Descriptions and tables of fits, written as a researcher and R would write them."""

import json
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

Tree = dict[str, Any]


def spell_toml(tree: Mapping[str, Any]) -> str:
    """A tree as TOML: one line for each top-level name, tables inside it inline."""
    return "".join(f"{_key(name)} = {_value(value)}\n" for name, value in tree.items())


def write_description(folder: Path, tree: Mapping[str, Any]) -> Path:
    """The description in a file of that folder."""
    path = folder / "description.toml"
    path.write_text(spell_toml(tree), encoding="utf-8")
    return path


def write_matrix(path: Path, names: Sequence[str], rows: Sequence[Sequence[float]]) -> None:
    """As R's write.csv(vcov(fit), path)."""
    lines = [",".join(['""', *map(json.dumps, names)])]
    lines += [",".join([json.dumps(name), *map(repr, map(float, row))]) for name, row in zip(names, rows, strict=True)]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def write_vector(path: Path, figures: Mapping[str, float]) -> None:
    """As R's write.csv(coef(fit), path)."""
    lines = ['"","x"', *(f"{json.dumps(name)},{float(figure)!r}" for name, figure in figures.items())]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def write_rows(path: Path, names: Sequence[str], rows: Sequence[Sequence[float]]) -> None:
    """As R's write.csv(table, path, row.names = FALSE)."""
    lines = [",".join(map(json.dumps, names)), *(",".join(map(repr, map(float, row))) for row in rows)]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def plain_model(source: str, predictors: Sequence[Tree], equations: Sequence[Tree]) -> Tree:
    """All else that a description must say."""
    return {
        "id": "described-fit",
        "version": "1.0.0",
        "title": "Described fit",
        "outcome": "The outcome of the fit.",
        "source": {"kind": "local", "citation": source},
        "use": {
            "population": "The rows the fit was made from.",
            "setting": "Tests of the program.",
            "not_for": ["patients"],
            "not_used": [],
            "cautions": [],
            "plain": {"outcome": "the outcome", "cautions": []},
        },
        "predictors": list(predictors),
        "equations": list(equations),
    }


def bare_number(name: str) -> Tree:
    """A predictor without limits."""
    return {"id": name, "label": name, "kind": "number", "quantity": "number", "unit": "1", "group": "Values"}


def linear_terms(names: Sequence[str]) -> list[Tree]:
    """One untransformed term a predictor, without its coefficient."""
    return [{"id": name, "product": [{"of": name}]} for name in names]


def _key(name: str) -> str:
    return name if name.replace("_", "a").replace("-", "a").isalnum() and name.isascii() else json.dumps(name)


def _value(value: Any) -> str:
    if isinstance(value, Mapping):
        return "{" + ", ".join(f"{_key(name)} = {_value(item)}" for name, item in value.items()) + "}"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(map(_value, value)) + "]"
    return repr(value) if isinstance(value, float) else json.dumps(value, ensure_ascii=False)
