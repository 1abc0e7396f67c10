"""Parquet, Excel and Stata tables, read by pandas and taken over cell by cell."""

from __future__ import annotations

from collections.abc import Callable
from importlib.util import find_spec
from pathlib import Path
from typing import TYPE_CHECKING, Any
from zipfile import BadZipFile

import numpy as np

from clinicalc.cohort.cells import CellGathering, read_number
from clinicalc.cohort.course import Course
from clinicalc.cohort.delimited import settle_names, tell_blank
from clinicalc.cohort.raw import RawColumn, RawTable, number_text
from clinicalc.errors import Problem, TableRefused

if TYPE_CHECKING:
    import pandas as pd

_UNREADABLE = (ValueError, OSError, KeyError, ImportError, EOFError, TypeError, AttributeError, BadZipFile)
"""What the readers raise over a file that is not what its name says."""
_EXACT = float(2**53)
"""Whole numbers up to here stand exactly in a float."""


def read_parquet(path: Path, course: Course) -> RawTable:
    """The table in a Parquet file. Raises TableRefused where it cannot be read, or the extra `files` is lacking."""
    require(path, "pyarrow", "Parquet")
    import pandas as pd

    return _take_over(
        path, lambda: pd.read_parquet(path), course, "Read as Parquet; lines are counted from 1.", first_line=1
    )


def read_excel(path: Path, course: Course) -> RawTable:
    """The first sheet of an Excel file. Raises TableRefused where it cannot be read, or the extra is lacking."""
    require(path, "openpyxl", "Excel")
    import pandas as pd

    def read() -> pd.DataFrame:
        rows = pd.read_excel(path, engine="openpyxl", header=None, dtype=object, keep_default_na=False, na_values=[""])
        header = [_cell_text(cell) for cell in rows.iloc[0]] if len(rows) else []
        frame = rows.iloc[1:]
        frame.columns = pd.Index(settle_names(path.name, header))
        return frame

    return _take_over(path, read, course, "Read as Excel, its first sheet.", first_line=2)


def read_stata(path: Path, course: Course) -> RawTable:
    """The table in a Stata file, value labels as texts. Raises TableRefused where it cannot be read."""
    import pandas as pd

    def read() -> pd.DataFrame:
        try:
            return pd.read_stata(path)
        except ValueError:
            # labels that stand for two numbers: the numbers are kept
            return pd.read_stata(path, convert_categoricals=False)

    return _take_over(path, read, course, "Read as Stata; lines are counted from 1.", first_line=1)


def require(path: Path, package: str, form: str) -> None:
    """Nothing where a package is installed; else TableRefused with a sentence that names the extra."""
    if find_spec(package) is None:
        why = f'{form} files need the package {package}: install clinicalc with its extra, "clinicalc[files]".'
        raise TableRefused(path.name, (Problem("", f"{why} Or save the table as CSV."),))


def _take_over(path: Path, read: Callable[[], pd.DataFrame], course: Course, told: str, *, first_line: int) -> RawTable:
    course.say("Reading the table")
    try:
        frame = read()
    except _UNREADABLE as error:
        why = f"It cannot be read as what its name says it is ({type(error).__name__}). Save it again, or as CSV."
        raise TableRefused(path.name, (Problem("", why),)) from error
    if frame.index.name is not None:
        frame = frame.reset_index()
    names = settle_names(path.name, [str(name) for name in frame.columns])
    columns = []
    for place, name in enumerate(names):
        course.go_on()
        columns.append(_take_column(name, frame.iloc[:, place]))
    lines = np.arange(first_line, first_line + len(frame), dtype=np.int64)
    return _without_blank(RawTable(path.name, tuple(columns), lines, told))


def _without_blank(table: RawTable) -> RawTable:
    """The table without lines that hold nothing, as Excel leaves them below a table."""
    blank = np.ones(table.rows, dtype=bool)
    for column in table.columns:
        blank &= column.empty()
    if not blank.any():
        return table
    kept = ~blank
    columns = tuple(
        RawColumn(one.name, one.numbers[kept], None if one.codes is None else one.codes[kept], one.levels)
        for one in table.columns
    )
    return RawTable(table.file, columns, table.lines[kept], f"{table.told}{tell_blank(int(blank.sum()))}")


def _take_column(name: str, series: pd.Series[Any]) -> RawColumn:
    import pandas as pd

    gathering = CellGathering(name)
    kind = series.dtype
    if pd.api.types.is_numeric_dtype(kind) and not pd.api.types.is_bool_dtype(kind):
        numbers = series.to_numpy(dtype=np.float64, na_value=np.nan)
        large = pd.api.types.is_integer_dtype(kind) and bool((np.abs(numbers) >= _EXACT).any())
        if not large and not np.isinf(numbers).any():
            gathering.add_weighed(np.array(numbers))
            return gathering.column()
    codes, uniques = pd.factorize(series)
    weighed = [_weigh(value) for value in uniques]
    numbers = np.array([number for number, _ in weighed] + [np.nan])[codes]
    texts = [text for _, text in weighed] + [None]
    gathering.add_weighed(numbers, None if not any(texts) else (texts[code] for code in codes))
    return gathering.column()


def _weigh(value: object) -> tuple[float, str | None]:
    """The number of a cell, or NaN and its text; whole numbers that no float holds stay texts."""
    if isinstance(value, int | float) and not isinstance(value, bool) and abs(value) < _EXACT:
        return float(value), None
    text = _cell_text(value)
    number = read_number(text)
    return (np.nan, text or None) if number is None else (number, None)


def _cell_text(value: object) -> str:
    """A cell as it would stand in a text file: dates as 2021-03-05, nothing for what is missing."""
    if value is None or value != value:
        return ""
    if isinstance(value, float):
        return number_text(value)
    text = str(value).strip()
    return text.removesuffix(" 00:00:00")
