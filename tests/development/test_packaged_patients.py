"""Worked examples from described people: what is printed is compared, the rest worked out and marked."""

import pytest

from tests.development.lung_case import Case


def test_no_patient_is_asked_for(lung: Case) -> None:
    del lung.tree["patients"]
    assert lung.only_problem().startswith("patients: no person is described. A coefficient file proves itself")


def test_a_printed_probability_that_differs_shows_both(lung: Case) -> None:
    lung.tree["patients"][0] |= {"probability": 0.58, "tolerance": 0.005}
    del lung.tree["patients"][0]["lower"], lung.tree["patients"][0]["upper"]
    said = lung.only_problem()
    assert said.startswith("patients 1, probability: 0.58 was printed, and this model gives 0.6761541346")
    assert "Is the reference point the one where the baseline holds" in said


def test_printed_limits_on_another_scale_are_refused(lung: Case) -> None:
    """R 4.2.2, survival 3.5-3: summary(survfit(fit, newdata), times = 365) prints 0.323846 (0.214061, 0.489936)."""
    lung.tree["patients"][0] |= {"lower": 1 - 0.489936, "upper": 1 - 0.214061, "tolerance": 5e-5}
    first, second = lung.problems()
    assert first.startswith("patients 1, lower: 0.510064 was printed, and this model gives 0.5420442781")
    assert "log-log for survival" in second


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"probability": 1.2}, "1.2 looks like a percentage: write 0.012"),
        ({"probability": 0.5, "lower": 0.6, "upper": 0.7}, "the limits must stand on the two sides of the probability"),
        ({"time": 200}, "the model has no horizon of 200 days; it has 180 days or 365 days"),
        ({"values": {"age": 71, "sex": "femal", "ecog": 2}}, '"femal" is no answer to "sex". Did you mean "female"?'),
        ({"values": {"age": 71, "sex": "female"}}, "gets no number"),
        ({"values": {"age": 150, "sex": "female", "ecog": 2}}, "gets no number"),
    ],
)
def test_a_patient_that_cannot_be(change: dict[str, object], words: str, lung: Case) -> None:
    lung.tree["patients"][0] |= change
    found = lung.problems()
    assert any(said.startswith("patients 1") and words in said for said in found), found


def test_figures_without_a_printed_probability(lung: Case) -> None:
    del lung.tree["patients"][0]["probability"]
    assert all('"probability" is missing' in said for said in lung.problems())


def test_a_printed_probability_needs_tolerance_and_source(lung: Case) -> None:
    del lung.tree["patients"][0]["tolerance"], lung.tree["patients"][0]["source"]
    assert [said[:25] for said in lung.problems()] == ['patients 1: "tolerance" i', 'patients 1: "source" is m']


def test_what_is_worked_out_is_marked_and_covers_every_horizon(lung: Case) -> None:
    lung.tree["patients"].append({"values": {"age": 50, "sex": "male", "ecog": 0}})
    examples = lung.package().model.content.worked_examples
    assert [(example.computed is True, example.time) for example in examples] == [
        (False, 365),
        (True, 180),
        (True, 365),
    ]
    assert all(isinstance(example.lower, float) for example in examples)
