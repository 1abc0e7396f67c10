"""Re-measurement spread: delta method on the link scale, against arithmetic by hand and simulated readings."""

import json
import math
from dataclasses import replace
from statistics import NormalDist

import msgspec
import numpy as np
import pytest
from msgspec import structs

from clinicalc.assessment.assess import assess
from clinicalc.assessment.case import Case
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model, prepare_model
from clinicalc.assessment.spread import remeasured_sd, spread_of
from clinicalc.coefficients.schema import ModelContent, NumberPredictor, WithinPerson
from clinicalc.prediction.line import Adjustment
from clinicalc.prediction.predict import predict
from clinicalc.units.averaged import Averaged
from tests.assessment.cases import FULL, NOW, WOMAN_55_AT_RISK, WOMAN_61, WOMAN_EGFR_90, shipped
from tests.assessment.one_equation import SBP, SCORE, file_with, g, plain_case, spread, x
from tests.assessment.whole_case import case_of
from tests.coefficients.tiny_model import Tree, read_of

Z = NormalDist().inv_cdf(0.975)


def varying(model: Model, within: dict[str, WithinPerson]) -> Model:
    """The model with other within-person variations; values not named have none."""
    predictors = tuple(
        structs.replace(p, within_person=within.get(p.id, msgspec.UNSET)) if isinstance(p, NumberPredictor) else p
        for p in model.content.predictors
    )
    return prepare_model(read_of(structs.replace(model.content, predictors=predictors)))


WITHIN_61 = {
    "total_cholesterol": WithinPerson("meta-analysis of 30 studies", cv=0.061),
    "hdl_cholesterol": WithinPerson("meta-analysis of 30 studies", cv=0.074),
    "systolic_bp": WithinPerson("Keenan et al. BMJ 2009;338:b1492", sd=9.7),
}
LIPIDS = varying(shipped("general-cvd-2008-lipids"), WITHIN_61)


def test_the_printed_woman_of_61() -> None:
    """General CVD 2008, women: ln of the values times 1.20904, -0.70833 and 2.76157 (D'Agostino 2008, table 2).

    So the link SD is the root of (1.20904 x 0.061)^2 + (0.70833 x 0.074)^2 + (2.76157 x 9.7 / 124)^2, by hand 0.2342.
    """
    found = spread(case_of(LIPIDS, WOMAN_61))
    by_hand = (1.20904 * 0.061, 0.70833 * 0.074, 2.76157 * 9.7 / 124)
    assert {part.field: part.link_sd for part in found.parts} == pytest.approx(
        dict(zip(WITHIN_61, by_hand, strict=True)), rel=1e-8
    )
    assert found.link_sd == pytest.approx(math.hypot(*by_hand), rel=1e-8)
    assert round(found.link_sd, 3) == 0.234
    assert (round(100 * found.lower, 1), round(100 * found.upper, 1)) == (6.8, 16.1)
    assert found.level == 0.95
    assert [(part.field, part.sd) for part in found.parts] == [
        ("total_cholesterol", pytest.approx(180 * 0.061)),
        ("hdl_cholesterol", pytest.approx(47 * 0.074)),
        ("systolic_bp", 9.7),
    ]


def test_the_unit_typed_changes_nothing() -> None:
    """4.6548 mmol/L is 180 mg/dL by the file's factor of 0.02586; the SD stays that of the file's unit."""
    found = spread(case_of(LIPIDS, WOMAN_61 | {"total_cholesterol": "4.6548 mmol/L"}))
    known = spread(case_of(LIPIDS, WOMAN_61))
    assert (found.lower, found.upper) == pytest.approx((known.lower, known.upper), rel=1e-12)
    assert found.parts[0].sd == pytest.approx(180 * 0.061, rel=1e-12)


def test_averaged_readings_divide() -> None:
    """Two visits halve the variance of the pressure; three readings of one visit do not without a figure for it."""
    whole = spread(case_of(LIPIDS, WOMAN_61))
    visits = spread(case_of(LIPIDS, WOMAN_61 | {"systolic_bp": "124 mmHg of 2 visits"}))
    assert visits.parts[2].sd == pytest.approx(9.7 / math.sqrt(2), rel=1e-14)
    assert visits.parts[2].link_sd == pytest.approx(whole.parts[2].link_sd / math.sqrt(2), rel=1e-8)
    assert visits.parts[:2] == whole.parts[:2]
    assert visits.upper < whole.upper
    readings = spread(case_of(LIPIDS, WOMAN_61 | {"systolic_bp": "124 mmHg of 3 readings on 2026-10-02"}))
    assert readings == whole
    part = varying(LIPIDS, WITHIN_61 | {"systolic_bp": WithinPerson("invented", sd=9.7, within_visit_sd=4.0)})
    both = spread(case_of(part, WOMAN_61 | {"systolic_bp": "124 mmHg of 2 visits of 3 readings"}))
    assert both.parts[2].sd == pytest.approx(math.sqrt((9.7**2 - 16) / 2 + 16 / 6), rel=1e-14)


@pytest.mark.parametrize(
    ("within", "value", "averaged", "sd"),
    [
        (WithinPerson("s", sd=9.0), 120.0, None, 9.0),
        (WithinPerson("s", sd=9.0), 120.0, Averaged(9, 5), 3.0),
        (WithinPerson("s", sd=5.0, within_visit_sd=3.0), 120.0, None, 5.0),
        (WithinPerson("s", sd=5.0, within_visit_sd=3.0), 120.0, Averaged(1, 9), math.sqrt(17)),  # 16 + 9 / 9
        (WithinPerson("s", sd=5.0, within_visit_sd=3.0), 120.0, Averaged(4, 9), math.sqrt(4.25)),  # 16 / 4 + 9 / 36
        (WithinPerson("s", cv=0.05, within_visit_cv=0.03), 200.0, Averaged(4, 9), 2 * math.sqrt(4.25)),
        (WithinPerson("s", cv=0.1), -3.0, None, 0.3),
    ],
)
def test_the_sd_of_a_mean(within: WithinPerson, value: float, averaged: Averaged | None, sd: float) -> None:
    assert remeasured_sd(within, value, averaged) == pytest.approx(sd, rel=1e-14)


def test_without_a_stated_variation_there_is_no_spread() -> None:
    assert spread_of(case_of(varying(LIPIDS, {}), WOMAN_61)) is None
    assert spread_of(case_of(varying(LIPIDS, {"age": WithinPerson("s", sd=1.0)}), WOMAN_61)) is not None


def test_a_value_that_this_equation_leaves_out_takes_no_part() -> None:
    weight = SCORE | {"id": "y", "within_person": {"sd": 3.0, "source": "invented"}}
    assert spread_of(plain_case([SCORE, weight], [(0.1, [x()])], x="5", y="7")) is None


def test_products_and_values_worked_out_carry_the_variation_on() -> None:
    """The 2024 form takes non-HDL cholesterol in mmol/L, alone, by age and by statin: worked out, both parts vary.

    The derivatives of the linear predictor by hand, from the coefficients in the file: age 50, no statin, with
    (age - 55) / 10 = -0.5, HDL in steps of 0.3 mmol/L.
    """
    model = shipped("total-cvd-2024-base")
    within = {"total_cholesterol": WithinPerson("s", sd=0.3), "hdl_cholesterol": WithinPerson("s", sd=0.1)}
    case = case_of(varying(model, within), WOMAN_EGFR_90)
    b = {term.id: term.coefficient for term in case.equation.terms}
    by_total = b["non_hdl_cholesterol"] - 0.5 * b["age_non_hdl_cholesterol"]
    by_hdl = -by_total + (b["hdl_cholesterol"] - 0.5 * b["age_hdl_cholesterol"]) / 0.3
    total, hdl = spread(case).parts
    assert (total.link_sd, hdl.link_sd) == pytest.approx((abs(by_total) * 0.3, abs(by_hdl) * 0.1), rel=1e-8)


DIFFERENCE: Tree = {
    "id": "d",
    "label": "Difference",
    "quantity": "number",
    "unit": "1",
    "possible": [-3, 40],
    "equation": "difference",
    "inputs": {"minuend": "x", "subtrahend": "y"},
    "may_be_typed": True,
}


def _difference_case(**typed: str) -> Case:
    parts = [SCORE | {"id": id, "label": id, "within_person": {"sd": 2.0, "source": "invented"}} for id in "xy"]
    data = file_with(parts, [(0.5, [{"of": "d"}])], -1.0, derived=(DIFFERENCE,))
    content = msgspec.convert(json.loads(data)["model"], ModelContent)
    return case_of(prepare_model(read_of(content)), typed)


def test_a_typed_value_that_could_be_worked_out_has_no_variation() -> None:
    worked_out = spread(_difference_case(x="30", y="25"))
    assert [part.link_sd for part in worked_out.parts] == pytest.approx([1.0, 1.0], rel=1e-8)
    assert spread_of(_difference_case(x="30", y="25", d="5")) is None


@pytest.mark.parametrize(("x", "y"), [("22", "25"), ("65", "25")])
def test_a_worked_out_value_at_its_limit_is_moved_inwards_only(x: str, y: str) -> None:
    """-3 and 40 are the limits of the difference: half of a two-sided step would be lost there."""
    assert [part.link_sd for part in spread(_difference_case(x=x, y=y)).parts] == pytest.approx([1.0, 1.0], rel=1e-8)


@pytest.mark.parametrize("typed", ["60", "300"])
def test_at_a_limit_of_the_model_the_difference_is_one_sided(typed: str) -> None:
    """ln x at its lower and upper limit: s / x."""
    pressure = SBP | {"possible": [60, 300], "within_person": {"sd": 6.0, "source": "invented"}}
    case = plain_case([pressure], [(1.0, [x({"log": "natural"})])], x=typed)
    assert spread(case).link_sd == pytest.approx(6.0 / float(typed), rel=1e-5)


@pytest.mark.parametrize(
    ("typed", "link_sd"),
    [
        ("140", 0.45),  # on the cut: half the jump, which is the SD of what falls on either side as often
        ("135", 0.45),  # within one SD of it
        ("149", 0.45),
        ("125", 0.0),
        ("160", 0.0),
    ],
)
def test_a_jump_counts_within_one_sd_of_its_cut(typed: str, link_sd: float) -> None:
    pressure = SBP | {"within_person": {"sd": 9.7, "source": "invented"}}
    found = spread(plain_case([pressure], [(0.9, [x({"from": 140})])], x=typed))
    assert found.link_sd == pytest.approx(link_sd, abs=1e-12)


@pytest.mark.parametrize(("typed", "up"), [("135", 0.9), ("149", 0.0)])
def test_the_number_across_a_cut_lies_in_the_spread(typed: str, up: float) -> None:
    """It is met in 30 and in 18 of 100 such measurements, and 1.96 halves of a jump fall just short of it."""
    pressure = SBP | {"within_person": {"sd": 9.7, "source": "invented"}}
    found = spread(plain_case([pressure], [(0.9, [x({"from": 140})])], lp0=-2.0, x=typed))
    low, high = (1 / (1 + math.exp(-eta)) for eta in (-2.0, -1.1))
    assert (found.upper == pytest.approx(high, rel=1e-12)) is (up > 0)
    assert (found.lower == pytest.approx(low, rel=1e-12)) is (up == 0)
    assert found.lower <= low * (1 + 1e-12)
    assert found.upper >= high * (1 - 1e-12)


def test_a_jump_that_does_not_count_for_this_patient_changes_nothing() -> None:
    pressure = SBP | {"within_person": {"sd": 9.7, "source": "invented"}}
    terms = [(0.9, [x({"from": 140}), {"of": "y"}]), (0.02, [x()])]
    assert spread(plain_case([pressure, SCORE | {"id": "y"}], terms, x="140", y="0")).link_sd == pytest.approx(0.194)
    assert spread(plain_case([pressure, SCORE | {"id": "y"}], terms, x="140", y="1")).link_sd == pytest.approx(0.644)


def test_a_model_of_nothing_but_cuts_may_have_no_spread_at_all() -> None:
    """Every value of the printed woman of the 2007 form lies more than one SD away from the cuts that count."""
    found = spread(case_of(shipped("diabetes-2007-clinical"), WOMAN_55_AT_RISK))
    assert found.link_sd == 0.0
    assert found.lower == found.upper


def test_a_recalibration_stretches_the_spread() -> None:
    case = case_of(LIPIDS, WOMAN_61)
    moved = replace(case, adjustment=Adjustment(0.3, 0.8, None))
    assert spread(moved).link_sd == pytest.approx(0.8 * spread(case).link_sd, rel=1e-8)
    middle = float(moved.predict_with({}).eta[0])
    assert spread(moved).upper == pytest.approx(g("cloglog", middle + Z * spread(moved).link_sd), rel=1e-12)


def test_where_the_line_has_no_finite_value_there_is_no_spread() -> None:
    case = plain_case([SCORE | {"within_person": {"sd": 3.0, "source": "s"}}], [(1.0, [x({"log": "natural"})])], x="-4")
    assert spread_of(case) is None


@pytest.mark.parametrize("id", sorted(FULL))
def test_the_spread_is_what_simulated_readings_do(id: str) -> None:
    """A full entry of every shipped file, 20 000 invented re-measurements: the SD of eta, within what a line misses."""
    case = case_of(shipped(id), FULL[id])
    found = spread_of(case)
    if found is None or found.link_sd == 0.0:
        return
    generator = np.random.default_rng(61)
    moved = {p.field: case.numbers[p.field].value + p.sd * generator.standard_normal(20_000) for p in found.parts}
    simulated = float(np.std(predict(case.line, case.design_with(moved), adjustment=case.adjustment, band=False).eta))
    assert found.link_sd == pytest.approx(simulated, rel=0.05)


def test_every_end_is_a_probability_in_order() -> None:
    for id, texts in FULL.items():
        found = spread(case_of(shipped(id), texts))
        assert 0 < found.lower <= found.upper < 1


OPEN = ("total_cholesterol", "hdl_cholesterol", "smoker")


@pytest.mark.parametrize("id", OPEN)
def test_with_a_value_not_measured_the_average_moves(id: str) -> None:
    """The slope along the pressure is that of the whole assessment, typed anew 1 mmHg lower and higher."""
    model = shipped("general-cvd-2008-lipids")
    full = case_of(model, WOMAN_61)
    case = replace(
        full,
        numbers={name: number for name, number in full.numbers.items() if name != id},
        answers={name: answer for name, answer in full.answers.items() if name != id},
        columns={name: column for name, column in full.columns.items() if name != id},
    )
    assert spread_of(case) is None  # without a word about the open value nothing can be said
    found = spread_of(case, (model.by_id[id],))
    assert found is not None
    assert id not in [part.field for part in found.parts]

    def eta(pressure: str) -> float:
        texts = WOMAN_61 | {id: "unknown", "systolic_bp": pressure}
        estimate = assess(model, entry_from_texts(texts), at=NOW).estimate
        assert estimate is not None
        return estimate.eta

    part = next(part for part in found.parts if part.field == "systolic_bp")
    assert part.link_sd == pytest.approx(abs(eta("125") - eta("123")) / 2 * 9.7, rel=2e-4)
    middle = eta("124")
    assert (found.lower, found.upper) == pytest.approx(
        (g("cloglog", middle - Z * found.link_sd), g("cloglog", middle + Z * found.link_sd)), rel=1e-9
    )
