"""Outcomes: statuses, times, entries, dates; and everything about them that cannot be."""

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, SurvivalOutcome
from clinicalc.cohort.dictionary import OutcomeKind, OutcomePlan
from clinicalc.cohort.problems import ProblemCode
from tests.cohort.invented import AGE, BINARY, COMPETING, TIMED, checked, codes, only, table_of

AGES = [41, 52, 63, 74]
DATED = OutcomePlan(
    OutcomeKind.TIME_TO_EVENT, start="entered", end="left", status="status", event=("dead",), censored=("alive",)
)


def survival(cohort: CheckedCohort) -> SurvivalOutcome:
    """The outcome of a cohort that has times."""
    assert isinstance(cohort.outcome, SurvivalOutcome)
    return cohort.outcome


def test_times_statuses_and_entries_are_taken(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[10, 20.5, 30, ""], status=[0, 1, 2, 1], came=[0, 5, 7, 1])
    cohort = checked(table, (AGE,), outcome=replace(COMPETING, entry="came"))
    outcome = survival(cohort)
    np.testing.assert_array_equal(outcome.times, [10, 20.5, 30, np.nan])
    np.testing.assert_array_equal(outcome.status, [0, 1, 2, 1])
    np.testing.assert_array_equal(outcome.entry, [0, 5, 7, 1])
    assert outcome.unit == "d"
    assert codes(cohort) == {ProblemCode.OUTCOME_MISSING}
    assert "says nothing in 1 of 4 lines (25.0\u202f%)" in only(cohort, ProblemCode.OUTCOME_MISSING).sentence


def test_a_binary_outcome_is_taken(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, dead=["Yes", "no", "yes", ""])
    cohort = checked(table, (AGE,), outcome=replace(BINARY, event=("yes",), no_event=("no",)))
    assert isinstance(cohort.outcome, BinaryOutcome)
    np.testing.assert_array_equal(cohort.outcome.y, [1, 0, 1, np.nan])
    assert only(cohort, ProblemCode.OUTCOME_MISSING).gravity is Grade.NOTE


@pytest.mark.parametrize(("plan", "column"), [(BINARY, "dead"), (TIMED, "status")])
def test_one_and_two_are_asked_about(tmp_path: Path, plan: OutcomePlan, column: str) -> None:
    table = table_of(tmp_path, **{"age": AGES, "days": [1, 2, 3, 4], column: [1, 2, 2, 2]})
    problem = only(checked(table, (AGE,), outcome=plan), ProblemCode.CODED_ONE_TWO)
    assert problem.gravity is Grade.STOP
    assert f'Column "{column}" holds "2" in 3 lines and "1" in 1 line' in problem.sentence
    assert 'Which is the event? Say so: event = "2" and ' in problem.sentence


def test_one_and_two_that_were_explained_are_taken(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[1, 2, 3, 4], status=[1, 2, 2, 1])
    plan = replace(TIMED, event=("2",), censored=("1",))
    cohort = checked(table, (AGE,), outcome=plan)
    np.testing.assert_array_equal(survival(cohort).status, [0, 1, 1, 0])
    assert cohort.problems == ()


def test_a_status_nobody_explained_is_named_with_the_closest(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[1, 2, 3, 4], status=["dead", "alive", "dad", "moved"])
    plan = replace(TIMED, event=("dead",), censored=("alive",))
    problem = only(checked(table, (AGE,), outcome=plan), ProblemCode.STATUS)
    assert (problem.count, problem.rows) == (2, (4, 5))
    assert '"dad" in 1 line and "moved" in 1 line, first in line 4, and nobody said' in problem.sentence
    assert 'Did you mean "dead"?' in problem.sentence


@pytest.mark.parametrize(
    ("states", "code", "words"),
    [
        ([0, 0, 0, 0], ProblemCode.NO_EVENTS, 'nobody had the event ("1" stands in no line); it holds "0" in 4 lines'),
        ([1, 1, 1, 1], ProblemCode.NO_EVENTS, "everybody had the event"),
        (["", "", "", "NA"], ProblemCode.OUTCOME_MISSING, "says of nobody what happened"),
    ],
)
def test_an_outcome_without_events_or_without_any_others_is_a_stop(
    tmp_path: Path, states: list[object], code: ProblemCode, words: str
) -> None:
    problem = only(checked(table_of(tmp_path, age=AGES, dead=states), (AGE,), outcome=BINARY), code)
    assert problem.gravity is Grade.STOP
    assert words in problem.sentence


def test_times_of_zero_or_below_are_a_stop(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[0, -3, 30, 40], status=[0, 1, 2, 1])
    problem = only(checked(table, (AGE,), outcome=COMPETING), ProblemCode.TIME_NOT_POSITIVE)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 2, (2, 3))
    assert "a time of 0 cannot be, in lines 2 and 3" in problem.sentence


def test_leaving_before_entering_is_a_stop_and_an_event_before_entry_another(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[10, 20, 30, 40], status=[0, 1, 2, 1], came=[10, 25, 7, 1])
    cohort = checked(table, (AGE,), outcome=replace(COMPETING, entry="came"))
    left, happened = only(cohort, ProblemCode.EXIT_BEFORE_ENTRY), only(cohort, ProblemCode.EVENT_BEFORE_ENTRY)
    assert (left.gravity, left.rows) == (Grade.STOP, (2,))
    assert (happened.gravity, happened.rows) == (Grade.STOP, (3,))
    assert "the event lies at or before the entry in line 3, such as 20 after 25" in happened.sentence


def test_a_unit_of_time_that_makes_people_too_old_is_a_stop(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[1000, 20, 30, 40], status=[0, 1, 2, 1])
    problem = only(checked(table, (AGE,), outcome=replace(COMPETING, unit="a")), ProblemCode.UNIT)
    assert "1000 years is longer than anybody lives, in line 2" in problem.sentence
    said = only(checked(table, (AGE,), outcome=replace(COMPETING, unit="s")), ProblemCode.UNIT).sentence
    assert 'time cannot be counted in "s". Use "a" (years), "mo" (months), "wk" (weeks) or "d" (days).' in said


@pytest.mark.parametrize(
    "written",
    [
        ["2020-01-31", "2020-03-01", "2019-02-28", "2020-05-05"],
        ["31.01.2020", "1.3.2020", "28.02.2019", "5.5.2020"],
        ["01/31/2020", "03/01/2020", "02/28/2019", "05/05/2020"],
        ["20200131", "20200301", "20190228", "20200505"],
    ],
)
def test_dates_are_turned_into_days(tmp_path: Path, written: list[str]) -> None:
    left = ["2021-01-30", "2020-03-02", "2020-02-28", "2020-05-06"]
    status = ["alive", "dead", "dead", "alive"]
    table = table_of(tmp_path, age=AGES, entered=written, left=left, status=status)
    cohort = checked(table, (AGE,), outcome=DATED)
    # counted by hand: 2020 is a leap year
    np.testing.assert_array_equal(survival(cohort).times, [365, 1, 365, 1])
    assert survival(cohort).entry is None
    assert cohort.problems == ()


def test_with_a_date_of_birth_time_is_age_and_entry_is_late(tmp_path: Path) -> None:
    table = table_of(
        tmp_path,
        age=AGES,
        born=["2000-01-01"] * 4,
        entered=["2000-01-11"] * 4,
        left=["2000-01-31", "2000-01-21", "2000-01-12", "2000-01-13"],
        status=["alive", "dead", "dead", "alive"],
    )
    outcome = survival(checked(table, (AGE,), outcome=replace(DATED, born="born")))
    np.testing.assert_array_equal(outcome.times, [30, 20, 11, 12])
    np.testing.assert_array_equal(outcome.entry, [10, 10, 10, 10])


def test_dates_that_are_none_or_out_of_order_are_a_stop(tmp_path: Path) -> None:
    table = table_of(
        tmp_path,
        age=AGES,
        entered=["2020-01-31", "2020-02-30", "2020-01-01", "2020-01-01"],
        left=["2020-01-30", "2021-01-01", "2020-01-01", "soon"],
        status=["alive", "dead", "dead", "alive"],
    )
    cohort = checked(table, (AGE,), outcome=DATED)
    odd = [problem for problem in cohort.problems if problem.code is ProblemCode.NOT_A_DATE]
    assert [(problem.column, problem.rows) for problem in odd] == [("entered", (3,)), ("left", (5,))]
    assert '"2020-02-30" is no date, in line 3. Write every date as year, month and day' in odd[0].sentence
    order = only(cohort, ProblemCode.DATES_OUT_OF_ORDER)
    assert (order.gravity, order.rows) == (Grade.STOP, (2,))
    assert only(cohort, ProblemCode.TIME_NOT_POSITIVE).rows == (4,)


def test_days_and_months_that_nothing_tells_apart_are_asked_about(tmp_path: Path) -> None:
    table = table_of(
        tmp_path,
        age=AGES,
        entered=["01/02/2020", "03/04/2020", "05/06/2020", "07/08/2020"],
        left=["2021-01-01"] * 4,
        status=["alive", "dead", "dead", "alive"],
    )
    problem = only(checked(table, (AGE,), outcome=DATED), ProblemCode.NOT_A_DATE)
    assert problem.count == 4
    assert '"01/02/2020" may be day and month or month and day, and no other date tells.' in problem.sentence


def test_a_competing_event_nobody_had_is_a_note(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=[1, 2, 3, 4], status=[0, 1, 1, 0])
    problem = only(checked(table, (AGE,), outcome=COMPETING), ProblemCode.STATUS)
    assert problem.gravity is Grade.NOTE
    assert 'no competing event ("2") stands in any line' in problem.sentence
