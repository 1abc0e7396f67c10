"""Kaplan-Meier and Aalen-Johansen at times, against R's survfit: with ties, with late entry, to the last event."""

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.estimation.incidence import aalen_johansen, kaplan_meier
from tests.estimation import cohorts
from tests.estimation.r_fine_gray import CURVES, CURVES_IN_YEARS, CURVES_LATE, LOG_LOG_IN_YEARS, CurveFigures

Array = NDArray[np.float64]
LIMIT = 1e-13


def check(status: Array, times: Array, expected: CurveFigures, entry: Array | None = None) -> None:
    found = aalen_johansen(times, status, expected.times, entry=entry)
    assert [one.share for one in found] == pytest.approx(expected.incidence, rel=LIMIT)
    assert [one.se for one in found] == pytest.approx(expected.se, rel=LIMIT)
    others = aalen_johansen(times, np.where(status > 0, 3 - status, 0), expected.times, entry=entry)
    assert [one.share for one in others] == pytest.approx(expected.other, rel=LIMIT)
    assert not expected.other_se or [one.se for one in others] == pytest.approx(expected.other_se, rel=LIMIT)
    alone = kaplan_meier(times, (status == 1) * 1.0, expected.times, entry=entry)
    assert [1 - one.share for one in alone] == pytest.approx(expected.survival, rel=LIMIT)
    assert not expected.survival_se or [one.se for one in alone] == pytest.approx(expected.survival_se, rel=LIMIT)


def test_months() -> None:
    people = cohorts.mgus2_competing()
    check(people.status, people.times, CURVES)


def test_years_and_their_limits() -> None:
    people = cohorts.mgus2_competing()
    years = np.ceil(people.times / 12)
    check(people.status, years, CURVES_IN_YEARS)
    alone = kaplan_meier(years, (people.status == 1) * 1.0, CURVES_IN_YEARS.times)
    low, high = LOG_LOG_IN_YEARS
    limits = [one.limits() for one in alone]
    assert [1 - each[1] for each in limits if each] == pytest.approx(low, rel=1e-12)
    assert [1 - each[0] for each in limits if each] == pytest.approx(high, rel=1e-12)


def test_late_entry() -> None:
    """Where people come late the jackknife is not Greenwood's: R has the one for an incidence, the other alone."""
    people = cohorts.mgus2_competing()
    entry = np.arange(1, len(people.times) + 1, dtype=np.float64) % 4 * 6
    there = people.times > entry
    assert there.sum() == 1232
    check(people.status[there], people.times[there], CURVES_LATE, entry[there])


def test_the_share_is_what_is_known_at_the_time() -> None:
    times, status = np.array([1.0, 2.0, 2.0, 3.0, 4.0]), np.array([1.0, 2.0, 0.0, 1.0, 1.0])
    found = aalen_johansen(times, status, [0.5, 1.0, 2.0, 3.5, 4.0, 9.0])
    # by hand: 1/5; then 4 at risk, one with the other event; then 2 at risk, so 0.6 / 2; then the last
    assert [one.share for one in found] == pytest.approx([0, 0.2, 0.2, 0.5, 0.8, 0.8], rel=1e-15)
    assert [one.followed for one in found] == [5, 5, 4, 1, 1, 0]
    assert (found[0].se, found[0].limits()) == (0.0, None)
    # of five people one, binomial
    assert found[1].se == pytest.approx((0.2 * 0.8 / 5) ** 0.5, rel=1e-15)


def test_limits_lie_on_either_side_and_end_with_the_last_person() -> None:
    times = np.array([1.0, 2.0, 3.0])
    found = kaplan_meier(times, np.ones(3), [1.0, 2.0, 3.0])
    low, high = found[0].limits() or (0, 0)
    assert 0 < low < 1 / 3 < high < 1
    assert found[2].limits() is None
    assert (found[2].share, found[2].se) == (1.0, 0.0)


@pytest.mark.parametrize("seed", range(5))
def test_without_censoring_it_is_a_share_of_people(seed: int) -> None:
    """Everybody followed to an event: the incidence is a count, its variance that of a share."""
    rng = np.random.default_rng(seed)
    times, status = rng.integers(1, 9, 200).astype(float), rng.integers(1, 3, 200).astype(float)
    for at, one in zip((2.0, 5.0, 8.0), aalen_johansen(times, status, (2.0, 5.0, 8.0)), strict=True):
        share = ((times <= at) & (status == 1)).mean()
        assert one.share == pytest.approx(share, rel=1e-13)
        assert one.se == pytest.approx(np.sqrt(share * (1 - share) / 200), rel=1e-12)
