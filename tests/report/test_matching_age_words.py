"""The matching age in words."""

import pytest

from clinicalc.assessment.matching_age import AgePlace, MatchingAge
from clinicalc.report.matching_age_words import say_matching_age, short_age


@pytest.mark.parametrize(
    ("found", "short", "sentence"),
    [
        (
            MatchingAge(AgePlace.WITHIN, 74.94, 3.76, 35, 79, ""),
            "matching age 75",
            "The reference person would have this number at 74.9 years (standard error 3.8).",
        ),
        (
            MatchingAge(AgePlace.WITHIN, 52.04, None, 35, 79, ""),
            "matching age 52",
            "The reference person would have this number at 52.0 years.",
        ),
        (
            MatchingAge(AgePlace.BELOW, None, None, 30, 74, ""),
            "matching age below 30",
            "The matching age is below 30 years, the lowest age for which the model gives a number.",
        ),
        (
            MatchingAge(AgePlace.ABOVE, None, None, 30, 74, ""),
            "matching age above 74",
            "The matching age is above 74 years, the highest age for which the model gives a number.",
        ),
        (
            MatchingAge(None, None, None, 0, 0, "The number does not depend on age."),
            "",
            "No matching age. The number does not depend on age.",
        ),
    ],
)
def test_words(found: MatchingAge, short: str, sentence: str) -> None:
    assert (short_age(found), say_matching_age(found)) == (short, sentence)
