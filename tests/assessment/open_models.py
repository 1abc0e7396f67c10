"""Shipped files with invented people put behind them, so that values of theirs can stand open."""

from functools import cache
from typing import Any

import msgspec

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import Finding, FindingCode
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import prove_model
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.coefficients.schema import ModelContent
from tests.assessment.cases import NOW, about, shipped
from tests.coefficients.tiny_model import Tree, changed, read_of, tree_of

Change = tuple[str, Any]

DIABETES_PEOPLE: Tree = {
    "source": "Invented people of Tarnwick.",
    "numbers": [
        {"id": "age", "mean": 54, "sd": 10},
        {"id": "height", "mean": 168, "sd": 9},
        {"id": "weight", "mean": 78, "sd": 14},
        {"id": "glucose", "mean": 4.57, "sd": 0.1, "log": "natural"},
    ],
    "correlations": [[1, -0.1, 0.05, 0.2], [-0.1, 1, 0.5, 0], [0.05, 0.5, 1, 0.3], [0.2, 0, 0.3, 1]],
    "yes_no": [
        {"id": "parent_diabetes", "intercept": -3, "coefficients": {"weight": 0.02}},
        {"id": "bp_treated", "intercept": -6, "coefficients": {"age": 0.06, "weight": 0.02, "parent_diabetes": 0.3}},
    ],
}

KIDNEY_PEOPLE: Tree = {
    "source": "Invented people of Tarnwick",
    "numbers": [
        {"id": "age", "mean": 52, "sd": 12},
        {"id": "creatinine", "mean": -0.2, "sd": 0.25, "log": "natural"},
        {"id": "hdl_cholesterol", "mean": 0.3, "sd": 0.25, "log": "natural"},
        {"id": "total_cholesterol", "mean": 5.2, "sd": 1.0},
    ],
    "correlations": [[1, 0.3, 0.05, 0.1], [0.3, 1, -0.1, 0], [0.05, -0.1, 1, 0.1], [0.1, 0, 0.1, 1]],
    "yes_no": [],
}


WOMAN_WEIGHED = {
    "diabetes": "no",
    "sex": "female",
    "age": "55",
    "parent_diabetes": "yes",
    "weight": "78",
    "height": "165",
    "systolic_bp": "120",
    "diastolic_bp": "75",
    "bp_treated": "no",
    "hdl_cholesterol": "60",
    "triglycerides": "100",
    "glucose": "90",
}


@cache
def with_people(id: str, *open: str, described: bool = True) -> Model:
    """A shipped file in which these predictors may stand open, with its people described or not."""
    people = {"diabetes-2007-clinical": DIABETES_PEOPLE, "total-cvd-2024-base": KIDNEY_PEOPLE}[id]
    content = shipped(id).content
    places = {predictor.id: place for place, predictor in enumerate(content.predictors)}
    tree = changed(
        tree_of(content),
        ("/model/population", people if described else None),
        *((f"/model/predictors/{places[name]}/may_be_missing", True) for name in open),
    )
    return model_of(tree)


def model_of(tree: Tree) -> Model:
    """The proved model of a tree."""
    return prove_model(read_of(msgspec.convert(tree["model"], ModelContent)))


def of(model: Model, texts: dict[str, str], **more: str) -> Assessment:
    """The assessment of these texts at the model's first horizon."""
    return assess(model, entry_from_texts(texts | more), span=model.spans[0], at=NOW)


def estimated(assessment: Assessment) -> Estimate:
    """The estimate, which must be there."""
    assert assessment.estimate is not None, [finding.message for finding in assessment.findings]
    return assessment.estimate


def open_finding(assessment: Assessment, field: str) -> Finding:
    """What is said at a field that was not measured."""
    (found,) = [finding for finding in about(assessment, FindingCode.NOT_MEASURED) if finding.field == field]
    return found
