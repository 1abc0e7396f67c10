"""The record: the named keys, unrounded numbers, values that can be typed in again, never the label."""

import json
from dataclasses import replace
from typing import Any

import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.record import record_of, write_record
from clinicalc.assessment.result import Assessment
from clinicalc.settings import PracticePoint
from tests.assessment.cases import DEMO, MAN_50, NOW, WOMAN_61, WOMAN_EGFR_90, probability, run, shipped

KEYS = [
    "model",
    "vetting",
    "years",
    "level",
    "probability",
    "complement",
    "eta",
    "band",
    "band_absent_because",
    "recalibration",
    "values",
    "derived",
    "spread",
    "not_measured",
    "comparison",
    "shares",
    "matching_age",
    "decision_points",
    "findings",
]


def test_keys_and_numbers() -> None:
    result = run("cvd-2021-regional", MAN_50, recalibration="low")
    record = record_of(result)
    assert list(record) == KEYS
    assert record["probability"] == probability(result)
    assert record["recalibration"] == "low"
    assert record["years"] == 10
    assert json.loads(write_record(result)) == json.loads(json.dumps(record))


def test_typed_values_can_be_typed_in_again() -> None:
    entry = WOMAN_EGFR_90 | {"creatinine": "0.79"}
    first = run("total-cvd-2024-base", entry)
    record = json.loads(write_record(first))
    again = {value["id"]: value["typed"] for value in (*record["values"], *record["derived"]) if value["typed"]}
    assert again["systolic_bp"] == "160 mm[Hg]"
    second = run("total-cvd-2024-base", again)
    assert write_record(second) == write_record(first)


def test_exclusions_stand_among_the_values() -> None:
    record = json.loads(write_record(run("general-cvd-2008-lipids", WOMAN_61)))
    assert {"id": "prior_cvd", "typed": "no", "value": "no", "unit": None, "dated": None} in record["values"]


def test_on_a_stop_the_numbers_are_null() -> None:
    record = json.loads(write_record(run("general-cvd-2008-lipids", WOMAN_61, age="abc")))
    assert record["probability"] is record["complement"] is record["eta"] is record["band"] is None
    assert record["findings"][0]["code"] == "unreadable"
    assert record["findings"][0]["field"] == "age"


def test_the_label_is_not_in_it() -> None:
    labelled = replace(run("general-cvd-2008-lipids", WOMAN_61), label="Ottilie Fenn")
    assert "Ottilie" not in write_record(labelled)


def with_changes(id: str, texts: dict[str, str], changes: dict[str, Typed], **more: Any) -> Assessment:
    """An assessment in which other values are asked for as well."""
    entry = PatientEntry({field: Typed(text) for field, text in texts.items()}, "", changes)
    return assess(shipped(id), entry, at=NOW, **more)


def written(assessment: Assessment) -> Any:
    """The record as a program reads it."""
    return json.loads(write_record(assessment))


def test_the_spread_names_each_value_with_its_unit() -> None:
    result = run("tarnwick-cvd-10y", DEMO)
    assert result.estimate is not None
    spread = result.estimate.spread
    assert spread is not None
    record = written(result)["spread"]
    assert [record[key] for key in ("level", "lower", "upper")] == [0.95, spread.lower, spread.upper]
    units = {part["id"]: part["unit"] for part in record["parts"]}
    assert units == {"systolic_bp": "mm[Hg]", "total_cholesterol": "mmol/L", "hdl_cholesterol": "mmol/L"}
    assert record["link_sd"] == pytest.approx(sum(part["link_sd"] ** 2 for part in record["parts"]) ** 0.5, rel=1e-12)


def test_changes_stand_as_they_were_entered_beside_the_patients_own() -> None:
    changes = {"smoker": Typed("no"), "total_cholesterol": Typed("190", unit="mg/dL"), "systolic_bp": Typed("142")}
    record = written(with_changes("tarnwick-cvd-10y", DEMO, changes))["comparison"]
    systolic, total, smoker = record["changes"]
    assert systolic == {"id": "systolic_bp", "typed": "142 mm[Hg]", "own": 142.0, "value": 142.0, "unit": "mm[Hg]"}
    assert (total["typed"], total["own"], total["unit"]) == ("190 mg/dL", 5.2, "mmol/L")
    assert total["value"] == pytest.approx(190 * 0.02586, rel=1e-12)  # the factor of published unit tables
    assert smoker == {"id": "smoker", "typed": "no", "own": "yes", "value": "no", "unit": None}
    assert record["probability"] + record["complement"] == pytest.approx(1.0, abs=1e-15)
    assert record["lower"] < record["probability"] < record["upper"]
    assert record["because"] is None


def test_a_change_that_cannot_be_used_is_kept_with_the_reason() -> None:
    record = written(with_changes("tarnwick-cvd-10y", DEMO, {"systolic_bp": Typed("abc")}))["comparison"]
    assert record["changes"] == [
        {"id": "systolic_bp", "typed": "abc", "own": 142.0, "value": None, "unit": None},
    ]
    assert record["probability"] is record["difference"] is None
    assert "Systolic blood pressure" in record["because"]


def test_what_is_not_measured_says_so_and_takes_shares_and_matching_age_away() -> None:
    texts = WOMAN_61 | {"hdl_cholesterol": "not measured"}
    record = written(with_changes("general-cvd-2008-lipids", texts, {}, matching_age=True))
    found = record["not_measured"]
    assert found["fields"] == ["hdl_cholesterol"]
    assert found["lower"] < record["probability"] < found["upper"]
    assert record["band"]["lower"] < found["known_lower"] < found["known_upper"] < record["band"]["upper"]
    assert record["shares"]["steps"] == []
    assert record["shares"]["because"] == record["matching_age"]["because"]
    assert record["matching_age"]["place"] is record["matching_age"]["lowest"] is None


def test_shares_and_matching_age_lead_from_the_reference_person() -> None:
    record = written(with_changes("tarnwick-cvd-10y", DEMO, {}, matching_age=True))
    shares = record["shares"]
    whole = shares["reference_eta"] + sum(step["amount"] for step in shares["steps"])
    assert whole == pytest.approx(record["eta"], abs=1e-12)
    assert record["matching_age"]["place"] == "within"
    assert 61 < record["matching_age"]["age"] < record["matching_age"]["highest"]
    assert run("tarnwick-cvd-10y", DEMO).estimate is not None
    assert written(run("tarnwick-cvd-10y", DEMO))["matching_age"] is None


def test_decision_points_say_whose_they_are() -> None:
    own = PracticePoint("tarnwick-cvd-10y", 10.0, "a", 0.2, "Second look", "agreed in the practice")
    points = written(with_changes("tarnwick-cvd-10y", DEMO, {}, practice_points=(own,)))["decision_points"]
    assert [(point["probability"], point["origin"], point["above"]) for point in points] == [
        (0.1, "file", True),
        (0.2, "practice", False),
    ]
    assert points[0]["confidence"] > 0.5 > points[1]["confidence"]


def test_a_rebuilt_band_lists_what_it_assumes_and_no_other_does() -> None:
    rebuilt = run("general-cvd-2008-lipids", WOMAN_61)
    assert written(rebuilt)["band"]["assumptions"] == list(band_assumptions(rebuilt))
    assert len(band_assumptions(rebuilt)) == 9
    assert written(run("tarnwick-cvd-10y", DEMO))["band"]["assumptions"] == []


def test_without_a_number_nothing_stands_beside_it() -> None:
    record = written(with_changes("tarnwick-cvd-10y", DEMO | {"age": ""}, {"smoker": Typed("no")}, matching_age=True))
    beside = [record[key] for key in ("spread", "not_measured", "comparison", "shares", "matching_age")]
    assert beside == [None] * 5
    assert record["decision_points"] == []
