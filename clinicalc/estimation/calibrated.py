"""What comparing predicted risks with what happened comes to: groups, a smooth curve, its distances from the diagonal.

The same nouns hold for the people a model was made from and for others; nothing here knows where they came from.
"""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


class Smoother(StrEnum):
    """How the smooth curve was made."""

    LOWESS = "lowess"
    COX_SPLINE = "cox_spline"
    FINE_GRAY_SPLINE = "fine_gray_spline"


class Observed(StrEnum):
    """How the observed risk of a group and its limits were made."""

    WILSON = "wilson"
    KAPLAN_MEIER = "kaplan_meier"
    AALEN_JOHANSEN = "aalen_johansen"


class NoCurve(StrEnum):
    """Why there is no smooth curve."""

    TOO_FEW_PEOPLE = "too_few_people"
    TOO_FEW_PREDICTIONS = "too_few_predictions"
    TOO_FEW_EVENTS = "too_few_events"
    NOT_FOLLOWED = "not_followed"
    CAME_LATE = "came_late"
    NOT_FITTED = "not_fitted"


@dataclass(frozen=True, slots=True)
class CalibrationGroup:
    """Some people: how many, how many had the event (by the horizon), mean predicted and observed risk, 95 % limits.

    `observed` and the limits are None where nobody was followed to the horizon, the limits also where the estimate has
    none (Kaplan-Meier before the first event or after all have had it).
    """

    people: int
    events: int
    predicted: float
    observed: float | None
    lower: float | None
    upper: float | None


@dataclass(frozen=True, slots=True, eq=False)
class SmoothCurve:
    """Observed risk over predicted risk as a curve: k places, ascending, shape (k,), with a 95 % band if there is one.

    `knots` are those of a spline on log(-log(1 - p)), () for lowess or a straight line. The band is that of the model
    of a spline, or from so many `resamples` of the people; the predictions are taken as known in either.
    """

    smoother: Smoother
    predicted: Array
    observed: Array
    lower: Array | None = None
    upper: Array | None = None
    knots: tuple[float, ...] = ()
    resamples: int = 0


@dataclass(frozen=True, slots=True)
class CalibrationIndices:
    """Distances |smooth(p) - p| over the people: mean, median, 90th percentile, largest.

    ICI: Austin & Steyerberg, Stat Med 2019;38:4051-4065; E50, E90, Emax: Harrell, Regression Modeling Strategies.
    """

    ici: float
    e50: float
    e90: float
    emax: float


@dataclass(frozen=True, slots=True)
class Limits:
    """Where a figure lies with 95 %."""

    lower: float
    upper: float

    def holding(self, value: float) -> "Limits":
        """The same, widened where a value lies outside."""
        return Limits(min(self.lower, value), max(self.upper, value))


@dataclass(frozen=True, slots=True)
class IndexLimits:
    """Limits of each index: percentiles over so many `draws` of the curve, widened to hold it; predictions as known.

    No index is below 0, and none is 0 even where the predictions are right, so that limits never hold 0. `chance` is
    the ICI of such predictions in as many people on average, `chance_bound` what it exceeds in 5 of 100 such samples.
    """

    ici: Limits
    e50: Limits
    e90: Limits
    emax: Limits
    draws: int
    chance: float
    chance_bound: float


@dataclass(frozen=True, slots=True, eq=False)
class PredictionSpread:
    """How predictions lie: all of them ascending, shape (n,).

    `had_event` says for each whether the event was seen (by the horizon); who was lost before it, or had another event
    first, is no event seen.
    """

    predictions: Array
    had_event: Mask

    @property
    def people(self) -> int:
        """How many predictions there are."""
        return len(self.predictions)

    def quantile(self, part: float) -> float:
        """The value below which that part of the predictions lies (type 7 of Hyndman & Fan 1996)."""
        return float(np.quantile(self.predictions, part))


@dataclass(frozen=True, slots=True, eq=False)
class Calibration:
    """Predicted risks against what happened, by `horizon` (in the unit of the times; None for a binary outcome).

    `overall` is everybody as one group, `groups` are tenths of the predictions or fewer where they tie. `curve` and
    `indices` are both there or both None, and then `no_curve` says why. `limits` are of the indices, where asked for.
    """

    horizon: float | None
    observed: Observed
    overall: CalibrationGroup
    groups: tuple[CalibrationGroup, ...]
    spread: PredictionSpread
    curve: SmoothCurve | None
    indices: CalibrationIndices | None
    no_curve: NoCurve | None = None
    limits: IndexLimits | None = None
