"""What is said of the variation within a person when a file is inspected."""

import pytest

from clinicalc.assessment.model import Model
from clinicalc.operations.inspection_fields import field_sections
from tests.assessment.whole_case import model_of
from tests.coefficients.tiny_model import Tree, changed, tiny_cloglog_model, tree_of

TREE = tree_of(tiny_cloglog_model())


def said(within: Tree) -> str:
    """Everything said about the predictors."""
    model: Model = model_of(changed(TREE, ("/model/predictors/3/within_person", {"source": "invented"} | within)))
    return "\n".join(dict(field_sections(model))["Predictors"])


@pytest.mark.parametrize(
    ("within", "words"),
    [
        ({"sd": 0.3}, "varies within a person: SD 0.3 mmol/L (invented)"),
        ({"cv": 0.061}, "varies within a person: CV 6.1\u202f% (invented)"),
        (
            {"sd": 0.3, "within_visit_sd": 0.1},
            "varies within a person: SD 0.3 mmol/L, of which among readings of one visit SD 0.1 mmol/L (invented)",
        ),
        (
            {"cv": 0.06, "within_visit_cv": 0.03},
            "varies within a person: CV 6\u202f%, of which among readings of one visit CV 3\u202f% (invented)",
        ),
    ],
)
def test_the_variation_within_a_person_is_said(within: Tree, words: str) -> None:
    assert words in said(within)
