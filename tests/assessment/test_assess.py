"""The whole assessment: choices that are open, levels, and that nothing typed ever raises."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import PatientEntry, Typed, entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.record import write_record
from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from tests.assessment.cases import DEMO, FULL, MAN_50, NOW, WOMAN_61, about, run, shipped

texts = st.one_of(
    st.text(max_size=40),
    st.from_regex(r"[-+−]?[0-9]{1,6}([.,][0-9]{1,4})?( ?(mg/dL|mmol/L|mmHg|kPa|years|%))?", fullmatch=True),
    st.sampled_from(["yes", "no", "female", "male", "", "nan", "1,234", "<5", "180 mg/dL on 2026-13-45"]),
)


@pytest.mark.parametrize("id", sorted(FULL))
@settings(max_examples=60, deadline=None)
@given(st.data(), st.sampled_from([0.5, 0.95, 0.999]))
def test_nothing_typed_raises(id: str, data: st.DataObject, level: float) -> None:
    model = shipped(id)
    fields = [field.id for field in model.fields]
    typed = FULL[id] | data.draw(st.dictionaries(st.sampled_from(fields), texts, max_size=4))
    recalibration = "high" if model.content.recalibration_required else None
    result = assess(model, entry_from_texts(typed), recalibration=recalibration, level=level, at=NOW)
    stopped = any(finding.grade is Grade.STOP for finding in result.findings)
    assert (result.estimate is None) == stopped
    write_record(result)
    if result.estimate is not None:
        assert 0 < result.estimate.probability < 1


@pytest.mark.parametrize("recalibration", ["zzz", "low "])
def test_a_recalibration_that_is_not_on_offer_stops(recalibration: str) -> None:
    for id, entry in (("cvd-2021-regional", MAN_50), ("general-cvd-2008-lipids", WOMAN_61)):
        result = run(id, entry, recalibration=recalibration)
        assert [finding.grade for finding in about(result, FindingCode.RECALIBRATION)] == [Grade.STOP]
        assert result.estimate is None


def test_a_horizon_that_the_model_has_not_stops() -> None:
    result = run("general-cvd-2008-lipids", WOMAN_61, span=Span(7))
    (stop,) = about(result, FindingCode.HORIZON)
    assert "10 years" in stop.message
    assert result.estimate is None


@pytest.mark.parametrize("level", [0.0, 0.4, 1.0, 95.0, float("nan")])
def test_a_level_of_which_no_band_can_be_made_is_refused(level: float) -> None:
    with pytest.raises(UsageError, match="a band cannot be made"):
        run("general-cvd-2008-lipids", WOMAN_61, level=level)


def test_an_unknown_unit_beside_a_field_is_a_stop() -> None:
    entry = entry_from_texts(WOMAN_61).with_typed("systolic_bp", Typed("124", unit="banana"))
    result = assess(shipped("general-cvd-2008-lipids"), entry, at=NOW)
    assert [finding.field for finding in about(result, FindingCode.WRONG_UNIT)] == ["systolic_bp"]
    write_record(result)


def test_the_band_widens_with_the_level() -> None:
    narrow, wide = (run("tarnwick-cvd-10y", DEMO, level=level).estimate for level in (0.5, 0.99))
    assert narrow is not None
    assert wide is not None
    assert narrow.band is not None
    assert wide.band is not None
    assert wide.band.lower < narrow.band.lower < narrow.probability < narrow.band.upper < wide.band.upper


def test_a_required_recalibration_is_asked_for() -> None:
    result = run("cvd-2021-regional", MAN_50)
    (stop,) = about(result, FindingCode.RECALIBRATION)
    assert stop.grade is Grade.STOP
    for id in ("low", "moderate", "high", "very-high"):
        assert id in stop.message


def test_a_unit_chosen_beside_the_field_counts_and_a_typed_one_counts_more() -> None:
    entry = entry_from_texts(WOMAN_61)
    chosen = entry.with_typed("total_cholesterol", Typed("4.655", unit="mmol/L"))
    both = entry.with_typed("total_cholesterol", Typed("180 mg/dL", unit="mmol/L"))
    model = shipped("general-cvd-2008-lipids")
    first, second = (assess(model, e, at=NOW).estimate for e in (chosen, both))
    assert first is not None
    assert second is not None
    assert round(first.probability, 4) == 0.1048
    assert second.probability == pytest.approx(0.10484, abs=5e-6)


def test_an_entry_is_never_changed() -> None:
    entry = entry_from_texts(WOMAN_61, label="A")
    changed = entry.with_typed("age", Typed("62"))
    assert entry.typed["age"] == Typed("61")
    assert changed.typed["age"] == Typed("62")
    assert changed.label == "A"
    assert PatientEntry().typed == {}


def test_without_a_covariance_the_reason_stands_in_place_of_the_band() -> None:
    # the white woman of 55 of Circulation 2014;129(25 Suppl 2):S49-S73, Table A
    woman = WOMAN_61 | {"age": "55", "ethnic_group": "white", "total_cholesterol": "213", "smoker": "no"}
    estimate = run("ascvd-2013-pooled-cohort", woman).estimate
    assert estimate is not None
    assert estimate.band is None
    assert "covariance" in estimate.band_absent_because


def test_findings_stand_in_reading_order() -> None:
    result = run("general-cvd-2008-lipids", WOMAN_61, prior_cvd="yes", age="29", systolic_bp="240")
    assert [(f.grade, f.field) for f in result.findings] == [
        (Grade.STOP, "prior_cvd"),
        (Grade.STOP, "age"),
        (Grade.CAUTION, "systolic_bp"),
    ]
