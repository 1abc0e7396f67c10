"""The sentences about the re-measurement spread."""

from dataclasses import replace

from clinicalc.assessment.spread import Spread, SpreadPart
from clinicalc.report.phrases_spread import SPREAD_MEANING, spread_sentence, spread_sources

LIPIDS = "Smith SJ et al. Clin Chem 1993;39:1012"
PRESSURE = "Keenan et al. BMJ 2009;338:b1492."
PARTS = (
    SpreadPart("total_cholesterol", "Total cholesterol", 10.98, 0.0738, LIPIDS),
    SpreadPart("hdl_cholesterol", "HDL cholesterol", 3.478, 0.0524, LIPIDS),
    SpreadPart("systolic_bp", "Systolic blood pressure", 9.7, 0.216, PRESSURE),
)
WOMAN_61 = Spread(0.95, 0.067592, 0.160774, 0.234209, PARTS)


def test_the_spread_says_what_it_says_and_of_which_values() -> None:
    assert spread_sentence(WOMAN_61) == (
        "Re-measurement spread 6.8–16.1\u202f%: how far the number would move if the same patient were measured again,"
        " in 95 of 100 measurements round the values typed"
        " (total cholesterol, HDL cholesterol, systolic blood pressure)."
    )


def test_a_value_that_does_not_move_the_number_is_not_named_as_moving_it() -> None:
    still = replace(PARTS[1], link_sd=0.0)
    assert "(total cholesterol, systolic blood pressure)." in spread_sentence(
        replace(WOMAN_61, parts=(PARTS[0], still, PARTS[2]))
    )


def test_a_spread_of_no_width_is_no_promise() -> None:
    still = tuple(replace(part, link_sd=0.0) for part in PARTS)
    assert spread_sentence(replace(WOMAN_61, lower=0.1, upper=0.1, link_sd=0.0, parts=still)) == (
        "Re-measurement spread: within one SD of total cholesterol, HDL cholesterol or systolic blood pressure, up or"
        " down, the number stays the same. A larger difference may still move it."
    )


def test_each_source_stands_once_with_its_values() -> None:
    assert spread_sources(WOMAN_61) == (
        "Variation of total cholesterol and HDL cholesterol within a person: Smith SJ et al. Clin Chem 1993;39:1012.",
        "Variation of systolic blood pressure within a person: Keenan et al. BMJ 2009;338:b1492.",
    )


def test_the_permanent_words_are_one_sentence() -> None:
    assert SPREAD_MEANING.count(".") == 1
