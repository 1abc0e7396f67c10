"""Repeated fits are the fits to the rows drawn, for invented people with ties; what refuses those refuses these."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.bootstrap_hazards import pick_people, ready_hazards
from clinicalc.estimation.bootstrap_risks import RiskPeople, ready_risks
from clinicalc.estimation.concordance import find_concordance
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawing import draw_counts, repeat_rows
from clinicalc.estimation.drawn_concordance import find_drawn_area, find_drawn_c, order_people
from clinicalc.estimation.drawn_times import sort_strata
from clinicalc.estimation.fine_gray import CompetingCohort, fit_fine_gray
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards
from clinicalc.estimation.hazard_views import CompetingView, RowsView, view_drawn
from clinicalc.estimation.logistic import Link, fit_logistic
from clinicalc.estimation.optimism import Compared, Lost
from clinicalc.estimation.optimism_hazards import RepeatedHazards, RepeatedSubdistribution
from clinicalc.estimation.optimism_risks import RepeatedRisks

Array = NDArray[np.float64]

SEEDS = st.integers(0, 2**32 - 1)


def _invent(seed: int, people: int) -> Cohort:
    """Whole times, so that there are many ties; a column of 0 and 1, one of five values, a continuous one."""
    rng = np.random.default_rng(seed)
    x = np.column_stack(
        [rng.random(people) < 0.3, rng.integers(0, 5, people), rng.normal(size=people) * 10 + 50]
    ).astype(np.float64)
    lp = x @ np.array([0.5, -0.2, 0.03]) - 1.5
    times = np.ceil(rng.exponential(size=people) * np.exp(-lp) * 10)
    ends = rng.integers(1, 15, people).astype(np.float64)
    return Cohort(np.minimum(times, ends), (times <= ends).astype(np.float64), x)


def _hold_alike(own: FitRefused, other: FitRefused) -> None:
    assert (own.code, own.columns) == (other.code, other.columns)


@np.errstate(all="ignore")  # as the fits of a study: figures out of range are refused by what comes of them
@settings(deadline=None, max_examples=40)
@given(seed=SEEDS, people=st.integers(30, 300), link=st.sampled_from(Link), away=st.booleans())
def test_a_binomial_refit_is_the_fit_to_the_rows_drawn(seed: int, people: int, link: Link, away: bool) -> None:
    cohort = _invent(seed, people)
    y, x = cohort.events, cohort.x
    offset = np.random.default_rng(seed).normal(size=people) * 0.3 if away else None
    try:
        all_of_them = fit_logistic(y, x, link=link, offset=offset)
    except FitRefused:
        return
    counts = np.array([draw_counts(people, seed, number) for number in range(5)])
    found = ready_risks(RiskPeople(y, x, link, offset), all_of_them.coefficients).refit(counts)
    for row, own in zip(counts, found, strict=True):
        rows = repeat_rows(row)
        try:
            fit = fit_logistic(y[rows], x[rows], link=link, offset=None if offset is None else offset[rows])
        except FitRefused as refused:
            assert isinstance(own, FitRefused)
            _hold_alike(own, refused)
            continue
        assert not isinstance(own, FitRefused)
        assert own == pytest.approx(fit.coefficients, rel=1e-9, abs=1e-9)


@np.errstate(all="ignore")
@settings(deadline=None, max_examples=40)
@given(
    seed=SEEDS,
    people=st.integers(40, 300),
    ties=st.sampled_from(Ties),
    several=st.booleans(),
    away=st.booleans(),
    late=st.booleans(),
)
def test_a_cox_refit_is_the_fit_to_the_rows_drawn(
    seed: int, people: int, ties: Ties, several: bool, away: bool, late: bool
) -> None:
    rng, cohort = np.random.default_rng(seed), _invent(seed, people)
    strata = rng.integers(0, 3, people) if several else None
    cohort = replace(
        cohort,
        offset=rng.normal(size=people) * 0.3 if away else None,
        entry=np.floor(cohort.times * rng.random(people) * 0.5) if late else None,
    )
    try:
        all_of_them = fit_cox(cohort, ties=ties, strata=strata)
    except FitRefused:
        return
    ready = ready_hazards(cohort, all_of_them.coefficients, ties, strata)
    for number in range(4):
        counts = draw_counts(people, seed, number)
        rows = repeat_rows(counts)
        try:
            fit = fit_cox(pick_people(cohort, rows), ties=ties, strata=None if strata is None else strata[rows])
        except FitRefused as refused:
            with pytest.raises(FitRefused) as lost:
                ready.refit(counts)
            _hold_alike(lost.value, refused)
            continue
        assert ready.refit(counts) == pytest.approx(fit.coefficients, rel=1e-9, abs=1e-9)


@settings(deadline=None, max_examples=40)
@given(seed=SEEDS, people=st.integers(5, 200), several=st.booleans())
def test_c_of_those_drawn_is_that_of_the_rows_drawn(seed: int, people: int, several: bool) -> None:
    rng, cohort = np.random.default_rng(seed), _invent(seed, people)
    strata = rng.integers(0, 3, people) if several else None
    lp, counts = np.round(rng.normal(size=people), 1), draw_counts(people, seed, 0)
    rows = repeat_rows(counts)
    compared = order_people(cohort.times, cohort.events, strata)
    try:
        own = None if strata is None else strata[rows]
        c = find_concordance(cohort.times[rows], cohort.events[rows], lp[rows], strata=own).c
    except FitRefused:
        with pytest.raises(FitRefused):
            find_drawn_c(compared, lp, counts)
        return
    assert find_drawn_c(compared, lp, counts) == c


@settings(deadline=None, max_examples=40)
@given(seed=SEEDS, people=st.integers(5, 200))
def test_the_area_of_those_drawn_is_the_c_of_the_rows_drawn(seed: int, people: int) -> None:
    rng = np.random.default_rng(seed)
    y = (rng.random(people) < 0.4).astype(np.float64)
    lp, counts = np.round(rng.normal(size=people), 1), draw_counts(people, seed, 0)
    rows = repeat_rows(counts)
    try:
        c = find_concordance(1 - y[rows], y[rows], lp[rows]).c
    except FitRefused:
        with pytest.raises(FitRefused):
            find_drawn_area(y, lp, counts)
        return
    assert find_drawn_area(y, lp, counts) == c


@pytest.mark.parametrize("ties", Ties)
def test_slope_and_baseline_of_those_drawn_are_those_of_the_rows_drawn(ties: Ties) -> None:
    cohort = _invent(4, 250)
    strata = np.random.default_rng(4).integers(0, 2, 250)
    lp = cohort.x @ np.array([0.4, -0.1, 0.02]) - 1.0
    counts = draw_counts(250, 4, 0)
    quick = view_drawn(sort_strata(cohort, strata), cohort, ties, strata, counts)
    rows = RowsView(cohort, ties, strata, counts)
    assert quick.slope(lp) == pytest.approx(rows.slope(lp), rel=1e-10)
    for own, other in zip(quick.curves(lp), rows.curves(lp), strict=True):
        assert (own.code, own.when.tolist()) == (other.code, other.when.tolist())
        assert own.gathered == pytest.approx(other.gathered, rel=1e-12)
        drawn = repeat_rows(counts * (strata == own.code))
        (sums,) = sum_hazards(replace(pick_people(cohort, drawn), x=lp[drawn, None]), np.ones(1), [5.0], ties)
        assert own.at(np.array([5.0]))[0] == pytest.approx(sums.hazard, rel=1e-12)


def test_a_fine_gray_refit_is_the_fit_to_the_rows_drawn() -> None:
    cohort, rng = _invent(8, 400), np.random.default_rng(8)
    status = np.where(cohort.events == 1, rng.integers(1, 3, 400), 0).astype(np.float64)
    competing = CompetingCohort(cohort.times, status, cohort.x)
    repeated = RepeatedSubdistribution(competing, fit_fine_gray(competing).coefficients, 6.0)
    counts = draw_counts(400, 8, 0)
    (found,) = repeated.judge(counts[None])
    assert isinstance(found, Compared)
    rows = repeat_rows(counts)
    drawn = CompetingCohort(cohort.times[rows], status[rows], cohort.x[rows])
    lp = cohort.x @ fit_fine_gray(drawn).coefficients
    on_all = fit_fine_gray(replace(competing, x=lp[:, None]))
    assert found.original.slope == pytest.approx(on_all.coefficients[0], rel=1e-9)
    assert found.sample.slope == 1.0
    view = CompetingView(competing, Ties.BRESLOW, repeated.censoring, counts)
    assert view.slope(lp) == pytest.approx(1.0, abs=1e-9)
    waiting = competing.as_waiting
    assert found.original.c == find_concordance(waiting.times, waiting.events, lp).c
    assert found.original.intercept is None


def test_where_slope_is_taken_as_one_it_is_one() -> None:
    """By the equations that the coefficients solve; worked out where the fit has an offset or a penalty."""
    cohort = _invent(2, 300)
    counts = np.array([draw_counts(300, 2, 0)])
    drawn = RowsView(cohort, Ties.EFRON, None, counts[0])
    b = ready_hazards(cohort, fit_cox(cohort).coefficients, Ties.EFRON, None).refit(counts[0])
    assert drawn.slope(cohort.x @ b) == pytest.approx(1.0, abs=1e-9)
    for link in Link:
        people = RiskPeople(cohort.events, cohort.x, link)
        plain = RepeatedRisks(people, fit_logistic(people.y, people.x, link=link).coefficients)
        told = RepeatedRisks(people, plain.coefficients, refit=_fit_again)
        (own,), (other,) = plain.judge(counts), told.judge(counts)
        assert isinstance(own, Compared)
        assert isinstance(other, Compared)
        assert (own.sample.slope, own.sample.intercept) == (1.0, 0.0)
        assert other.sample.slope == pytest.approx(1.0, abs=1e-8)
        assert other.sample.intercept == pytest.approx(0.0, abs=1e-8)
        assert other.original.slope == pytest.approx(own.original.slope, abs=1e-8)
        assert other.original.brier == pytest.approx(own.original.brier, abs=1e-9)


def _fit_again(people: RiskPeople, copies: NDArray[np.int64]) -> Array:
    assert len(copies) == len(people.y)
    return fit_logistic(people.y, people.x, link=people.link, offset=people.offset).coefficients


def test_a_level_that_vanishes_and_a_sample_without_events_are_lost_by_their_reason() -> None:
    cohort = _invent(3, 120)
    rare = np.zeros(120)
    rare[[5, 6]] = 1.0
    x = np.column_stack([cohort.x, rare])
    y = cohort.events.copy()
    y[5], y[6] = 1.0, 0.0
    counts = np.ones((4, 120))
    counts[0, [5, 6]] = 0.0  # nobody with the rare answer
    counts[1, 6] = 0.0  # all who have it have the event
    counts[2] = np.where(y == 1, 0.0, 1.0)
    people = RiskPeople(y, x, Link.LOGIT)
    found = RepeatedRisks(people, fit_logistic(y, x).coefficients).judge(counts)
    assert found[:3] == (Lost("constant", (3,)), Lost("separated", (3,)), Lost("no_events", ()))
    assert isinstance(found[3], Compared)
    timed = Cohort(cohort.times, y, x)
    found = RepeatedHazards(timed, fit_cox(timed).coefficients, Ties.EFRON, 6.0).judge(counts[[0, 2, 3]])
    assert found[:2] == (Lost("constant", (3,)), Lost("no_events", ()))
    assert isinstance(found[2], Compared)


def test_whole_clusters_are_drawn() -> None:
    cluster = np.repeat(np.arange(20), 7)
    counts = draw_counts(140, 1, 0, cluster).reshape(20, 7)
    assert (counts == counts[:, :1]).all()
    assert counts[:, 0].sum() == 20
    assert draw_counts(140, 1, 0).sum() == 140
    assert (draw_counts(140, 1, 0) != draw_counts(140, 1, 1)).any()


def test_whoever_came_late_leaves_c_and_brier_undefined() -> None:
    cohort = _invent(6, 200)
    cohort = replace(cohort, entry=np.floor(cohort.times / 3))
    repeated = RepeatedHazards(cohort, fit_cox(cohort).coefficients, Ties.EFRON, 5.0)
    apparent = repeated.judge_apparent()
    assert (apparent.c, apparent.brier, apparent.slope) == (None, None, 1.0)
    # with Breslow's baseline the events expected are those seen; Efron's is higher at ties
    breslow = replace(repeated, ties=Ties.BRESLOW)
    assert breslow.judge_apparent().intercept == pytest.approx(0.0, abs=1e-12)


@np.errstate(all="ignore")
def test_a_cloglog_fit_is_not_taken_for_separated_where_statsmodels_runs_away() -> None:
    """GLM says that it rests, with coefficients of 1e14 and no likelihood left; the maximum is near."""
    cohort = _invent(63, 31)
    rows = repeat_rows(draw_counts(31, 63, 3))
    fit = fit_logistic(cohort.events[rows], cohort.x[rows], link=Link.CLOGLOG)
    assert np.abs(fit.coefficients).max() < 10
    assert fit.score_max < 1e-12
