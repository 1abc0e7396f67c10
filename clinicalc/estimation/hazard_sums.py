"""The running sums of a proportional hazards fit from which absolute risk and its band are made.

At an event time with d deaths, over those at risk r = exp(x'b), S0 = sum r, S1 = sum r x, and D0, D1 the same over the
deaths: for l = 0..d-1 with f = l/d (Efron) or f = 0 (Breslow) H grows by 1/(S0 - f D0), A by its square, and q by
(S1 - f D1)/(S0 - f D0)^2. Tsiatis, Ann Stat 1981;9:93; Link, Biometrics 1984;40:601; Efron's increments: Therneau &
Grambsch, Modeling Survival Data (2000), chapter 10.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


class Ties(StrEnum):
    """How events at one time are counted."""

    EFRON = "efron"
    BRESLOW = "breslow"


@dataclass(frozen=True, slots=True, eq=False)
class Cohort:
    """People of one stratum: times, events (1 or 0), x of shape (n, p); `entry` and `weights` where there are any.

    Somebody is at risk in (entry, time]. Times are compared exactly: round them before, where they come from sums.
    """

    times: Array
    events: Array
    x: Array
    entry: Array | None = None
    weights: Array | None = None


@dataclass(frozen=True, slots=True, eq=False)
class RunningSums:
    """H, A and q (shape (p,)) up to and including `time`, for somebody with x = 0."""

    time: float
    hazard: float
    squares: float
    moments: Array


@dataclass(frozen=True, slots=True, eq=False)
class _AtRisk:
    """One event time: sums over those at risk and over the deaths, and how many deaths of which mean weight."""

    time: float
    risk0: float
    risk1: Array
    deaths0: float
    deaths1: Array
    deaths: int
    mean_weight: float
    deaths_x: Array


def sum_hazards(cohort: Cohort, coefficients: Array, at: Sequence[float], ties: Ties) -> tuple[RunningSums, ...]:
    """The sums at each of the times `at`, in their order; x as it stands in the cohort."""
    size = cohort.x.shape[1]
    hazard, squares, moments = 0.0, 0.0, np.zeros(size)
    steps = [RunningSums(-np.inf, hazard, squares, moments)]
    for place in _event_times(cohort, coefficients):
        for left0, left1 in _shares(place, ties):
            hazard += place.mean_weight / left0
            squares += place.mean_weight / (left0 * left0)
            moments = moments + place.mean_weight * left1 / (left0 * left0)
        steps.append(RunningSums(place.time, hazard, squares, moments))
    times = np.array([step.time for step in steps])
    found = [steps[int(np.searchsorted(times, time, side="right")) - 1] for time in at]
    return tuple(
        RunningSums(time, step.hazard, step.squares, step.moments) for time, step in zip(at, found, strict=True)
    )


def score(cohort: Cohort, coefficients: Array, ties: Ties) -> Array:
    """The derivative of the log partial likelihood, shape (p,): zero at the maximum."""
    total = np.zeros(cohort.x.shape[1])
    for place in _event_times(cohort, coefficients):
        total += place.deaths_x
        for left0, left1 in _shares(place, ties):
            total -= place.mean_weight * left1 / left0
    return total


def _shares(place: _AtRisk, ties: Ties) -> Iterator[tuple[float, Array]]:
    """What is left at risk for each death of a tie: its sum and the sum of x."""
    for number in range(place.deaths):
        share = number / place.deaths if ties is Ties.EFRON else 0.0
        yield place.risk0 - share * place.deaths0, place.risk1 - share * place.deaths1


def _event_times(cohort: Cohort, coefficients: Array) -> Iterator[_AtRisk]:
    """Every event time in order, with sums over those at risk made from the end backwards."""
    weights = np.ones(len(cohort.times)) if cohort.weights is None else cohort.weights
    lp = (cohort.x * coefficients).sum(axis=1)
    r = weights * np.exp(lp)
    rx = r[:, None] * cohort.x
    dead = cohort.events == 1
    when = np.unique(cohort.times[dead])
    staying0, staying1 = _sums_from(cohort.times, when, r, rx)
    if cohort.entry is not None:
        later0, later1 = _sums_from(cohort.entry, when, r, rx)
        staying0, staying1 = staying0 - later0, staying1 - later1
    for place, time in enumerate(when):
        rows = np.flatnonzero(dead & (cohort.times == time))
        yield _AtRisk(
            float(time),
            float(staying0[place]),
            staying1[place],
            float(r[rows].sum()),
            rx[rows].sum(axis=0),
            len(rows),
            float(weights[rows].mean()),
            (weights[rows, None] * cohort.x[rows]).sum(axis=0),
        )


def _sums_from(times: Array, when: Array, r: Array, rx: Array) -> tuple[Array, Array]:
    """For each time of `when` the sums of r and rx over the rows whose time is that or later."""
    order = np.argsort(times, kind="stable")
    ends0 = np.append(np.cumsum(r[order][::-1])[::-1], 0.0)
    ends1 = np.vstack([np.cumsum(rx[order][::-1], axis=0)[::-1], np.zeros((1, rx.shape[1]))])
    first = np.searchsorted(times[order], when, side="left")
    return ends0[first], ends1[first]
