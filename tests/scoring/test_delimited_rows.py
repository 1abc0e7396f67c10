"""Text tables as blocks of rows: every cell as Python's csv module reads it, whatever the size of a block."""

import csv
import io
from pathlib import Path

import numpy as np
import pytest

from clinicalc.errors import TableRefused, UsageError
from clinicalc.scoring.delimited_rows import DelimitedRows
from clinicalc.scoring.row_blocks import Wanted
from clinicalc.scoring.scored import CodedTexts

WANTED = Wanted({"a": "a", "c": "c"}, ("b", "a"))


def read_all(path: Path, block: int = 1 << 22, wanted: Wanted = WANTED) -> list[tuple[str, ...]]:
    """Every row: a, c, then the kept b and a."""
    rows: list[tuple[str, ...]] = []
    for one in DelimitedRows(path, block).blocks(wanted):
        fields = []
        for cells in one.cells.values():
            assert isinstance(cells, CodedTexts)
            fields.append([cells.distinct[place] for place in cells.at])
        columns = [*fields, *(kept.texts for kept in one.kept)]
        rows += zip(*columns, strict=True)
        assert one.after.rows == len(rows)
    return rows


def by_csv(text: str, separator: str = ",") -> list[tuple[str, ...]]:
    """The same by the csv module alone."""
    _, *rows = [row for row in csv.reader(io.StringIO(text, newline=""), delimiter=separator) if row]
    return [(row[0], row[2], row[1], row[0]) for row in rows]


def write(path: Path, text: str, encoding: str = "utf-8") -> Path:
    path.write_bytes(text.encode(encoding))
    return path


def random_table(seed: int, odd: bool) -> str:
    draw = np.random.default_rng(seed)
    cells = ["1", "2.50", " x ", "", "NA", "nan", "true", "é", "007", "1e5", "-0", "#", "\\", "'", "None", "1_000"]
    odder = ['"q,r"', '"say ""no"""', '"two\nlines"', '""', '"a\r\nb"', '5" tube']
    lines = ["a,b,c"]
    for _ in range(300):
        pool = cells + odder * (odd and draw.random() < 0.1)
        lines.append(",".join(draw.choice(pool, 3)))
        if odd and draw.random() < 0.02:
            lines.append("")
    return str(draw.choice(["\n", "\r\n"])).join(lines) + str(draw.choice(["", "\n"]))


@pytest.mark.parametrize("seed", range(12))
@pytest.mark.parametrize("block", [64, 1000, 1 << 22])
def test_cells_are_those_of_the_csv_module(seed: int, block: int, tmp_path: Path) -> None:
    text = random_table(seed, odd=seed % 2 == 1)
    assert read_all(write(tmp_path / "t.csv", text), block) == by_csv(text)


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "latin-1"])
@pytest.mark.parametrize("separator", [";", "\t", "|"])
def test_encodings_and_separators(encoding: str, separator: str, tmp_path: Path) -> None:
    text = "a,b,c\n1,é,3\n4,ü,6\n".replace(",", separator)
    path = write(tmp_path / "t.csv", text, encoding)
    assert read_all(path, 8) == read_all(path) == [("1", "3", "é", "1"), ("4", "6", "ü", "4")]


@pytest.mark.parametrize("seed", range(40))
def test_quotation_marks_anywhere(seed: int, tmp_path: Path) -> None:
    """Cells of the signs that matter, drawn one after the other: the same rows as by the csv module, or a refusal."""
    draw = np.random.default_rng(seed)
    rows = ["".join(draw.choice(["x", "x", ",", '"', "\n"], 12, p=[0.3, 0.2, 0.2, 0.25, 0.05])) for _ in range(4)]
    quoted = ['"k","","m"', *rows[: seed % 5], 'k,"l",m']
    text = "a,b,c\n" + "\n".join(quoted) + "\n"
    path = write(tmp_path / "t.csv", text)
    try:
        found = [row for row in csv.reader(io.StringIO(text, newline=""), strict=True) if row]
        fits = all(len(row) == 3 for row in found)
    except csv.Error:
        fits = False
    if fits:
        assert read_all(path, 16) == read_all(path) == by_csv(text)
    else:
        with pytest.raises(TableRefused):
            read_all(path)


def test_cells_all_in_quotation_marks(tmp_path: Path) -> None:
    """As R writes them; two cells of a table of two columns that only look like two rows stay one."""
    text = 'a,b,c\r\n"1","two words",3\r\n"","",""\r\n'
    assert read_all(write(tmp_path / "t.csv", text)) == [("1", "3", "two words", "1"), ("", "", "", "")]
    path = write(tmp_path / "two.csv", 'a,b\n1,"x\ny,z"\n')
    assert read_all(path, wanted=Wanted({"a": "a"}, ("b",))) == [("1", "x\ny,z")]


def test_a_table_of_returns_alone(tmp_path: Path) -> None:
    assert read_all(write(tmp_path / "t.csv", "a,b,c\r1,2,3\r4,5,6\r")) == [("1", "3", "2", "1"), ("4", "6", "5", "4")]


def test_empty_lines_are_left_out_and_counted(tmp_path: Path) -> None:
    source = DelimitedRows(write(tmp_path / "t.csv", "a,b,c\n1,2,3\n\n\n4,5,6\n,,\n"))
    (block,) = source.blocks(WANTED)
    assert (block.rows, block.after.blank, block.after.line) == (3, 2, 7)


@pytest.mark.parametrize(
    ("line", "said"),
    [
        ("1,2", "line 103: has 2 fields, and the first line has 3 names; perhaps it is cut off."),
        ("1,2,3,4", "line 103: has 4 fields, and the first line has 3 names; perhaps a text that holds the separator"),
        ('1,"2,3', "line 103: cannot be read"),
    ],
)
@pytest.mark.parametrize("block", [50, 1 << 22])
def test_a_row_that_does_not_fit_is_named_by_its_line(line: str, said: str, block: int, tmp_path: Path) -> None:
    text = "a,b,c\n" + '"1\n2",2,3\n' + "1,2,3\n" * 99 + f"{line}\n" + "1,2,3\n" * 50
    with pytest.raises(TableRefused) as refused:
        read_all(write(tmp_path / "t.csv", text), block)
    assert said in str(refused.value)
    assert "--resume" in str(refused.value)


def test_two_misfits_that_cancel_out(tmp_path: Path) -> None:
    """Four fields and then two are six, as in two whole rows."""
    with pytest.raises(TableRefused) as refused:
        read_all(write(tmp_path / "t.csv", "a,b,c\n1,2,3\n1,2,3,4\n1,2\n"))
    assert [problem.path for problem in refused.value.problems] == ["line 3", "line 4", ""]


def test_reading_goes_on_where_it_stopped(tmp_path: Path) -> None:
    text = random_table(3, odd=True)
    path = write(tmp_path / "t.csv", text)
    blocks = list(DelimitedRows(path, 500).blocks(WANTED))
    assert len(blocks) > 3
    for number, block in enumerate(blocks[:-1]):
        rest = list(DelimitedRows(path, 500).blocks(WANTED, block.after))
        assert [one.after for one in rest] == [one.after for one in blocks[number + 1 :]]
    path.write_bytes(path.read_bytes().replace(b"2.50", b"2.51", 1))
    with pytest.raises(UsageError, match="is not what it was"):
        list(DelimitedRows(path, 500).blocks(WANTED, blocks[-2].after))
