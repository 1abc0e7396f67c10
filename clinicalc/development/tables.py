"""The tables a fit leaves behind, as R's write.csv or a JSON file spells them: numbers by name, never by position."""

import csv
import io
import re
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.strict_json import LARGEST, parse
from clinicalc.coefficients.toml_reading import Fault, read_text

__all__ = [
    "Fault",
    "NumberTable",
    "count_digits",
    "read_json",
    "read_number",
    "read_number_table",
    "read_text",
]

Array = NDArray[np.float64]

_NUMBER = re.compile(r"[-+]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][-+]?[0-9]+)?")


@dataclass(frozen=True, slots=True, eq=False)
class NumberTable:
    """Rows of numbers under named columns, in file order; `row_names` is empty where the rows have no names.

    `values` has shape (rows, columns).
    """

    columns: tuple[str, ...]
    row_names: tuple[str, ...]
    values: Array

    def column(self, name: str) -> Array:
        """One column by its name, shape (rows,)."""
        return self.values[:, self.columns.index(name)]


def read_number_table(text: str) -> NumberTable | Fault:
    """A CSV table as write.csv writes it; a first column without a name holds the names of the rows."""
    lines = [line for line in csv.reader(io.StringIO(text)) if any(cell.strip() for cell in line)]
    if len(lines) < 2:
        return Fault("the table has no rows. Its first line names the columns, and the numbers stand below.")
    head = [cell.strip() for cell in lines[0]]
    fault = _judge_head(head, lines[0])
    if fault:
        return Fault(fault)
    named = head[0] == ""
    columns = tuple(head[1:] if named else head)
    values, faults = list[list[float]](), list[str]()
    for number, line in enumerate(lines[1:], start=2):
        if len(line) != len(head):
            return Fault(f"line {number} has {len(line)} entries under {len(head)} names.")
        row = list[float]()
        for name, cell in zip(columns, line[1:] if named else line, strict=True):
            answer = read_number(cell)
            if isinstance(answer, Fault):
                faults.append(f"line {number}, column {quoted(name)}: {answer.message}")
            else:
                row.append(answer)
        values.append(row)
    if faults:
        return Fault(" ".join(faults[:5]) + (f" There are {len(faults) - 5} more." if len(faults) > 5 else ""))
    names = tuple(line[0].strip() for line in lines[1:]) if named else ()
    return NumberTable(columns, names, np.array(values, dtype=np.float64).reshape(len(values), len(columns)))


def read_number(cell: str) -> float | Fault:
    """One number as software prints it; what it prints for "none" is explained."""
    text = cell.strip()
    if _NUMBER.fullmatch(text):
        number = float(text)
        if abs(number) <= LARGEST:
            return number
        if np.isfinite(number):
            return Fault(f"{text} is larger than any figure of a fit.")
    if text in ("NA", ""):
        return Fault(
            f"{text or 'nothing'} stands here. R writes NA where a coefficient could not be estimated; leave it "
            "out of the fit, or look why."
        )
    if text.lower().strip("+-") in ("nan", "inf", "infinity") or _NUMBER.fullmatch(text):
        return Fault(f"{text} is not finite. A fit that gives it has not come to an end (separation?).")
    if re.fullmatch(r"[-+]?[0-9]+,[0-9]+(?:[eE][-+]?[0-9]+)?", text):
        return Fault(f"{quoted(text)} has a decimal comma. Write the table with write.csv, not write.csv2.")
    return Fault(f"{quoted(text)} is not a number.")


def read_json(text: str) -> object | Fault:
    """The value of a JSON text, read strictly."""
    parsed = parse(text.encode("utf-8"))
    if parsed.problems:
        return Fault(" ".join(str(problem) for problem in parsed.problems[:5]))
    return parsed.value


def count_digits(values: Array) -> int:
    """The most significant digits that any of the numbers needs: how precisely a table was printed."""
    found = (re.sub(r"e.*|[-.]", "", repr(float(value))).strip("0") for value in values.ravel())
    return max((len(digits) for digits in found), default=0)


def _judge_head(head: list[str], line: list[str]) -> str:
    if len(head) == 1 and ";" in line[0]:
        return "the columns are parted by semicolons. Write the table with write.csv, not write.csv2."
    if len(head) == 1 and re.search(r"\s", line[0].strip()):
        return "the columns are parted by spaces. Write the table with write.csv, not write.table or print."
    names = [name for place, name in enumerate(head) if place > 0 or name]
    if any(not name for name in names):
        return "a column after the first has no name."
    double = sorted({name for name in names if names.count(name) > 1})
    if double:
        return f"two columns are called {quoted(double[0])}."
    if head[0] and all(_NUMBER.fullmatch(name) for name in names):
        return (
            "the first line holds numbers and no names. Nothing here is matched by its position: write the names too."
        )
    return ""
