"""A proportional hazards model by maximum partial likelihood: own Newton steps on sums over those at risk.

Cox, J R Stat Soc B 1972;34:187; ties after Efron or Breslow. With v the hazard that each person has gathered (Efron:
less his share at his own time), the score is the sum of x (event - v) and the information the sum of v x x' less that
of (S1/S0)(S1/S0)' over the steps, so that no second moments are summed over those at risk. Columns are centred and
scaled inside; answers are on the scale of the columns given. Everything over people is summed column by column, so that
the figures do not depend on the number of threads.
"""

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.columns import (
    ScaledColumns,
    add_columns,
    are_alike,
    find_separated,
    has_inverse,
    invert,
    refuse_flat,
    scale_columns,
    straighten,
    sum_columns,
    sum_products,
    turn_back,
)
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.hazard_sums import Cohort, Ties, score
from clinicalc.estimation.people_at_risk import RiskSets, find_risk_sets

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

MOST_STEPS = 50
MOST_HALVINGS = 20
SCORE_SLACK = 1e-8
"""Largest score of a scaled column that may be left, for each person."""


@dataclass(frozen=True, slots=True, eq=False)
class CoxFit:
    """Coefficients (p,) and their model covariance (p, p) on the scale of the columns given.

    `score_max` is the largest score of a scaled column that was left, for each person: proven below 1e-8.
    """

    coefficients: Array
    covariance: Array
    loglik_null: float
    loglik: float
    score_max: float
    iterations: int
    people: int
    events: int


@dataclass(frozen=True, slots=True, eq=False)
class Stratum:
    """One stratum with scaled columns, in the order of time, and its risk sets."""

    cohort: Cohort
    sets: RiskSets
    weights: Array
    counted: Array


@dataclass(frozen=True, slots=True, eq=False)
class State:
    """The log partial likelihood and its derivatives at b, all on scaled columns."""

    b: Array
    loglik: float
    score: Array
    information: Array


def fit_cox(cohort: Cohort, *, ties: Ties = Ties.EFRON, strata: Codes | None = None, tol: float = 1e-16) -> CoxFit:
    """The fit; raises FitRefused (code of FitFault, places of the columns). `strata`: a code for each person, (n,).

    It stops when the squared distance to the maximum, in standard errors, is below `tol`, takes that last step too, and
    proves the score once more by the sums of `hazard_sums`. Times are compared exactly: where near-ties shall merge,
    pass `round_times(cohort, decimals)`, here and to every later sum.
    """
    events = check_times(cohort)
    columns = scale_columns(cohort.x)
    if len(columns.centre) > events:
        raise refuse_fit(FitFault.MORE_COLUMNS_THAN_EVENTS)
    parts = split_strata(cohort, columns, ties, strata)
    null = look(parts, np.zeros(len(columns.centre)))
    refuse_flat(null.information, len(cohort.times))
    found, steps = climb(parts, null, tol)
    left = sum((score(part.cohort, found.b, ties) for part in parts), np.zeros(len(found.b)))
    worst = float(np.abs(left).max()) / len(cohort.times)
    if not worst <= SCORE_SLACK:
        raise refuse_fit(FitFault.NOT_CONVERGED)
    return CoxFit(
        coefficients=found.b / columns.spread,
        covariance=_invert_at(found, cohort, columns, ties, strata) / np.outer(columns.spread, columns.spread),
        loglik_null=null.loglik,
        loglik=found.loglik,
        score_max=worst,
        iterations=steps,
        people=len(cohort.times),
        events=events,
    )


def _invert_at(state: State, cohort: Cohort, columns: ScaledColumns, ties: Ties, strata: Codes | None) -> Array:
    """The inverse of the information at b, (p, p), on scaled columns; where they are alike, by way of straight ones."""
    if not are_alike(state.information):
        return invert(state.information)
    q, triangle = straighten(columns.z)
    straight = look(split_strata(cohort, replace(columns, z=q), ties, strata), triangle @ state.b)
    return turn_back(invert(straight.information), triangle)


def check_times(cohort: Cohort) -> int:
    """The number of events; raises FitRefused for what no fit can be made from."""
    if not len(cohort.times):
        raise refuse_fit(FitFault.NO_PEOPLE)
    if not np.isin(cohort.events, (0.0, 1.0)).all():
        raise refuse_fit(FitFault.OUTCOME_NOT_BINARY)
    for values in (cohort.times, cohort.entry, cohort.weights, cohort.offset):
        if values is not None and not np.isfinite(values).all():
            raise refuse_fit(FitFault.NOT_FINITE)
    if cohort.entry is None and (cohort.times <= 0).any():
        raise refuse_fit(FitFault.TIME_NOT_POSITIVE)
    if cohort.entry is not None and (cohort.entry >= cohort.times).any():
        raise refuse_fit(FitFault.ENTRY_NOT_BEFORE_TIME)
    if cohort.weights is not None and (cohort.weights <= 0).any():
        raise refuse_fit(FitFault.WEIGHT_NOT_POSITIVE)
    events = int(cohort.events.sum())
    if not events:
        raise refuse_fit(FitFault.NO_EVENTS)
    return events


def split_strata(cohort: Cohort, columns: ScaledColumns, ties: Ties, strata: Codes | None) -> list[Stratum]:
    """The strata in which there are events, each in the order of time."""
    codes = np.zeros(len(cohort.times), dtype=np.int64) if strata is None else strata
    order = np.lexsort((cohort.times, codes))
    parts = []
    for rows in np.split(order, np.flatnonzero(np.diff(codes[order])) + 1):
        if not cohort.events[rows].any():
            continue
        part = Cohort(
            cohort.times[rows],
            cohort.events[rows],
            np.empty((len(rows), len(columns.centre)), order="F"),
            None if cohort.entry is None else cohort.entry[rows],
            None if cohort.weights is None else cohort.weights[rows],
            None if cohort.offset is None else cohort.offset[rows],
        )
        for place in range(len(columns.centre)):
            part.x[:, place] = columns.z[rows, place]
        weights = np.ones(len(rows)) if part.weights is None else part.weights
        parts.append(Stratum(part, find_risk_sets(part, ties), weights, weights * part.events))
    return parts


def climb(parts: list[Stratum], null: State, tol: float, start: State | None = None) -> tuple[State, int]:
    """The maximum and the number of Newton steps to it from `start`; raises FitRefused where there is none."""
    state = null if start is None else start
    for steps in range(1, MOST_STEPS + 1):
        step: Array = np.asarray(np.linalg.solve(state.information, state.score), dtype=np.float64)
        distance = float((step * state.score).sum())
        there = abs(distance) <= tol
        after = look(parts, state.b + step) if there else _step(parts, state, step)
        if after is None or not has_inverse(after.information):
            break
        state = after
        wild = find_separated(state.b, state.information, null.information)
        # at rest beyond the limits, or still on the way after more steps than any other fit takes
        if wild and (there or steps > 20):
            raise refuse_fit(FitFault.SEPARATED, wild)
        if there:
            return state, steps
    wild = find_separated(state.b, state.information, null.information)
    raise refuse_fit(FitFault.SEPARATED if wild else FitFault.NOT_CONVERGED, wild)


def _step(parts: list[Stratum], state: State, step: Array) -> State | None:
    """The state after the step, halved until the likelihood does not fall; None where it always does."""
    for _ in range(MOST_HALVINGS):
        after = look(parts, state.b + step)
        # where r underflows for all at risk the likelihood is without limit
        if np.isfinite(after.loglik) and after.loglik >= state.loglik - 1e-12 * abs(state.loglik):
            return after
        step = step / 2
    return None


def look(parts: list[Stratum], b: Array) -> State:
    """The log partial likelihood, its score and information at b, over all strata."""
    loglik, total, information = 0.0, np.zeros(len(b)), np.zeros((len(b), len(b)))
    # an overlong step may overflow; it is then halved
    with np.errstate(all="ignore"):
        for part in parts:
            own = _look_at(part, b)
            loglik, total, information = loglik + own.loglik, total + own.score, information + own.information
    return State(b, loglik, total, information)


def _look_at(part: Stratum, b: Array) -> State:
    """The same for one stratum."""
    z, sets = part.cohort.x, part.sets
    lp = add_columns(z, b)
    if part.cohort.offset is not None:
        lp += part.cohort.offset
    lp -= lp.max()
    r = part.weights * np.exp(lp)
    left0 = sets.sum_left(r)
    jumps = sets.mass / left0
    gathered = sets.spread_steps(jumps)
    gathered[sets.dead] -= sets.sum_steps(sets.share * jumps)[sets.own]
    gathered *= r
    means = np.empty((len(left0), len(b)), order="F")
    root = np.sqrt(sets.mass)
    for place in range(len(b)):
        means[:, place] = root * sets.sum_left(r * z[:, place]) / left0
    return State(
        b,
        float((part.counted * lp).sum() - (sets.mass * np.log(left0)).sum()),
        sum_columns(z, part.counted - gathered),
        sum_products(z, gathered) - sum_products(means, np.ones(len(means))),
    )
