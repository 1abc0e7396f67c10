"""Values that contradict each other."""

from clinicalc.assessment.findings import FindingCode, Grade
from tests.assessment.cases import WOMAN_55_AT_RISK, WOMAN_61, about, run

LIPIDS = "general-cvd-2008-lipids"


def test_hdl_above_total_is_a_stop_across_units() -> None:
    result = run(LIPIDS, WOMAN_61, total_cholesterol="90 mg/dL", hdl_cholesterol="2.4 mmol/L")
    (stop,) = about(result, FindingCode.CROSS_CHECK)
    assert (stop.grade, stop.field) == (Grade.STOP, "hdl_cholesterol")
    assert "90 mg/dL" in stop.message
    assert "2.4 mmol/L" in stop.message
    assert result.estimate is None


def test_hdl_below_total_is_none() -> None:
    assert about(run(LIPIDS, WOMAN_61), FindingCode.CROSS_CHECK) == []


def test_diastolic_must_lie_below_systolic() -> None:
    for diastolic in ("120", "130"):
        result = run("diabetes-2007-clinical", WOMAN_55_AT_RISK, systolic_bp="120", diastolic_bp=diastolic)
        assert [finding.field for finding in about(result, FindingCode.CROSS_CHECK)] == ["diastolic_bp"]
        assert result.estimate is None
