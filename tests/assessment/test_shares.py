"""Shares against the average over every order of moving the values, worked out one order after another."""

import random
from collections.abc import Mapping
from functools import cache
from itertools import pairwise, permutations
from math import fsum

import numpy as np
import pytest

from clinicalc.assessment.case import Case
from clinicalc.assessment.reference_person import describe_reference, find_reference, own_value
from clinicalc.assessment.shares import MOST_TOGETHER, Shares, shares_of, why_no_shares
from clinicalc.coefficients.reader import read_bytes
from clinicalc.resources import read_shipped
from tests.assessment.cases import FULL, shipped
from tests.assessment.whole_case import case_of, model_of
from tests.coefficients.tiny_model import Tree, changed, tiny_cloglog_model, tiny_logit_model, tree_of

LOW = {"cvd-2021-regional": "low"}
WORKED_OUT = {
    "total-cvd-2024-base": {"egfr": "", "creatinine": "1.4 mg/dL"},
    "diabetes-2007-clinical": {"bmi": "", "weight": "92", "height": "165"},
}
OTHERS = {
    "sex": "male",
    "age": "58",
    "smoker": "yes",
    "systolic_bp": "151",
    "diastolic_bp": "93",
    "hdl_cholesterol": "38 mg/dL",
}


def by_all_orders(case: Case) -> dict[str, float]:
    """The mean change of the linear predictor at each value's turn, over all orders in which they can be moved."""
    reference = find_reference(case)
    assert not reference.because
    own = {id: own_value(case, id) for id in reference.values}
    moving = [id for id, value in reference.values.items() if own[id] != value]
    assert 0 < len(moving) <= 8

    @cache
    def eta(moved: frozenset[str]) -> float:
        values = {id: np.array([own[id] if id in moved else value]) for id, value in reference.values.items()}
        return float(case.predict_with(values).eta[0])

    changes: dict[str, list[float]] = {id: [] for id in moving}
    for order in permutations(moving):
        for place, id in enumerate(order):
            changes[id].append(eta(frozenset(order[: place + 1])) - eta(frozenset(order[:place])))
    return {id: fsum(some) / len(some) for id, some in changes.items()}


def walked(case: Case) -> Shares:
    shares = shares_of(case)
    assert shares is not None, why_no_shares(case)
    assert why_no_shares(case) == ""
    return shares


def amounts(case: Case) -> dict[str, float]:
    return {step.field: step.amount for step in walked(case).steps}


def assert_same_as_by_all_orders(case: Case) -> None:
    found, expected = amounts(case), by_all_orders(case)
    for id, amount in expected.items():
        assert found.get(id, 0.0) == pytest.approx(amount, rel=1e-12, abs=1e-12), id
    shares = walked(case)
    way = float(case.predict_with({}).eta[0]) - shares.reference_eta
    assert fsum(step.amount for step in shares.steps) == way
    sizes = [abs(step.amount) for step in shares.steps]
    assert all(larger >= smaller - 1e-12 for larger, smaller in pairwise(sizes))


def given(texts: Mapping[str, str]) -> dict[str, str]:
    return {id: text for id, text in texts.items() if text}


@pytest.mark.parametrize("id", FULL)
@pytest.mark.parametrize("more", [{}, OTHERS, "worked out"])
def test_shipped_files(id: str, more: dict[str, str] | str) -> None:
    extra = WORKED_OUT.get(id, {}) if isinstance(more, str) else {k: v for k, v in more.items() if k in FULL[id]}
    assert_same_as_by_all_orders(case_of(shipped(id), given(FULL[id] | extra), recalibration=LOW.get(id)))


def test_a_product_that_another_value_cancels_does_not_turn_the_sign() -> None:
    """White women of the 2013 equations (Goff, Circulation 2014;129:S49, Table A), cholesterol 170 to 230 at 55 to 65.

    ln TC 13.540 and ln age x ln TC -3.114, every other value the patient's own. Taken together the two terms that hold
    cholesterol fall by 2.51, because the product also moves with age; the share is
    13.540 ln(230/170) - 3.114 ln(230/170) (ln 55 + ln 65) / 2 = 0.2403, worked out by hand.
    """
    tree = _shipped_tree("ascvd-2013-pooled-cohort")
    tree = changed(tree, ("/model/equations/0/reference_person", {"age": 55, "total_cholesterol": 170}))
    texts = FULL["ascvd-2013-pooled-cohort"] | {"age": "65", "total_cholesterol": "230 mg/dL"}
    case = case_of(model_of(tree), texts)
    rise, ages = np.log(230 / 170), np.log([55, 65])
    expected = 13.540 * rise - 3.114 * rise * ages.mean()
    assert expected == pytest.approx(0.24, abs=0.005)
    assert amounts(case)["total_cholesterol"] == pytest.approx(expected, abs=1e-12)
    together = 13.540 * rise - 3.114 * (ages[1] * np.log(230) - ages[0] * np.log(170))
    assert together == pytest.approx(-2.51, abs=0.01)
    assert_same_as_by_all_orders(case)


def _shipped_tree(id: str) -> Tree:
    return tree_of(read_bytes(read_shipped(f"example_models/{id}.json"), f"{id}.json").content.model)


def test_a_recalibration_stretches_every_share_by_its_slope() -> None:
    texts = FULL["cvd-2021-regional"] | {"systolic_bp": "160"}
    plain = case_of(shipped("cvd-2021-regional"), texts)
    moved = case_of(shipped("cvd-2021-regional"), texts, recalibration="low")
    assert moved.adjustment is not None
    for id, amount in amounts(plain).items():
        assert amounts(moved)[id] == pytest.approx(moved.adjustment.slope * amount, rel=1e-12)
    reference = moved.adjustment.intercept + moved.adjustment.slope * walked(plain).reference_eta
    assert walked(moved).reference_eta == pytest.approx(reference, rel=1e-14)


def _wide_tree(seed: int) -> tuple[Tree, dict[str, str]]:
    """An invented logistic model with products of up to four factors, cuts, a derived value, and a person for it."""
    draw = random.Random(seed)
    numbers = ["first", "second", "third", "fourth"]
    predictors: list[Tree] = [
        {"id": id, "label": id, "group": "All", "kind": "number", "quantity": "number", "unit": "1", "possible": [1, 9]}
        for id in numbers
    ]
    predictors += [
        {"id": "asked", "label": "asked", "group": "All", "kind": "yes_no"},
        {
            "id": "kind",
            "label": "kind",
            "group": "All",
            "kind": "choice",
            "choices": [{"id": answer, "label": answer} for answer in ("one", "two", "three")],
        },
    ]
    ratio: Tree = {"id": "ratio", "label": "ratio", "quantity": "number", "unit": "1", "equation": "ratio"}
    ratio["inputs"] = {"numerator": "first", "denominator": "second"}

    def factor() -> Tree:
        of = draw.choice([*numbers, "asked", "kind", "ratio"])
        if of == "asked":
            return {"of": of}
        if of == "kind":
            return {"of": of, "steps": [{"is": draw.sample(["one", "two", "three"], 2)}]}
        steps = [[], [{"log": "natural"}], [{"subtract": 4}], [{"power": 2}], [{"from": 3}], [{"clip_high": 5}]]
        return {"of": of, "steps": draw.choice(steps)}

    def product() -> list[Tree]:
        return [factor() for _ in range(draw.randint(1, 4))]

    terms: list[Tree] = [
        {"id": f"t{n}", "coefficient": draw.uniform(-1, 1)}
        | ({"sum": [product(), product()]} if draw.random() < 0.3 else {"product": product()})
        for n in range(7)
    ]
    terms.append({"id": "all", "coefficient": 0.1, "product": [{"of": id} for id in (*numbers, "asked", "ratio")]})
    terms.append({"id": "last", "coefficient": 0.2, "product": [{"of": "kind", "steps": [{"is": ["two"]}]}]})
    reference = {id: round(draw.uniform(1, 9), 1) for id in numbers} | {"asked": "no", "kind": "one"}
    for id in draw.sample(sorted(reference), draw.randint(0, 2)):
        del reference[id]
    if draw.random() < 0.3:
        reference["ratio"] = 2.5
        ratio["may_be_typed"] = True
    texts = {id: f"{draw.uniform(1, 9):.1f}" for id in numbers}
    texts |= {"asked": "yes", "kind": draw.choice(["two", "three"])}
    tree = changed(
        tree_of(tiny_logit_model()),
        ("/model/predictors", predictors),
        ("/model/derived", [ratio]),
        ("/model/exclusions", []),
        ("/model/equations/0/terms", terms),
        ("/model/equations/0/reference_person", reference),
        ("/model/equations/0/uncertainty", {"basis": "none", "because": "invented"}),
    )
    return tree, texts


@pytest.mark.parametrize("seed", range(40))
def test_random_models(seed: int) -> None:
    tree, texts = _wide_tree(seed)
    assert_same_as_by_all_orders(case_of(model_of(tree), texts))


def test_what_is_not_named_keeps_the_value_of_the_patient() -> None:
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/reference_person", {"smoker": "no"}))
    case = case_of(model_of(tree), {"age": "63", "smoker": "yes", "prior_event": "no"})
    shares = walked(case)
    assert amounts(case) == {"smoker": pytest.approx(0.5)}
    assert shares.reference_eta == pytest.approx(-5 + 0.06 * 63)
    assert shares.reference_probability == pytest.approx(1 / (1 + np.exp(5 - 0.06 * 63)))
    assert describe_reference(case) == "Smokes now: No; Age as entered"


def test_a_person_like_the_reference_person_has_no_shares_to_walk() -> None:
    """100 mg/dL by way of mmol/L is still 100: equal to nine digits is equal."""
    texts = FULL["general-cvd-2008-lipids"] | {
        "smoker": "no",
        "systolic_bp": "120",
        "hdl_cholesterol": "1.293 mmol/L",
        "total_cholesterol": "4.6548 mmol/L",
    }
    shares = walked(case_of(shipped("general-cvd-2008-lipids"), texts))
    assert shares.steps == ()


def test_equal_shares_stand_in_page_order_and_nought_is_left_out() -> None:
    tree = changed(
        tree_of(tiny_logit_model()),
        ("/model/equations/0/terms/0/product", [{"of": "age", "steps": [{"clip_high": 60}]}]),
        ("/model/equations/0/terms/0/coefficient", 0.05),
    )
    ten = walked(case_of(model_of(tree), {"age": "72", "smoker": "yes", "prior_event": "no"}))
    assert [step.field for step in ten.steps] == ["age", "smoker"]
    tree = changed(tree, ("/model/equations/0/reference_person/age", 65))
    none = walked(case_of(model_of(tree), {"age": "72", "smoker": "yes", "prior_event": "no"}))
    assert [step.field for step in none.steps] == ["smoker"]


def test_the_words_of_a_step_are_the_value_as_typed_and_the_reference_with_its_unit() -> None:
    texts = FULL["general-cvd-2008-lipids"] | {"total_cholesterol": "5.2 mmol/L"}
    shares = walked(case_of(shipped("general-cvd-2008-lipids"), texts))
    words = {step.field: (step.label, step.own, step.reference) for step in shares.steps}
    assert words["smoker"] == ("Smokes now", "Yes", "No")
    assert words["systolic_bp"] == ("Systolic blood pressure", "124 mmHg", "120 mmHg")
    # 180 mg/dL x 0.02586 = 4.6548 mmol/L
    assert words["total_cholesterol"] == ("Total cholesterol", "5.2 mmol/L", "4.65 mmol/L (180 mg/dL)")


def test_a_derived_value_that_the_file_names_moves_as_a_whole() -> None:
    id = "total-cvd-2024-base"
    case = case_of(shipped(id), given(FULL[id] | WORKED_OUT[id]))
    steps = {step.field: step for step in walked(case).steps}
    assert "creatinine" not in steps
    assert steps["egfr"].own.endswith("mL/min/1.73 m²")
    assert steps["egfr"].reference == "90 mL/min/1.73 m²"
    assert describe_reference(case).endswith("Has diabetes: No; Age as entered")


def test_without_a_usable_reference_person_the_reason_is_said() -> None:
    none = case_of(
        model_of(tree_of(tiny_cloglog_model())),
        {"age": "60", "sex": "female", "bp_treated": "no", "total_cholesterol": "5"},
    )
    assert shares_of(none) is None
    assert why_no_shares(none) == "The file names no reference person for this equation."
    assert describe_reference(none) == ""
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/reference_person/age", 80))
    outside = case_of(model_of(tree), {"age": "60", "smoker": "no", "prior_event": "no"})
    assert shares_of(outside) is None
    assert "reference person has Age 80 years, for which the model gives no number" in why_no_shares(outside)


def test_a_value_typed_over_inputs_that_the_file_names_leaves_no_shares() -> None:
    id = "diabetes-2007-clinical"
    reference = {"weight": 65, "height": 168, "bp_treated": "no"}
    model = model_of(changed(_shipped_tree(id), ("/model/equations/0/reference_person", reference)))
    typed = case_of(model, FULL[id])
    assert shares_of(typed) is None
    assert why_no_shares(typed).startswith(
        "The file gives the reference person a value of Weight, but Body mass index was typed instead"
    )
    worked_out = case_of(model, given(FULL[id] | WORKED_OUT[id]))
    assert_same_as_by_all_orders(worked_out)
    assert {"weight"} <= amounts(worked_out).keys()


def test_a_value_that_is_not_there_leaves_no_shares() -> None:
    case = case_of(model_of(tree_of(tiny_logit_model())), {"age": "60", "smoker": "yes", "prior_event": "no"})
    columns = {id: column for id, column in case.columns.items() if id != "smoker"}
    open_case = Case(
        model=case.model,
        equation=case.equation,
        line=case.line,
        adjustment=None,
        level=0.95,
        numbers=case.numbers,
        answers={},
        columns=columns,
        worked_out={},
    )
    assert shares_of(open_case) is None
    assert why_no_shares(open_case).startswith("Smokes now was not measured")


def test_so_many_values_in_one_term_that_no_share_is_worked_out() -> None:
    tree = tree_of(tiny_logit_model())
    ids = [f"asked_{n}" for n in range(MOST_TOGETHER + 1)]
    tree = changed(
        tree,
        ("/model/predictors", [{"id": id, "label": id, "group": "All", "kind": "yes_no"} for id in ids]),
        ("/model/equations/0/terms", [{"id": "t", "coefficient": 1.1, "product": [{"of": id} for id in ids]}]),
        ("/model/equations/0/uncertainty", {"basis": "none", "because": "invented"}),
        ("/model/equations/0/reference_person", dict.fromkeys(ids, "no")),
    )
    texts = dict.fromkeys(ids, "yes") | {"prior_event": "no"}
    assert "meet in one term of the equation, more than 10" in why_no_shares(case_of(model_of(tree), texts))
    fewer = case_of(model_of(changed(tree, ("/model/equations/0/reference_person/asked_0", "yes"))), texts)
    # all alike: each has the same part of the one term
    assert list(amounts(fewer).values()) == [pytest.approx(1.1 / MOST_TOGETHER)] * MOST_TOGETHER
