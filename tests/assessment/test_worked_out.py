"""Derived values: either way in, typed against worked out, and what cannot be worked out."""

import pytest

from clinicalc.assessment.findings import FindingCode, Grade
from tests.assessment.cases import WOMAN_55_AT_RISK, WOMAN_EGFR_90, about, probability, run

BASE = "total-cvd-2024-base"
DIABETES = "diabetes-2007-clinical"
WITHOUT_EGFR = {id: text for id, text in WOMAN_EGFR_90.items() if id != "egfr"}


def test_creatinine_may_stand_for_egfr() -> None:
    """CKD-EPI 2021, woman of 50 with 1.0 mg/dL: 68.6 mL/min/1.73 m² (worked out by hand from Inker et al. 2021)."""
    result = run(BASE, WITHOUT_EGFR, creatinine="1.0 mg/dL")
    line = next(line for line in result.values if line.id == "egfr")
    assert line.worked_out
    assert line.number == pytest.approx(68.6, abs=0.05)
    assert probability(result) == pytest.approx(
        probability(run(BASE, WITHOUT_EGFR, egfr=f"{line.number:.6f}")), abs=1e-8
    )


def test_creatinine_in_molar_units_is_the_same_patient() -> None:
    mass = run(BASE, WITHOUT_EGFR, creatinine="1.0 mg/dL")
    molar = run(BASE, WITHOUT_EGFR, creatinine="88.4 µmol/L")
    assert probability(molar) == pytest.approx(probability(mass), rel=1e-12)


def test_neither_typed_nor_worked_out_asks_for_one_of_the_two() -> None:
    result = run(BASE, WITHOUT_EGFR)
    (missing,) = result.missing
    assert missing.field == "egfr"
    assert "type it, or type" in missing.message
    assert "creatinine" in missing.message.lower()


def test_typed_counts_and_a_difference_of_more_than_5_percent_is_said() -> None:
    typed = run(BASE, WOMAN_EGFR_90)
    both = run(BASE, WOMAN_EGFR_90, creatinine="1.0 mg/dL")
    assert probability(both) == probability(typed)
    (caution,) = about(both, FindingCode.TYPED_AND_COMPUTED)
    assert caution.grade is Grade.CAUTION
    assert "68.6" in caution.message
    assert about(run(BASE, WOMAN_EGFR_90, creatinine="0.79"), FindingCode.TYPED_AND_COMPUTED) == []


def test_millilitres_a_minute_are_not_indexed_ones() -> None:
    (stop,) = about(run(BASE, WITHOUT_EGFR, egfr="90 mL/min"), FindingCode.WRONG_UNIT)
    assert stop.grade is Grade.STOP


def test_body_mass_index_from_weight_and_height_in_any_unit() -> None:
    rest = {id: text for id, text in WOMAN_55_AT_RISK.items() if id != "bmi"}
    metric = run(DIABETES, rest, weight="92 kg", height="172 cm")
    imperial = run(DIABETES, rest, weight="202.825 lb", height="67.71654 in")
    assert probability(metric) == pytest.approx(probability(imperial), rel=1e-9)
    assert next(line for line in metric.values if line.id == "bmi").used == "31.1 kg/m²"


def test_an_impossible_worked_out_value_is_a_stop_on_it() -> None:
    rest = {id: text for id, text in WOMAN_55_AT_RISK.items() if id != "bmi"}
    result = run(DIABETES, rest, weight="240 kg", height="120 cm")
    assert result.estimate is None
    (stop,) = about(result, FindingCode.IMPOSSIBLE)
    assert stop.field == "bmi"
    assert "worked out from" in stop.message


def test_an_unusual_worked_out_value_is_a_caution_on_it() -> None:
    rest = {id: text for id, text in WOMAN_55_AT_RISK.items() if id != "bmi"}
    result = run(DIABETES, rest, weight="190 kg", height="140 cm")
    (caution,) = [finding for finding in about(result, FindingCode.UNUSUAL) if finding.field == "bmi"]
    assert "Check the values it was worked out from" in caution.message


def test_apart_is_said_without_decimals_it_does_not_have() -> None:
    (caution,) = about(run(BASE, WOMAN_EGFR_90, creatinine="1.0 mg/dL"), FindingCode.TYPED_AND_COMPUTED)
    assert "more than 5\u202f% apart" in caution.message
