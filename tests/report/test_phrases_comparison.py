"""A comparison in sentences, and how honest they are about small differences."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.assessment.comparison import ChangedValue, Comparison, Side
from clinicalc.report.phrases_comparison import (
    NO_PROMISE,
    changes_sentence,
    comparison_sentences,
    difference_sentence,
    people_words,
    sides_sentence,
)


def side(probability: float) -> Side:
    """A number without a band."""
    return Side(probability, 1 - probability, None, None)


def comparison(own: float, changed: float, limits: tuple[float, float] | None = None) -> Comparison:
    """Two numbers and their difference."""
    lower, upper = limits or (None, None)
    values = (ChangedValue("smoker", "Smokes now", "no", "Yes", "No"),)
    because = "" if limits else "The source prints none."
    return Comparison(0.95, values, side(own), side(changed), changed - own, lower, upper, because)


@pytest.mark.parametrize(
    ("own", "changed", "words"),
    [
        (0.12, 0.06, "Of 100 people: 12 as entered, 6 with the changes, 6 fewer."),
        (0.06, 0.12, "Of 100 people: 6 as entered, 12 with the changes, 6 more."),
        (0.122, 0.118, "Of 100 people: 12 as entered, 12 with the changes, fewer than 1 in 100 apart."),
        # 13 less 6 would be 7 where the difference is 6.02
        (0.1251, 0.0649, "Of 1000 people: 125 as entered, 65 with the changes, 60 fewer."),
        # 11 and 12 would say one more where the difference is 0.02
        (0.1149, 0.1151, "Of 1000 people: 115 as entered, 115 with the changes, fewer than 1 in 1000 apart."),
        (0.012, 0.004, "Of 1000 people: 12 as entered, 4 with the changes, 8 fewer."),
        (0.004, 0.0001, "Of 1000 people: 4 as entered, fewer than 1 with the changes, 4 fewer."),
        (0.00012, 0.0001, "Of 1000 people: fewer than 1 as entered, fewer than 1 with the changes, fewer than 1 in"),
        (0.9999, 0.995, "Of 1000 people: all but fewer than 1 as entered, 995 with the changes, 5 fewer."),
        (0.12, 0.12, "Of 100 people: 12 as entered, 12 with the changes, the same."),
    ],
)
def test_people(own: float, changed: float, words: str) -> None:
    said = people_words(comparison(own, changed))
    assert said.startswith(words)
    assert said.endswith(f" {NO_PROMISE}")


def test_the_second_sentence_is_word_for_word() -> None:
    assert NO_PROMISE == (
        "This compares people who differ in these values; it does not promise what changing them brings."
    )


@given(st.floats(1e-9, 1 - 1e-9), st.floats(1e-9, 1 - 1e-9))
def test_numbers_that_differ_are_never_nought_apart(own: float, changed: float) -> None:
    said = people_words(comparison(own, changed)) + difference_sentence(comparison(own, changed))
    assert ", 0 " not in said
    if own != changed:
        assert "the same" not in said
        assert "Difference 0" not in said
        assert " 0.0 points" not in said


@pytest.mark.parametrize(
    ("own", "changed", "limits", "words"),
    [
        (0.122, 0.071, (-0.085, -0.04), "Difference −5.1 points, 95 % band −8.5 to −4.0 points."),
        (0.071, 0.122, (-0.01, 0.04), "Difference +5.1 points, 95 % band −1.0 to +4.0 points."),
        (0.122, 0.071, (-0.085, -0.0004), "Difference −5.10 points, 95 % band −8.50 to −0.04 points."),
        (0.1, 0.1002, (0.0001, 0.0003), "Difference +0.02 points, 95 % band +0.01 to +0.03 points."),
        (0.1, 0.1 + 4e-8, (-1e-8, 8e-8), "Difference just above 0 points, 95 % band just below 0 to just above 0 poi"),
        (0.122, 0.071, None, "Difference −5.1 points. No band of it: The source prints none."),
        (0.1, 0.1, (0.0, 0.0), "Difference 0 points: for the model these values make no difference here."),
    ],
)
def test_difference(own: float, changed: float, limits: tuple[float, float] | None, words: str) -> None:
    assert difference_sentence(comparison(own, changed, limits)).replace("\u202f", " ").startswith(words)


def test_everything_in_reading_order() -> None:
    said = comparison_sentences(comparison(0.122, 0.06, (-0.085, -0.04)))
    assert [sentence.replace("\u202f", " ") for sentence in said] == [
        "Changed: Smokes now, No instead of Yes.",
        "12.2 % as entered, 6.0 % with the changes.",
        f"Of 100 people: 12 as entered, 6 with the changes, 6 fewer. {NO_PROMISE}",
        "Difference −6.2 points, 95 % band −8.5 to −4.0 points.",
    ]


def test_the_sides_stand_right_beside_a_decision_point() -> None:
    found = sides_sentence(comparison(0.122, 0.0996), [0.1]).replace("\u202f", " ")
    assert found == "12.2 % as entered, 9.96 % with the changes."


def test_without_numbers_only_the_reason_is_said() -> None:
    none = Comparison(0.95, (), None, None, None, None, None, "Age cannot be changed.")
    assert comparison_sentences(none) == ("No comparison: Age cannot be changed.",)


def test_nothing_changed_is_said() -> None:
    same = Comparison(0.95, (), side(0.1), side(0.1), 0.0, 0.0, 0.0, "")
    assert changes_sentence(same) == "Changed: nothing; every changed value is the one that was entered."
