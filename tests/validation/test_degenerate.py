"""What cannot be worked out is None with a sentence, never a number and never an error half-way."""

import warnings
from dataclasses import fields

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.validation.measuring import measure_group, measure_horizon
from clinicalc.validation.predicted import FlagPoint, Outcome, PredictedPeople, YesNo
from clinicalc.validation.validated import HorizonValidation, Measure
from tests.validation.people import YEAR, answered, competed, watched

CASES: dict[str, tuple[tuple[PredictedPeople, Outcome], Span | None]] = {
    "answered": (answered(200, 1), None),
    "watched": (watched(200, 2), YEAR),
    "competed": (competed(200, 3), YEAR),
}


def _measures(found: HorizonValidation) -> dict[str, Measure]:
    each = {field.name: getattr(found, field.name) for field in fields(found)}
    for place, decision in enumerate(found.decisions):
        each |= {f"{field.name} {place}": getattr(decision, field.name) for field in fields(decision)}
    return {name: value for name, value in each.items() if isinstance(value, Measure)}


def _measure(predicted: PredictedPeople, outcome: Outcome, span: Span | None, *points: float) -> dict[str, Measure]:
    """Every measure; each is finite within its limits, or None or without limits with a sentence."""
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        found = measure_horizon(predicted, outcome, span, [FlagPoint(point) for point in points])
    measures = _measures(found)
    for name, measure in measures.items():
        if measure.lower is None:
            assert measure.upper is None, name
            assert measure.why.endswith("."), name
            continue
        assert measure.value is not None
        assert measure.upper is not None
        assert np.isfinite([measure.value, measure.lower, measure.upper]).all(), name
        assert measure.lower <= measure.value <= measure.upper, name
        assert measure.lower < measure.upper, name
        assert not measure.why, name
    return measures


@pytest.mark.parametrize("case", CASES)
def test_nothing_lacks_where_nothing_is_odd(case: str) -> None:
    (predicted, outcome), span = CASES[case]
    measures = _measure(predicted, outcome, span, 0.3)
    lacking = {name for name, measure in measures.items() if measure.lower is None}
    assert lacking == ({"uno"} if span is None else set())


@pytest.mark.parametrize("case", CASES)
def test_predictions_all_equal(case: str) -> None:
    (predicted, outcome), span = CASES[case]
    measures = _measure(PredictedPeople(np.full(len(predicted.probability), 0.3)), outcome, span, 0.3)
    for name in ("slope", "c", "auc"):
        assert measures[name].value is None
        assert "same predicted risk" in measures[name].why
    for name in ("intercept", "observed_to_expected", "brier", "scaled_brier"):
        assert measures[name].value is not None


@pytest.mark.parametrize("case", CASES)
def test_nobody_flagged_and_everybody_flagged(case: str) -> None:
    (predicted, outcome), span = CASES[case]
    measures = _measure(predicted, outcome, span, 0.9999, 1e-9)
    assert measures["positive_value 0"].value is None
    assert measures["positive_value 0"].why == "Nobody reaches the decision point."
    assert measures["negative_value 1"].why == "Everybody reaches the decision point."
    assert (measures["sensitivity 0"].value, measures["specificity 0"].value) == (0.0, 1.0)
    assert (measures["sensitivity 1"].value, measures["specificity 1"].value) == (1.0, 0.0)
    found = measure_horizon(predicted, outcome, span, [FlagPoint(0.9999), FlagPoint(1e-9)])
    none, everybody = found.decisions
    assert (none.net_benefit, everybody.missed) == (0.0, 0.0)
    assert none.missed == pytest.approx(100 * (found.observed.value or 0.0))
    assert everybody.net_benefit == everybody.treat_all


@pytest.mark.parametrize("case", CASES)
def test_no_events_by_the_horizon(case: str) -> None:
    (predicted, outcome), span = CASES[case]
    if isinstance(outcome, YesNo):
        outcome = YesNo(np.zeros(200))
    else:
        outcome = Watched(outcome.times, np.where(outcome.status == 2, 2.0, 0.0))
    measures = _measure(predicted, outcome, span, 0.3)
    assert measures["observed"].value == 0.0
    for name in ("intercept", "slope", "c", "auc", "scaled_brier", "sensitivity 0"):
        assert measures[name].value is None, name
    assert measures["observed_to_expected"].value == 0.0
    assert measures["observed_to_expected"].why.startswith("Nobody was seen to have the event")


@pytest.mark.parametrize("case", CASES)
def test_everybody_has_it(case: str) -> None:
    (predicted, outcome), span = CASES[case]
    if isinstance(outcome, YesNo):
        outcome = YesNo(np.ones(200))
    else:
        outcome = Watched(np.minimum(outcome.times, 0.9), np.ones(200))
    measures = _measure(predicted, outcome, span, 0.3)
    assert measures["observed"].value == 1.0
    assert measures["observed_to_expected"].lower is None
    for name in ("auc", "scaled_brier", "specificity 0"):
        assert measures[name].value is None, name
    if span is None:
        assert measures["intercept"].why == "Everybody had the event."


@pytest.mark.parametrize("event", [0.0, 1.0])
@pytest.mark.parametrize("span", [None, YEAR])
def test_one_person(span: Span | None, event: float) -> None:
    outcome: Outcome = YesNo(np.array([event]))
    if span is not None:
        outcome = Watched(np.array([1.5 if event == 0.0 else 0.5]), np.array([event]))
    measures = _measure(PredictedPeople(np.array([0.2])), outcome, span, 0.1)
    assert measures["brier"].value == pytest.approx((event - 0.2) ** 2)
    assert measures["c"].value is None


def test_a_horizon_beyond_the_follow_up_is_refused() -> None:
    predicted, outcome = watched(200, 2)
    with pytest.raises(UsageError, match="10 years lies beyond the follow-up"):
        measure_horizon(predicted, outcome, Span(10.0))
    with pytest.raises(UsageError, match="nobody to measure"):
        measure_horizon(PredictedPeople(np.empty(0)), YesNo(np.empty(0)), None)
    with pytest.raises(UsageError, match="none is named"):
        measure_horizon(predicted, outcome, None)
    with pytest.raises(UsageError, match="missing"):
        measure_horizon(PredictedPeople(np.full(200, np.nan)), outcome, YEAR)


def test_those_flagged_all_lost_before_the_horizon() -> None:
    predicted, outcome = watched(200, 2)
    flagged = predicted.probability >= 0.5
    early = Watched(np.where(flagged, outcome.times / 4, outcome.times), np.where(flagged, 0.0, outcome.status))
    measures = _measure(predicted, early, YEAR, 0.5)
    for name in ("sensitivity 0", "specificity 0", "positive_value 0"):
        assert measures[name].why == "The last of those at or above the decision point was lost before the horizon."
    assert measures["negative_value 0"].value is not None
    found = measure_horizon(predicted, early, YEAR, [FlagPoint(0.5)])
    assert found.decisions[0].net_benefit is None
    assert found.net_benefit is not None
    assert np.isfinite(found.net_benefit.by_model).all()
    assert found.net_benefit.points.max() < 0.55


def test_people_who_came_late() -> None:
    predicted, outcome = watched(200, 2)
    late = Watched(outcome.times, outcome.status, outcome.times / 10)
    measures = _measure(predicted, late, YEAR, 0.3)
    for name in ("c", "uno", "auc", "brier", "scaled_brier"):
        assert "first watched after time nought" in measures[name].why
    for name in ("observed", "observed_to_expected", "intercept", "slope", "sensitivity 0"):
        assert measures[name].lower is not None
    predicted, outcome = competed(200, 3)
    late = Watched(outcome.times, outcome.status, outcome.times / 10)
    assert "first watched after" in _measure(predicted, late, YEAR, 0.3)["slope"].why


def test_risks_of_nought_and_one() -> None:
    for (predicted, outcome), span in CASES.values():
        p = predicted.probability.copy()
        p[:2] = 0.0, 1.0
        measures = _measure(PredictedPeople(p), outcome, span, 0.3)
        assert "exactly 0 or 1" in measures["slope"].why
        assert measures["c"].value is not None
        nought = _measure(PredictedPeople(np.zeros(len(p))), outcome, span, 0.3)
        assert nought["observed_to_expected"].why == "Everybody has a predicted risk of 0."


def test_predictions_that_part_perfectly() -> None:
    y = np.repeat([0.0, 1.0], 30)
    measures = _measure(PredictedPeople(np.linspace(0.1, 0.9, 60)), YesNo(y), None, 0.5)
    assert measures["slope"].value is None
    assert (measures["c"].value, measures["c"].lower) == (1.0, None)


def test_a_group_of_three() -> None:
    for (predicted, outcome), span in CASES.values():
        rows = np.arange(3)
        found = measure_group(predicted.part(rows), outcome.part(rows), span, "practice", "Weir Lane")
        assert found.why == "3 people are in this group: no figures are made of fewer than 20."
        assert (found.people, found.observed.value, found.slope.value, found.c.value) == (3, None, None, None)
        assert found.observed.why == found.why
        assert found.expected == pytest.approx(predicted.probability[:3].mean())


def test_a_group_with_few_events_has_no_slope_and_no_c() -> None:
    predicted, outcome = answered(200, 1)
    few = YesNo(np.where(np.cumsum(outcome.y) <= 5, outcome.y, 0.0))
    found = measure_group(predicted, few, None, "sex", "male")
    assert (found.people, found.events, found.why) == (200, 5, "")
    assert found.observed.value == 0.025
    assert found.observed_to_expected.lower is not None
    assert found.slope.why == "Fewer than 10 people with the event: too few for this figure."
    assert found.c.value is None
