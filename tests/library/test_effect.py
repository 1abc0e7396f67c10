"""What a change does to standard patients: bit for bit what each of them would get, counted without a patient lost."""

import math

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.library.effect import GridEffect, MovedPatient, Whose, find_effect
from clinicalc.library.effect_words import say_grid, say_moved
from clinicalc.library.grid_answers import answer_grid
from clinicalc.library.standard_patients import MOST_PATIENTS, lay_out_grid
from tests.assessment.cases import FULL, NOW, shipped
from tests.library.versions import Tree, model_of

TARNWICK = "tarnwick-cvd-10y"
LIPIDS = "general-cvd-2008-lipids"


def _twice_as_odd(model: Tree) -> None:
    """Every odds multiplied by two: the log odds rise by log 2 (definition of the logit)."""
    model["version"] = "2.0.0"
    model["equations"][0]["horizons"][0]["intercept"] += math.log(2)


def _effect(old: Model, new: Model) -> GridEffect:
    (grid,) = find_effect(old, new).grids
    return grid


@pytest.mark.parametrize("id", FULL)
def test_each_patient_of_the_grid_gets_what_one_patient_gets(id: str) -> None:
    model = shipped(id)
    grid = lay_out_grid(model, model)
    ids = [r.id for r in model.recalibrations_at(model.spans[0])]
    recalibration = ids[0] if model.content.recalibration_required else None
    answers = answer_grid(model, grid, model.spans[0], recalibration)
    assert 0 < answers.gives.sum() < len(grid.rows) <= MOST_PATIENTS
    for row in range(0, len(grid.rows), 11):
        one = assess(
            model,
            entry_from_texts(grid.typed(row)),
            span=model.spans[0],
            recalibration=recalibration,
            at=NOW,
            number_only=True,
        )
        assert (one.estimate is not None) == answers.gives[row]
        if one.estimate is not None:
            assert (one.estimate.probability, one.estimate.eta) == (answers.probability[row], answers.eta[row])


def test_values_worked_out_are_checked_and_used_as_for_one_patient() -> None:
    """Without typed body mass index or eGFR the grid goes through their inputs."""

    def change(model: Tree) -> None:
        for derived in model["derived"]:
            derived["may_be_typed"] = False
        for equation in model["equations"]:
            equation.pop("reference_person", None)
        for example in model["worked_examples"]:
            if "egfr" in example["values"]:
                del example["values"]["egfr"]
                example["values"]["creatinine"] = "0.8 mg/dL"

    model = model_of("total-cvd-2024-base", change)
    grid = lay_out_grid(model, model)
    assert {"creatinine", "age", "sex"} <= {field.id for field in grid.entered}
    answers = answer_grid(model, grid, model.spans[0], None)
    stopped = 0
    for row in range(0, len(grid.rows), 17):
        one = assess(model, entry_from_texts(grid.typed(row)), span=model.spans[0], at=NOW, number_only=True)
        assert (one.estimate is not None) == answers.gives[row]
        stopped += one.estimate is None
        if one.estimate is not None:
            assert one.estimate.probability == answers.probability[row]
    assert stopped


def test_a_version_does_nothing_beside_itself() -> None:
    grid = _effect(shipped(TARNWICK), shipped(TARNWICK))
    assert grid.both == grid.unchanged == 1152
    assert (grid.only_old, grid.only_new, grid.crossing) == (0, 0, 0)
    assert grid.largest_rise is grid.largest_fall is None
    assert grid.width is not None
    assert (grid.width.least, grid.width.most) == (1.0, 1.0)
    assert "  The new band is as wide as the old one on the link scale (1152 patients)." in tuple(say_grid(grid))


def test_twice_the_odds_for_everybody() -> None:
    grid = _effect(shipped(TARNWICK), model_of(TARNWICK, _twice_as_odd))
    old, new = np.array(grid.old), np.array(grid.new)
    np.testing.assert_allclose(new / (1 - new), 2 * old / (1 - old), rtol=1e-12)
    assert grid.largest_fall is None
    assert grid.largest_rise is not None
    # p' - p = p (1 - p) / (1 + p) has its maximum at p = sqrt 2 - 1: 3 - 2 sqrt 2 (by hand)
    assert grid.largest_rise.new - grid.largest_rise.old == max(new - old)
    assert 0.16 < grid.largest_rise.new - grid.largest_rise.old <= 3 - 2 * math.sqrt(2)
    (point,) = grid.crossed
    # at the point of 10 %: old odds from 1/18 up to, not with, 1/9
    assert point.upwards == int(((old >= 1 / 19) & (old < 0.1)).sum()) == grid.crossing > 0
    assert point.downwards == 0
    assert (point.in_old, point.in_new, point.labels) == (True, True, ("Practice setting",))


def test_the_patient_named_gets_these_numbers_when_typed_in() -> None:
    old, new = shipped(TARNWICK), model_of(TARNWICK, _twice_as_odd)
    moved = _effect(old, new).largest_rise
    assert moved is not None
    for model, expected in ((old, moved.old), (new, moved.new)):
        estimate = assess(model, entry_from_texts(dict(moved.typed)), at=NOW).estimate
        assert estimate is not None
        assert estimate.probability == expected


def test_wider_bands_are_said_as_a_ratio() -> None:
    """Four times the covariance is twice the width (definition of a standard deviation)."""

    def change(model: Tree) -> None:
        band = model["equations"][0]["uncertainty"]
        band["covariance"] = [[4 * figure for figure in row] for row in band["covariance"]]
        band["at_centre"][0]["variance"] *= 4

    grid = _effect(shipped(TARNWICK), model_of(TARNWICK, change))
    assert grid.unchanged == grid.both
    assert grid.width is not None
    np.testing.assert_allclose([grid.width.least, grid.width.middle, grid.width.most], 2.0, rtol=1e-9)
    assert "  The new band is 2 times as wide as the old one on the link scale (1152 patients)." in tuple(
        say_grid(grid)
    )


def test_another_unit_of_a_question_is_the_same_patient() -> None:
    """The lipid form with total cholesterol asked for in mmol/L and its step changed back to mg/dL."""

    def change(model: Tree) -> None:
        predictor = next(p for p in model["predictors"] if p["id"] == "total_cholesterol")
        predictor["unit"] = "mmol/L"
        predictor["factor"] = 0.02586
        for name in ("possible", "usual", "derivation"):
            predictor.pop(name, None)
        predictor.pop("within_person", None)
        predictor.pop("outside_derivation", None)
        for equation in model["equations"]:
            for term in equation["terms"]:
                if term.get("product", [{}])[0].get("of") == "total_cholesterol":
                    term["product"][0]["steps"].insert(0, {"divide": 0.02586})
        model["population"] = None
        for equation in model["equations"]:
            equation.pop("population", None)
        model["unconfirmed"] = [row for row in model["unconfirmed"] if "/population" not in row["at"]]
        for example in model["worked_examples"]:
            value = example["values"]["total_cholesterol"]
            if " " not in value:
                example["values"]["total_cholesterol"] = f"{value} mg/dL"

    old, new = shipped(LIPIDS), model_of(LIPIDS, change)
    grid = _effect(old, new)
    assert len(next(f for f in lay_out_grid(old, new).entered if f.id == "total_cholesterol").texts) > 3
    assert grid.both > 1000
    np.testing.assert_allclose(grid.old, grid.new, rtol=1e-9)


def test_patients_whom_only_one_version_answers_are_counted() -> None:
    def change(model: Tree) -> None:
        model["predictors"][0]["derivation"] = [40, 79]
        model["worked_examples"] = [e for e in model["worked_examples"] if float(e["values"]["age"]) >= 40]

    grid = _effect(shipped(TARNWICK), model_of(TARNWICK, change))
    assert grid.only_old > 0
    assert grid.only_new == 0
    assert grid.both + grid.only_old <= grid.patients


def test_examples_of_both_are_answered_by_both() -> None:
    def change(model: Tree) -> None:
        _twice_as_odd(model)
        del model["worked_examples"][3:]

    old, new = shipped(TARNWICK), model_of(TARNWICK, change)
    found = find_effect(old, new).examples
    assert [example.stated_by for example in found].count(Whose.OLD) == len(old.content.worked_examples)
    assert [example.stated_by for example in found].count(Whose.NEW) == 3
    first = found[0]
    assert first.old is not None
    assert first.new is not None
    assert first.old == pytest.approx(first.stated, abs=1e-9)
    assert first.new / (1 - first.new) == pytest.approx(2 * first.old / (1 - first.old), rel=1e-12)


def test_an_example_that_a_version_cannot_answer_says_why() -> None:
    found = find_effect(shipped("cvd-2021-regional"), shipped(TARNWICK))
    assert {example.stated_by for example in found.examples} == {Whose.OLD, Whose.NEW}
    unanswered = [example for example in found.examples if example.new is None]
    assert unanswered
    assert all(example.new_because for example in unanswered)
    assert any("recalibration" in said for said in found.not_compared)


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        (0.1, 0.2, "10.0 % to 20.0 % (+10.0 points)"),
        # 50.56 to 49.84: with one decimal 50.6, 49.8 and −0.7, which does not add up
        (0.5056, 0.4984, "50.56 % to 49.84 % (−0.72 points)"),
        (0.12341, 0.12342, "12.341 % to 12.342 % (+0.001 points)"),
    ],
)
def test_two_figures_and_their_distance_add_up(old: float, new: float, said: str) -> None:
    moved = MovedPatient((("age", "61 a"),), old, new)
    assert say_moved(moved) == f"{said}: age 61 years".replace(" %", "\u202f%").replace(" points", "\u202fpoints")


def test_a_patient_is_told_by_names_and_without_what_has_an_empty_one() -> None:
    moved = MovedPatient((("prior_cvd", "no"), ("systolic_bp", "142 mm[Hg]"), ("smoker", "yes")), 0.1, 0.2)
    said = say_moved(moved, {"prior_cvd": "", "systolic_bp": "blood pressure"})
    assert said.endswith(": blood pressure 142 mmHg, smoker yes")


def test_a_grid_that_is_too_large_is_thinned_evenly() -> None:
    model = shipped("diabetes-2007-clinical")
    grid = lay_out_grid(model, model)
    assert (grid.whole, len(grid.rows)) == (17496, MOST_PATIENTS)
    assert len(set(grid.rows)) == MOST_PATIENTS
    for at, field in enumerate(grid.entered):
        counts = np.bincount([row[at] for row in grid.rows], minlength=len(field.texts))
        np.testing.assert_allclose(counts, MOST_PATIENTS / len(field.texts), rtol=0.02)


def test_a_horizon_that_only_one_version_has_is_said() -> None:
    def change(model: Tree) -> None:
        equation = model["equations"][0]
        equation["horizons"][0]["years"] = 5
        equation["uncertainty"]["at_centre"][0]["years"] = 5
        for example in model["worked_examples"]:
            example["years"] = 5

    found = find_effect(shipped(TARNWICK), model_of(TARNWICK, change))
    assert found.grids == ()
    assert found.not_compared == (
        "Only the old version answers for 10 years.",
        "Only the new version answers for 5 years.",
    )


def test_each_recalibration_that_both_offer_has_an_effect_of_its_own() -> None:
    model = shipped("cvd-2021-regional")
    found = find_effect(model, model)
    assert model.content.recalibration_required
    assert [grid.recalibration for grid in found.grids] == [r.id for r in model.content.recalibrations]
    assert len({grid.old for grid in found.grids}) == len(found.grids)
