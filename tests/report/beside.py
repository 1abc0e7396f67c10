"""Assessments of shipped files with every figure beside the number, for the tests of what is made of them."""

from collections.abc import Mapping
from dataclasses import replace

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.operations.bedside import assess_patient, take_changes
from clinicalc.report.parts import PrintParts
from clinicalc.settings import PracticePoint
from tests.assessment.cases import FULL, NOW, shipped

TARNWICK, LIPIDS = "tarnwick-cvd-10y", "general-cvd-2008-lipids"
EVERYTHING = PrintParts(shares=True, matching_age=True)
PRACTICE_POINT = PracticePoint(TARNWICK, 10.0, "a", 0.125, "Second look", "agreed in the practice, 2026")


def full(
    id: str = TARNWICK,
    changes: tuple[str, ...] = ("smoker=no", "systolic_bp=125"),
    *,
    values: Mapping[str, str] | None = None,
    matching_age: bool = True,
    points: tuple[PracticePoint, ...] = (),
    label: str = "",
) -> Assessment:
    """A usual patient of a shipped file with a comparison and the matching age asked for."""
    model = shipped(id)
    entry = replace(entry_from_texts({**FULL[id], **(values or {})}, label), changes=take_changes(model, changes))
    recalibration = "low" if id == "cvd-2021-regional" else None
    return assess_patient(
        model, entry, at=NOW, matching_age=matching_age, practice_points=points, recalibration=recalibration
    )


def estimate_of(assessment: Assessment) -> Estimate:
    """The estimate, which must be there."""
    assert assessment.estimate is not None, [finding.message for finding in assessment.findings]
    return assessment.estimate
