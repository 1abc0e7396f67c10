"""A subdistribution fit is a Cox fit to rows split and weighted; what weights stand for; the share it tells."""

from dataclasses import dataclass, replace

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.cox_residuals import robust_covariance
from clinicalc.estimation.fine_gray import (
    CensoringTies,
    CompetingCohort,
    FineGrayFit,
    fit_fine_gray,
    robust_subdistribution_covariance,
    sum_subdistribution,
)
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

quick = settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow])
seeds = st.integers(0, 2**32 - 1)
AT = (2.0, 4.0, 7.0)


def draw(seed: int, people: int = 60) -> CompetingCohort:
    """Invented people with few distinct times, every third time with weights, every other with an offset."""
    rng = np.random.default_rng(seed)
    x = np.column_stack([rng.normal(size=people), rng.random(people) < 0.4])
    times = np.ceil(rng.exponential(3.0, people) * np.exp(-0.3 * x[:, 0]) * 2) / 2
    status = rng.choice([0.0, 1.0, 2.0], people, p=(0.3, 0.4, 0.3))
    weights = rng.integers(1, 4, people) / 2 if seed % 3 == 0 else None
    return CompetingCohort(times, status, x, weights, rng.normal(size=people) / 3 if seed % 2 else None)


def fit(cohort: CompetingCohort, ties: Ties, censoring: CensoringTies = CensoringTies.EVENT_FIRST) -> FineGrayFit:
    try:
        return fit_fine_gray(cohort, ties=ties, censoring=censoring)
    except FitRefused:
        assume(False)
        raise


@dataclass(frozen=True, slots=True, eq=False)
class Split:
    """Rows as they are made by hand, and the person of each."""

    cohort: Cohort
    person: Codes


def split(cohort: CompetingCohort, censoring: CensoringTies) -> Split:
    """Each person watched to his own time; after a competing event a row up to each event time, with its weight."""
    weights = np.ones(len(cohort.times)) if cohort.weights is None else cohort.weights
    when = np.unique(cohort.times[cohort.status == 1])
    rows = []
    for person, (time, status, weight) in enumerate(zip(cohort.times, cohort.status, weights, strict=True)):
        rows.append((0.0, time, float(status == 1), weight, person))
        begin = time
        for end in when[when > time] if status == 2 else ():
            rows.append((begin, end, 0.0, weight * uncensored(cohort, time, end, censoring), person))
            begin = end
    entry, times, events, weight, person = np.array(rows).T
    place = person.astype(np.int64)
    offset = None if cohort.offset is None else cohort.offset[place]
    return Split(Cohort(times, events, cohort.x[place], entry, weight, offset), place)


def uncensored(cohort: CompetingCohort, begin: float, end: float, censoring: CensoringTies) -> float:
    """G(end-) / G(begin-): the product over the times from `begin` on and before `end`, censoring by censoring."""
    weights = np.ones(len(cohort.times)) if cohort.weights is None else cohort.weights
    product = 1.0
    for time in np.unique(cohort.times[(cohort.times >= begin) & (cohort.times < end)]):
        there = cohort.times > time
        ended = (cohort.times == time) & (cohort.status == 0)
        happened = (cohort.times == time) & (cohort.status != 0)
        left = weights[there | ended].sum() + (weights[happened].sum() if censoring is CensoringTies.TOGETHER else 0.0)
        product *= 1 - weights[ended].sum() / left if ended.any() else 1.0
    return product


@quick
@given(seeds, st.sampled_from(Ties), st.sampled_from(CensoringTies))
def test_rows_split_and_weighted_give_the_same(seed: int, ties: Ties, censoring: CensoringTies) -> None:
    cohort = draw(seed)
    found = fit(cohort, ties, censoring)
    rows = split(cohort, censoring)
    whole = fit_cox(rows.cohort, ties=ties)
    assert found.coefficients == pytest.approx(whole.coefficients, rel=1e-8, abs=1e-10)
    assert found.inverse_information == pytest.approx(whole.covariance, rel=1e-8)
    assert (found.loglik_null, found.loglik) == pytest.approx((whole.loglik_null, whole.loglik), rel=1e-11)
    robust = robust_subdistribution_covariance(cohort, found, ties=ties, censoring=censoring)
    expected = robust_covariance(rows.cohort, whole, ties, cluster=rows.person)
    assert robust == pytest.approx(expected, rel=1e-7, abs=1e-10)
    several = (np.arange(len(cohort.times)) % 7).astype(np.int64)
    robust = robust_subdistribution_covariance(cohort, found, ties=ties, censoring=censoring, cluster=several)
    expected = robust_covariance(rows.cohort, whole, ties, cluster=several[rows.person])
    assert robust == pytest.approx(expected, rel=1e-7, abs=1e-10)
    sums = sum_subdistribution(cohort, found.coefficients, AT, ties=ties, censoring=censoring)
    for one, other in zip(sums, sum_hazards(rows.cohort, found.coefficients, AT, ties), strict=True):
        assert (one.hazard, one.squares) == pytest.approx((other.hazard, other.squares), rel=1e-11)
        assert one.moments == pytest.approx(other.moments, rel=1e-9, abs=1e-12)


@quick
@given(seeds)
def test_weights_are_rows_drawn_again_under_breslow(seed: int) -> None:
    """As a bootstrap needs it: counts of a sample, those not drawn left out."""
    cohort = replace(draw(seed), weights=None)
    counts = np.random.default_rng(seed + 1).multinomial(len(cohort.times), np.full(60, 1 / 60)).astype(np.float64)
    drawn, rows = counts > 0, np.repeat(np.arange(60), counts.astype(int))
    one = fit(take(cohort, np.flatnonzero(drawn), counts[drawn]), Ties.BRESLOW)
    other = fit(take(cohort, rows), Ties.BRESLOW)
    assert one.coefficients == pytest.approx(other.coefficients, rel=1e-8, abs=1e-10)
    assert one.loglik == pytest.approx(other.loglik, rel=1e-12)
    weighted = take(cohort, np.flatnonzero(drawn), counts[drawn])
    for left, right in zip(
        sum_subdistribution(weighted, one.coefficients, AT),
        sum_subdistribution(take(cohort, rows), one.coefficients, AT),
        strict=True,
    ):
        assert left.hazard == pytest.approx(right.hazard, rel=1e-11)


def take(cohort: CompetingCohort, rows: Codes, weights: Array | None = None) -> CompetingCohort:
    offset = None if cohort.offset is None else cohort.offset[rows]
    return CompetingCohort(cohort.times[rows], cohort.status[rows], cohort.x[rows], weights, offset)


@quick
@given(seeds, st.sampled_from(Ties))
def test_without_a_competing_event_it_is_a_cox_fit(seed: int, ties: Ties) -> None:
    cohort = draw(seed)
    cohort = replace(cohort, status=np.minimum(cohort.status, 1.0))
    found, plain = fit(cohort, ties), fit_cox(cohort.as_cohort, ties=ties)
    assert (found.coefficients == plain.coefficients).all()
    assert (found.inverse_information == plain.covariance).all()
    assert found.competing == 0


@quick
@given(seeds, st.floats(-1e3, 1e3), st.floats(1e-3, 1e3), st.sampled_from(Ties))
def test_order_of_people_and_beginnings_of_columns(seed: int, shift: float, scale: float, ties: Ties) -> None:
    cohort = draw(seed)
    order = np.random.default_rng(seed).permutation(60)
    turn = np.array([scale, -1.0])
    mixed = take(cohort, order, None if cohort.weights is None else cohort.weights[order])
    moved = replace(mixed, x=mixed.x * turn + shift * turn)
    one, other = fit(cohort, ties), fit(moved, ties)
    se = np.sqrt(np.diag(one.inverse_information))
    assert np.abs((other.coefficients * turn - one.coefficients) / se).max() < 1e-8
    robust = robust_subdistribution_covariance(moved, other, ties=ties) * np.outer(turn, turn)
    assert robust == pytest.approx(robust_subdistribution_covariance(cohort, one, ties=ties), rel=1e-6, abs=1e-9)


def test_coefficients_of_a_known_subdistribution_are_covered() -> None:
    """Fine & Gray's own design (1999, section 4): F(t|x) = 1 - (1 - 0.6 (1 - e^-t))^exp(x'b); 400 samples of 300.

    Of 400 intervals that cover with 0.95, a share between 0.92 and 0.975 does so with a probability above 0.98.
    """
    truth, rng = np.array([0.5, -0.5]), np.random.default_rng(20)
    covered = np.zeros(2)
    for _ in range(400):
        cohort = draw_known(rng, truth, 300)
        found = fit_fine_gray(cohort)
        se = np.sqrt(np.diag(robust_subdistribution_covariance(cohort, found)))
        covered += np.abs(found.coefficients - truth) < 1.959963984540054 * se
    assert ((covered / 400 > 0.92) & (covered / 400 < 0.975)).all(), covered


def draw_known(rng: np.random.Generator, truth: Array, people: int) -> CompetingCohort:
    x = rng.normal(size=(people, 2))
    r, u = np.exp(x @ truth), rng.random(people)
    never = 0.4**r
    mine = u < 1 - never
    # 1 - (1 - 0.6 (1 - e^-t))^r = u, solved for t
    times = np.where(
        mine, -np.log1p(-(1 - (1 - np.where(mine, u, 0.0)) ** (1 / r)) / 0.6), rng.exponential(1.0, people)
    )
    ends = rng.uniform(0.5, 3.0, people)
    status = np.where(ends < times, 0.0, np.where(mine, 1.0, 2.0))
    return CompetingCohort(np.maximum(np.minimum(times, ends), 1e-9), status, x)
