"""What is typed into a number field: limits, units, dates, each answered in a sentence."""

from dataclasses import replace

import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.units import Averaged
from tests.assessment.cases import DEMO, NOW, WOMAN_55_AT_RISK, WOMAN_61, about, probability, run, shipped

LIPIDS = "general-cvd-2008-lipids"
DIABETES = "diabetes-2007-clinical"


@pytest.mark.parametrize(
    ("field", "text", "code", "words"),
    [
        ("age", "abc", FindingCode.UNREADABLE, "“abc” is not a number"),
        ("age", "-3", FindingCode.IMPOSSIBLE, "Age −3 years is not possible; the possible range is 0–120 years."),
        ("age", "200", FindingCode.IMPOSSIBLE, "Age 200 years is not possible"),
        ("age", "29", FindingCode.OUTSIDE_DERIVATION, "Age 29 years lies below 30–74 years"),
        ("age", "75", FindingCode.OUTSIDE_DERIVATION, "gives no number for them"),
        ("age", "732 mo", FindingCode.WRONG_UNIT, "Age"),
        ("total_cholesterol", "5.2", FindingCode.IMPOSSIBLE, "5.2 mmol/L would be believable: use that unit"),
        ("total_cholesterol", "1,234", FindingCode.UNREADABLE, "1.234"),
        ("total_cholesterol", "nan", FindingCode.UNREADABLE, "Total cholesterol"),
        ("total_cholesterol", "<0.1", FindingCode.UNREADABLE, "Total cholesterol"),
        ("total_cholesterol", "1e3", FindingCode.UNREADABLE, "Total cholesterol"),
        ("total_cholesterol", "9" * 5000, FindingCode.UNREADABLE, "32"),
        ("total_cholesterol", "١٨٠", FindingCode.UNREADABLE, "Total cholesterol"),
        ("total_cholesterol", "180 mmHg", FindingCode.WRONG_UNIT, "mmHg"),
        ("systolic_bp", "124 mg/dL", FindingCode.WRONG_UNIT, "mg/dL"),
        ("systolic_bp", "124 bananas", FindingCode.UNREADABLE, "bananas"),
        ("systolic_bp", "16 kPa", None, ""),
        ("total_cholesterol", "4.655 mmol/l", None, ""),
        ("total_cholesterol", "180,0", None, ""),
    ],
)
def test_a_typed_number_is_answered_in_words(field: str, text: str, code: FindingCode | None, words: str) -> None:
    result = run(LIPIDS, WOMAN_61, changed=(field, text))
    stops = [finding for finding in result.findings if finding.grade is Grade.STOP]
    if code is None:
        assert stops == []
        assert result.estimate is not None
        return
    assert result.estimate is None
    assert [(stop.code, stop.field) for stop in stops] == [(code, field)]
    assert words in stops[0].message
    assert len(stops[0].message) < 400


def test_the_stop_for_mass_digits_of_a_molar_value_offers_the_molar_unit() -> None:
    (stop,) = about(run(LIPIDS, WOMAN_61, total_cholesterol="5.2"), FindingCode.IMPOSSIBLE)
    assert stop.offer == ("mmol/L",)


def test_an_unusual_value_that_is_usual_in_another_unit_is_a_caution_with_the_offer() -> None:
    """Glucose of 21 mg/dL is possible and unusual; 21 mmol/L is within what is seen."""
    (caution,) = about(run(DIABETES, WOMAN_55_AT_RISK, glucose="21 mg/dL"), FindingCode.UNUSUAL)
    assert caution.grade is Grade.CAUTION
    assert caution.offer == ("mmol/L",)
    assert "21 mmol/L would be" in caution.message


def test_glucose_above_126_stops_the_diabetes_model_and_126_does_not() -> None:
    assert run(DIABETES, WOMAN_55_AT_RISK, glucose="126").estimate is not None
    (stop,) = about(run(DIABETES, WOMAN_55_AT_RISK, glucose="127"), FindingCode.OUTSIDE_DERIVATION)
    assert stop.grade is Grade.STOP
    assert "lies above 126 mg/dL" in stop.message


def test_a_limit_met_exactly_in_another_unit_is_met() -> None:
    """126 mg/dL x 0.05551 = 6.99426 mmol/L; the way back is a bit off 126 in binary."""
    assert run(DIABETES, WOMAN_55_AT_RISK, glucose="6.99426 mmol/L").estimate is not None


def test_a_value_may_carry_its_date() -> None:
    fresh = run(LIPIDS, WOMAN_61, total_cholesterol="180 mg/dL on 2026-10-02")
    assert about(fresh, FindingCode.OUT_OF_DATE) == []
    line = next(line for line in fresh.values if line.id == "total_cholesterol")
    assert line.dated is not None
    assert line.dated.isoformat() == "2026-10-02"
    (old,) = about(run(LIPIDS, WOMAN_61, total_cholesterol="180 mg/dL on 2025-11-01"), FindingCode.OUT_OF_DATE)
    assert old.grade is Grade.CAUTION
    assert "395 days old" in old.message
    (future,) = about(run(LIPIDS, WOMAN_61, total_cholesterol="180 on 2027-01-01"), FindingCode.FUTURE_DATE)
    assert future.grade is Grade.STOP


def test_the_unit_typed_with_the_number_counts() -> None:
    """The 2008 worked example in mmol/L: 4.655 and 1.215 give 0.1049 where 180 and 47 mg/dL give 0.1048."""
    molar = run(LIPIDS, WOMAN_61, total_cholesterol="4.655 mmol/L", hdl_cholesterol="1.215 mmol/L")
    assert round(probability(run(LIPIDS, WOMAN_61)), 4) == 0.1048
    assert round(probability(molar), 4) == 0.1049


@pytest.mark.parametrize("typed", ["1.03 mmol/L", "20.69 mmol/L"])
def test_the_range_beside_a_refused_value_does_not_hold_it(typed: str) -> None:
    """40 and 800 mg/dL are 1.0344 and 20.688 mmol/L; written inwards they are 1.04 and 20.6."""
    (stop,) = about(run(LIPIDS, WOMAN_61, total_cholesterol=typed), FindingCode.IMPOSSIBLE)
    assert "1.04–20.6 mmol/L" in stop.message


def test_every_digit_typed_is_shown() -> None:
    result = run(DIABETES, WOMAN_55_AT_RISK, glucose="110.20000000000000000000000000")
    line = next(line for line in result.values if line.id == "glucose")
    assert line.shown == "110.20000000000000000000000000 mg/dL"


@pytest.mark.parametrize(
    ("typed", "again"),
    [
        ("124 of 2 visits", "124 mm[Hg] of 2 visits"),
        ("124 mmHg of 3 readings", "124 mm[Hg] of 3 readings"),
        ("124 of 2 visits of 3 readings on 2026-10-02", "124 mm[Hg] of 2 visits of 3 readings on 2026-10-02"),
        ("124 of 1 visit of 1 reading", "124 mm[Hg]"),
    ],
)
def test_a_mean_is_kept_with_its_value(typed: str, again: str) -> None:
    line = next(v for v in run(LIPIDS, WOMAN_61, systolic_bp=typed).values if v.id == "systolic_bp")
    assert line.typed == again
    assert line.shown == "124 mmHg"
    assert probability(run(LIPIDS, WOMAN_61, systolic_bp=typed)) == probability(run(LIPIDS, WOMAN_61))


def test_of_two_stated_means_the_text_counts_as_with_dates() -> None:
    apart = Typed("124", averaged=Averaged(4, 2))
    for typed, averaged in (
        (apart, Averaged(4, 2)),
        (replace(apart, text="124 of 2 visits"), Averaged(2, 1)),
        (replace(apart, text="124 of 1 visit"), None),
    ):
        entry = entry_from_texts(WOMAN_61).with_typed("systolic_bp", typed)
        line = next(v for v in assess(shipped(LIPIDS), entry, at=NOW).values if v.id == "systolic_bp")
        assert line.averaged == averaged


def test_a_mean_is_kept_where_its_value_cannot_be_used() -> None:
    line = next(v for v in run(LIPIDS, WOMAN_61, systolic_bp="900 of 2 visits").values if v.id == "systolic_bp")
    assert line.typed == "900 mm[Hg] of 2 visits"
    assert line.number is None


def test_a_mean_that_is_not_clear_stops() -> None:
    (stop,) = about(run(LIPIDS, WOMAN_61, systolic_bp="124 of 0 visits"), FindingCode.UNREADABLE)
    assert stop.grade is Grade.STOP
    assert stop.message.startswith("Systolic blood pressure: “of 0 visits” is no mean")


@pytest.mark.parametrize("typed", ["110 ON 2026-10-02", "110\ton 2026-10-02", "110,0 mg/dl on 2026-10-02"])
def test_what_was_typed_can_be_typed_again(typed: str) -> None:
    first = run(DIABETES, WOMAN_55_AT_RISK, glucose=typed)
    line = next(line for line in first.values if line.id == "glucose")
    second = run(DIABETES, WOMAN_55_AT_RISK, glucose=line.typed)
    assert next(line for line in second.values if line.id == "glucose") == line
    assert line.dated is not None


def test_a_broken_age_names_the_slip() -> None:
    (stop,) = about(run(LIPIDS, WOMAN_61, age="74.9"), FindingCode.OUTSIDE_DERIVATION)
    assert "completed years" in stop.message


def test_the_label_is_said_once() -> None:
    (stop,) = about(run(LIPIDS, WOMAN_61, age="732 mo"), FindingCode.WRONG_UNIT)
    assert "Age: Age" not in stop.message


def test_a_value_may_be_both_unusual_and_outside_the_derivation() -> None:
    result = run("tarnwick-cvd-10y", DEMO, total_cholesterol="12 mmol/L")
    codes = [finding.code for finding in result.findings if finding.field == "total_cholesterol"]
    assert codes == [FindingCode.UNUSUAL, FindingCode.OUTSIDE_DERIVATION]


def test_the_offer_reads_as_what_would_be_believable() -> None:
    (caution,) = about(run(DIABETES, WOMAN_55_AT_RISK, glucose="21"), FindingCode.UNUSUAL)
    assert caution.message.endswith("21 mmol/L would be believable: use that unit, or type the value again.")
