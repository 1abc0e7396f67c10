"""The strength of a ridge penalty by ten-fold cross-validation, the same each time: seed, folds and grid are fixed.

Logistic: the deviance of those left out under the fit to the others. Cox: the cross-validated partial likelihood of
Verweij & van Houwelingen, Stat Med 1993;12:2305, the likelihood of everybody less that of those kept, at their fit, as
the people left out have no likelihood of their own. Columns are scaled once, over everybody, so that a strength means
the same in each fold. People of one cluster are in one fold; else each fold has its share of the events.
"""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.binomial import Link, sum_loglik
from clinicalc.estimation.columns import scale_columns
from clinicalc.estimation.cox import check_times, look, split_strata
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.logistic import begin, check_answers
from clinicalc.estimation.ridge import climb_hazards, climb_risks, spread_squared

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
Judge = Callable[[float], float]

FOLDS = 10
SEED = 1
WEAKEST, STRONGEST = 0.01, 10_000.0
PER_DECADE = 2
REFINEMENTS = 10
"""Golden sections between the neighbours of the best of the grid: to some parts in a hundred, where it is flat."""
TOLERANCE = 1e-8
"""Squared distance at which a fold's last Newton step is taken, which leaves far less than that."""


@dataclass(frozen=True, slots=True)
class ChosenStrength:
    """The strength, to three digits; `deviance` is -2 times the cross-validated log likelihood at it.

    `at_edge` says that the best of the grid was its weakest or its strongest.
    """

    strength: float
    deviance: float
    at_edge: bool


@dataclass(frozen=True, slots=True, eq=False)
class _Part:
    """Some of the people of a logistic fit."""

    design: Array
    y: Array
    ones: Array
    away: Array


def choose_risk_strength(
    y: Array, x: Array, *, offset: Array | None = None, cluster: Codes | None = None
) -> ChosenStrength:
    """For a logistic fit of y (0 or 1, (n,)) on x (n, p). Raises FitRefused."""
    counts = np.ones(len(y))
    away = np.zeros(len(y)) if offset is None else offset
    check_answers(y, counts, away)
    columns = scale_columns(x)
    design = np.column_stack([np.ones(len(y)), columns.z])
    unit = np.append(0.0, spread_squared(columns, counts))
    folds = lay_folds(y, cluster)
    numbers = range(int(folds.max()) + 1)
    null = begin(design, y, Link.LOGIT, counts, away)
    last = dict.fromkeys(numbers, null)
    kepts = [_Part(design[rows], y[rows], counts[rows], away[rows]) for rows in (folds != number for number in numbers)]
    outs = [_Part(design[rows], y[rows], counts[rows], away[rows]) for rows in (folds == number for number in numbers)]

    def judge(strength: float) -> float:
        total = 0.0
        for number in numbers:
            kept, out = kepts[number], outs[number]
            b, _ = climb_risks(kept.design, last[number], kept.y, kept.ones, kept.away, strength * unit, TOLERANCE)
            last[number] = b
            total -= 2 * sum_loglik(out.design, b, out.y, Link.LOGIT, out.ones, out.away)
        return total

    return search(judge)


def choose_hazard_strength(
    cohort: Cohort, *, ties: Ties = Ties.EFRON, strata: Codes | None = None, cluster: Codes | None = None
) -> ChosenStrength:
    """For a Cox fit. Raises FitRefused."""
    check_times(cohort)
    columns = scale_columns(cohort.x)
    whole = split_strata(cohort, columns, ties, strata)
    unit = spread_squared(columns, np.ones(len(cohort.times)))
    folds = lay_folds(cohort.events, cluster)
    kept = []
    for number in range(int(folds.max()) + 1):
        rows = folds != number
        own = replace(columns, z=columns.z[rows])
        kept.append(split_strata(_pick(cohort, rows), own, ties, None if strata is None else strata[rows]))
    last = [np.zeros(len(unit)) for _ in kept]

    def judge(strength: float) -> float:
        total = 0.0
        for number, parts in enumerate(kept):
            state, _ = climb_hazards(parts, look(parts, last[number]), strength * unit, TOLERANCE)
            last[number] = state.b
            total -= 2 * (look(whole, state.b).loglik - state.loglik)
        return total

    return search(judge)


def lay_folds(events: Array, cluster: Codes | None = None, *, folds: int = FOLDS, seed: int = SEED) -> Codes:
    """The fold of each person, 0 to folds - 1, (n,); drawn from `seed`. At least two people or clusters."""
    random = np.random.default_rng(seed)
    if cluster is not None:
        units, own = np.unique(cluster, return_inverse=True)
        return np.asarray((random.permutation(len(units)) % folds)[own.reshape(-1)], dtype=np.int64)
    found = np.empty(len(events), dtype=np.int64)
    order = random.permutation(len(events))
    # those with the event first, so that they are dealt out evenly, and the others after them
    dealt = np.concatenate([order[events[order] == 1], order[events[order] != 1]])
    found[dealt] = np.arange(len(events)) % folds
    return found


def search(judge: Judge) -> ChosenStrength:
    """The strength with the smallest figure: the best of the grid, then golden sections of its logarithm."""
    decades = round(np.log10(STRONGEST / WEAKEST))
    grid = np.linspace(np.log10(STRONGEST), np.log10(WEAKEST), decades * PER_DECADE + 1)
    figures = [judge(_strength(point)) for point in grid]
    best = int(np.argmin(figures))
    if best in (0, len(grid) - 1):
        return ChosenStrength(_strength(grid[best]), figures[best], True)
    low, high = grid[best + 1], grid[best - 1]
    part = (np.sqrt(5.0) - 1) / 2
    inner, outer = high - part * (high - low), low + part * (high - low)
    at_inner, at_outer = judge(_strength(inner)), judge(_strength(outer))
    for _ in range(REFINEMENTS):
        if at_inner <= at_outer:
            high, outer, at_outer = outer, inner, at_inner
            inner = high - part * (high - low)
            at_inner = judge(_strength(inner))
        else:
            low, inner, at_inner = inner, outer, at_outer
            outer = low + part * (high - low)
            at_outer = judge(_strength(outer))
    strength = float(f"{_strength((low + high) / 2):.3g}")
    return ChosenStrength(strength, judge(strength), False)


def _strength(logarithm: float) -> float:
    return float(np.power(10.0, logarithm))


def _pick(cohort: Cohort, rows: NDArray[np.bool_]) -> Cohort:
    entry = None if cohort.entry is None else cohort.entry[rows]
    offset = None if cohort.offset is None else cohort.offset[rows]
    return Cohort(cohort.times[rows], cohort.events[rows], cohort.x[rows], entry, None, offset)
