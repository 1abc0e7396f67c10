"""Decision points: which hold, on which side the number lies, and how the number is written beside them."""

from dataclasses import replace

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.case import Case
from clinicalc.assessment.decision import (
    DecisionPoint,
    PlacedPoint,
    PointOrigin,
    find_crossed,
    place_points,
    points_for,
)
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.shown_figures import shown_band, shown_probability
from clinicalc.coefficients.spans import Span
from clinicalc.prediction.exceedance import place_on_link
from clinicalc.settings import PracticePoint
from tests.assessment.cases import DEMO, FULL, NOW, WOMAN_61, run, shipped
from tests.assessment.whole_case import case_of, model_of
from tests.coefficients.tiny_model import changed, tiny_logit_model, tree_of

TARNWICK = "tarnwick-cvd-10y"
TINY_TEXTS = {"age": "50", "smoker": "yes", "prior_event": "no"}


def point(probability: float, origin: PointOrigin = PointOrigin.FILE) -> DecisionPoint:
    """A point with an invented source."""
    return DecisionPoint(probability, "Talk it over", "invented", origin)


def place(case: Case, *probabilities: float, all_measured: bool = True) -> tuple[PlacedPoint, ...]:
    """The points placed as an assessment of this case would."""
    result = case.predict_with({}, band=True)
    band = None
    if result.lower is not None and result.upper is not None:
        band = float(result.lower[0]), float(result.upper[0])
    points = [point(probability) for probability in probabilities]
    return place_points(case, float(result.eta[0]), band, points, all_measured=all_measured)


def placed_on(assessment: Assessment, *probabilities: float) -> Assessment:
    """The assessment with these points beside its number."""
    estimate = assessment.estimate
    assert estimate is not None
    placed = place(case_of(assessment.model, FULL[assessment.model.content.id]), *probabilities)
    return replace(assessment, estimate=replace(estimate, decision_points=placed))


def test_the_points_of_the_file_hold_for_every_horizon_and_the_practices_for_its_own() -> None:
    model = model_of(tree_of(tiny_logit_model()))
    own = PracticePoint("tiny-logit", 10, "a", 0.05, "Ring up", "practice meeting")
    others = (replace(own, model="other"), replace(own, time=5), replace(own, time=120, unit="mo"))
    found = points_for(model, Span(10), (own, *others, replace(own, probability=0.2)))
    assert [(p.probability, p.origin) for p in found] == [
        (0.05, PointOrigin.PRACTICE),
        (0.1, PointOrigin.FILE),
        (0.2, PointOrigin.PRACTICE),
    ]
    assert (found[0].label, found[0].source) == ("Ring up", "practice meeting")
    assert [p.probability for p in points_for(model, Span(3), (own,))] == [0.1]


def test_a_point_that_the_practice_took_over_from_the_file_stands_once() -> None:
    model = shipped(TARNWICK)
    [stated] = model.content.decision_points
    own = PracticePoint(model.content.id, 10, "a", stated.probability, stated.label, stated.source)
    assert [p.origin for p in points_for(model, Span(10), (own,))] == [PointOrigin.FILE]
    other = replace(own, source="Practice meeting of May")
    assert [p.origin for p in points_for(model, Span(10), (other,))] == [PointOrigin.FILE, PointOrigin.PRACTICE]


def test_the_place_and_the_confidence() -> None:
    """The tiny model's worked example: eta -1.5 with variance 0.0284, Phi((-1.5 - logit(T)) / sqrt(0.0284))."""
    case = case_of(model_of(tree_of(tiny_logit_model())), TINY_TEXTS)
    low, near, high = place(case, 0.1, 0.18, 0.3)
    assert [(p.above, p.crossed) for p in (low, near, high)] == [(True, False), (True, True), (False, False)]
    # Python 3.11, statistics.NormalDist().cdf((-1.5 - log(T / (1 - T))) / sqrt(0.0284))
    assert [p.confidence for p in (low, near, high)] == pytest.approx(
        [0.999982426624547, 0.5386385906600004, 5.3735448554581566e-05], abs=1e-9
    )


def test_on_the_point_counts_as_above_and_nothing_is_rounded() -> None:
    case = case_of(model_of(tree_of(tiny_logit_model())), TINY_TEXTS)
    at = place_on_link("logit", 0.1)
    for eta, above in ((at, True), (float(np.nextafter(at, 9)), True), (float(np.nextafter(at, -9)), False)):
        (placed,) = place_points(case, eta, (0.05, 0.2), [point(0.1)])
        assert placed.above is above
    (at_the_top,) = place_points(case, at - 1, (0.01, 0.1), [point(0.1)])
    (at_the_foot,) = place_points(case, at + 1, (0.1, 0.4), [point(0.1)])
    assert (at_the_top.crossed, at_the_foot.crossed) == (True, False)  # as the number itself, an end on it is above


def test_without_a_band_nothing_is_crossed_and_nothing_known_of_confidence() -> None:
    (placed,) = place(case_of(shipped("ascvd-2013-pooled-cohort"), FULL["ascvd-2013-pooled-cohort"]), 0.075)
    assert (placed.crossed, placed.confidence) == (False, None)


def test_with_a_value_not_measured_the_confidence_is_not_known() -> None:
    (placed,) = place(case_of(shipped(TARNWICK), DEMO), 0.12, all_measured=False)
    assert (placed.crossed, placed.confidence) == (True, None)


def test_no_points_no_places() -> None:
    assert place(case_of(shipped(TARNWICK), DEMO)) == ()


def test_a_band_across_a_point_is_a_caution() -> None:
    placed = place(case_of(shipped(TARNWICK), DEMO), 0.05, 0.1, 0.3)
    (finding,) = find_crossed(placed, 0.0967, 0.155)
    assert (finding.grade, finding.code, finding.field) == (Grade.CAUTION, FindingCode.DECISION_POINT, "")
    assert finding.message == (
        "The band 9.7–15.5\u202f% reaches across the decision point 10.0\u202f% (Talk it over; invented). The number"
        " lies above it, and the model’s coefficients are not known precisely enough to settle which side."
    )


def test_the_band_in_a_caution_has_the_digits_it_has_beside_all_points() -> None:
    """Its lower end of 9.67 % would read as 9.7 % beside the crossed point alone, above the other one of 9.68 %."""
    placed = place(case_of(shipped(TARNWICK), DEMO), 0.0968, 0.1)
    messages = [finding.message for finding in find_crossed(placed, 0.0967, 0.155)]
    assert len(messages) == 2
    assert all(message.startswith("The band 9.67–15.5\u202f% reaches across") for message in messages)


def test_a_band_of_values_not_measured_too_says_so() -> None:
    """General CVD file, HDL cholesterol open: 15.5 %, band 10.4 to 22.4 %."""
    practice = (PracticePoint("general-cvd-2008-lipids", 10, "a", 0.2, "Talk it over", "invented"),)
    entry = entry_from_texts({**WOMAN_61, "systolic_bp": "142", "hdl_cholesterol": "unknown"})
    found = assess(shipped("general-cvd-2008-lipids"), entry, at=NOW, practice_points=practice).findings
    (finding,) = [finding for finding in found if finding.code is FindingCode.DECISION_POINT]
    assert finding.message.endswith(
        "The number lies below it, and the model’s coefficients and what was not measured are not known precisely"
        " enough to settle which side."
    )


def test_the_ends_of_a_band_across_a_point_stand_on_their_sides() -> None:
    crossed = PlacedPoint(point(0.1), above=False, crossed=True, confidence=0.1)
    (finding,) = find_crossed([crossed], 0.08, 0.10002)
    assert "The band 8.0–10.0\u202f% reaches" in finding.message  # on it is above, so 10.0 is not the wrong side
    (finding,) = find_crossed([crossed], 0.09996, 0.12)
    assert "The band 9.996–12.0\u202f% reaches" in finding.message


def test_the_number_is_shown_on_its_side_of_every_point() -> None:
    assessment = run(TARNWICK, DEMO)  # 12.2909… %
    assert shown_probability(assessment) == "12.3\u202f%"
    assert shown_probability(placed_on(assessment, 0.1)) == "12.3\u202f%"
    assert shown_probability(placed_on(assessment, 0.123)) == "12.29\u202f%"
    assert shown_probability(placed_on(assessment, 0.05, 0.1229, 0.123)) == "12.29\u202f%"


def test_the_band_is_shown_with_the_same_care() -> None:
    assessment = run(TARNWICK, DEMO)  # 9.6684… to 15.5026… %
    assert shown_band(assessment) == "9.7–15.5\u202f%"
    assert shown_band(placed_on(assessment, 0.097)) == "9.67–15.5\u202f%"


def test_nothing_is_shown_where_there_is_nothing() -> None:
    assessment = run(TARNWICK, {"age": "61"})
    assert (shown_probability(assessment), shown_band(assessment)) == ("", "")
    assert shown_band(run("ascvd-2013-pooled-cohort", FULL["ascvd-2013-pooled-cohort"])) == ""


def test_a_file_states_its_points() -> None:
    tree = changed(tree_of(tiny_logit_model()), ("/model/decision_points", []))
    assert points_for(model_of(tree), Span(10)) == ()
    assert points_for(shipped(TARNWICK), Span(10))[0].origin is PointOrigin.FILE
