"""Every finding has its sentence: the column by name, the figure, and what to do."""

from dataclasses import replace

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.sample_size import R2Origin
from clinicalc.estimation.screened import Figure, Screen, Screened, ScreenedColumn, ScreenedOutcome
from clinicalc.estimation.screening import StatedR2, screen
from clinicalc.estimation.screening_words import word_screened

Array = NDArray[np.float64]

N = 400
RANDOM = np.random.default_rng(8)
Y = (np.arange(N) % 8 == 0) * 1.0
X = RANDOM.normal(size=N)
TIMES = RANDOM.exponential(1000.0, N)


def column(name: str, values: Array, **beside: tuple[str, ...]) -> ScreenedColumn:
    return ScreenedColumn(name, values, **beside)


def with_holes(share: float) -> Array:
    values = RANDOM.normal(size=N)
    values[: round(share * N)] = np.nan
    return values


def among(rows: NDArray[np.int64]) -> Array:
    flag = np.zeros(N)
    flag[rows] = 1.0
    return flag


CASES: dict[Screen, tuple[list[ScreenedColumn], ScreenedOutcome, StatedR2 | None]] = {
    Screen.NO_PEOPLE: ([column("x", X)], ScreenedOutcome(np.full(N, np.nan)), None),
    Screen.NO_EVENTS: ([column("x", X)], ScreenedOutcome(np.zeros(N)), None),
    Screen.ALL_EVENTS: ([column("x", X)], ScreenedOutcome(np.ones(N)), None),
    Screen.NOT_FINITE: ([column("x", np.where(X > 2, np.inf, X))], ScreenedOutcome(Y), None),
    Screen.CONSTANT: ([column("x", np.ones(N))], ScreenedOutcome(Y), None),
    Screen.LEVEL_WITHOUT_EVENTS: ([column("x", among(np.array([1, 2, 3])))], ScreenedOutcome(Y), None),
    Screen.LEVEL_ONLY_EVENTS: ([column("x", among(np.array([0, 8])))], ScreenedOutcome(Y), None),
    Screen.SEPARATED: ([column("x", np.abs(X) + 9 * Y)], ScreenedOutcome(Y), None),
    Screen.NEARLY_SEPARATED: ([column("x", np.abs(X) + 9 * Y * (np.arange(N) != 8))], ScreenedOutcome(Y), None),
    Screen.SPARSE_LEVEL: ([column("x", among(np.array([0, 1, 2, 3])))], ScreenedOutcome(Y), None),
    Screen.DEPENDENT: ([column("x", X), column("y", X / 2)], ScreenedOutcome(Y), None),
    Screen.COLLINEAR: ([column("x", X), column("y", X + 0.1 * Y)], ScreenedOutcome(Y), None),
    Screen.TOO_MANY_TERMS: (
        [column(f"x{k}", RANDOM.normal(size=N)) for k in range(51)],
        ScreenedOutcome(Y, TIMES),
        None,
    ),
    Screen.EVENTS_PER_PARAMETER: ([column("x", X)], ScreenedOutcome(Y), None),
    Screen.NO_MINIMUM: ([column("x", X)], ScreenedOutcome(Y), StatedR2(0.9, R2Origin.ANTICIPATED)),
    Screen.BELOW_MINIMUM: ([column("x", X)], ScreenedOutcome(Y), StatedR2(0.01, R2Origin.ANTICIPATED)),
    Screen.OUTLIERS: ([column("x", np.where(np.arange(N) == 5, 1400.0, X))], ScreenedOutcome(Y), None),
    Screen.ALL_MISSING: ([column("x", np.full(N, np.nan))], ScreenedOutcome(Y), None),
    Screen.MISSING: ([column("x", with_holes(0.3))], ScreenedOutcome(Y), None),
    Screen.COMPLETE_CASES: ([column("x", with_holes(0.3))], ScreenedOutcome(Y), None),
    Screen.NO_COMPLETE_CASES: ([column("x", np.full(N, np.nan))], ScreenedOutcome(Y), None),
    Screen.MISSING_TOGETHER: ([column("x", with_holes(0.2)), column("y", with_holes(0.1))], ScreenedOutcome(Y), None),
    Screen.MISSING_WITH_OUTCOME: (
        [column("x", np.where(Y == 1, np.where(X > 0, np.nan, X), X))],
        ScreenedOutcome(Y),
        None,
    ),
}

COMPETING = ((Figure.SHARE, 0.1), (Figure.OTHER_SHARE, 0.7), (Figure.VALUE, 0.13), (Figure.DIFFERENCE, 0.3))
MANY = ((Figure.PEOPLE, 120.0), (Figure.OF_PEOPLE, 400.0), (Figure.SHARE, 0.3))
FOUND_ELSEWHERE = {
    Screen.COMPETING_CENSORED: Screened(Grade.CAUTION, (), Screen.COMPETING_CENSORED, COMPETING, level="10 years"),
    Screen.COMPETING_COUNTED: Screened(Grade.NOTE, (), Screen.COMPETING_COUNTED, COMPETING, level="10 years"),
    Screen.HELD_BY_PENALTY: Screened(Grade.CAUTION, ("x",), Screen.HELD_BY_PENALTY, level="1", detail="value"),
    Screen.FILLED_IN: Screened(Grade.CAUTION, ("x",), Screen.FILLED_IN, (*MANY, (Figure.SETS, 20.0))),
    Screen.NOT_FILLED_IN: Screened(Grade.CAUTION, (), Screen.NOT_FILLED_IN, MANY),
    Screen.NOT_MIXED: Screened(Grade.CAUTION, ("x",), Screen.NOT_MIXED, ((Figure.VALUE, 1.31), (Figure.ROUNDS, 30.0))),
}

OF_NO_COLUMN = {
    *(FOUND_ELSEWHERE.keys() - {Screen.HELD_BY_PENALTY, Screen.FILLED_IN, Screen.NOT_MIXED}),
    Screen.NO_PEOPLE,
    Screen.NO_EVENTS,
    Screen.ALL_EVENTS,
    Screen.TOO_MANY_TERMS,
    Screen.EVENTS_PER_PARAMETER,
    Screen.NO_MINIMUM,
    Screen.BELOW_MINIMUM,
    Screen.COMPLETE_CASES,
    Screen.NO_COMPLETE_CASES,
}


def find(code: Screen) -> Screened:
    if code in FOUND_ELSEWHERE:
        return FOUND_ELSEWHERE[code]
    columns, outcome, r2 = CASES[code]
    return next(each for each in screen(columns, outcome, r2=r2) if each.code is code)


@pytest.mark.parametrize("code", Screen)
def test_each_finding_has_a_sentence_that_names_its_columns(code: Screen) -> None:
    found = find(code)
    sentence = word_screened(found)
    assert sentence.endswith(".")
    assert "nan" not in sentence.split()
    assert not any(mark in sentence for mark in ("{", "}", "  ", "-1", " %"))
    for name in found.columns:
        assert f'"{name}"' in sentence
    assert (code in OF_NO_COLUMN) == (not found.columns)
    if found.gravity is not Grade.NOTE:  # what to do next is a sentence, or a part, of its own
        assert sentence.count(".") + sentence.count(";") >= 2


@pytest.mark.parametrize("code", [code for code in Screen if code not in OF_NO_COLUMN])
def test_a_name_can_be_given_as_a_reader_knows_it(code: Screen) -> None:
    sentence = word_screened(find(code), lambda name: f"the field {name.upper()}")
    assert "the field X" in sentence or "the field Y" in sentence
    assert '"x"' not in sentence


def test_a_level_is_said_in_its_own_words() -> None:
    place = np.where(Y == 1, 0.0, np.arange(N) % 2)
    stop = screen([column("x", place, levels=("never", "for\u202emer"))], ScreenedOutcome(Y))[0]
    assert stop.code is Screen.LEVEL_WITHOUT_EVENTS
    assert word_screened(stop) == (
        '"x": none of the 200 people with “for<U+202E>mer” had the event, so the coefficient runs off without end. Join'
        " this level with another one of like meaning, or leave the term out."
    )


def test_a_hostile_name_is_shown_safely() -> None:
    stop = screen([column("a\u202eb\n" + 90 * "c", np.ones(N))], ScreenedOutcome(Y))[0]
    sentence = word_screened(stop)
    assert "\u202e" not in sentence
    assert "\n" not in sentence
    assert "<U+202E>" in sentence
    assert len(sentence) < 300


def test_more_people_in_the_denominator_than_a_thousand_and_only_one() -> None:
    x = np.zeros(2000)
    x[0] = 1.0
    y = (np.arange(2000) % 4 == 1) * 1.0
    assert '"x": the only person with the value 1 did not have the event, so' in word_screened(
        screen([column("x", x)], ScreenedOutcome(y))[0]
    )
    no_events = screen([column("x", x)], ScreenedOutcome(np.zeros(2000)))
    assert any("None of the 2,000 people has the event" in word_screened(each) for each in no_events)


def test_where_the_r2_comes_from_is_said() -> None:
    said = {
        origin: next(
            word_screened(each)
            for each in screen([column("x", X)], ScreenedOutcome(Y), r2=StatedR2(0.1, origin))
            if each.code in (Screen.EVENTS_PER_PARAMETER, Screen.BELOW_MINIMUM)
        )
        for origin in R2Origin
    }
    assert "Riley and others (2019)" in said[R2Origin.ANTICIPATED]
    assert "as it was stated to be expected" in said[R2Origin.ANTICIPATED]
    assert "15\u202f% of the largest possible" in said[R2Origin.ASSUMED]
    assert "a check afterwards, not a plan made before" in said[R2Origin.APPARENT]


def test_follow_up_of_different_length_is_not_passed_over() -> None:
    columns, outcome, _ = CASES[Screen.MISSING_WITH_OUTCOME]
    for times, said in ((None, False), (TIMES, True)):
        found = screen(columns, ScreenedOutcome(outcome.events, times))
        sentence = next(word_screened(each) for each in found if each.code is Screen.MISSING_WITH_OUTCOME)
        assert ("follow-up left aside" in sentence) is said
        assert "not a test" in sentence


def test_how_far_one_minus_kaplan_meier_is_above() -> None:
    censored = FOUND_ELSEWHERE[Screen.COMPETING_CENSORED]
    assert word_screened(censored) == (
        "By 10 years, 10.0\u202f% have had the event and 70.0\u202f% a competing event first (Aalen–Johansen). With"
        " competing events taken as censored it is 13.0\u202f% (one minus Kaplan–Meier): 30.0\u202f% more, and the"
        " probabilities of this Cox fit are likewise above the share of people who will have the event. Where that"
        ' share is what a patient is to be told, fit kind = "fine-gray".'
    )
    twice = replace(censored, figures=(*COMPETING[:3], (Figure.DIFFERENCE, 1.25)))
    assert "2.2 times as much" in word_screened(twice)
    none = replace(censored, gravity=Grade.NOTE, figures=(*COMPETING[:3], (Figure.DIFFERENCE, 0.0)))
    assert "): no more, and" in word_screened(none)
    assert "fine-gray" not in word_screened(none)
