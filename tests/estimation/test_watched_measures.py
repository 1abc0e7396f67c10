"""Brier, area and Uno's C of people partly lost from sight: R's figures, every pair, numerical derivatives."""

from dataclasses import dataclass

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from clinicalc.estimation.concordance import find_concordance
from clinicalc.estimation.horizon_area import find_area
from clinicalc.estimation.incidence import aalen_johansen
from clinicalc.estimation.net_benefit import curve_of_risks, curve_of_times, net_benefit
from clinicalc.estimation.squared_errors import find_squared_errors
from clinicalc.estimation.uno import find_uno
from clinicalc.estimation.watching_weights import know_risks, know_times
from clinicalc.estimation.weighed_ranks import WeighedRanks
from tests.estimation.validated import breast_cancer, breast_cancer_in_years, pima

Array = NDArray[np.float64]
Z = 1.959963984540054


def test_weighted_measures_are_those_of_r() -> None:
    # R 4.2.2, survival 3.5.3: G by survfit of the end of watching, an event first where they tie; sums by hand in R;
    # Uno's C: concordance(..., timewt = "n/G2", ymax = 1825), whose standard error takes G as known
    people = breast_cancer()
    times, status = people.watched.times, people.watched.status
    known = know_times(times, status, people.horizon)
    errors = find_squared_errors(known, people.predictions)
    assert errors.brier == pytest.approx(0.225437741128885, abs=1e-12)
    assert errors.null == pytest.approx(0.249930191807596, abs=1e-12)
    assert errors.scaled == pytest.approx(0.097997166735124, abs=1e-12)
    area = find_area(known, people.predictions)
    assert area is not None
    assert area.area == pytest.approx(0.691236410769169, abs=1e-12)
    uno = find_uno(times, status, people.predictions, people.horizon)
    assert uno is not None
    assert (uno.c, uno.se_known) == pytest.approx((0.640230462576788, 0.0163907117079378), abs=1e-10)
    assert uno.se == pytest.approx(uno.se_known, rel=0.01)


def test_published_limits_of_the_guidance_of_stratos() -> None:
    # McLernon et al., Ann Intern Med 2023;176:105-114, companion text: AUC 0.69 (0.63, 0.74), Brier 0.22 (0.21, 0.24),
    # scaled 0.10 (0.04, 0.16) at 4.99 years of times cut at 5; Uno's C 0.64 (0.61, 0.67); more digits: R 4.2.2
    people = breast_cancer_in_years()
    times, status = people.watched.times, people.watched.status
    known = know_times(times, status, 4.99)
    errors, area = find_squared_errors(known, people.predictions), find_area(known, people.predictions)
    uno = find_uno(times, status, people.predictions, 5.0)
    assert area is not None
    assert uno is not None
    assert errors.scaled is not None
    assert errors.scaled_se is not None
    found = [
        (errors.brier, errors.se, (0.22, 0.21, 0.24), 0.224547087019384),
        (errors.scaled, errors.scaled_se, (0.10, 0.04, 0.16), 0.101560778250242),
        (area.area, area.se, (0.69, 0.63, 0.74), 0.68563542197046),
        (uno.c, uno.se, (0.64, 0.61, 0.67), 0.638871196779489),
    ]
    for value, se, printed, digits in found:
        assert tuple(round(each, 2) for each in (value, value - Z * se, value + Z * se)) == printed
        assert value == pytest.approx(digits, abs=1e-12)
    limits = uno.c - 1.959964 * uno.se_known, uno.c + 1.959964 * uno.se_known  # the rounded 1.96 of the companion text
    assert limits == pytest.approx((0.607132781968337, 0.67060961159064), abs=1e-12)


def test_net_benefit_of_people_with_times() -> None:
    # R 4.2.2: survfit among those with p >= t, Vickers 2008
    people = breast_cancer()
    points = np.array([0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7])
    wanted = [0.45372792189555, 0.385443912132493, 0.300217106171066, 0.205147853138714]
    wanted += [0.117767690381013, 0.0856727389997267, 0.0290633971072293]
    watched = people.watched
    found = curve_of_times(people.predictions, watched.times, watched.status, people.horizon, points)
    assert found == pytest.approx(np.array(wanted), abs=1e-12)
    treat_all = [0.45372792189555, 0.385443912132493, 0.297650185294278, 0.180591882843325]
    treat_all += [0.0167102594119894, -0.229112175735013, -0.638816234313351]
    assert [net_benefit(1.0, 0.508355129705995, at) for at in points] == pytest.approx(treat_all, abs=1e-12)


def test_net_benefit_of_a_yes_or_no() -> None:
    # R 4.2.2 on MASS Pima.te: true and false positives at p >= t
    p, y = pima()
    points = np.array([0.02, 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 0.7])
    wanted = [0.314789771330219, 0.296766011414077, 0.279116465863454, 0.253012048192771, 0.242469879518072]
    wanted += [0.195352839931153, 0.155622489959839, 0.129518072289157, 0.0542168674698795]
    assert curve_of_risks(p, y, points) == pytest.approx(np.array(wanted), abs=1e-12)


@dataclass(frozen=True)
class Group:
    """A few people with many ties."""

    times: Array
    status: Array
    predictions: Array
    horizon: float


@st.composite
def groups(draw: st.DrawFn) -> Group:
    """Somebody is watched to the horizon, so that everything is known there."""
    size = draw(st.integers(3, 14))
    times = draw(st.lists(st.integers(1, 8), min_size=size, max_size=size))
    status = draw(st.lists(st.sampled_from([0.0, 1.0, 1.0, 2.0]), min_size=size, max_size=size))
    predictions = draw(st.lists(st.sampled_from([0.1, 0.2, 0.35, 0.5, 0.8]), min_size=size, max_size=size))
    horizon = draw(st.sampled_from([2.0, 3.0, 4.5, float(max(times))]))
    return Group(np.array(times) * 1.0, np.array(status), np.array(predictions), min(horizon, float(max(times))))


def measure_by_hand(group: Group, counts: Array) -> tuple[float, float | None, float | None, float | None]:
    """Brier, scaled Brier, area and Uno's C, person by person and pair by pair; each counts so often."""
    people, who = float(counts.sum()), range(len(counts))

    def still(at: float) -> float:
        left = 1.0
        for time in sorted(set(group.times)):
            lost = sum(counts[k] for k in who if group.times[k] == time and group.status[k] == 0)
            there = sum(counts[k] for k in who if group.times[k] > time) + lost
            if time < at and lost:
                left *= 1 - lost / there
        return left

    seen: list[tuple[float, float]] = []
    for k in who:
        if group.status[k] and group.times[k] <= group.horizon:
            seen.append((float(group.status[k] == 1), counts[k] / still(group.times[k])))
        elif group.times[k] >= group.horizon:
            seen.append((0.0, counts[k] / still(group.horizon)))
        else:
            seen.append((0.0, 0.0))
    risks = group.predictions
    brier = sum(w * (y - risks[k]) ** 2 for k, (y, w) in enumerate(seen)) / people
    risk = sum(w * y for y, w in seen) / people
    null = sum(w * (y - risk) ** 2 for y, w in seen) / people
    worth = [[float(a > b) + 0.5 * float(a == b) for b in risks] for a in risks]
    top = bottom = 0.0
    for i in who:
        for j in who:
            weight = seen[i][1] * seen[i][0] * seen[j][1] * (1 - seen[j][0])
            top, bottom = top + weight * worth[i][j], bottom + weight
    area = top / bottom if bottom else None
    top = bottom = 0.0
    for i in who:
        if group.status[i] != 1 or group.times[i] > group.horizon:
            continue
        own = still(group.times[i])
        for j in who:
            if group.times[j] > group.times[i] or (group.times[j] == group.times[i] and group.status[j] != 1):
                weight = counts[i] * counts[j] / own**2
            elif group.status[j] == 2:
                weight = counts[i] * counts[j] / (own * still(group.times[j]))
            else:
                continue
            top, bottom = top + weight * worth[i][j], bottom + weight
    return brier, 1 - brier / null if null > 1e-9 else None, area, top / bottom if bottom else None


def measure(group: Group) -> list[tuple[float, float] | None]:
    known = know_times(group.times, group.status, group.horizon)
    errors, area = find_squared_errors(known, group.predictions), find_area(known, group.predictions)
    uno = find_uno(group.times, group.status, group.predictions, group.horizon)
    scaled = None if errors.scaled is None or errors.scaled_se is None else (errors.scaled, errors.scaled_se)
    return [
        (errors.brier, errors.se),
        scaled,
        None if area is None else (area.area, area.se),
        None if uno is None else (uno.c, uno.se),
    ]


@settings(max_examples=150, deadline=None)
@given(groups())
def test_values_are_those_of_every_pair(group: Group) -> None:
    for found, wanted in zip(measure(group), measure_by_hand(group, np.ones(len(group.times))), strict=True):
        assert (found is None) == (wanted is None)
        if found is not None and wanted is not None:
            assert found[0] == pytest.approx(wanted, abs=1e-11)


@settings(max_examples=25, deadline=None)
@given(groups())
def test_standard_errors_are_those_of_numerical_derivatives(group: Group) -> None:
    people, step = len(group.times), 1e-5
    found = measure(group)
    moved: list[list[float]] = [[] for _ in found]
    for k in range(people):
        pair = [measure_by_hand(group, np.ones(people) + sign * step * (np.arange(people) == k)) for sign in (1, -1)]
        for place, (up, down) in enumerate(zip(*pair, strict=True)):
            if up is not None and down is not None:
                moved[place].append((up - down) / (2 * step))
    for one, each in zip(found, moved, strict=True):
        if one is not None:
            assert one[1] == pytest.approx(float(np.sqrt(np.sum(np.square(each)))), rel=1e-5, abs=1e-7)


@settings(max_examples=60, deadline=None)
@given(groups())
def test_net_benefit_is_that_of_the_incidence_among_the_flagged(group: Group) -> None:
    points = np.array([0.05, 0.2, 0.3, 0.6, 0.9])
    found = curve_of_times(group.predictions, group.times, group.status, group.horizon, points)
    for point, benefit in zip(points, found, strict=True):
        flagged = group.predictions >= point
        if not flagged.any():
            assert benefit == 0.0
            continue
        times, status = group.times[flagged], group.status[flagged]
        if times.max() < group.horizon and (status[times == times.max()] == 0).any():
            assert np.isnan(benefit)
            continue
        (risk,) = aalen_johansen(times, status, (group.horizon,))
        assert benefit == pytest.approx(net_benefit(flagged.mean(), risk.share, point), abs=1e-12)


@settings(max_examples=60, deadline=None)
@given(st.lists(st.tuples(st.integers(0, 9), st.floats(0.0, 5.0)), min_size=1, max_size=30), st.data())
def test_weights_of_ranks_are_those_counted_one_by_one(pairs: list[tuple[int, float]], data: st.DataObject) -> None:
    ranks, weights = (np.array(each) for each in zip(*pairs, strict=True))
    end = data.draw(st.integers(0, len(pairs)))
    rank = data.draw(st.integers(0, 12))
    lower, same = WeighedRanks(ranks, weights, 12).sum_first(np.array([end]), np.array([rank]))
    assert lower[0] == pytest.approx(weights[:end][ranks[:end] < rank].sum(), abs=1e-9)
    assert same[0] == pytest.approx(weights[:end][ranks[:end] == rank].sum(), abs=1e-9)


def test_where_all_are_watched_they_are_the_plain_ones() -> None:
    # Hanley & McNeil, Radiology 1982;143:29-36, 109 images on a five-point scale: W = 0.893
    normal, abnormal = [33, 6, 6, 11, 2], [3, 2, 2, 11, 33]
    ratings = np.repeat(np.tile(np.arange(1.0, 6.0), 2), normal + abnormal)
    y = np.repeat([0.0, 1.0], [58, 51])
    area = find_area(know_risks(y), ratings)
    assert area is not None
    assert round(area.area, 3) == 0.893
    # R 4.2.2, survival 3.5.3 concordance: infinitesimal jackknife
    assert (area.area, area.se) == pytest.approx((0.893171061528059, 0.030434196247893), abs=1e-12)
    harrell = find_concordance(1 - y, y, ratings)
    assert (harrell.c, harrell.se) == pytest.approx((area.area, area.se), abs=1e-12)
    rng = np.random.default_rng(3)
    times, p = rng.exponential(size=300), rng.random(300)
    own, other = find_uno(times, np.ones(300), p, 99.0), find_concordance(times, np.ones(300), p)
    assert own is not None
    assert (own.c, own.se, own.se_known) == pytest.approx((other.c, other.se, other.se), abs=1e-12)


def test_whoever_leaves_at_the_horizon_was_watched_to_it() -> None:
    times, status = np.array([1.0, 2.0, 5.0, 5.0, 5.0]), np.array([1.0, 0.0, 0.0, 0.0, 1.0])
    known = know_times(times, status, 5.0)
    assert known.weights == pytest.approx([1.0, 0.0, 4 / 3, 4 / 3, 4 / 3])
    assert known.happened.tolist() == [1.0, 0.0, 0.0, 0.0, 1.0]
