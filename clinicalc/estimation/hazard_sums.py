"""The running sums of a proportional hazards fit from which absolute risk and its band are made.

At an event time with d deaths, over those at risk r = exp(x'b), S0 = sum r, S1 = sum r x, and D0, D1 the same over the
deaths: for l = 0..d-1 with f = l/d (Efron) or f = 0 (Breslow) H grows by 1/(S0 - f D0), A by its square, and q by
(S1 - f D1)/(S0 - f D0)^2. Tsiatis, Ann Stat 1981;9:93; Link, Biometrics 1984;40:601; Efron's increments: Therneau &
Grambsch, Modeling Survival Data (2000), chapter 10. With weights each step counts with the mean weight of its deaths.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.people_at_risk import Cohort, RiskSets, Ties, find_risk_sets

__all__ = ["Cohort", "RunningSums", "Ties", "score", "score_over", "sum_hazards", "sums_over"]

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class RunningSums:
    """H, A and q (shape (p,)) up to and including `time`, for somebody with x = 0."""

    time: float
    hazard: float
    squares: float
    moments: Array


def sum_hazards(cohort: Cohort, coefficients: Array, at: Sequence[float], ties: Ties) -> tuple[RunningSums, ...]:
    """The sums at each of the times `at`, in their order; x as it stands in the cohort."""
    return sums_over(find_risk_sets(cohort, ties), cohort, coefficients, at)


def sums_over(sets: RiskSets, cohort: Cohort, coefficients: Array, at: Sequence[float]) -> tuple[RunningSums, ...]:
    """The same where those at risk are known."""
    r = _weigh(cohort, coefficients)
    left0 = sets.sum_left(r)
    # how many steps lie at or before each time; the jump at the time itself counts
    steps = np.searchsorted(sets.when[sets.place], np.asarray(at, dtype=np.float64), side="right")
    hazard = _run(sets.mass / left0, steps)
    squares = _run(sets.mass / (left0 * left0), steps)
    moments = np.empty((len(at), cohort.x.shape[1]))
    for column in range(cohort.x.shape[1]):
        left1 = sets.sum_left(r * cohort.x[:, column])
        moments[:, column] = _run(sets.mass * left1 / (left0 * left0), steps)
    return tuple(
        RunningSums(float(time), float(hazard[place]), float(squares[place]), moments[place])
        for place, time in enumerate(at)
    )


def score(cohort: Cohort, coefficients: Array, ties: Ties) -> Array:
    """The derivative of the log partial likelihood, shape (p,): zero at the maximum."""
    return score_over(find_risk_sets(cohort, ties), cohort, coefficients)


def score_over(sets: RiskSets, cohort: Cohort, coefficients: Array) -> Array:
    """The same where those at risk are known."""
    r = _weigh(cohort, coefficients)
    weights = cohort.events == 1 if cohort.weights is None else cohort.weights * (cohort.events == 1)
    left0 = sets.sum_left(r)
    total = np.empty(cohort.x.shape[1])
    for column in range(cohort.x.shape[1]):
        left1 = sets.sum_left(r * cohort.x[:, column])
        total[column] = (weights * cohort.x[:, column]).sum() - (sets.mass * left1 / left0).sum()
    return total


def _weigh(cohort: Cohort, coefficients: Array) -> Array:
    """exp(x'b) of each person, with his offset, times his weight."""
    lp = np.zeros(len(cohort.times)) if cohort.offset is None else cohort.offset.copy()
    for column, slope in enumerate(coefficients):
        lp += cohort.x[:, column] * slope
    r = np.exp(lp)
    return r if cohort.weights is None else cohort.weights * r


def _run(increments: Array, steps: NDArray[np.intp]) -> Array:
    """The sum of the first so many increments, for each of `steps`."""
    return np.append(0.0, np.cumsum(increments))[steps]
