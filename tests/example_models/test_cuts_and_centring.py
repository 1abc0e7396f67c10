"""Each cut, knot and centring value of the shipped published models, on both sides, as the papers print them."""

from pathlib import Path

import pytest

from tests.example_models import naive_twin as twin

FOLDER = Path(__file__).parents[2] / "example_models"
MODEL_2007 = twin.load(FOLDER / "diabetes-2007-clinical.json")
MODEL_2021 = twin.load(FOLDER / "cvd-2021-regional.json")
MODEL_2024 = twin.load(FOLDER / "total-cvd-2024-base.json")

Values = dict[str, twin.Value]

# Wilson et al., Arch Intern Med 2007;167:1068-1074: nobody's term is counted here
REFERENCE: Values = {
    "sex": "female",
    "age": 45,
    "bmi": 23,
    "hdl_cholesterol": 60,
    "triglycerides": 100,
    "glucose": 90,
    "systolic_bp": 120,
    "diastolic_bp": 80,
    "bp_treated": "no",
    "parent_diabetes": "no",
}


@pytest.mark.parametrize(
    ("changes", "counted"),
    [  # each input on either side of its cut: 50-64, >=65; 25-29.9, >=30; >130/85; <40 (m), <50 (f); >=150; 100-126
        ({"age": 49}, set()),
        ({"age": 50}, {"age_50_to_64"}),
        ({"age": 64}, {"age_50_to_64"}),
        ({"age": 65}, {"age_from_65"}),
        ({"bmi": 24.9}, set()),
        ({"bmi": 25}, {"bmi_25_to_30"}),
        ({"bmi": 29.9}, {"bmi_25_to_30"}),
        ({"bmi": 30}, {"bmi_from_30"}),
        ({"systolic_bp": 130, "diastolic_bp": 85}, set()),
        ({"systolic_bp": 131}, {"raised_or_treated_bp"}),
        ({"diastolic_bp": 86}, {"raised_or_treated_bp"}),
        ({"systolic_bp": 150, "diastolic_bp": 95}, {"raised_or_treated_bp"}),
        ({"bp_treated": "yes"}, {"raised_or_treated_bp"}),
        ({"bp_treated": "yes", "systolic_bp": 150, "diastolic_bp": 95}, {"raised_or_treated_bp"}),
        ({"hdl_cholesterol": 50}, set()),
        ({"hdl_cholesterol": 49}, {"low_hdl_cholesterol"}),
        ({"sex": "male", "hdl_cholesterol": 40}, {"male"}),
        ({"sex": "male", "hdl_cholesterol": 39}, {"male", "low_hdl_cholesterol"}),
        ({"triglycerides": 149}, set()),
        ({"triglycerides": 150}, {"triglycerides_from_150"}),
        ({"glucose": 99}, set()),
        ({"glucose": 100}, {"glucose_from_100"}),
        ({"glucose": 126}, {"glucose_from_100"}),
        ({"parent_diabetes": "yes"}, {"parent_diabetes"}),
    ],
)
def test_2007_cuts(changes: Values, counted: set[str]) -> None:
    (equation,) = MODEL_2007["equations"]
    row = twin.design(equation, REFERENCE | changes)
    assert row == {term["id"]: float(term["id"] in counted) for term in equation["terms"]}


def test_2007_body_mass_index_is_worked_out_from_weight_and_height() -> None:
    values: Values = {name: value for name, value in REFERENCE.items() if name != "bmi"} | {"weight": 96, "height": 175}
    assert twin.with_derived(MODEL_2007, values)["bmi"] == pytest.approx(96 / 1.75**2)


# Eur Heart J 2021;42:2439-2454, centring from memory: (age - 60)/5, (SBP - 120)/20, TC - 6, (HDL - 1.3)/0.5
CENTRE_2021: Values = {
    "sex": "male",
    "age": 60,
    "smoker": "no",
    "systolic_bp": 120,
    "total_cholesterol": 6,
    "hdl_cholesterol": 1.3,
}


@pytest.mark.parametrize("sex", ["female", "male"])
@pytest.mark.parametrize(
    ("changes", "counted"),
    [
        ({}, {}),
        ({"age": 65}, {"age": 1}),
        ({"smoker": "yes"}, {"smoker": 1}),
        ({"systolic_bp": 140}, {"systolic_bp": 1}),
        ({"total_cholesterol": 7}, {"total_cholesterol": 1}),
        ({"hdl_cholesterol": 1.8}, {"hdl_cholesterol": 1}),
        ({"age": 70, "smoker": "yes"}, {"age": 2, "smoker": 1, "age_smoker": 2}),
        ({"age": 50, "systolic_bp": 160}, {"age": -2, "systolic_bp": 2, "age_systolic_bp": -4}),
        ({"age": 50, "total_cholesterol": 5}, {"age": -2, "total_cholesterol": -1, "age_total_cholesterol": 2}),
        ({"age": 50, "hdl_cholesterol": 0.8}, {"age": -2, "hdl_cholesterol": -1, "age_hdl_cholesterol": 2}),
    ],
)
def test_2021_centring(sex: str, changes: Values, counted: dict[str, float]) -> None:
    known: Values = CENTRE_2021 | changes | {"sex": sex}
    (equation,) = twin.equations_for(MODEL_2021, known)
    expected = {term["id"]: counted.get(term["id"], 0) for term in equation["terms"]}
    assert twin.design(equation, known) == pytest.approx(expected)


# Khan et al., Circulation 2024;149:430-449: (age - 55)/10, non-HDL - 3.5, (HDL - 1.3)/0.3; systolic in two pieces
# that meet at 110, (min - 110)/20 and (max - 130)/20; eGFR in two that meet at 60, (min - 60)/-15 and (max - 90)/-15
CENTRE_2024: Values = {
    "sex": "female",
    "age": 55,
    "total_cholesterol": 4.8,
    "hdl_cholesterol": 1.3,
    "systolic_bp": 130,
    "bp_treated": "no",
    "statin": "no",
    "smoker": "no",
    "diabetes": "no",
    "egfr": 90,
}
SBP_LOW, SBP_HIGH, AGE_SBP = "systolic_bp_below_110", "systolic_bp_from_110", "age_systolic_bp_from_110"
TREATED_SBP, NON_HDL = "bp_treated_systolic_bp_from_110", "non_hdl_cholesterol"


@pytest.mark.parametrize("sex", ["female", "male"])
@pytest.mark.parametrize(
    ("changes", "counted"),
    [
        ({}, {}),
        ({"age": 65}, {"age": 1}),
        ({"total_cholesterol": 5.8}, {NON_HDL: 1}),
        ({"total_cholesterol": 5.1, "hdl_cholesterol": 1.6}, {"hdl_cholesterol": 1}),
        ({"systolic_bp": 90}, {SBP_LOW: -1, SBP_HIGH: -1}),
        ({"systolic_bp": 110}, {SBP_HIGH: -1}),
        ({"systolic_bp": 150}, {SBP_HIGH: 1}),
        ({"egfr": 120}, {"egfr_from_60": -2}),
        ({"egfr": 60}, {"egfr_from_60": 2}),
        ({"egfr": 45}, {"egfr_from_60": 2, "egfr_below_60": 1}),
        ({"bp_treated": "yes", "systolic_bp": 170}, {"bp_treated": 1, SBP_HIGH: 2, TREATED_SBP: 2}),
        ({"statin": "yes", "total_cholesterol": 3.8}, {"statin": 1, NON_HDL: -1, "statin_non_hdl_cholesterol": -1}),
        ({"age": 75, "total_cholesterol": 6.8}, {"age": 2, NON_HDL: 2, "age_non_hdl_cholesterol": 4}),
        (
            {"age": 75, "total_cholesterol": 4.5, "hdl_cholesterol": 1.0},
            {"age": 2, "hdl_cholesterol": -1, "age_hdl_cholesterol": -2},
        ),
        ({"age": 35, "systolic_bp": 150}, {"age": -2, SBP_HIGH: 1, AGE_SBP: -2}),
        ({"age": 35, "diabetes": "yes"}, {"age": -2, "diabetes": 1, "age_diabetes": -2}),
        ({"age": 35, "smoker": "yes"}, {"age": -2, "smoker": 1, "age_smoker": -2}),
        ({"age": 75, "egfr": 30}, {"age": 2, "egfr_from_60": 2, "egfr_below_60": 2, "age_egfr_below_60": 4}),
    ],
)
def test_2024_centring_and_knots(sex: str, changes: Values, counted: dict[str, float]) -> None:
    known = twin.with_derived(MODEL_2024, CENTRE_2024 | changes | {"sex": sex})
    (equation,) = twin.equations_for(MODEL_2024, known)
    expected = {term["id"]: counted.get(term["id"], 0) for term in equation["terms"]}
    assert twin.design(equation, known) == pytest.approx(expected)
