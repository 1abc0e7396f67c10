"""Values whose rounding decides on which side of a cut they fall."""

import pytest

from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.numerals import percent
from tests.assessment.cases import WOMAN_55_AT_RISK, WOMAN_61, about, probability, run

DIABETES = "diabetes-2007-clinical"


def test_a_value_on_a_cut_names_the_result_on_the_other_side() -> None:
    result = run(DIABETES, WOMAN_55_AT_RISK, glucose="100")
    (caution,) = about(result, FindingCode.NEAR_CUT)
    assert (caution.grade, caution.field) == (Grade.CAUTION, "glucose")
    below = probability(run(DIABETES, WOMAN_55_AT_RISK, glucose="99.6"))
    assert percent(below) in caution.message
    assert "99.5 mg/dL" in caution.message


def test_one_more_digit_settles_the_side() -> None:
    assert about(run(DIABETES, WOMAN_55_AT_RISK, glucose="100.6"), FindingCode.NEAR_CUT) == []
    assert len(about(run(DIABETES, WOMAN_55_AT_RISK, glucose="99.96"), FindingCode.NEAR_CUT)) == 0
    assert len(about(run(DIABETES, WOMAN_55_AT_RISK, glucose="99.8"), FindingCode.NEAR_CUT)) == 0
    assert len(about(run(DIABETES, WOMAN_55_AT_RISK, glucose="100.0"), FindingCode.NEAR_CUT)) == 1


def test_rounding_reaches_a_cut_of_a_worked_out_value() -> None:
    """Weight 86.7 kg at 1.70 m is a BMI of exactly 30; at 86.65 kg it is below."""
    rest = {id: text for id, text in WOMAN_55_AT_RISK.items() if id != "bmi"}
    result = run(DIABETES, rest, weight="86.7 kg", height="170.0 cm")
    assert {finding.field for finding in about(result, FindingCode.NEAR_CUT)} == {"weight", "height"}


def test_completed_years_are_not_rounded_years() -> None:
    assert about(run(DIABETES, WOMAN_55_AT_RISK, age="49"), FindingCode.NEAR_CUT) == []
    assert about(run(DIABETES, WOMAN_55_AT_RISK, age="50"), FindingCode.NEAR_CUT) == []


def test_a_cut_that_does_not_count_is_not_mentioned() -> None:
    """Blood pressure on its cut of 130 mmHg changes nothing for a person under treatment."""
    untreated = run(DIABETES, WOMAN_55_AT_RISK, systolic_bp="130")
    assert [finding.field for finding in about(untreated, FindingCode.NEAR_CUT)] == ["systolic_bp"]
    assert about(run(DIABETES, WOMAN_55_AT_RISK, systolic_bp="130", bp_treated="yes"), FindingCode.NEAR_CUT) == []


def test_models_without_cuts_say_nothing_of_them() -> None:
    assert about(run("general-cvd-2008-lipids", WOMAN_61), FindingCode.NEAR_CUT) == []


@pytest.mark.parametrize("typed", ["100", "5.551 mmol/L"])
def test_a_cut_met_by_way_of_another_unit_is_met(typed: str) -> None:
    """100 mg/dL of glucose x 0.05551 = 5.551 mmol/L."""
    assert probability(run(DIABETES, WOMAN_55_AT_RISK, glucose=typed)) == probability(
        run(DIABETES, WOMAN_55_AT_RISK, glucose="110")
    )


@pytest.mark.parametrize("typed", ["126", "6.99 mmol/L"])
def test_a_value_at_the_limit_says_that_beyond_it_there_is_no_number(typed: str) -> None:
    (caution,) = about(run(DIABETES, WOMAN_55_AT_RISK, glucose=typed), FindingCode.NEAR_CUT)
    assert caution.field == "glucose"
    assert caution.message.endswith("it would give no number.")


def test_a_worked_out_value_at_its_limit_speaks_for_what_was_typed() -> None:
    """8 kg/m² is the least possible BMI: 20.5 kg at 1.60 m is 8.0078, and 20.45 kg is 7.988."""
    rest = {id: text for id, text in WOMAN_55_AT_RISK.items() if id != "bmi"}
    result = run(DIABETES, rest, weight="20.5 kg", height="160 cm")
    assert {finding.field for finding in about(result, FindingCode.NEAR_CUT)} == {"weight", "height"}
