"""Cautions that come with the equation: unconfirmed figures that were used, and competing events."""

import msgspec
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.model import prepare_model
from clinicalc.coefficients.schema import NoBand
from tests.assessment.cases import (
    FULL,
    MAN_50,
    NOW,
    PERSON_55,
    WOMAN_55_AT_RISK,
    WOMAN_61,
    WOMAN_EGFR_90,
    about,
    run,
    shipped,
)
from tests.coefficients.tiny_model import read_of

LIPIDS = "general-cvd-2008-lipids"
REGIONAL = "cvd-2021-regional"


def test_only_the_unconfirmed_figures_of_the_equation_that_answered_are_named() -> None:
    (woman,) = about(run(LIPIDS, WOMAN_61), FindingCode.UNCONFIRMED)
    (man,) = about(run(LIPIDS, WOMAN_61, sex="male"), FindingCode.UNCONFIRMED)
    assert woman.grade is Grade.CAUTION
    assert "26.191" in woman.message
    assert "23.983" in man.message
    assert "23.983" not in woman.message


def test_an_interval_is_named_where_the_band_is_rebuilt_from_it_and_only_there() -> None:
    printed = "The printed interval of the hazard ratio of diabetes in women is from memory"
    (woman,) = about(run(LIPIDS, WOMAN_61), FindingCode.UNCONFIRMED)
    (man,) = about(run(LIPIDS, WOMAN_61, sex="male"), FindingCode.UNCONFIRMED)
    assert printed in woman.message
    assert printed not in man.message
    content = shipped(LIPIDS).content
    women = msgspec.structs.replace(content.equations[0], uncertainty=NoBand("Taken off."))
    bare = msgspec.structs.replace(content, equations=(women, content.equations[1]))
    model = prepare_model(read_of(bare))
    (without,) = about(assess(model, entry_from_texts(WOMAN_61), at=NOW), FindingCode.UNCONFIRMED)
    assert "interval" not in without.message


def test_only_the_chosen_recalibration_is_named() -> None:
    (low,) = about(run(REGIONAL, MAN_50, recalibration="low"), FindingCode.UNCONFIRMED)
    (high,) = about(run(REGIONAL, MAN_50, recalibration="high"), FindingCode.UNCONFIRMED)
    assert "untested" not in low.message
    assert "untested" in high.message


def test_a_conversion_factor_is_named_only_when_it_was_used() -> None:
    molar = WOMAN_EGFR_90 | {"total_cholesterol": "5.17 mmol/L", "hdl_cholesterol": "1.16 mmol/L"}
    (mass,) = about(run("total-cvd-2024-base", WOMAN_EGFR_90), FindingCode.UNCONFIRMED)
    (unconverted,) = about(run("total-cvd-2024-base", molar), FindingCode.UNCONFIRMED)
    assert "0.02586" in mass.message
    assert "0.02586" not in unconverted.message


def test_a_file_whose_figures_are_confirmed_says_nothing() -> None:
    result = run("diabetes-2007-clinical", WOMAN_55_AT_RISK)
    assert result.estimate is not None
    assert about(result, FindingCode.UNCONFIRMED) == []


def test_a_coefficient_that_is_multiplied_with_nought_is_not_named() -> None:
    """1.957 for untreated blood pressure in white women is from memory; nobody under treatment rests on it."""
    pooled = "ascvd-2013-pooled-cohort"
    (untreated,) = about(run(pooled, PERSON_55), FindingCode.UNCONFIRMED)
    (treated,) = about(run(pooled, PERSON_55, bp_treated="yes"), FindingCode.UNCONFIRMED)
    assert "1.857" in untreated.message
    assert "1.857" not in treated.message


@pytest.mark.parametrize("id", sorted(FULL))
def test_what_the_file_itself_says_stands_beside_every_number(id: str) -> None:
    result = run(id, FULL[id], recalibration="low" if id == "cvd-2021-regional" else None)
    said = [finding.message for finding in about(result, FindingCode.MODEL)]
    assert said == [f"About this model: {caution}" for caution in result.model.content.use.cautions]
    assert result.estimate is not None


def test_the_diabetes_model_says_that_no_age_range_is_stated() -> None:
    said = " ".join(f.message for f in about(run("diabetes-2007-clinical", WOMAN_55_AT_RISK), FindingCode.MODEL))
    assert "age" in said


def test_censored_competing_events_are_cautioned_above_70() -> None:
    assert about(run(LIPIDS, WOMAN_61, age="70"), FindingCode.COMPETING_EVENTS) == []
    (caution,) = about(run(LIPIDS, WOMAN_61, age="71"), FindingCode.COMPETING_EVENTS)
    assert caution.field == "age"
    assert "makes the number higher" in caution.message


def test_a_subdistribution_fit_needs_no_such_caution() -> None:
    assert about(run("total-cvd-2024-base", WOMAN_EGFR_90, age="75"), FindingCode.COMPETING_EVENTS) == []


def test_no_caution_about_a_number_that_is_not_there() -> None:
    assert about(run(LIPIDS, WOMAN_61, age="abc"), FindingCode.UNCONFIRMED) == []
