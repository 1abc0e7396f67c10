"""A table as it was read: names, and cells that are numbers, texts or empty."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import UsageError

Numbers = NDArray[np.float64]
Places = NDArray[np.int32]


@dataclass(frozen=True, slots=True, eq=False)
class RawColumn:
    """One column of n cells: `numbers` (NaN where the cell is no number), `codes` places among `levels` (−1: no text).

    `codes` is None where no cell is a text. A cell that is neither is empty. Texts are trimmed and otherwise as in the
    file; those with leading zeros and whole numbers of 16 digits and more are texts, since as numbers they would
    change. Dates are texts, "2021-03-05".
    """

    name: str
    numbers: Numbers
    codes: Places | None = None
    levels: tuple[str, ...] = ()

    @property
    def used_levels(self) -> tuple[tuple[str, int], ...]:
        """The texts with how many cells hold each, the most frequent first."""
        if self.codes is None:
            return ()
        counts = np.bincount(self.codes[self.codes >= 0], minlength=len(self.levels))
        order = np.argsort(-counts, kind="stable")
        return tuple((self.levels[place], int(counts[place])) for place in order if counts[place])

    def text(self, row: int) -> str:
        """The cell of a row, from 0, as a text; "" where it is empty."""
        if self.codes is not None and self.codes[row] >= 0:
            return self.levels[int(self.codes[row])]
        return number_text(float(self.numbers[row]))

    def empty(self) -> NDArray[np.bool_]:
        """Which cells hold nothing."""
        nothing: NDArray[np.bool_] = np.isnan(self.numbers)
        return nothing if self.codes is None else nothing & (self.codes < 0)


def number_text(number: float) -> str:
    """A number of a cell as it may have stood there, "" for NaN."""
    return "" if number != number else f"{number:.15g}"


@dataclass(frozen=True, slots=True, eq=False)
class RawTable:
    """Columns of equal length. `lines` are the lines of the file from 1; `told` says how the file was understood."""

    file: str
    columns: tuple[RawColumn, ...]
    lines: NDArray[np.int64]
    told: str = ""

    @property
    def names(self) -> tuple[str, ...]:
        """The names of the columns, in their order."""
        return tuple(column.name for column in self.columns)

    @property
    def rows(self) -> int:
        """How many people there are lines for."""
        return len(self.lines)

    def find(self, name: str) -> RawColumn | None:
        """The column of that name, None where there is none."""
        return next((column for column in self.columns if column.name == name), None)

    def column(self, name: str) -> Numbers | NDArray[np.object_]:
        """The cells: floats, NaN for empty; or, where some are texts, objects: float, text, None for empty.

        Raises UsageError where there is no such column.
        """
        found = self.find(name)
        if found is None:
            raise UsageError(f"{self.file} has no column {name!r}.", do="Use one of the names in its first line.")
        if found.codes is None:
            return found.numbers
        cells = found.numbers.astype(object)
        cells[found.empty()] = None
        texts = found.codes >= 0
        cells[texts] = np.array(found.levels, dtype=object)[found.codes[texts]]
        return cells
