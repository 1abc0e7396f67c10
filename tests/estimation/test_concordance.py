"""Harrell's C and its standard error against R's concordance, and against every pair counted one by one."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.concordance import find_concordance
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.ranks import RankCounter
from tests.estimation import cohorts
from tests.estimation.cohorts import Answers
from tests.estimation.r_figures import BINARY, FITS
from tests.estimation.test_cox import PEOPLE
from tests.reference.figures import BinaryFit, HazardFit, load

Array = NDArray[np.float64]

ANSWERS = {
    "birthwt_logit": cohorts.birthwt,
    "pima_logit": cohorts.pima,
    "pima_cloglog": cohorts.pima,
    "biopsy_tails": cohorts.biopsy,
    "retinopathy_robust": cohorts.retinopathy_answers,
}


@pytest.mark.parametrize("name", FITS)
def test_survival_against_r(name: str) -> None:
    people, expected = PEOPLE[name](), FITS[name]
    lp = (people.cohort.x * np.array(load(name, HazardFit).coefficients)).sum(axis=1)
    found = find_concordance(
        people.cohort.times, people.cohort.events, lp, strata=people.strata, cluster=people.cluster
    )
    assert (found.concordant, found.discordant, found.tied) == expected.pairs
    assert (found.c, found.se) == pytest.approx((expected.c, expected.se), abs=1e-12)


@pytest.mark.parametrize("name", ANSWERS)
def test_binary_against_r(name: str) -> None:
    answers: Answers = ANSWERS[name]()
    _, _, c, se = BINARY[name]
    lp = (answers.x * np.array(load(name, BinaryFit).coefficients[1:])).sum(axis=1)
    found = find_concordance(1 - answers.y, answers.y, lp)
    assert (found.c, found.se) == pytest.approx((c, se), abs=1e-12)


def count_by_hand(times: Array, events: Array, predictions: Array) -> tuple[float, float] | None:
    """C and its standard error from every pair; None where no two can be compared."""
    ahead = (events == 1)[:, None] & (
        (times[:, None] < times) | ((times[:, None] == times) & (events == 0) & ~np.eye(len(times), dtype=bool))
    )
    worth = (predictions[:, None] > predictions) + (predictions[:, None] == predictions) / 2
    pairs = ahead.sum()
    if not pairs:
        return None
    c = (ahead * worth).sum() / pairs
    count = (ahead * worth).sum(axis=0) + (ahead * worth).sum(axis=1)
    number = ahead.sum(axis=0) + ahead.sum(axis=1)
    return float(c), float(np.sqrt((((count - c * number) / pairs) ** 2).sum()))


person = st.tuples(st.integers(1, 9), st.integers(0, 1), st.integers(-5, 5))


@settings(max_examples=300, deadline=None)
@given(st.lists(person, min_size=1, max_size=40))
def test_every_pair_is_counted_as_by_hand(people: list[tuple[int, int, int]]) -> None:
    times, events, predictions = np.array(people, dtype=np.float64).T
    expected = count_by_hand(times, events, predictions)
    if expected is None:
        with pytest.raises(FitRefused) as refused:
            find_concordance(times, events, predictions)
        assert refused.value.code == FitFault.NOBODY_COMPARED
        return
    found = find_concordance(times, events, predictions)
    assert (found.c, found.se) == pytest.approx(expected, rel=1e-12, abs=1e-15)


@settings(max_examples=200, deadline=None)
@given(st.lists(st.integers(0, 20), max_size=30), st.data())
def test_ranks_of_a_stretch_are_counted(ranks: list[int], data: st.DataObject) -> None:
    begin = data.draw(st.integers(0, len(ranks)))
    end = data.draw(st.integers(begin, len(ranks)))
    asked = data.draw(st.integers(0, 40))
    counter = RankCounter(np.array(ranks, dtype=np.int64))
    lower, same = counter.count(np.array([begin]), np.array([end]), np.array([asked]))
    assert (lower[0], same[0]) == (sum(rank < asked for rank in ranks[begin:end]), ranks[begin:end].count(asked))


def test_a_missing_prediction_is_refused() -> None:
    with pytest.raises(FitRefused) as refused:
        find_concordance(np.array([1.0, 2.0]), np.array([1.0, 1.0]), np.array([np.nan, 0.0]))
    assert refused.value.code == FitFault.NOT_FINITE
