"""Drawn curves: against samples of the people and the whole curve made anew, grouped against one by one, chance."""

from collections.abc import Callable

import numpy as np
import pytest

from clinicalc.estimation.calibrated import IndexLimits, Limits
from clinicalc.estimation.calibration import calibrate_risks, calibrate_times
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.estimation.drawn_curves import draw_normal, find_places
from clinicalc.estimation.drawn_lowess import draw_lowess
from clinicalc.estimation.ranks import part_values
from clinicalc.estimation.smooth_curves import SPAN, Smoothed, smooth_risks, smooth_times
from clinicalc.validation.predicted import PredictedPeople
from tests.estimation.validated import breast_cancer, pima
from tests.validation.people import answered, competed, lose, watched

Made = Callable[[int, int], tuple[PredictedPeople, Watched]]


def _limits(found: IndexLimits) -> dict[str, Limits]:
    return {"ici": found.ici, "e50": found.e50, "e90": found.e90, "emax": found.emax}


def _ici_of_samples(predictions: np.ndarray, outcome: Watched, samples: int) -> np.ndarray:
    """The ICI of people drawn again, the spline fitted anew at the same knots."""
    whole = smooth_times(predictions, outcome, 1.0)
    assert isinstance(whole, Smoothed)
    rng = np.random.default_rng(17)
    found = []
    for _ in range(samples):
        rows = rng.integers(0, len(predictions), len(predictions))
        each = smooth_times(predictions[rows], outcome.part(rows), 1.0, whole.knots)
        assert isinstance(each, Smoothed)
        found.append(float(np.abs(each.values - predictions[rows]).mean()))
    return np.array(found)


@pytest.mark.parametrize("make", [watched, competed])
def test_limits_of_a_spline_are_those_of_people_drawn_again(make: Made) -> None:
    predicted, outcome = make(1500, 3)
    calibration = calibrate_times(predicted.probability, outcome, 1.0, draws=2000)
    assert calibration.limits is not None
    drawn = _ici_of_samples(predicted.probability, outcome, 300)
    low, high = np.quantile(drawn, (0.025, 0.975))
    width = high - low
    assert calibration.limits.ici.upper - calibration.limits.ici.lower == pytest.approx(width, rel=0.15)
    # 300 samples know either end to about a tenth of the width
    assert calibration.limits.ici.lower == pytest.approx(low, abs=0.15 * width)
    assert calibration.limits.ici.upper == pytest.approx(high, abs=0.15 * width)


@pytest.mark.parametrize("people", [400, 3000])
def test_limits_and_band_of_grouped_people_are_those_of_people_drawn_one_by_one(people: int) -> None:
    # the whole curve of statsmodels made anew of each sample
    predicted, outcome = answered(people, 3)
    grouped = calibrate_risks(predicted.probability, outcome.y, draws=500)
    asked = calibrate_risks(predicted.probability, outcome.y, draws=500, resamples=400)
    assert grouped.limits is not None
    assert asked.limits is not None
    assert (grouped.limits.draws, asked.limits.draws) == (500, 400)
    for name, one in _limits(grouped.limits).items():
        other = _limits(asked.limits)[name]
        width = other.upper - other.lower
        assert (one.lower, one.upper) == pytest.approx((other.lower, other.upper), abs=0.15 * width), name
    first, second = grouped.curve, asked.curve
    assert first is not None
    assert second is not None
    assert (first.resamples, second.resamples) == (500, 400)
    assert first.lower is not None
    assert first.upper is not None
    assert second.lower is not None
    assert second.upper is not None
    width = float((second.upper - second.lower).mean())
    away = np.concatenate([first.lower - second.lower, first.upper - second.upper])
    assert np.abs(away).mean() < 0.06 * width
    assert (first.lower <= first.observed).all()
    assert (first.observed <= first.upper).all()


def test_the_curve_of_groups_is_that_of_the_people() -> None:
    for p, y in (pima(), (answered(20_000, 2)[0].probability, answered(20_000, 2)[1].y)):
        whole = smooth_risks(p, y)
        assert isinstance(whole, Smoothed)
        places = find_places(p)
        assert places.people.sum() == len(p)
        assert np.array_equal(np.bincount(places.find_codes(p)), places.people)
        assert (places.highest[0], places.highest[-1]) == (p.min(), p.max())
        middle = np.median(draw_lowess(places, places.count(p, y), SPAN, 2000, 1).curves, axis=0)
        order = np.argsort(p)
        own = np.interp(places.predicted, p[order], whole.values[order])
        assert np.abs(middle - own)[places.people > 0].mean() < 0.1 / np.sqrt(len(p))


@pytest.mark.parametrize("make", [watched, competed])
def test_grouped_places_give_the_limits_of_each_person(make: Made) -> None:
    predicted, outcome = make(2000, 9)
    smoothed = smooth_times(predicted.probability, outcome, 1.0, draws=300)
    assert isinstance(smoothed, Smoothed)
    assert smoothed.drawn is not None
    grouped = smoothed.drawn
    assert 250 < len(grouped.places.people) <= 300
    assert len(find_places(predicted.probability, 2000).people) == 2000
    # the fitted curve at the places is that of the people there, so that the ICI of the places is theirs
    order = np.argsort(predicted.probability)
    own = np.interp(grouped.places.predicted, predicted.probability[order], smoothed.values[order])
    at_places = np.average(np.abs(own - grouped.places.predicted), weights=grouped.places.people)
    assert at_places == pytest.approx(float(np.abs(smoothed.values - predicted.probability).mean()), rel=1e-3)


def test_curves_drawn_spread_as_the_band_says() -> None:
    people = breast_cancer()
    smoothed = smooth_times(people.predictions, people.watched, people.horizon, draws=4000)
    assert isinstance(smoothed, Smoothed)
    assert smoothed.drawn is not None
    assert smoothed.lower is not None
    assert smoothed.upper is not None
    order = np.argsort(people.predictions)
    for limits, part in ((smoothed.lower, 0.025), (smoothed.upper, 0.975)):
        own = np.interp(smoothed.drawn.places.predicted, people.predictions[order], limits[order])
        assert np.quantile(smoothed.drawn.curves, part, axis=0)[5:-5] == pytest.approx(own[5:-5], abs=0.01)


@pytest.mark.parametrize("kind", ["answered", "watched"])
def test_chance_is_what_right_predictions_show(kind: str) -> None:
    found, said, beyond, samples = [], [], 0, 200
    for sample in range(samples):
        rng = np.random.default_rng(sample)
        eta = rng.normal(-0.6, 0.8, 400)
        if kind == "answered":
            p = 1 / (1 + np.exp(-eta))
            calibration = calibrate_risks(p, (rng.random(400) < p).astype(np.float64), draws=100)
        else:
            times = rng.exponential(size=400) / np.exp(eta)
            calibration = calibrate_times(-np.expm1(-np.exp(eta)), lose(times, np.ones(400), 0.4, rng), 1.0, draws=100)
        assert calibration.indices is not None
        assert calibration.limits is not None
        found.append(calibration.indices.ici)
        said.append(calibration.limits.chance)
        beyond += calibration.indices.ici > calibration.limits.chance_bound
        # however near to 0
        assert 0 < calibration.limits.ici.lower <= calibration.indices.ici <= calibration.limits.ici.upper
    assert np.mean(said) == pytest.approx(float(np.mean(found)), rel=0.1)
    assert 0.01 <= beyond / samples <= 0.1


def test_few_predictions_of_very_unequal_numbers_have_finite_limits() -> None:
    rng = np.random.default_rng(8)
    curves = 0
    for _ in range(60):
        at = np.sort(rng.random(rng.integers(5, 60)))
        p = rng.choice(at, 120, p=rng.dirichlet(np.full(len(at), 0.3)))
        y = (rng.random(120) < 0.2 + 0.5 * p).astype(np.float64)
        calibration = calibrate_risks(p, y, draws=60)
        if calibration.curve is None:
            continue
        curves += 1
        assert calibration.curve.lower is not None
        assert calibration.curve.upper is not None
        assert np.isfinite([calibration.curve.lower, calibration.curve.upper]).all()
        assert calibration.limits is not None
        for each in _limits(calibration.limits).values():
            assert 0 <= each.lower < each.upper < np.inf
        assert 0 < calibration.limits.chance < calibration.limits.chance_bound
    assert curves > 30


def test_draws_belong_to_their_seed() -> None:
    p, y = pima()
    one, again, other = (calibrate_risks(p, y, draws=50, seed=seed).limits for seed in (1, 1, 2))
    assert one == again
    assert one != other
    people = breast_cancer()
    drawn = [calibrate_times(people.predictions, people.watched, 1825.0, draws=50, seed=s).limits for s in (1, 1, 2)]
    assert drawn[0] == drawn[1]
    assert drawn[0] != drawn[2]
    assert calibrate_risks(p, y).limits is None


def test_a_joint_normal_has_its_covariance() -> None:
    covariance = np.array([[2.0, -0.9], [-0.9, 0.5]])
    drawn = draw_normal(covariance, 200_000, 4)
    wanted = np.block([[np.ones((1, 1)), np.zeros((1, 2))], [np.zeros((2, 1)), covariance]])
    assert np.cov(drawn.T) == pytest.approx(wanted, abs=0.02)
    # rank one, as of few people with robust variance
    flat = draw_normal(np.ones((2, 2)), 10, 4)
    assert flat[:, 1] == pytest.approx(flat[:, 2])


def test_values_in_order_are_parted_as_any() -> None:
    values = np.random.default_rng(1).integers(0, 50, 400) / 7
    for each in (values, np.sort(values), values[:1], values[:0], np.array([0.0, np.inf, np.inf])):
        different, places = part_values(each)
        wanted = np.unique(each, return_inverse=True)
        assert np.array_equal(different, wanted[0])
        assert np.array_equal(places, wanted[1])
        assert places.dtype == np.int64
