"""The record: the named keys, unrounded numbers, values that can be typed in again, never the label."""

import json
from dataclasses import replace

from clinicalc.assessment.record import record_of, write_record
from tests.assessment.cases import MAN_50, WOMAN_61, WOMAN_EGFR_90, probability, run

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
