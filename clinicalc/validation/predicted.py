"""What measures are made from: predicted risks, what was seen of the same people, decision points."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.calibration_groups import Watched

Array = NDArray[np.float64]
Rows = NDArray[np.bool_] | NDArray[np.intp]


@dataclass(frozen=True, slots=True, eq=False)
class PredictedPeople:
    """The predicted risk of each of n people, one minus it where that is known more closely, both (n,), no NaN.

    `hazards` is, for a hazard model whose baseline is known at every time, the cumulative hazard of each until his own
    time or the horizon, whichever comes first; calibration in the large then goes by all follow-up.
    """

    probability: Array
    complement: Array | None = None
    hazards: Array | None = None

    @property
    def log_odds(self) -> Array:
        """log(p / (1 - p)), infinite where p is 0 or 1."""
        with np.errstate(divide="ignore"):
            return np.asarray(np.log(self.probability) - np.log(self.remainder), dtype=np.float64)

    @property
    def log_hazard(self) -> Array:
        """log(-log(1 - p)), infinite where p is 0 or 1."""
        with np.errstate(divide="ignore"):
            small = -np.log1p(-np.minimum(self.probability, 0.5))
            hazard = np.where(self.probability < 0.5, small, -np.log(self.remainder))
            return np.asarray(np.log(hazard), dtype=np.float64)

    @property
    def remainder(self) -> Array:
        """One minus the risk."""
        return 1.0 - self.probability if self.complement is None else self.complement

    def part(self, rows: Rows) -> "PredictedPeople":
        """Some of them."""
        rest = (None if each is None else each[rows] for each in (self.complement, self.hazards))
        return PredictedPeople(self.probability[rows], *rest)


@dataclass(frozen=True, slots=True, eq=False)
class YesNo:
    """An outcome without time: 1 or 0 of each person, (n,). Beside it stands `Watched` for times."""

    y: Array

    def part(self, rows: Rows) -> "YesNo":
        """Some of them."""
        return YesNo(self.y[rows])


Outcome = YesNo | Watched
"""Times are in the unit of the span they are judged at. With status 2 as it is other events come first; a model that
takes them for the end of watching is judged with 2 made 0."""


@dataclass(frozen=True, slots=True)
class FlagPoint:
    """A risk from which people are flagged (those at it too), and what it is called."""

    value: float
    label: str = ""
