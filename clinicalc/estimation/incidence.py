"""The share of people who have had an event by a time, where watching ends early: Kaplan & Meier, Aalen & Johansen.

Kaplan & Meier, J Am Stat Assoc 1958;53:457, with Greenwood's variance; Aalen & Johansen, Scand J Stat 1978;5:141, where
other events come first, with the infinitesimal jackknife of R's survfit. Somebody is watched in (entry, time], and an
event comes before the end of watching at the same time.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from math import exp, log
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.ranks import part_values

Array = NDArray[np.float64]
Places = NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class Incidence:
    """The share with the event by `time`, the standard error of that share, and how many were followed so far.

    `followed` counts those whose watching, or whose event, lies at `time` or later; where it is 0 the share is only
    what it was when the last of them left.
    """

    time: float
    share: float
    se: float
    followed: int

    def limits(self, level: float = 0.95) -> tuple[float, float] | None:
        """Limits that hold on the scale of log(-log(1 - share)); None where the share is 0 or 1."""
        if not 0.0 < self.share < 1.0:
            return None
        left = log(1.0 - self.share)
        half = NormalDist().inv_cdf(0.5 + level / 2.0) * self.se / ((1.0 - self.share) * -left)
        return 1.0 - exp(left * exp(-half)), 1.0 - exp(left * exp(half))


@dataclass(frozen=True, slots=True, eq=False)
class _Counts:
    """At each time at which somebody had any event: those at risk, with the event, with any event, all (K,)."""

    when: Array
    at_risk: Array
    events: Array
    any: Array


def kaplan_meier(times: Array, events: Array, at: Sequence[float], *, entry: Array | None = None) -> list[Incidence]:
    """One minus Kaplan-Meier at each of the times `at`; events 1 or 0, shape (n,). Greenwood's standard errors."""
    counts = _count(times, events, entry)
    stay = counts.at_risk - counts.any
    left = np.append(1.0, np.cumprod(stay / counts.at_risk))
    # where nobody is left the share is 1 whatever comes
    parts = counts.any / (counts.at_risk * np.where(stay > 0, stay, 1.0))
    sums = np.append(0.0, np.cumsum(parts))
    found = []
    for time in at:
        steps = _steps(counts, time)
        se = float(left[steps] * np.sqrt(sums[steps]))
        found.append(Incidence(float(time), 1.0 - float(left[steps]), se, _followed(times, entry, time)))
    return found


def aalen_johansen(times: Array, status: Array, at: Sequence[float], *, entry: Array | None = None) -> list[Incidence]:
    """The incidence of status 1 at each of the times `at`, where status 2 comes first for others; 0 is censored.

    Without a status 2 it is one minus Kaplan-Meier.
    """
    counts = _count(times, status, entry)
    before = np.append(1.0, np.cumprod(1.0 - counts.any / counts.at_risk))
    shares = np.append(0.0, np.cumsum(before[:-1] * counts.events / counts.at_risk))
    until = np.searchsorted(counts.when, times, side="right")
    since = np.zeros(len(times), dtype=np.intp)
    if entry is not None:
        since = np.searchsorted(counts.when, entry, side="right")
    found = []
    for time in at:
        steps = _steps(counts, time)
        weights = _weigh(counts, before[:steps], shares[1 : steps + 1])
        moved = _move(weights, status, np.minimum(until, steps), np.minimum(since, steps), times <= time)
        se = float(np.sqrt((moved * moved).sum()))
        found.append(Incidence(float(time), float(shares[steps]), se, _followed(times, entry, time)))
    return found


@dataclass(frozen=True, slots=True, eq=False)
class _Weights:
    """What a person moves the share by at each step, (S,): by the event, by any event, by being at risk."""

    event: Array
    any: Array
    at_risk: Array


def _weigh(counts: _Counts, before: Array, shares: Array) -> _Weights:
    """The derivative of the last of the `shares` by the weight of a person, for its steps.

    At the step u it is S(u-) dM1 / Y - (F(t) - F(u)) dM / (Y - d), where dM1 and dM are his event and any event of his
    less their shares of those at risk.
    """
    steps = len(before)
    y, own, lost = counts.at_risk[:steps], counts.events[:steps], counts.any[:steps]
    event = before / y
    # after an event that leaves nobody there is no later one
    later = np.where(y > lost, (shares[-1:] - shares) / np.where(y > lost, y - lost, 1.0), 0.0)
    return _Weights(event, later, event * own / y - later * lost / y)


def _move(weights: _Weights, status: Array, until: Places, since: Places, happened: NDArray[np.bool_]) -> Array:
    """What each person moves the share by, (n,): at risk in the steps from `since` to `until`, his event at the end."""
    running = np.append(0.0, np.cumsum(weights.at_risk))
    moved: Array = running[since] - running[until]
    for code, weight in ((1, weights.event), (1, -weights.any), (2, -weights.any)):
        rows = np.flatnonzero(happened & (status == code))
        moved[rows] += weight[until[rows] - 1]
    return moved


def _steps(counts: _Counts, time: float) -> int:
    return int(np.searchsorted(counts.when, time, side="right"))


def _followed(times: Array, entry: Array | None, time: float) -> int:
    there = times >= time if entry is None else (times >= time) & (entry < time)
    return int(there.sum())


def _count(times: Array, status: Array, entry: Array | None) -> _Counts:
    happened = status != 0
    when, place = part_values(times[happened])
    at_risk = len(times) - np.searchsorted(np.sort(times), when, side="left")
    if entry is not None:
        at_risk -= len(times) - np.searchsorted(np.sort(entry), when, side="left")
    own = np.bincount(place, weights=status[happened] == 1, minlength=len(when)).astype(np.float64)
    return _Counts(when, at_risk.astype(np.float64), own, np.bincount(place, minlength=len(when)).astype(np.float64))
