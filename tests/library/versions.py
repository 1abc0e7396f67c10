"""Further versions of shipped coefficient files: the same file with figures and texts changed in the parsed JSON."""

import json
from collections.abc import Callable
from typing import Any

import msgspec

from clinicalc.assessment.model import Model, prepare_model
from clinicalc.assessment.proof import load_model_bytes, recompute
from clinicalc.coefficients.reader import ReadFile, read_bytes
from clinicalc.coefficients.schema import CoefficientFile, ModelContent
from clinicalc.resources import read_shipped

Tree = Any


def tree_of(id: str) -> Tree:
    """The parsed file, to be changed freely."""
    return json.loads(read_shipped(f"example_models/{id}.json"))


def spell(tree: Tree) -> bytes:
    """The bytes of a changed file."""
    return json.dumps(tree, ensure_ascii=False).encode()


def changed(id: str, change: Callable[[Tree], None]) -> bytes:
    """The bytes of a shipped file after a change of its "model"."""
    tree = tree_of(id)
    change(tree["model"])
    return spell(tree)


def version_of(id: str, change: Callable[[Tree], None]) -> ReadFile:
    """The changed file, read and checked; its worked examples need not come out."""
    return read_bytes(changed(id, change), f"{id}.json")


def proved(id: str, change: Callable[[Tree], None]) -> bytes:
    """The changed file with its worked examples stating what the changed file itself computes."""
    tree = tree_of(id)
    change(tree["model"])
    content = CoefficientFile("clinicalc.coefficients/1", msgspec.convert(tree["model"], ModelContent), ())
    model = prepare_model(ReadFile("draft", content, b"", ""))
    for example, stated in zip(content.model.worked_examples, tree["model"]["worked_examples"], strict=True):
        estimate = recompute(model, example).estimate
        assert estimate is not None
        stated |= {"probability": estimate.probability, "tolerance": 1e-9, "computed": True}
        stated.pop("from_memory", None)
        if estimate.band is not None and "lower" in stated:
            stated |= {"lower": estimate.band.lower, "upper": estimate.band.upper}
    return spell(tree)


def model_of(id: str, change: Callable[[Tree], None]) -> Model:
    """The changed file, read, checked and proved."""
    return load_model_bytes(proved(id, change), f"{id}.json")
