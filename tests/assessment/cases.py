"""Shipped models and full sets of answers that tests start from."""

from datetime import UTC, datetime
from functools import cache

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import Finding, FindingCode
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model_bytes
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.spans import Span
from clinicalc.resources import read_shipped

NOW = datetime(2026, 12, 1, 9, 30, tzinfo=UTC)

WOMAN_61 = {
    "prior_cvd": "no",
    "sex": "female",
    "age": "61",
    "total_cholesterol": "180",
    "hdl_cholesterol": "47",
    "systolic_bp": "124",
    "bp_treated": "no",
    "smoker": "yes",
    "diabetes": "no",
}
"""A full entry for the 2008 lipid form: its printed worked example."""

MAN_50 = {
    "prior_cvd": "no",
    "diabetes": "no",
    "sex": "male",
    "age": "50",
    "smoker": "yes",
    "systolic_bp": "140",
    "total_cholesterol": "5.5",
    "hdl_cholesterol": "1.3",
}
"""A full entry for the 2021 regional form: its printed worked example."""

WOMAN_EGFR_90 = {
    "prior_cvd": "no",
    "sex": "female",
    "age": "50",
    "total_cholesterol": "200 mg/dL",
    "hdl_cholesterol": "45 mg/dL",
    "systolic_bp": "160",
    "bp_treated": "yes",
    "statin": "no",
    "diabetes": "yes",
    "smoker": "no",
    "egfr": "90",
}
"""A full entry for the 2024 base form: its printed worked example."""

WOMAN_55_AT_RISK = {
    "diabetes": "no",
    "sex": "female",
    "age": "55",
    "parent_diabetes": "yes",
    "bmi": "31",
    "systolic_bp": "120",
    "diastolic_bp": "75",
    "bp_treated": "no",
    "hdl_cholesterol": "60",
    "triglycerides": "100",
    "glucose": "110",
}
"""A full entry for the 2007 clinical form: parent, BMI of 30 or more, glucose of 100 to 126 mg/dL."""

DEMO = {
    "prior_cvd": "no",
    "age": "61",
    "sex": "female",
    "systolic_bp": "142",
    "bp_treated": "no",
    "total_cholesterol": "5.2",
    "hdl_cholesterol": "1.3",
    "smoker": "yes",
    "diabetes": "no",
}
"""A full entry for the invented Tarnwick model, which has a band."""

PERSON_55 = {
    "prior_cvd": "no",
    "sex": "female",
    "age": "55",
    "total_cholesterol": "213",
    "hdl_cholesterol": "50",
    "systolic_bp": "120",
    "bp_treated": "no",
    "smoker": "no",
    "diabetes": "no",
    "ethnic_group": "white",
}
"""A full entry for the 2013 pooled cohort equations: the person of the printed worked examples."""

FULL = {
    "general-cvd-2008-lipids": WOMAN_61,
    "ascvd-2013-pooled-cohort": PERSON_55,
    "cvd-2021-regional": MAN_50,
    "total-cvd-2024-base": WOMAN_EGFR_90,
    "diabetes-2007-clinical": WOMAN_55_AT_RISK,
    "tarnwick-cvd-10y": DEMO,
}
"""A full entry for every shipped file."""


@cache
def shipped(id: str) -> Model:
    """The proved model of a shipped file."""
    return load_model_bytes(read_shipped(f"example_models/{id}.json"), f"{id}.json")


def run(
    id: str,
    texts: dict[str, str],
    *,
    recalibration: str | None = None,
    span: Span | None = None,
    level: float = 0.95,
    changed: tuple[str, str] | None = None,
    **more: str,
) -> Assessment:
    """The assessment of a full set of answers with some of them changed."""
    entry = entry_from_texts(texts | more | ({} if changed is None else dict([changed])))
    return assess(shipped(id), entry, recalibration=recalibration, span=span, level=level, at=NOW)


def probability(assessment: Assessment) -> float:
    """The probability of an assessment that must have one."""
    assert assessment.estimate is not None, [finding.message for finding in assessment.findings]
    return assessment.estimate.probability


def about(assessment: Assessment, code: FindingCode) -> list[Finding]:
    """The findings with one code."""
    return [finding for finding in assessment.findings if finding.code is code]
