"""Questions: nothing is ever taken as no, a yes to an exclusion stops, and an unknown answer is named."""

import pytest

from clinicalc.assessment.findings import FindingCode, Grade
from tests.assessment.cases import PERSON_55, WOMAN_61, about, probability, run

LIPIDS = "general-cvd-2008-lipids"
POOLED = "ascvd-2013-pooled-cohort"


@pytest.mark.parametrize("field", ["prior_cvd", "sex", "bp_treated", "smoker", "diabetes", "age"])
@pytest.mark.parametrize("text", ["", "   "])
def test_an_unanswered_field_means_no_number(field: str, text: str) -> None:
    result = run(LIPIDS, WOMAN_61, changed=(field, text))
    assert result.estimate is None
    assert [finding.field for finding in result.missing] == [field]
    assert result.stops == ()


def test_an_empty_entry_counts_what_is_to_go_in_page_order() -> None:
    result = run(LIPIDS, {})
    assert [finding.field for finding in result.missing] == [field.id for field in result.model.fields]


def test_yes_to_an_exclusion_stops_and_says_why() -> None:
    result = run(LIPIDS, WOMAN_61, prior_cvd="yes")
    (stop,) = about(result, FindingCode.EXCLUDED)
    assert stop.grade is Grade.STOP
    assert "does not answer for this patient" in stop.message
    assert result.estimate is None


def test_an_unknown_answer_names_the_answers_and_the_close_one() -> None:
    (stop,) = about(run(LIPIDS, WOMAN_61, sex="femal"), FindingCode.UNKNOWN_ANSWER)
    assert "female and male" in stop.message
    assert "Did you mean female?" in stop.message


def test_control_characters_in_an_answer_are_shown_not_echoed() -> None:
    (stop,) = about(run(LIPIDS, WOMAN_61, sex="fe\u202emale"), FindingCode.UNKNOWN_ANSWER)
    assert "\u202e" not in stop.message
    assert "[U+202E]" in stop.message


def test_a_group_without_an_equation_takes_the_white_equations_with_a_caution() -> None:
    other = run(POOLED, PERSON_55, ethnic_group="other")
    assert probability(other) == probability(run(POOLED, PERSON_55))
    (caution,) = about(other, FindingCode.GROUP)
    assert caution.grade is Grade.CAUTION
    assert about(run(POOLED, PERSON_55), FindingCode.GROUP) == []
