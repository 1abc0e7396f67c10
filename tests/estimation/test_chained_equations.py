"""Chained equations: what is filled in, that it can be had again, and that fits to it are right on average.

The truth of the people drawn here is known; limits of the averages are four of their Monte Carlo errors.
"""

from collections.abc import Sequence

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.errors import Stopped
from clinicalc.estimation.chained_equations import ChainColumn, ChainPlan, FilledIn, fill_in
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.rubin import Pooled, pool
from clinicalc.estimation.student import student_quantile

Array = NDArray[np.float64]
PEOPLE, RUNS = 500, 120
TRUTH = np.array([-0.5, 0.8, -0.6, 0.7])


def untold(done: int, of: int) -> None:
    """Nobody listens."""


def draw_people(run: int) -> tuple[Array, Array]:
    """x (n, 3), a number, a number and an answer, and y; 31 % of the second and the third missing at random.

    What is missing depends on the first and on y alone, both of which are known of everybody.
    """
    rng = np.random.default_rng((7, run))
    x = np.empty((PEOPLE, 3))
    x[:, 0] = rng.normal(size=PEOPLE)
    x[:, 1] = 0.5 * x[:, 0] + 0.9 * rng.normal(size=PEOPLE)
    x[:, 2] = rng.random(PEOPLE) < 1 / (1 + np.exp(0.3 - 0.5 * x[:, 0]))
    y = (rng.random(PEOPLE) < 1 / (1 + np.exp(-TRUTH[0] - x @ TRUTH[1:]))).astype(np.float64)
    for place in (1, 2):
        x[rng.random(PEOPLE) < 1 / (1 + np.exp(1.8 - 1.2 * y - x[:, 0] * (2 * y - 1))), place] = np.nan
    return x, y


def columns_of(x: Array, y: Array) -> list[ChainColumn]:
    return [ChainColumn(x[:, 0]), ChainColumn(x[:, 1]), ChainColumn(x[:, 2], answers=True), ChainColumn(y)]


def fit_pooled(x: Array, y: Array, filled: FilledIn) -> Pooled:
    fits = []
    for each in filled.sets:
        whole = np.asfortranarray(x)
        for place, values in each.items():
            whole[:, place] = values
        fits.append(fit_logistic(y, whole))
    degrees = len(y) - x.shape[1] - 1.0
    return pool(np.array([fit.coefficients for fit in fits]), np.array([fit.covariance for fit in fits]), degrees)


def test_on_average_right_where_complete_cases_are_not() -> None:
    found, others, covered, errors = [], [], [], []
    for run in range(RUNS):
        x, y = draw_people(run)
        pooled = fit_pooled(x.copy(), y, fill_in(columns_of(x, y), ChainPlan(10, 5, run), untold))
        half = np.array([student_quantile(0.975, degrees) for degrees in pooled.degrees]) * pooled.se
        found.append(pooled.estimates)
        errors.append(pooled.se)
        covered.append(np.abs(pooled.estimates - TRUTH) < half)
        complete = ~np.isnan(x).any(axis=1)
        others.append(fit_logistic(y[complete], np.asfortranarray(x[complete])).coefficients)
    spread = np.std(found, axis=0, ddof=1)
    assert (np.abs(np.mean(found, axis=0) - TRUTH) < 4 * spread / np.sqrt(RUNS)).all()
    bias = np.mean(others, axis=0) - TRUTH
    assert bias[0] < -0.4
    assert bias[1] < -0.8
    # binomial: 95 % of 120 runs, four standard errors of 2 %
    assert (np.abs(np.mean(covered, axis=0) - 0.95) < 4 * np.sqrt(0.95 * 0.05 / RUNS)).all()
    # the standard deviation of 120 estimates is known to about 6.5 %
    assert np.mean(errors, axis=0) == pytest.approx(spread, rel=0.26)


def same(one: FilledIn, two: FilledIn) -> bool:
    pairs: Sequence[tuple[dict[int, Array], dict[int, Array]]] = list(zip(one.sets, two.sets, strict=True))
    return all((first[place] == second[place]).all() for first, second in pairs for place in first)


def test_a_seed_gives_the_same_bits_whatever_was_done_before() -> None:
    x, y = draw_people(0)
    first = fill_in(columns_of(x, y), ChainPlan(4, 3, 11), untold)
    np.random.default_rng(0).normal(size=1000)
    fill_in(columns_of(*draw_people(1)), ChainPlan(3, 2, 11), untold)
    assert same(first, fill_in(columns_of(x, y), ChainPlan(4, 3, 11), untold))
    assert not same(first, fill_in(columns_of(x, y), ChainPlan(4, 3, 12), untold))


def test_a_chain_does_not_depend_on_how_many_there_are() -> None:
    """Its draws belong to its number, so that more sets are the same sets and others."""
    x, y = draw_people(0)
    few, many = (fill_in(columns_of(x, y), ChainPlan(sets, 10, 5), untold) for sets in (3, 6))
    assert few.rounds == many.rounds
    assert same(few, FilledIn(many.sets[:3], many.rounds, many.mixing))


def test_only_values_that_somebody_has_and_answers_stay_answers() -> None:
    x, y = draw_people(2)
    kept = x.copy()
    filled = fill_in(columns_of(x, y), ChainPlan(5, 3, 1), untold)
    assert np.array_equal(x, kept, equal_nan=True)
    assert set(filled.mixing) == {1, 2}
    for each in filled.sets:
        assert set(each) == {1, 2}
        for place, values in each.items():
            known = ~np.isnan(x[:, place])
            assert (values[known] == x[known, place]).all()
            assert np.isin(values, x[known, place]).all()
        assert set(np.unique(each[2])) == {0.0, 1.0}
    assert not same(FilledIn(filled.sets[:1], 1, {}), FilledIn(filled.sets[1:2], 1, {}))


def test_people_alike_in_everything_get_donors_by_chance() -> None:
    """With nothing but two kinds of people, every one of a kind who has the value is a donor at some time."""
    rng = np.random.default_rng(4)
    kind = np.repeat([0.0, 1.0], 60)
    values = 100.0 * kind + np.arange(120.0)
    values[rng.choice(120, 40, replace=False)] = np.nan
    filled = fill_in([ChainColumn(values), ChainColumn(kind)], ChainPlan(60, 1, 1), untold)
    lacks = np.isnan(values)
    given = np.concatenate([each[0][lacks] for each in filled.sets])
    assert set(given) == set(values[~lacks])


def test_a_column_that_tells_an_answer_apart_leaves_it_finite() -> None:
    """Everybody above 0 says yes, nobody else does: the likelihood has no maximum, the few people added give it one."""
    x = np.linspace(-1.0, 1.0, 80)
    answers = (x > 0).astype(np.float64)
    answers[::4] = np.nan
    filled = fill_in([ChainColumn(answers, answers=True), ChainColumn(x)], ChainPlan(20, 2, 1), untold)
    lacks = np.isnan(answers)
    mean = np.mean([each[0][lacks] for each in filled.sets], axis=0)
    assert mean[x[lacks] < -0.5].max() <= 0.3
    assert mean[x[lacks] > 0.5].min() >= 0.7


def test_chains_that_tell_nearly_the_same_do_not_mix_and_run_longer() -> None:
    """Two columns with little between them, seldom known together, remember for long what they began with."""
    rng = np.random.default_rng(5)
    first = rng.normal(size=400)
    second = first + rng.normal(scale=0.02, size=400)
    first[:170], second[230:] = np.nan, np.nan
    filled = fill_in([ChainColumn(first), ChainColumn(second)], ChainPlan(10, 2, 1), untold)
    assert filled.rounds == 6
    assert not filled.settled
    assert max(filled.mixing.values()) > 1.1


def test_work_is_told_of_and_stopped_between_rounds() -> None:
    x, y = draw_people(0)
    told: list[tuple[int, int]] = []

    def tell(done: int, of: int) -> None:
        told.append((done, of))
        if len(told) == 7:
            raise Stopped("stopped")

    with pytest.raises(Stopped):
        fill_in(columns_of(x, y), ChainPlan(3, 4, 1), tell)
    assert told == [(done, 12) for done in range(7)]
