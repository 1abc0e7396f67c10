"""A text table read row by row: every row that has too many or too few fields is named by its line.

Python's own csv module reads it, in blocks of rows: pandas takes a row that is too short for one with empty cells.
"""

import csv
from collections.abc import Iterator
from dataclasses import dataclass, field
from itertools import islice
from pathlib import Path
from typing import TextIO

import numpy as np

from clinicalc.cohort.cells import CellGathering, read_number
from clinicalc.cohort.course import Course
from clinicalc.cohort.encodings import tell_encoding
from clinicalc.cohort.raw import RawTable
from clinicalc.cohort.separators import TextForm, tell_form
from clinicalc.errors import Problem, TableRefused

_BLOCK = 1 << 15
_SAMPLE_LINES = 2000
_NAMED_LINES = 5
_ENCODINGS = {"utf-8": "UTF-8", "utf-8-sig": "UTF-8 with a byte order mark", "utf-16": "UTF-16", "latin-1": "latin-1"}


def read_delimited(path: Path, course: Course) -> RawTable:
    """The table in a CSV or TSV file. Raises TableRefused with every line that does not fit, and Stopped."""
    encoding = tell_encoding(path)
    with path.open(encoding=encoding, newline="") as file:
        form = tell_form(list(islice(file, _SAMPLE_LINES)))
        file.seek(0)
        return _Reading(path.name, form, encoding).read(file, course)


@dataclass(slots=True)
class _Reading:
    """The reading of one file."""

    file: str
    form: TextForm
    encoding: str
    lines: list[int] = field(default_factory=list)
    misfits: list[tuple[int, int]] = field(default_factory=list)
    blank: int = 0

    def read(self, file: TextIO, course: Course) -> RawTable:
        # strict: else a quotation mark left open swallows the rest of the file
        reader = csv.reader(file, delimiter=self.form.separator, strict=True)
        for _ in range(self.form.lines_before):
            next(reader, None)
        names = settle_names(self.file, next(reader, []))
        columns = [CellGathering(name, self.form.decimal) for name in names]
        try:
            while block := self._next_block(reader, len(names)):
                for column, cells in zip(columns, zip(*block, strict=True), strict=True):
                    column.add(cells)
                course.say("Reading the table", len(self.lines))
        except csv.Error as error:
            at = max([1, *self.lines[-1:], *(line for line, _ in self.misfits[-1:])]) + 1
            why = f"from here on it cannot be read ({error}): a quotation mark is left open, or stands inside a text."
            raise TableRefused(self.file, (*self._tell_misfits(len(names)), Problem(f"line {at}", why))) from error
        if self.misfits:
            raise TableRefused(self.file, tuple(self._tell_misfits(len(names))))
        lines = np.array(self.lines, dtype=np.int64)
        return RawTable(self.file, tuple(column.column() for column in columns), lines, self._told())

    def _next_block(self, reader: Iterator[list[str]], width: int) -> list[list[str]]:
        block: list[list[str]] = []
        before = reader.line_num  # type: ignore[attr-defined]  # csv's reader counts lines
        for row in reader:
            line, before = before + 1, reader.line_num  # type: ignore[attr-defined]
            if len(row) != width and row:
                self.misfits.append((line, len(row)))
            elif not any(row):
                self.blank += 1
            else:
                self.lines.append(line)
                block.append(row)
                if len(block) == _BLOCK:
                    break
        return block

    def _tell_misfits(self, width: int) -> Iterator[Problem]:
        counts = {count for _, count in self.misfits}
        if not self.lines and counts == {width + 1}:
            yield Problem(
                "line 1",
                f"has {width} names, and every line below has {width + 1} fields: the name of the first column is "
                "lacking, as where row names were written. Write the table without row names, or give them a name.",
            )
            return
        for line, count in self.misfits[:_NAMED_LINES]:
            slip = "a text that holds the separator must stand in quotation marks" if count > width else "it is cut off"
            yield Problem(f"line {line}", f"has {count} fields, and the first line has {width} names; perhaps {slip}.")
        if len(self.misfits) > _NAMED_LINES:
            yield Problem("", f"{len(self.misfits) - _NAMED_LINES} further lines have too many or too few fields.")

    def _told(self) -> str:
        return f"Read as {_ENCODINGS[self.encoding]}, {self.form.words}.{tell_blank(self.blank)}"


def tell_blank(lines: int) -> str:
    """What is said of lines that hold nothing, "" where there are none; it begins with a space."""
    if lines < 2:
        return " 1 empty line was left out." if lines else ""
    return f" {lines} empty lines were left out."


def settle_names(file: str, header: list[str]) -> list[str]:
    """The names of the columns, trimmed; one without a name is called by its place.

    Raises TableRefused where there is no header, where a name stands twice, and where the header holds numbers.
    """
    names = [name.strip() or f"column {place}" for place, name in enumerate(header, 1)]
    problems = []
    if not any(name.strip() for name in header):
        problems.append(Problem("line 1", "is empty; it has to hold the names of the columns."))
    elif all(read_number(name.replace(",", ".")) is not None for name in names):
        problems.append(
            Problem("line 1", "holds numbers; it has to hold the names of the columns. Put a line of names above it.")
        )
    for name in sorted({name for name in names if names.count(name) > 1}):
        problems.append(Problem("line 1", f'names "{name}" {names.count(name)} times. Give every column its own name.'))
    if problems:
        raise TableRefused(file, tuple(problems))
    return names
