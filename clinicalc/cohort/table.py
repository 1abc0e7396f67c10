"""A table of people read from a file: CSV, TSV, Parquet, Excel or Stata, told by the end of its name."""

from collections.abc import Callable, Mapping
from pathlib import Path
from types import MappingProxyType

from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.cohort.delimited import read_delimited
from clinicalc.cohort.frames import read_excel, read_parquet, read_stata
from clinicalc.cohort.raw import RawTable
from clinicalc.errors import Problem, TableRefused

_READERS: Mapping[str, Callable[[Path, Course], RawTable]] = MappingProxyType(
    {
        ".csv": read_delimited,
        ".tsv": read_delimited,
        ".txt": read_delimited,
        ".parquet": read_parquet,
        ".xlsx": read_excel,
        ".dta": read_stata,
    }
)

TABLE_ENDINGS = tuple(_READERS)
"""The ends of file names that are read."""


def read_table(path: Path, course: Course = UNWATCHED) -> RawTable:
    """The table in a file, cells as they stand there.

    Raises TableRefused with every problem of its form (lines with too many or too few fields, names that stand twice,
    nobody in it), where it is not there, and where what reads such files is not installed; Stopped by `course`.
    """
    reader = _READERS.get(path.suffix.lower())
    if reader is None:
        endings = ", ".join(TABLE_ENDINGS)
        why = f'The end "{path.suffix}" of its name is none of {endings}. Save the table in one of these forms.'
        raise TableRefused(path.name, (Problem("", why),))
    try:
        table = reader(path, course)
    except OSError as error:
        why = f"It cannot be opened ({error.strerror or type(error).__name__}). Check its name and its folder."
        raise TableRefused(path.name, (Problem("", why),)) from error
    if table.rows == 0:
        raise TableRefused(path.name, (Problem("", "There is nobody in it: no line stands below the names."),))
    return table
