"""Parquet, Excel and Stata: the same people give the same cells as a CSV file of them."""

from datetime import date
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from clinicalc.cohort.frames import require
from clinicalc.cohort.table import read_table
from clinicalc.errors import TableRefused


def people() -> pd.DataFrame:
    """Six invented people, with what is missing, an integer that no float holds, and dates."""
    return pd.DataFrame(
        {
            "person": ["T1", "T2", "T3", "T4", "T5", "007"],
            "chol": [5.2, np.nan, 4.1, 6.3, 0.1 + 0.2, 4.0],
            "age": [51, 62, 47, 70, 33, 58],
            "number": [2**53 + 1, 2, 3, 4, 5, 6],
            "sex": pd.Categorical(["F", "M", "F", None, "M", "M"]),
            "entry": pd.to_datetime(["2020-01-31", "2020-02-01", "", "2019-12-24", "2020-01-31", "2020-03-01"]),
        }
    )


def test_parquet_is_read_as_it_was_written(tmp_path: Path) -> None:
    pytest.importorskip("pyarrow")
    path = tmp_path / "tarnwick.parquet"
    people().assign(born=[date(1960, 5, 1)] * 6, smokes=[True, False] * 3).to_parquet(path)
    table = read_table(path)
    assert table.column("person").tolist() == ["T1", "T2", "T3", "T4", "T5", "007"]
    np.testing.assert_array_equal(table.column("chol"), people()["chol"])
    assert table.column("number").tolist() == ["9007199254740993", 2.0, 3.0, 4.0, 5.0, 6.0]
    assert table.column("sex").tolist() == ["F", "M", "F", None, "M", "M"]
    assert table.column("entry").tolist()[:3] == ["2020-01-31", "2020-02-01", None]
    assert table.column("born").tolist() == ["1960-05-01"] * 6
    assert table.column("smokes").tolist() == ["True", "False"] * 3
    assert table.lines.tolist() == [1, 2, 3, 4, 5, 6]


def test_excel_is_read_from_its_first_sheet(tmp_path: Path) -> None:
    pytest.importorskip("openpyxl")
    path = tmp_path / "tarnwick.xlsx"
    frame = people().drop(columns="number")
    blank = pd.DataFrame([[None] * len(frame.columns)], columns=frame.columns).astype(object)
    pd.concat([frame.astype(object), blank]).to_excel(path, index=False)
    table = read_table(path)
    assert table.names == ("person", "chol", "age", "sex", "entry")
    assert table.column("age").tolist() == [51.0, 62.0, 47.0, 70.0, 33.0, 58.0]
    # openpyxl writes 16 digits
    np.testing.assert_array_equal(table.column("chol"), [float(f"{value:.16g}") for value in people()["chol"]])
    assert table.column("entry").tolist()[:3] == ["2020-01-31", "2020-02-01", None]
    assert table.lines.tolist() == [2, 3, 4, 5, 6, 7]


def test_stata_is_read_with_its_labels(tmp_path: Path) -> None:
    path = tmp_path / "tarnwick.dta"
    people().drop(columns="number").to_stata(path, write_index=False, convert_dates={"entry": "td"})
    table = read_table(path)
    assert table.column("person").tolist()[-1] == "007"
    np.testing.assert_array_equal(table.column("chol"), people()["chol"])
    assert table.column("sex").tolist() == ["F", "M", "F", None, "M", "M"]
    assert table.column("entry").tolist()[:3] == ["2020-01-31", "2020-02-01", None]


@pytest.mark.parametrize("ending", [".dta", ".xlsx", ".parquet"])
def test_a_damaged_file_is_refused_in_a_sentence(tmp_path: Path, ending: str) -> None:
    if ending != ".dta":
        pytest.importorskip({".xlsx": "openpyxl", ".parquet": "pyarrow"}[ending])
    path = tmp_path / f"tarnwick{ending}"
    path.write_bytes(b"this is none of them" * 20)
    with pytest.raises(TableRefused, match="cannot be read as what its name says it is"):
        read_table(path)


def test_what_is_not_installed_is_said_with_the_name_of_the_extra() -> None:
    with pytest.raises(TableRefused) as refused:
        require(Path("tarnwick.parquet"), "no_such_package", "Parquet")
    assert 'install clinicalc with its extra, "clinicalc[files]"' in str(refused.value)
    assert "save the table as CSV" in str(refused.value)
