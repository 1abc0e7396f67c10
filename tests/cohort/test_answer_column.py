"""Columns of questions: texts taken for answers, strangers with the closest answer, answers nobody gave."""

from pathlib import Path

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.problems import ProblemCode
from tests.cohort.invented import DIABETES, SEX, SMOKING, checked, codes, only, table_of

DAYS = [10, 20, 30, 40]
STATUS = [0, 1, 0, 1]


def test_ids_labels_and_the_dictionary_s_texts_are_taken(tmp_path: Path) -> None:
    table = table_of(
        tmp_path,
        sex=["F", "m", "2", "NA"],
        smoking=["never", "Former", "CURRENT", ""],
        diabetes=["1", "0", "yes", "FALSE"],
        days=DAYS,
        status=STATUS,
    )
    levels = (("female", "F"), ("male", "M"), ("male", "2"))
    cohort = checked(table, (SEX, SMOKING, DIABETES), ColumnEntry("sex", predictor="sex", levels=levels))
    np.testing.assert_array_equal(cohort.columns["sex"], [0, 1, 1, np.nan])
    np.testing.assert_array_equal(cohort.columns["smoking"], [0, 1, 2, np.nan])
    np.testing.assert_array_equal(cohort.columns["diabetes"], [1, 0, 1, 0])
    assert cohort.stops == ()


def test_numbers_as_levels_are_matched_as_numbers(tmp_path: Path) -> None:
    table = table_of(tmp_path, sex=["1.0", "2", "01", "2"], days=DAYS, status=STATUS)
    entry = ColumnEntry("sex", predictor="sex", levels=(("female", "1"), ("male", "2")))
    np.testing.assert_array_equal(checked(table, (SEX,), entry).columns["sex"], [0, 1, 0, 1])


def test_an_answer_called_na_is_an_answer(tmp_path: Path) -> None:
    table = table_of(tmp_path, sex=["NA", "EU", "na", ""], days=DAYS, status=STATUS)
    entry = ColumnEntry("sex", predictor="sex", levels=(("female", "NA"), ("male", "EU")))
    np.testing.assert_array_equal(checked(table, (SEX,), entry).columns["sex"], [0, 1, np.nan, np.nan])


def test_a_stranger_is_named_with_its_line_and_the_closest_answer(tmp_path: Path) -> None:
    table = table_of(tmp_path, smoking=["never", "forner", "current", "forner"], days=DAYS, status=STATUS)
    problem = only(checked(table, (SMOKING,)), ProblemCode.UNKNOWN_LEVEL)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 2, (3, 5))
    assert problem.sentence == (
        'Column "smoking" (Smoking): "forner" in 2 lines, first in line 3, is none of its answers. Did you mean '
        '"former"? Say what it stands for under levels, or correct the cells.'
    )


def test_yes_and_no_coded_one_and_two_are_not_guessed(tmp_path: Path) -> None:
    table = table_of(tmp_path, diabetes=[1, 2, 2, 1], days=DAYS, status=STATUS)
    cohort = checked(table, (DIABETES,))
    assert 'say which is which, levels = {yes = "2", no = "1"}' in only(cohort, ProblemCode.UNKNOWN_LEVEL).sentence
    entry = ColumnEntry("diabetes", predictor="diabetes", levels=(("yes", "2"), ("no", "1")))
    np.testing.assert_array_equal(checked(table, (DIABETES,), entry).columns["diabetes"], [0, 1, 1, 0])


def test_a_stranger_that_often_means_missing_is_asked_about(tmp_path: Path) -> None:
    table = table_of(tmp_path, smoking=["never", "former", "current", "-9"], days=DAYS, status=STATUS)
    said = only(checked(table, (SMOKING,)), ProblemCode.UNKNOWN_LEVEL).sentence
    assert 'If it means that nothing was measured, name it: missing = ["-9"].' in said


def test_a_dictionary_s_own_slip_is_told(tmp_path: Path) -> None:
    table = table_of(tmp_path, sex=["F", "M", "F", "M"], days=DAYS, status=STATUS)
    entry = ColumnEntry("sex", predictor="sex", levels=(("femal", "F"), ("male", "M")))
    said = [problem.sentence for problem in checked(table, (SEX,), entry).stops]
    assert any('"femal", for which "F" should stand, is no answer. Did you mean "female"?' in one for one in said)


def test_an_answer_nobody_gave_is_a_caution(tmp_path: Path) -> None:
    table = table_of(tmp_path, smoking=["never", "former", "never", "former"], days=DAYS, status=STATUS)
    cohort = checked(table, (SMOKING,))
    assert codes(cohort) == {ProblemCode.UNUSED_LEVEL}
    assert 'nobody has the answer "current"' in only(cohort, ProblemCode.UNUSED_LEVEL).sentence
