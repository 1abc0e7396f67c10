"""What of an assessment stands on a ruler: the same in the window and in print."""

from dataclasses import replace

from clinicalc.assessment.assess import assess
from clinicalc.assessment.decision import points_for
from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.shown_figures import shown_probability
from clinicalc.operations.bedside import open_example
from clinicalc.report.measured import Lane
from clinicalc.report.on_the_ruler import (
    compared_of,
    lanes_of,
    measure_assessment,
    measure_nothing,
    reference_in_short,
    walk_of,
)
from clinicalc.settings import PracticePoint
from tests.assessment.cases import DEMO, NOW, WOMAN_61, run

TARNWICK = "tarnwick-cvd-10y"


def test_lanes_follow_the_file_not_the_patient() -> None:
    """Tarnwick states variations within a person and a decision point; the pooled equations state no point."""
    tarnwick, pooled = open_example(f"{TARNWICK}.json"), open_example("ascvd-2013-pooled-cohort.json")
    points = points_for(tarnwick, tarnwick.spans[0])
    assert lanes_of(tarnwick, points) == (Lane.BAND, Lane.SPREAD, Lane.DECISION)
    assert lanes_of(pooled, points_for(pooled, pooled.spans[0])) == (Lane.BAND, Lane.SPREAD)
    still = tuple(replace(f, within_person=None) if isinstance(f, NumberField) else f for f in tarnwick.fields)
    assert lanes_of(replace(tarnwick, fields=still), ()) == (Lane.BAND,)


def test_a_number_with_everything_beside_it() -> None:
    assessment = run(TARNWICK, DEMO)
    estimate = assessment.estimate
    assert estimate is not None
    assert estimate.band is not None
    assert estimate.spread is not None
    measured = measure_assessment(assessment)
    assert (measured.probability, measured.shown) == (estimate.probability, shown_probability(assessment))
    assert measured.band is not None
    assert measured.spread is not None
    assert (measured.band.lower, measured.band.upper) == (estimate.band.lower, estimate.band.upper)
    assert (measured.spread.lower, measured.spread.upper) == (estimate.spread.lower, estimate.spread.upper)
    assert [(point.probability, point.source) for point in measured.decisions] == [(0.1, "Practice setting")]
    assert not measured.approximate
    assert measure_assessment(run("general-cvd-2008-lipids", WOMAN_61)).approximate


def test_without_a_number_only_the_decision_points_stand() -> None:
    model = open_example(f"{TARNWICK}.json")
    points = points_for(model, model.spans[0])
    stopped = measure_assessment(run(TARNWICK, DEMO | {"total_cholesterol": "5.2 mg/dL"}), points)
    assert stopped == measure_nothing(model, points)
    assert (stopped.probability, stopped.band, stopped.spread) == (None, None, None)
    assert [point.probability for point in stopped.decisions] == [0.1]


def test_walk_and_comparison_write_the_number_on_its_side_of_a_point() -> None:
    model = open_example(f"{TARNWICK}.json")
    entry = entry_from_texts(DEMO).with_change("smoker", Typed("no"))
    bare = assess(model, entry, at=NOW)
    assert bare.estimate is not None
    close = PracticePoint(model.content.id, 10, "a", round(bare.estimate.probability, 3), "Our own", "meeting")
    assessment = assess(model, entry, at=NOW, practice_points=(close,))
    walk, compared = walk_of(assessment), compared_of(assessment)
    assert walk is not None
    assert compared is not None
    assert walk.figure == shown_probability(assessment) != shown_probability(bare)
    assert (walk.caption, compared.caption) == ("% within 10 years", "% within 10 years")
    assert compared.beside == (0.1, close.probability)
    assert walk.also == compared.also
    assert walk.patient == ""


def test_nothing_is_drawn_without_a_number() -> None:
    assessment = run(TARNWICK, {"prior_cvd": "no"})
    assert walk_of(assessment) is None
    assert compared_of(assessment) is None


def test_reference_person_in_short_is_of_the_patients_own_sex_and_age() -> None:
    """The file fixes neither, so both are the patient's."""
    assert reference_in_short(run(TARNWICK, DEMO)) == "Female, 61 years"
