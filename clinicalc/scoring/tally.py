"""What is counted while rows are scored, for the lines at the end."""

from collections import Counter
from dataclasses import dataclass, field

import numpy as np

from clinicalc.scoring.scored import ScoredBlock


@dataclass(frozen=True, slots=True)
class Tally:
    """Rows, how many have a number, and how many have each stop and each caution (codes with field ids)."""

    rows: int = 0
    with_number: int = 0
    stops: Counter[str] = field(default_factory=Counter)
    cautions: Counter[str] = field(default_factory=Counter)

    def plus(self, block: ScoredBlock) -> "Tally":
        """The same with the rows of a block."""
        numbers = self.with_number + int(np.isfinite(block.probability).sum())
        more = Tally(self.rows + block.size, numbers, self.stops.copy(), self.cautions.copy())
        counts = np.bincount(block.said, minlength=len(block.findings)).tolist()
        for said, count in zip(block.findings, counts, strict=True):
            if count:
                more.stops.update(dict.fromkeys(said.stops.split(), count))
                more.cautions.update(dict.fromkeys(said.cautions.split(), count))
        return more
