"""The two small models as trees, the places in them, and what must be said when one is spoilt."""

from typing import Any

from tests.coefficients.tiny_model import Tree, changed, refusals, tiny_cloglog_model, tiny_logit_model, tree_of

LOGIT = tree_of(tiny_logit_model())
CLOGLOG = tree_of(tiny_cloglog_model())
E0 = "/model/equations/0"
E1 = "/model/equations/1"
BAND = f"{E0}/uncertainty"
W0 = "/model/worked_examples/0"
STEP = f"{E0}/terms/0/product/0/steps"
NONE = {"basis": "none", "because": "It is invented."}
BMI: Tree = {
    "id": "bmi",
    "label": "Body mass index",
    "quantity": "body_mass_index",
    "unit": "kg/m2",
    "equation": "body_mass_index",
    "inputs": {"weight": "weight", "height": "height"},
}
Change = tuple[str, Any]


def said(tree: Tree, path: str, words: str, *changes: Change) -> None:
    found = refusals(changed(tree, *changes))
    assert path in found, found
    assert words in found[path]


def only_said(tree: Tree, path: str, words: str, *changes: Change) -> None:
    said(tree, path, words, *changes)
    assert len(refusals(changed(tree, *changes))) == 1, refusals(changed(tree, *changes))
