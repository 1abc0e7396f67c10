"""Where a problem was seen, and the pieces of which its sentence is made."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.coefficients.pointers import listed, quoted

Mask = NDArray[np.bool_]
Lines = NDArray[np.int64]

_NAMED_LINES = 5


@dataclass(frozen=True, slots=True)
class Sighting:
    """In how many lines something was seen, and the first five of them, as lines of the file."""

    count: int
    lines: tuple[int, ...]
    first: int
    """The row of the first, from 0; −1 where there is none."""

    @property
    def words(self) -> str:
        """The place in a sentence: "in line 7", "in lines 3 and 9", "in 40 lines (3, 5, 6, 8, 9 and on)"."""
        numbers = [str(line) for line in self.lines]
        if self.count == 1:
            return f"in line {numbers[0]}"
        if self.count <= _NAMED_LINES:
            return f"in lines {listed(numbers)}"
        return f"in {self.count} lines ({', '.join(numbers)} and on)"


def see(where: Mask, lines: Lines) -> Sighting:
    """Where a mask over the rows holds."""
    rows = np.flatnonzero(where)
    first = int(rows[0]) if len(rows) else -1
    return Sighting(len(rows), tuple(int(line) for line in lines[rows[:_NAMED_LINES]]), first)


def name_column(column: str, label: str = "") -> str:
    """The column at the beginning of a sentence, with what it is the value of."""
    return f"Column {quoted(column)} ({label})" if label and label != column else f"Column {quoted(column)}"


def share_words(part: int, whole: int) -> str:
    """A share as a percentage with one decimal, never 0 % or 100 % of what is not none or all."""
    share = 100.0 * part / whole
    if 0 < part < whole:
        share = min(max(share, 0.1), 99.9)
    return f"{share:.1f}{NARROW_SPACE}%" if share != 100.0 else f"100{NARROW_SPACE}%"


def count_words(found: Sequence[tuple[str, int]], most: int = 6) -> str:
    """Texts of cells with how many lines hold each: "“F” in 40 lines and “X” in 1 line"; the rest is counted."""
    named = [f"{quoted(text)} in {count} {'line' if count == 1 else 'lines'}" for text, count in found[:most]]
    rest = len(found) - most
    return listed([*named, f"{rest} more"]) if rest > 0 else listed(named)
