"""Columns of numbers: units, limits, mixtures, missing codes, texts among the numbers."""

from pathlib import Path

import numpy as np
import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.problems import ProblemCode
from tests.cohort.invented import AGE, CHOLESTEROL, HDL, SCORE, SYSTOLIC, checked, codes, number, only, table_of

DAYS = [10, 20, 30, 40]
STATUS = [0, 1, 0, 1]


def test_values_are_converted_and_nothing_is_said_of_sound_ones(tmp_path: Path) -> None:
    table = table_of(tmp_path, chol=["5.2", "4.1", "", "-9"], age=[40, 50, 60, 70], days=DAYS, status=STATUS)
    entry = ColumnEntry("chol", predictor="total_cholesterol", unit="mmol/L", missing=("-9",))
    cohort = checked(table, (CHOLESTEROL, AGE), entry)
    # 0.02586 mmol/L for 1 mg/dL, from the quantity table
    np.testing.assert_allclose(cohort.columns["total_cholesterol"], [5.2 / 0.02586, 4.1 / 0.02586, np.nan, np.nan])
    np.testing.assert_array_equal(cohort.columns["age"], [40, 50, 60, 70])
    problem = only(cohort, ProblemCode.MISSING)
    assert problem.gravity is Grade.CAUTION
    assert (problem.count, problem.rows) == (2, (4, 5))
    assert "missing in 2 of 4 lines (50.0\u202f%)" in problem.sentence
    assert codes(cohort) == {ProblemCode.MISSING}
    assert cohort.stops == ()


def test_impossible_values_name_limit_line_and_believable_unit(tmp_path: Path) -> None:
    table = table_of(tmp_path, chol=[5.2, 201, 4.4, 6.0], days=DAYS, status=STATUS)
    cohort = checked(table, (CHOLESTEROL,), ColumnEntry("chol", predictor="total_cholesterol", unit="mmol/L"))
    problem = only(cohort, ProblemCode.IMPOSSIBLE)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 1, (3,))
    assert problem.sentence == (
        'Column "chol" (Total cholesterol): 201 mmol/L is not possible, in line 3; the possible range is '
        "1.04–20.6 mmol/L. 201 mg/dL would be believable. Correct the cells, or leave them empty."
    )
    assert np.isnan(cohort.columns["total_cholesterol"][1])


def test_a_limit_met_by_way_of_another_unit_is_met(tmp_path: Path) -> None:
    # 800 mg/dL, the highest possible, is 20.688 mmol/L by the factor 0.02586
    table = table_of(tmp_path, chol=["20.688", "20.69", "5", "6"], days=DAYS, status=STATUS)
    cohort = checked(table, (CHOLESTEROL,), ColumnEntry("chol", predictor="total_cholesterol", unit="mmol/L"))
    assert cohort.columns["total_cholesterol"][0] == 800.0
    assert only(cohort, ProblemCode.IMPOSSIBLE).rows == (3,)


def test_limits_of_the_predictor_narrow_those_of_the_quantity(tmp_path: Path) -> None:
    table = table_of(tmp_path, frailty=[1, 2, 9, 0], days=DAYS, status=STATUS)
    cohort = checked(table, (number("frailty", "Frailty", "number", "1", (0, 4)),))
    problem = only(cohort, ProblemCode.IMPOSSIBLE)
    assert problem.rows == (4,)
    assert '9 (1 of them) may mean that nothing was measured: then name it, missing = ["9"].' in problem.sentence


def test_missing_codes_among_impossible_values_are_offered(tmp_path: Path) -> None:
    table = table_of(tmp_path, systolic_bp=[-9, 999, 130, 140], days=DAYS, status=STATUS)
    problem = only(checked(table, (SYSTOLIC,)), ProblemCode.IMPOSSIBLE)
    assert 'missing = ["-9", "999"]' in problem.sentence
    assert problem.sentence.startswith('Column "systolic_bp" (Systolic blood pressure): −9 mmHg and others')


def test_two_heaps_in_one_column_are_a_mixture(tmp_path: Path) -> None:
    mixed = [5.2, 201, 4.4, 180, 6.1, 250, 5.5, 222]
    table = table_of(tmp_path, chol=mixed, days=[10] * 8, status=STATUS * 2)
    cohort = checked(table, (CHOLESTEROL,), ColumnEntry("chol", predictor="total_cholesterol", unit="mmol/L"))
    problem = only(cohort, ProblemCode.UNIT_MIXTURE)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 4, (3, 5, 7, 9))
    assert "4 values fit mmol/L, such as 5.2 in line 2, and 4 fit mg/dL, such as 201 in line 3" in problem.sentence
    assert ProblemCode.IMPOSSIBLE not in codes(cohort)


def test_a_whole_column_in_another_unit_is_told_as_that(tmp_path: Path) -> None:
    table = table_of(tmp_path, total_cholesterol=[5.2, 4.4, 6.1, 5.9], days=DAYS, status=STATUS)
    problem = only(checked(table, (CHOLESTEROL,)), ProblemCode.UNIT)
    assert problem.gravity is Grade.STOP
    assert "is said to be in mg/dL, and its values, such as 5.2, 4.4 and 6.1, are usual in mmol/L" in problem.sentence
    assert 'unit = "mmol/L"' in problem.sentence


def test_a_unit_that_is_none_of_the_quantity_is_a_stop(tmp_path: Path) -> None:
    table = table_of(tmp_path, total_cholesterol=[200, 210, 220, 230], days=DAYS, status=STATUS)
    entry = ColumnEntry("total_cholesterol", predictor="total_cholesterol", unit="mmol/l")
    problem = only(checked(table, (CHOLESTEROL,), entry), ProblemCode.UNIT)
    assert problem.gravity is Grade.STOP
    assert "'mmol/l' is not a unit of the table." in problem.sentence
    assert "Did you mean mmol/L?" in problem.sentence


@pytest.mark.parametrize(
    ("cell", "slip"),
    [
        ("<3", "The limit of an assay is no value"),
        ('"5,2"', "Points and commas are mixed"),
        ("5.2 mmol/L", "The unit belongs into the dictionary"),
        ("2021-03-05", "It looks like a date"),
        ("unknown", 'name it: missing = ["unknown"]'),
        ("high", 'name it: missing = ["high"]'),
    ],
)
def test_a_text_among_numbers_is_named_with_the_likely_slip(tmp_path: Path, cell: str, slip: str) -> None:
    table = table_of(tmp_path, frailty=["1.5", cell, "2.5", "3.5"], days=DAYS, status=STATUS)
    problem = only(checked(table, (SCORE,)), ProblemCode.TEXT_IN_NUMBERS)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 1, (3,))
    assert slip in problem.sentence
    assert "in line 3" in problem.sentence


def test_numbers_with_leading_zeros_are_numbers_where_numbers_are_expected(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=["045", "50", "61", "NA"], days=DAYS, status=STATUS)
    np.testing.assert_array_equal(checked(table, (AGE,)).columns["age"], [45, 50, 61, np.nan])


def test_a_column_of_text_is_told_as_the_wrong_column(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=["F", "M", "F", "M"], days=DAYS, status=STATUS)
    problem = only(checked(table, (AGE,)), ProblemCode.TEXT_IN_NUMBERS)
    assert 'holds only texts, such as "F" and "M". Perhaps another column was meant' in problem.sentence


@pytest.mark.parametrize(
    ("cells", "code", "words"),
    [
        ([50, 50, 50, "NA"], ProblemCode.CONSTANT, 'is "50" for everybody for whom it is known'),
        (["", "NA", ".", "nan"], ProblemCode.EMPTY, "holds no value at all"),
    ],
)
def test_a_column_that_tells_nobody_apart_is_a_stop(
    tmp_path: Path, cells: list[object], code: ProblemCode, words: str
) -> None:
    problem = only(checked(table_of(tmp_path, age=cells, days=DAYS, status=STATUS), (AGE,)), code)
    assert problem.gravity is Grade.STOP
    assert words in problem.sentence


@pytest.mark.parametrize(("absent", "gravity"), [(29, Grade.NOTE), (30, Grade.CAUTION)])
def test_thirty_percent_missing_is_a_caution(tmp_path: Path, absent: int, gravity: Grade) -> None:
    ages = [""] * absent + [40 + place % 20 for place in range(100 - absent)]
    table = table_of(tmp_path, age=ages, days=range(1, 101), status=[0, 1] * 50)
    problem = only(checked(table, (AGE,)), ProblemCode.MISSING)
    assert problem.gravity is gravity
    assert f"missing in {absent} of 100 lines ({absent}.0\u202f%)" in problem.sentence
    assert problem.rows == (2, 3, 4, 5, 6)


def test_unusual_values_are_a_note_and_many_of_them_a_caution(tmp_path: Path) -> None:
    usual = [120 + place % 40 for place in range(196)]
    table = table_of(tmp_path, systolic_bp=[250, *usual], days=[9] * 197, status=[*[0, 1] * 98, 0])
    assert only(checked(table, (SYSTOLIC,)), ProblemCode.UNUSUAL).gravity is Grade.NOTE
    table = table_of(tmp_path, systolic_bp=[250, 251, *usual], days=[9] * 198, status=[0, 1] * 99)
    problem = only(checked(table, (SYSTOLIC,)), ProblemCode.UNUSUAL)
    assert problem.gravity is Grade.CAUTION
    assert "250 lies outside the usual range 80–220 mmHg, in lines 2 and 3." in problem.sentence


def test_values_that_contradict_each_other_are_told_with_the_table_s_own_sentence(tmp_path: Path) -> None:
    table = table_of(tmp_path, total_cholesterol=[180, 60, 210, 58], hdl=[50, 61, 45, 58], days=DAYS, status=STATUS)
    problem = only(checked(table, (CHOLESTEROL, HDL)), ProblemCode.CONTRADICTION)
    # 58 and 58 may be equal
    assert (problem.gravity, problem.count, problem.rows) == (Grade.STOP, 1, (3,))
    assert problem.sentence == (
        'Column "hdl" (HDL cholesterol) is 61 mg/dL and column "total_cholesterol" (Total cholesterol) 60 mg/dL in '
        "line 3; in line 3 they contradict each other. HDL cholesterol is a part of total cholesterol and cannot be "
        "above it: check both values and their units."
    )


def test_pressures_that_are_equal_contradict_each_other_in_any_units(tmp_path: Path) -> None:
    diastolic = number("diastolic_bp", "Diastolic blood pressure", "diastolic_bp", "kPa")
    table = table_of(tmp_path, systolic_bp=[120, 90, 130, 140], diastolic_bp=[80, 90, 85, 70], days=DAYS, status=STATUS)
    entry = ColumnEntry("diastolic_bp", predictor="diastolic_bp", unit="mm[Hg]")
    assert only(checked(table, (SYSTOLIC, diastolic), entry), ProblemCode.CONTRADICTION).rows == (3,)


def test_a_heap_that_is_possible_in_the_column_s_unit_is_a_caution(tmp_path: Path) -> None:
    weight = number("weight", "Weight", "weight", "kg")
    # 22 to 24 would be usual in stone, and is possible in kg: children, perhaps
    table = table_of(tmp_path, weight=[22, 23, 24, 70, 80, 90], days=[9] * 6, status=[0, 1] * 3)
    cohort = checked(table, (weight,))
    assert only(cohort, ProblemCode.UNIT_MIXTURE).gravity is Grade.CAUTION
    np.testing.assert_array_equal(cohort.columns["weight"], [22, 23, 24, 70, 80, 90])


def test_a_code_far_from_all_other_values_is_a_caution_where_no_limit_catches_it(tmp_path: Path) -> None:
    table = table_of(tmp_path, frailty=[1, -9, 3, 999, 2, 999], days=[9] * 6, status=[0, 1] * 3)
    problem = only(checked(table, (SCORE,)), ProblemCode.MISSING_CODE)
    assert (problem.gravity, problem.count, problem.rows) == (Grade.CAUTION, 3, (3, 5, 7))
    assert "−9 and 999 in lines 3, 5 and 7, far from all other values" in problem.sentence
    assert 'missing = ["-9", "999"]' in problem.sentence
    # nothing is said where there are others like it
    table = table_of(tmp_path, frailty=[1, -9, -3, 99, 45, 30], days=[9] * 6, status=[0, 1] * 3)
    assert checked(table, (SCORE,)).problems == ()
