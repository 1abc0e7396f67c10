"""What scoring gives for a block of rows: the numbers as columns, the findings as a few distinct texts."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Finding
from clinicalc.covariates.transforms import Column

Places = NDArray[np.intp]
Rows = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class CodedTexts:
    """A column of n cells as its distinct texts and, for each cell, the place of its own, shape (n,).

    The fastest form in which cells can be handed over; a text may stand more than once among `distinct`, and place −1
    is an empty cell.
    """

    distinct: Sequence[str]
    at: Places


Cells = CodedTexts | Sequence[object] | NDArray[np.float64] | NDArray[np.int64] | NDArray[np.bool_]
"""A column of n cells.

A number stands for its shortest digits (55.0 for "55"), NaN for an empty cell, True for "yes".
"""


@dataclass(frozen=True, slots=True)
class SaidOfRow:
    """The findings of a row: codes with field ids, such as "outside_derivation:age", parted by spaces, "" for none.

    In page order; one about the whole model is the code alone, such as "unconfirmed".
    """

    stops: str
    cautions: str
    notes: str


@dataclass(frozen=True, slots=True, eq=False)
class ScoredBlock:
    """For each of n rows, shape (n,): probability and the band's ends, NaN where there is none.

    `equation` is the place of the row's equation in `equations` (their ids), −1 where no single one applies; `said` the
    place of the row's findings in `findings`. A row has no number exactly where its findings hold a stop. What the file
    says with every number (`Scorer.said_once`) is not among them.
    """

    probability: Column
    lower: Column
    upper: Column
    equation: Places
    equations: tuple[str, ...]
    said: Places
    findings: tuple[SaidOfRow, ...]

    @property
    def size(self) -> int:
        """How many rows there are."""
        return len(self.probability)

    @property
    def equation_ids(self) -> NDArray[np.object_]:
        """The id of each row's equation, "" for none, shape (n,) of str."""
        return np.array([*self.equations, ""], dtype=object)[self.equation]

    @property
    def stops(self) -> NDArray[np.object_]:
        """The stops of each row as text, shape (n,) of str."""
        return np.array([said.stops for said in self.findings], dtype=object)[self.said]

    @property
    def cautions(self) -> NDArray[np.object_]:
        """The cautions of each row as text, shape (n,) of str."""
        return np.array([said.cautions for said in self.findings], dtype=object)[self.said]

    @property
    def notes(self) -> NDArray[np.object_]:
        """The notes of each row as text, shape (n,) of str."""
        return np.array([said.notes for said in self.findings], dtype=object)[self.said]


@dataclass(frozen=True, slots=True)
class SaidOnce:
    """What `assess` would say with every number of a run, whoever the patient is: it stands once, at the head."""

    findings: tuple[Finding, ...]
