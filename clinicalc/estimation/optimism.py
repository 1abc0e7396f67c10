"""Optimism of a fit by bootstrap: what a sample's own fit gains in the sample over the people it was drawn from.

Harrell, Lee & Mark, Stat Med 1996;15:361: for each replicate the statistic among those drawn less that of the same
coefficients among all; the mean of these differences is taken off the statistic of the fit. A sample that cannot be
fitted adds nothing and is counted by its reason.
"""

from collections import Counter
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, fields
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.drawing import draw_counts

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

MOST_FIGURES = 4_000_000
"""People times replicates in a block."""


@dataclass(frozen=True, slots=True)
class Measures:
    """C, calibration slope, intercept, Brier score of a set of coefficients among some people; None: not defined."""

    c: float | None
    slope: float | None
    intercept: float | None
    brier: float | None


@dataclass(frozen=True, slots=True)
class Compared:
    """One replicate: its coefficients judged among those drawn, and among all."""

    sample: Measures
    original: Measures


@dataclass(frozen=True, slots=True)
class Lost:
    """One replicate that could not be fitted: the code of FitFault, the places of the columns at fault."""

    code: str
    columns: tuple[int, ...]


Replicate = Compared | Lost


class Repeated(Protocol):
    """A fit that can be repeated on samples of its people; what another process is to work on must be pickled."""

    @property
    def people(self) -> int:
        """How many there are to draw from."""

    @property
    def cluster(self) -> Codes | None:
        """A code for each, where whole clusters are drawn."""

    @property
    def at_once(self) -> int:
        """Replicates in a block; blocks are the same whoever works them out, and so are last bits."""

    def judge_apparent(self) -> Measures:
        """The fit itself among the people it was made from."""

    def judge(self, counts: Array) -> tuple[Replicate, ...]:
        """One for each row of counts (B, people)."""


@dataclass(frozen=True, slots=True)
class Block:
    """Replicates that are worked out at once, by number, and of which set of people they are drawn."""

    set: int
    replicates: tuple[int, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Bootstrap:
    """A fit, or one for each of m sets of filled-in values of the same people; replicate r is drawn from set r % m."""

    sets: tuple[Repeated, ...]
    replicates: int
    seed: int

    def lay_blocks(self) -> tuple[Block, ...]:
        """What is to be done, in pieces that do not depend on who does them."""
        size = max(1, min(self.sets[0].at_once, MOST_FIGURES // self.sets[0].people))
        found = []
        for place in range(len(self.sets)):
            own = range(place, self.replicates, len(self.sets))
            found += [Block(place, tuple(own[begin : begin + size])) for begin in range(0, len(own), size)]
        return tuple(found)

    def work(self, block: Block) -> tuple[Replicate, ...]:
        """The replicates of a block, in their order."""
        fit = self.sets[block.set]
        drawn = [draw_counts(fit.people, self.seed, number, fit.cluster) for number in block.replicates]
        return fit.judge(np.array(drawn))


@dataclass(frozen=True, slots=True)
class Optimism:
    """A statistic among the people of the fit, and its mean optimism."""

    apparent: float
    optimism: float

    @property
    def corrected(self) -> float:
        """What is to be expected in other people of the same kind."""
        return self.apparent - self.optimism


def average(apparent: Sequence[Measures], replicates: Iterable[Replicate]) -> dict[str, Optimism]:
    """The optimism of each statistic that is defined in the fit and in every replicate fitted, by its name."""
    fitted = [one for one in replicates if isinstance(one, Compared)]
    found = {}
    for name in (field.name for field in fields(Measures)):
        own = [getattr(one, name) for one in apparent]
        gains = [_subtract(getattr(one.sample, name), getattr(one.original, name)) for one in fitted]
        if gains and None not in own and None not in gains:
            found[name] = Optimism(_mean(own), _mean(gains))
    return found


def count_lost(replicates: Iterable[Replicate]) -> Iterator[tuple[str, int, tuple[int, ...]]]:
    """For each reason its code, how many were lost by it, and the columns at fault, most often first."""
    lost = [one for one in replicates if isinstance(one, Lost)]
    for code, count in Counter(one.code for one in lost).most_common():
        columns = Counter(column for one in lost if one.code == code for column in one.columns)
        yield code, count, tuple(sorted(columns, key=lambda column: (-columns[column], column)))


def lose(refused: FitRefused) -> Lost:
    """The replicate that this refusal leaves."""
    return Lost(refused.code, refused.columns)


def _subtract(sample: float | None, original: float | None) -> float | None:
    return None if sample is None or original is None else sample - original


def _mean(values: Sequence[float | None]) -> float:
    return float(np.mean([value for value in values if value is not None]))
