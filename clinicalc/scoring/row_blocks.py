"""What a table to be scored is read as: blocks of rows, each with the cells of the model's fields and what is kept."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Protocol

from clinicalc.scoring.scored import Cells


@dataclass(frozen=True, slots=True)
class Wanted:
    """Which columns are read: the name of each field's column, by field id, and the names of those that are kept."""

    fields: Mapping[str, str]
    keep: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Place:
    """How far a table was read, at the end of a block of rows.

    `rows` were taken and `blank` lines left out; `at` is where the next block begins: bytes of a text, rows of a
    Parquet file. `line` counts lines from 1. `digest` is that of everything which the rows so far depend on.
    """

    rows: int = 0
    blank: int = 0
    at: int = 0
    line: int = 1
    digest: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class KeptColumn:
    """The cells of a column that goes into the output as it is: texts, "" for nothing; `arrow` with their own type."""

    texts: Sequence[str]
    arrow: Any = None


@dataclass(frozen=True, slots=True, eq=False)
class RowBlock:
    """A block of n rows: `cells` by field id and what is `kept`, all of n; `after` is the place behind it.

    `done` of `of` parts of the table are read with it.
    """

    rows: int
    cells: Mapping[str, Cells]
    kept: tuple[KeptColumn, ...]
    after: Place
    done: int
    of: int


class RowSource(Protocol):
    """A table that is read block by block, with the same blocks at every reading."""

    @property
    def names(self) -> tuple[str, ...]:
        """The names of its columns."""

    @property
    def told(self) -> str:
        """How the file was understood, a sentence."""

    @property
    def decimal(self) -> str:
        """The sign before decimals in its texts."""

    def arrow_type(self, name: str) -> Any:
        """The type of a column in Arrow; None for a column of texts."""

    def blocks(self, wanted: Wanted, begin: Place | None = None) -> Iterator[RowBlock]:
        """The blocks from `begin` on, or all.

        Raises TableRefused for a row that does not fit, and UsageError where what was read before is other now.
        """
