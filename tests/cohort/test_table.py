"""Text tables read: separators, decimals, encodings, lines that do not fit, and what was written read back."""

import csv
from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from clinicalc.cohort.course import Unwatched
from clinicalc.cohort.table import read_table
from clinicalc.errors import Stopped, TableRefused, UsageError
from tests.cohort.invented import write


def test_a_plain_table_is_read_with_numbers_texts_and_lines(tmp_path: Path) -> None:
    table = read_table(write(tmp_path, ["person,age,sex,chol", "P1,51,F,5.2", "P2,,M,NA", "", "P3,63,F,4"]))
    assert table.names == ("person", "age", "sex", "chol")
    assert table.rows == 3
    assert table.lines.tolist() == [2, 3, 5]
    assert table.told == "Read as UTF-8, fields separated by commas, decimal point. 1 empty line was left out."
    np.testing.assert_array_equal(table.column("age"), [51.0, np.nan, 63.0])
    assert table.column("sex").tolist() == ["F", "M", "F"]
    assert table.column("chol").tolist() == [5.2, "NA", 4.0]
    with pytest.raises(UsageError, match="no column 'bmi'"):
        table.column("bmi")


@pytest.mark.parametrize(
    ("name", "lines", "told"),
    [
        ("a.csv", ["id;chol", "a;5,2", "b;4"], "fields separated by semicolons, decimal comma"),
        ("a.csv", ["id;chol", "a;5.2", "b;4"], "fields separated by semicolons, decimal point"),
        ("a.tsv", ["id\tchol", "a\t5,2", "b\t4"], "fields separated by tabs, decimal comma"),
        ("a.txt", ["id|chol", "a|5.2", "b|4"], "fields separated by upright strokes, decimal point"),
        ("a.csv", ["sep=;", "id;chol", "a;5,2", "b;4"], "fields separated by semicolons, decimal comma"),
        ("a.csv", ["id,chol", '"a",5.2', '"b, c",4'], "fields separated by commas, decimal point"),
    ],
)
def test_separator_and_decimal_sign_are_told(tmp_path: Path, name: str, lines: list[str], told: str) -> None:
    table = read_table(write(tmp_path, lines, name))
    assert told in table.told
    assert table.column("chol").tolist() == [5.2, 4.0]


@pytest.mark.parametrize(
    ("encoding", "told"),
    [("utf-8", "UTF-8,"), ("utf-8-sig", "byte order mark"), ("latin-1", "latin-1"), ("utf-16", "UTF-16")],
)
def test_the_encoding_is_told_and_letters_are_kept(tmp_path: Path, encoding: str, told: str) -> None:
    table = read_table(write(tmp_path, ["Größe,Ort", "1.7,Tärnwick", "1.8,Tärnwick"], encoding=encoding))
    assert told in table.told
    assert table.names == ("Größe", "Ort")
    assert table.find("Ort").used_levels == (("Tärnwick", 2),)  # type: ignore[union-attr]  # it is there


def test_what_would_change_as_a_number_stays_a_text(tmp_path: Path) -> None:
    table = read_table(write(tmp_path, ["id,n", "007,0.5", "12345678901234567,1_000", "7,inf", "1e999,−3"]))
    assert table.column("id").tolist() == ["007", "12345678901234567", 7.0, "1e999"]
    assert table.column("n").tolist() == [0.5, "1_000", "inf", -3.0]


def test_every_line_of_the_wrong_width_is_named(tmp_path: Path) -> None:
    lines = ["a,b,c", "1,2,3", "1,2", '1,"2', 'x",3', "1,2,3,4", *["1"] * 5]
    with pytest.raises(TableRefused) as refused:
        read_table(write(tmp_path, lines))
    said = str(refused.value)
    assert "line 3: has 2 fields, and the first line has 3 names; perhaps it is cut off." in said
    # the text of line 4 runs into line 5, which is whole; counting goes on behind it
    assert "line 6: has 4 fields, and the first line has 3 names; perhaps a text that holds the separator" in said
    assert "line 7: has 1 fields" in said
    assert "2 further lines" in said
    assert "line 4" not in said


@pytest.mark.parametrize(
    ("lines", "sentence"),
    [
        (["a,b,a", "1,2,3"], 'names "a" 2 times'),
        (["1,2,3", "4,5,6"], "it has to hold the names of the columns"),
        ([""], "is empty"),
        (["a,b"], "There is nobody in it"),
        (["a,b", "x,1,2", "y,3,4"], "the name of the first column is lacking"),
        (["a,b", "x,1", 'x,"' + "y" * 200_000], "line 3: from here on it cannot be read"),
        (["a,b", "x,1", 'x,"y', "z,3"], "line 3: from here on it cannot be read"),
        (["a,b", "x,1", 'x,"y" z', "z,3"], "a quotation mark is left open, or stands inside a text"),
    ],
)
def test_what_is_no_table_is_refused_in_a_sentence(tmp_path: Path, lines: list[str], sentence: str) -> None:
    with pytest.raises(TableRefused, match=r"tarnwick\.csv: this table is not read") as refused:
        read_table(write(tmp_path, lines))
    assert sentence in str(refused.value)
    assert refused.value.exit_status == 4


def test_a_file_that_is_not_there_or_of_no_known_form_is_refused(tmp_path: Path) -> None:
    with pytest.raises(TableRefused, match="cannot be opened"):
        read_table(tmp_path / "absent.csv")
    with pytest.raises(TableRefused, match=r'The end "\.sav" of its name is none of \.csv'):
        read_table(write(tmp_path, ["a"], "a.sav"))


def test_reading_can_be_stopped(tmp_path: Path) -> None:
    class Ended(Unwatched):
        """Somebody who asks at once for the end."""

        def say(self, words: str, done: int = 0, of: int = 0) -> None:
            raise Stopped(words)

    with pytest.raises(Stopped):
        read_table(write(tmp_path, ["a,b", "1,2"]), Ended())


numbers = st.floats(allow_nan=False, allow_infinity=False, width=64).map(lambda one: float(f"{one:.15g}"))
texts = st.text(st.characters(exclude_categories=("Cs", "Cc", "Z")), min_size=1, max_size=12).filter(
    lambda text: not any(sign.isdigit() for sign in text)
)


@given(
    rows=st.lists(st.tuples(st.one_of(st.none(), numbers), st.one_of(st.none(), texts)), min_size=1, max_size=30),
    separator=st.sampled_from([",", ";", "\t"]),
)
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60, deadline=None)
def test_what_was_written_is_read_back(
    tmp_path: Path, rows: list[tuple[float | None, str | None]], separator: str
) -> None:
    path = tmp_path / "any.csv"
    with path.open("w", encoding="utf-8", newline="") as file:
        writer = csv.writer(file, delimiter=separator)
        writer.writerow(["place", "number", "text"])
        for place, (number, text) in enumerate(rows):
            writer.writerow([place, "" if number is None else repr(number), text or ""])
    table = read_table(path)
    np.testing.assert_array_equal(table.column("place"), np.arange(len(rows)))
    wanted = [np.nan if number is None else number for number, _ in rows]
    np.testing.assert_array_equal(np.asarray(table.column("number"), dtype=float), wanted)
    raw = table.find("text")
    assert raw is not None
    assert [raw.text(row) for row in range(len(rows))] == [text or "" for _, text in rows]
