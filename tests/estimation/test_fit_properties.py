"""What must not change a fit: where columns begin, their units, the order of people; and what weights stand for."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.cox_residuals import robust_covariance
from clinicalc.estimation.hazard_sums import Cohort, Ties, score, sum_hazards
from clinicalc.estimation.logistic import Link, fit_logistic
from clinicalc.estimation.people_at_risk import find_risk_sets

Array = NDArray[np.float64]

quick = settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow])
seeds = st.integers(0, 2**32 - 1)
shifts = st.floats(-1e4, 1e4)
scales = st.floats(1e-6, 1e6)


def draw(seed: int) -> Cohort:
    """Invented people, in every other case with few distinct times, or with delayed entry."""
    rng = np.random.default_rng(seed)
    people = int(rng.integers(60, 150))
    x = np.column_stack([rng.normal(size=people), rng.normal(size=people), rng.random(people) < 0.4])
    times = rng.exponential(size=people) * np.exp(-x @ np.array([0.6, -0.3, 0.4])) + 0.05
    if seed % 2:
        times = np.ceil(times * 6) / 6
    entry = times * rng.random(people) * 0.5 if seed % 3 == 0 else None
    return Cohort(times, (rng.random(people) < 0.7).astype(np.float64), x, entry)


@quick
@given(seeds, shifts, scales, st.sampled_from(Ties))
def test_beginnings_and_units_of_columns(seed: int, shift: float, scale: float, ties: Ties) -> None:
    cohort = draw(seed)
    plain = fit_cox(cohort, ties=ties)
    turn = np.array([scale, 1.0, -1.0])
    moved = Cohort(cohort.times, cohort.events, cohort.x * turn + shift * turn, cohort.entry)
    found = fit_cox(moved, ties=ties)
    se = np.sqrt(np.diag(plain.covariance))
    assert np.abs((found.coefficients * turn - plain.coefficients) / se).max() < 1e-8
    assert found.covariance * np.outer(turn, turn) == pytest.approx(plain.covariance, rel=1e-7, abs=1e-12)
    assert found.loglik == pytest.approx(plain.loglik, rel=1e-11)
    robust = robust_covariance(moved, found, ties) * np.outer(turn, turn)
    assert robust == pytest.approx(robust_covariance(cohort, plain, ties), rel=1e-6, abs=1e-9)


@quick
@given(seeds, st.sampled_from(Ties))
def test_the_order_of_people(seed: int, ties: Ties) -> None:
    cohort = draw(seed)
    order = np.random.default_rng(seed).permutation(len(cohort.times))
    entry = None if cohort.entry is None else cohort.entry[order]
    mixed = Cohort(cohort.times[order], cohort.events[order], cohort.x[order], entry)
    one, other = fit_cox(cohort, ties=ties), fit_cox(mixed, ties=ties)
    assert other.coefficients == pytest.approx(one.coefficients, rel=1e-9, abs=1e-11)
    assert other.covariance == pytest.approx(one.covariance, rel=1e-9, abs=1e-12)


@quick
@given(seeds)
def test_a_weight_of_two_is_a_row_twice_under_breslow(seed: int) -> None:
    cohort = draw(seed)
    weights = np.random.default_rng(seed + 1).integers(1, 3, len(cohort.times)).astype(np.float64)
    twice = np.repeat(np.arange(len(weights)), weights.astype(int))
    entry = None if cohort.entry is None else cohort.entry[twice]
    copies = Cohort(cohort.times[twice], cohort.events[twice], cohort.x[twice], entry)
    weighted = Cohort(cohort.times, cohort.events, cohort.x, cohort.entry, weights)
    one, other = fit_cox(weighted, ties=Ties.BRESLOW), fit_cox(copies, ties=Ties.BRESLOW)
    assert one.coefficients == pytest.approx(other.coefficients, rel=1e-9, abs=1e-11)
    assert one.covariance == pytest.approx(other.covariance, rel=1e-9, abs=1e-12)
    assert one.loglik == pytest.approx(other.loglik, rel=1e-12)
    # residuals of copies, summed by person, are those of the weighted rows
    robust = robust_covariance(copies, other, Ties.BRESLOW, cluster=twice.astype(np.int64))
    assert robust_covariance(weighted, one, Ties.BRESLOW) == pytest.approx(robust, rel=1e-8, abs=1e-11)


@quick
@given(seeds, shifts, scales, st.sampled_from(Link))
def test_binary_fits_and_their_columns(seed: int, shift: float, scale: float, link: Link) -> None:
    cohort = draw(seed)
    try:
        plain = fit_logistic(cohort.events, cohort.x, link=link)
    except FitRefused as refused:
        # a small draw may be separated; nothing else may be wrong with it
        assert refused.code == "separated"  # noqa: PT017
        return
    turn = np.array([scale, 1.0, -1.0])
    order = np.random.default_rng(seed).permutation(len(cohort.times))
    found = fit_logistic(cohort.events[order], (cohort.x * turn + shift * turn)[order], link=link)
    se = np.sqrt(np.diag(plain.covariance))[1:]
    assert np.abs((found.coefficients[1:] * turn - plain.coefficients[1:]) / se).max() < 1e-7
    assert found.loglik == pytest.approx(plain.loglik, rel=1e-10)


@quick
@given(seeds, st.sampled_from(Ties))
def test_sums_over_those_at_risk_are_those_of_a_table_of_everybody(seed: int, ties: Ties) -> None:
    """Who is at risk at each event time, person by person, in (entry, time]."""
    cohort = draw(seed)
    sets = find_risk_sets(cohort, ties)
    entry = np.full(len(cohort.times), -np.inf) if cohort.entry is None else cohort.entry
    at_risk = (entry < sets.when[:, None]) & (cohort.times >= sets.when[:, None])
    dead = (cohort.times == sets.when[:, None]) & (cohort.events == 1)
    values = np.random.default_rng(seed).random(len(cohort.times))
    assert sets.sum_at_risk(values) == pytest.approx((at_risk * values).sum(axis=1), rel=1e-10)
    assert sets.sum_dead(values) == pytest.approx((dead * values).sum(axis=1), rel=1e-12)
    steps = np.random.default_rng(seed + 1).random(len(sets.place))
    gathered = (at_risk * sets.sum_steps(steps)[:, None]).sum(axis=0)
    assert sets.spread_steps(steps) == pytest.approx(gathered, rel=1e-10, abs=1e-12)
    assert sets.mass.sum() == pytest.approx(cohort.events.sum())


def sum_by_definition(cohort: Cohort, b: Array, at: float, ties: Ties) -> tuple[float, float, Array, Array]:
    """H, A and q up to `at`, and the score over all times, one event time and one death after the other."""
    entry = np.full(len(cohort.times), -np.inf) if cohort.entry is None else cohort.entry
    weights = np.ones(len(cohort.times)) if cohort.weights is None else cohort.weights
    r = weights * np.exp(cohort.x @ b)
    hazard, squares, moments, slope = 0.0, 0.0, np.zeros(len(b)), np.zeros(len(b))
    for time in np.unique(cohort.times[cohort.events == 1]):
        there = (entry < time) & (cohort.times >= time)
        dead = (cohort.times == time) & (cohort.events == 1)
        slope += (weights[dead, None] * cohort.x[dead]).sum(axis=0)
        for number in range(int(dead.sum())):
            share = number / dead.sum() if ties is Ties.EFRON else 0.0
            left = r * (there - share * dead)
            whole, first = left.sum(), (left[:, None] * cohort.x).sum(axis=0)
            slope -= weights[dead].mean() * first / whole
            if time <= at:
                hazard += weights[dead].mean() / whole
                squares += weights[dead].mean() / whole**2
                moments += weights[dead].mean() * first / whole**2
    return hazard, squares, moments, slope


@quick
@given(seeds, st.booleans(), st.sampled_from(Ties))
def test_hazard_sums_and_score_are_those_of_their_definition(seed: int, weighted: bool, ties: Ties) -> None:
    cohort = draw(seed)
    if weighted:
        cohort = replace(cohort, weights=np.random.default_rng(seed).uniform(0.5, 3, len(cohort.times)))
    b = np.array([0.4, -0.2, 0.3])
    at = float(np.median(cohort.times))
    found = sum_hazards(cohort, b, [at], ties)[0]
    hazard, squares, moments, slope = sum_by_definition(cohort, b, at, ties)
    assert (found.hazard, found.squares) == pytest.approx((hazard, squares), rel=1e-11)
    assert found.moments == pytest.approx(moments, rel=1e-9, abs=1e-11)
    assert score(cohort, b, ties) == pytest.approx(slope, rel=1e-9, abs=1e-9)
