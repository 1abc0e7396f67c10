"""Calibration of predicted risks: indices and curves against R, against published figures, and on odd people."""

from dataclasses import replace

import numpy as np
import pytest

from clinicalc.errors import FitRefused
from clinicalc.estimation.calibrated import CalibrationIndices, NoCurve, Observed, Smoother
from clinicalc.estimation.calibration import Watched, calibrate_risks, calibrate_times, find_indices
from clinicalc.estimation.smooth_curves import Smoothed, smooth_times
from tests.estimation.validated import breast_cancer, breast_cancer_in_years, pima


def _same(found: CalibrationIndices | None, wanted: tuple[float, ...], slack: float) -> None:
    assert found is not None
    assert (found.ici, found.e50, found.e90, found.emax) == pytest.approx(wanted, abs=slack)


def test_lowess_indices_are_those_of_val_prob() -> None:
    # R 4.2.2: lowess(p, y, iter = 0), f = 2/3, approx back to p; rms 6.5.0 val.prob has the same Emax, E90 and Eavg
    found = calibrate_risks(*pima())
    _same(found.indices, (0.0230452494795126, 0.0209086290818127, 0.0433491414615675, 0.0638072989477918), 1e-9)
    assert found.curve is not None
    assert found.curve.smoother is Smoother.LOWESS
    assert (found.overall.people, found.overall.events) == (332, 109)
    assert 332 * found.overall.predicted == pytest.approx(111.961360840284, rel=1e-12)  # expected events, R


def test_indices_of_a_binary_spline_of_another_tool_differ_as_published() -> None:
    # the same people by rms rcs(logit p, 4): ICI 0.0382 (R). A curve without its name says nothing
    found = calibrate_risks(*pima()).indices
    assert found is not None
    assert abs(found.ici - 0.0382120283178928) > 0.01


def test_cox_spline_indices_are_those_of_the_published_guidance() -> None:
    # McLernon et al. 2023, companion text: ICI .0272, E50 .0297, E90 .0610, Emax .0691 (they predict 5 years from times
    # with their own rounding); worked out again with R 4.2.2, survival 3.5.3, rms 6.5.0 from the coefficients used here
    people = breast_cancer_in_years()
    found = calibrate_times(people.predictions, people.watched, people.horizon)
    _same(found.indices, (0.0272520591291002, 0.0297357175699042, 0.0609634934804852, 0.0690596722505333), 1e-11)
    _same(found.indices, (0.02724664, 0.02973399, 0.06101062, 0.06912009), 1e-4)
    assert found.curve is not None
    assert found.curve.smoother is Smoother.COX_SPLINE
    assert len(found.curve.knots) == 3


def test_cox_spline_of_four_knots() -> None:
    # R 4.2.2: survival 3.5.3 coxph on rms 6.5.0 rcs(log(-log(1 - p)), 4)
    people = breast_cancer()
    knots = (-1.19138451079544, -0.798127322887373, -0.468310160914067, 0.576092404654856)
    smoothed = smooth_times(people.predictions, people.watched, people.horizon, knots)
    assert isinstance(smoothed, Smoothed)
    wanted = (0.0563676304920735, 0.0470344212717415, 0.0919339612931826, 0.0973612840152002)
    _same(find_indices(people.predictions, smoothed.values), wanted, 1e-11)


def test_observed_risk_of_everybody_is_one_minus_kaplan_meier() -> None:
    # R 4.2.2, survival 3.5.3: survfit(..., conf.type = "log-log") at 1825 days
    people = breast_cancer()
    found = calibrate_times(people.predictions, people.watched, people.horizon)
    assert found.observed is Observed.KAPLAN_MEIER
    assert found.overall.predicted == pytest.approx(0.457910493554776, rel=1e-12)
    assert found.overall.observed == pytest.approx(0.508355129705995, rel=1e-12)
    assert (found.overall.lower, found.overall.upper) == pytest.approx((0.46418581143253, 0.554202776333841), rel=1e-12)
    assert found.overall.events == 285


def test_a_band_holds_its_curve_and_comes_from_model_or_samples() -> None:
    people = breast_cancer()
    timed = calibrate_times(people.predictions, people.watched, people.horizon).curve
    sampled = calibrate_risks(*pima(), resamples=60).curve
    for curve, resamples in ((timed, 0), (sampled, 60)):
        assert curve is not None
        assert curve.resamples == resamples
        assert curve.lower is not None
        assert curve.upper is not None
        assert (curve.lower < curve.upper).all()
        inner = slice(5, -5)
        assert ((curve.lower <= curve.observed) & (curve.observed <= curve.upper))[inner].all()
        assert (np.diff(curve.predicted) > 0).all()
    plain = calibrate_risks(*pima()).curve
    assert plain is not None
    assert plain.lower is None
    again = calibrate_risks(*pima(), resamples=60).curve
    assert sampled is not None
    assert again is not None
    assert sampled.lower is not None
    assert again.lower is not None
    assert np.array_equal(again.lower, sampled.lower)


def test_band_of_a_spline_is_the_standard_error_of_its_prediction() -> None:
    # against what samples of the people make of the same curve, within what 200 of them can say
    people = breast_cancer()
    smoothed = smooth_times(people.predictions, people.watched, people.horizon)
    assert isinstance(smoothed, Smoothed)
    assert smoothed.lower is not None
    assert smoothed.upper is not None
    place = int(np.argsort(people.predictions)[343])
    eta = [float(np.log(-np.log1p(-at[place]))) for at in (smoothed.lower, smoothed.upper)]
    rng = np.random.default_rng(5)
    drawn = []
    for _ in range(200):
        rows = rng.integers(0, 686, 686)
        p = np.append(people.predictions[rows], people.predictions[place])
        sample = people.watched.part(np.append(rows, place))
        each = smooth_times(p, sample, people.horizon, smoothed.knots)
        assert isinstance(each, Smoothed)
        drawn.append(float(np.log(-np.log1p(-each.values[-1]))))
    se = (eta[1] - eta[0]) / (2 * 1.959963984540054)
    assert se == pytest.approx(float(np.std(drawn)), rel=0.2)


def _with_other_events(people: int, seed: int) -> tuple[np.ndarray, Watched]:
    """Risks by time 1 that are true where another event may come first; a part is lost before.

    A subdistribution with the hazard of Fine & Gray 1999: F(t) = 1 - (1 - q(1 - exp(-t)))^r, q = 1/2.
    """
    rng = np.random.default_rng(seed)
    r = np.exp(rng.normal(-0.5, 0.7, people))
    ever = 1 - 0.5**r
    own = rng.random(people) < ever
    u = rng.random(people) * ever
    times = np.where(own, -np.log(1 - (1 - (1 - u) ** (1 / r)) / 0.5), rng.exponential(1.0, people))
    lost = rng.exponential(2.5, people)
    status = np.where(lost < times, 0.0, np.where(own, 1.0, 2.0))
    return 1 - (1 - 0.5 * (1 - np.exp(-1.0))) ** r, Watched(np.minimum(times, lost), status)


def test_with_other_events_true_risks_lie_on_the_diagonal_of_incidence() -> None:
    predictions, watched = _with_other_events(20_000, 11)
    found = calibrate_times(predictions, watched, 1.0)
    assert found.observed is Observed.AALEN_JOHANSEN
    assert found.curve is not None
    assert found.curve.smoother is Smoother.FINE_GRAY_SPLINE
    assert found.indices is not None
    assert found.indices.ici < 0.01
    for group in found.groups:
        assert group.observed is not None
        assert group.lower is not None
        assert group.upper is not None
        assert group.observed == pytest.approx(group.predicted, abs=0.03)
        assert group.lower < group.observed < group.upper
    # with the others taken as censored the risk observed is that of another world, and higher
    elsewhere = calibrate_times(predictions, replace(watched, status=np.where(watched.status == 1, 1.0, 0.0)), 1.0)
    assert elsewhere.observed is Observed.KAPLAN_MEIER
    assert found.overall.observed is not None
    assert elsewhere.overall.observed is not None
    assert elsewhere.overall.observed > found.overall.observed + 0.05


def test_people_who_came_late_are_at_risk_from_then_on() -> None:
    people = breast_cancer()
    rng = np.random.default_rng(2)
    entry = np.round(people.watched.times * rng.uniform(0.0, 0.3, 686))
    watched = replace(people.watched, entry=entry)
    found = calibrate_times(people.predictions, watched, people.horizon)
    assert found.curve is not None
    left = 1.0
    for time in np.unique(watched.times[watched.seen(people.horizon)]):
        at_risk = ((watched.times >= time) & (entry < time)).sum()
        left *= 1 - ((watched.times == time) & (watched.status == 1)).sum() / at_risk
    assert found.overall.observed == pytest.approx(1 - left, rel=1e-12)
    predictions, others = _with_other_events(500, 3)
    late = calibrate_times(predictions, replace(others, entry=others.times / 10), 1.0)
    assert (late.curve, late.indices, late.no_curve) == (None, None, NoCurve.CAME_LATE)


def test_no_curve_is_drawn_through_next_to_nothing() -> None:
    p, y = pima()
    few = calibrate_risks(p[:15], y[:15])
    assert (few.curve, few.indices, few.no_curve) == (None, None, NoCurve.TOO_FEW_PEOPLE)
    assert calibrate_risks(p, np.zeros(332)).no_curve is NoCurve.TOO_FEW_EVENTS
    assert calibrate_risks(p, np.ones(332)).no_curve is NoCurve.TOO_FEW_EVENTS
    assert calibrate_risks(np.round(p), y).no_curve is NoCurve.TOO_FEW_PREDICTIONS
    half = np.where(np.arange(332) < 240, 0.3, p)
    assert calibrate_risks(half, y).no_curve is NoCurve.TOO_FEW_PREDICTIONS
    people = breast_cancer()
    assert calibrate_times(people.predictions, people.watched, 90.0).no_curve is NoCurve.TOO_FEW_EVENTS
    assert calibrate_times(people.predictions, people.watched, 9000.0).no_curve is NoCurve.NOT_FOLLOWED


def test_predictions_that_mostly_tie_are_smoothed_by_a_straight_line() -> None:
    people = breast_cancer()
    tied = np.where(np.arange(686) % 20 < 13, 0.2, people.predictions)
    curve = calibrate_times(tied, people.watched, people.horizon).curve
    assert curve is not None
    assert curve.knots == ()


def test_predictions_of_nought_and_one_are_no_obstacle() -> None:
    people = breast_cancer()
    predictions = people.predictions.copy()
    predictions[:2] = 0.0, 1.0
    found = calibrate_times(predictions, people.watched, people.horizon)
    assert found.curve is not None
    assert np.isfinite(found.curve.observed).all()


def test_spread_keeps_each_prediction_with_its_outcome() -> None:
    p, y = pima()
    spread = calibrate_risks(p, y).spread
    assert np.array_equal(spread.predictions, np.sort(p))
    assert spread.people == 332
    assert np.array_equal(np.sort(spread.predictions[spread.had_event]), np.sort(p[y == 1]))
    assert spread.quantile(0.5) == float(np.median(p))


def test_what_cannot_be_compared_is_refused() -> None:
    p, y = pima()
    people = breast_cancer()
    with pytest.raises(FitRefused):
        calibrate_risks(p[:0], y[:0])
    with pytest.raises(FitRefused):
        calibrate_risks(p, y + 1)
    with pytest.raises(FitRefused):
        calibrate_risks(np.where(np.arange(332) == 3, np.nan, p), y)
    with pytest.raises(FitRefused):
        calibrate_times(people.predictions, replace(people.watched, times=people.watched.times * np.nan), 1825.0)
