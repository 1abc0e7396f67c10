"""Covariances and tables that `package` refuses: every fault with the file, the value and the likely slip."""

import json
import math
from collections.abc import Callable
from pathlib import Path

import pytest

from tests.development.lung_case import Case, Table, open_case


def test_both_are_taken_as_they_are(tmp_path: Path) -> None:
    for name in ("lung", "three_months"):
        folder = tmp_path / name
        folder.mkdir()
        assert open_case(folder, name).package().data


def test_a_lost_row_is_named(lung: Case) -> None:
    lung.rewrite("lung_vcov.csv", lambda rows: rows[:2] + rows[3:])
    said = lung.only_problem()
    assert said.startswith("fit.all.covariance (lung_vcov.csv): ")
    assert '"female" has a column and no row. Was a line lost?' in said


def test_a_lost_column_is_named(lung: Case) -> None:
    lung.rewrite("lung_vcov.csv", lambda rows: [row[:2] + row[3:] for row in rows])
    assert '"female" has a row and no column' in lung.only_problem()


def test_rows_and_columns_in_another_order_are_matched_by_name(lung: Case) -> None:
    plain = lung.package()
    lung.rewrite("lung_vcov.csv", lambda rows: [[row[0], *row[:0:-1]] for row in [rows[0], *rows[:0:-1]]])
    lung.rewrite("lung_coef.csv", lambda rows: [rows[0], *rows[:0:-1]])
    assert lung.package().data == plain.data


def test_a_matrix_without_names_is_not_matched_by_position(lung: Case) -> None:
    lung.rewrite("lung_vcov.csv", lambda rows: [row[1:] for row in rows[1:]])
    assert "the first line holds numbers and no names" in lung.only_problem()
    lung.rewrite("lung_vcov.csv", lambda rows: [["age", "female", "ecog"], *rows])
    assert "the rows have no names" in lung.only_problem()


def test_other_names_than_the_coefficients_are_refused(lung: Case) -> None:
    def rename(rows: Table) -> None:
        rows[0][2] = rows[2][0] = "sex"

    lung.rewrite("lung_vcov.csv", rename)
    said = lung.only_problem()
    assert '"female" has a coefficient and no row in the covariance.' in said
    assert '"sex" has a row in the covariance and no coefficient.' in said


def set_cell(row: int, column: int, text: str) -> Callable[[Table], None]:
    def change(rows: Table) -> None:
        rows[row][column] = text

    return change


@pytest.mark.parametrize(
    ("row", "column", "text", "words"),
    [
        (1, 2, "0.0001", "not symmetric: row 1, column 2"),
        (2, 2, "-0.0281", "entry 2 of its diagonal, a variance, is not above 0"),
        (1, 1, "0", "entry 1 of its diagonal"),
        (3, 3, "NA", 'line 4, column "ecog": NA stands here. R writes NA where a coefficient could not be estimated'),
        (3, 3, "Inf", "Inf is not finite"),
        (3, 3, "NaN", "NaN is not finite"),
        (3, 3, "1e999", "1e999 is not finite"),
        (3, 3, "0,0128", '"0,0128" has a decimal comma. Write the table with write.csv, not write.csv2'),
        (3, 3, "", "nothing stands here"),
        (3, 3, "x", '"x" is not a number'),
    ],
)
def test_an_entry_that_cannot_be(row: int, column: int, text: str, words: str, lung: Case) -> None:
    lung.rewrite("lung_vcov.csv", set_cell(row, column, text))
    said = lung.only_problem()
    assert said.startswith("fit.all.covariance (lung_vcov.csv): ")
    assert words in said


def test_a_covariance_that_is_not_positive_definite(lung: Case) -> None:
    def too_close(rows: Table) -> None:
        between = math.sqrt(float(rows[1][1]) * float(rows[2][2])) * 1.01
        rows[1][2] = rows[2][1] = repr(between)

    lung.rewrite("lung_vcov.csv", too_close)
    said = lung.only_problem()
    assert "not positive definite" in said
    assert "age, female, ecog" in said


def test_a_covariance_of_too_few_digits(tmp_path: Path) -> None:
    """Age and its square, uncentred: rounding that the eye passes over moves such a band by half and more."""
    case = open_case(tmp_path, "three_months")
    v = [[9.0, -0.28, 0.00216], [-0.28, 0.0089, -6.92e-05], [0.00216, -6.92e-05, 5.42e-07]]
    names = ["(Intercept)", "age", "age2"]
    (tmp_path / "v.json").write_text(json.dumps({"names": names, "matrix": v}), encoding="utf-8")
    (tmp_path / "b.json").write_text(json.dumps(dict(zip(names, (-9.1, 0.2, -0.001), strict=True))), encoding="utf-8")
    case.fit.update(coefficients="b.json", covariance="v.json")
    square = {"id": "age2", "product": [{"of": "age"}, {"of": "age"}]}
    case.equation["terms"] = [{"id": "age", "product": [{"of": "age"}]}, square]
    said = case.only_problem()
    assert "3 significant digits" in said
    assert "Write it with write.csv" in said


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ('"";"age"\n"age";1\n', "parted by semicolons. Write the table with write.csv, not write.csv2"),
        ("age female\nage 1\n", "parted by spaces"),
        ('"","age","age"\n"age",1,0\n"age",0,1\n', 'two columns are called "age"'),
        ('"","age"\n', "no rows"),
        ('"","age","female"\n"age",1\n', "line 2 has 2 entries under 3 names"),
        ("", "no rows"),
    ],
)
def test_a_file_of_another_form(text: str, words: str, lung: Case) -> None:
    (lung.folder / "lung_vcov.csv").write_text(text, encoding="utf-8")
    assert words in lung.only_problem()


def test_a_table_that_is_not_there(lung: Case) -> None:
    lung.fit["covariance"] = "vcov.csv"
    assert lung.only_problem().startswith("fit.all.covariance (vcov.csv): there is no such file in the folder ")
