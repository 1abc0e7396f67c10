"""The shipped published models against the figures their papers print, by an evaluator apart from the program.

"printed" was read in the source, "from memory" was not, "computed" is arithmetic on the same coefficients and proves
no copying of figures. A tolerance is half the last printed digit unless a comment says otherwise.
"""

import math
from pathlib import Path
from typing import Any

import pytest

from tests.example_models import naive_twin as twin

FOLDER = Path(__file__).parents[2] / "example_models"
FILES = (
    "general-cvd-2008-lipids",
    "ascvd-2013-pooled-cohort",
    "cvd-2021-regional",
    "total-cvd-2024-base",
    "diabetes-2007-clinical",
)
GENERAL, POOLED, REGIONAL, TOTAL, DIABETES = (twin.load(FOLDER / f"{name}.json") for name in FILES)

Values = dict[str, twin.Value]


def percent(model: twin.Node, values: Values, years: float = 10, recalibration: str | None = None) -> float:
    return 100.0 * twin.probability(model, values, years, recalibration)


# ---------------------------------------------------------------- 2008: D'Agostino et al., Circulation 2008;117:743-753

WOMAN_61: Values = {
    "sex": "female",
    "age": 61,
    "total_cholesterol": 180,
    "hdl_cholesterol": 47,
    "systolic_bp": 124,
    "bp_treated": "no",
    "smoker": "yes",
    "diabetes": "no",
}
MAN_53: Values = {
    "sex": "male",
    "age": 53,
    "total_cholesterol": 161,
    "hdl_cholesterol": 55,
    "systolic_bp": 125,
    "bp_treated": "yes",
    "smoker": "no",
    "diabetes": "yes",
}


def test_2008_cases_in_the_text() -> None:
    # 10.5 % and 15.6 %: the two cases in the text, from memory; 10.48418 and 15.62265 computed at full precision
    assert percent(GENERAL, WOMAN_61) == pytest.approx(10.48418, abs=5e-6)
    assert percent(GENERAL, MAN_53) == pytest.approx(15.62265, abs=5e-6)
    assert round(percent(GENERAL, WOMAN_61), 1) == 10.5
    assert round(percent(GENERAL, MAN_53), 1) == 15.6


def test_2008_woman_in_mmol_per_litre() -> None:
    # computed: 4.655 and 1.215 mmol/L divided by 0.02586 are 180.008 and 46.984 mg/dL
    values: Values = WOMAN_61 | {"total_cholesterol": 4.655 / 0.02586, "hdl_cholesterol": 1.215 / 0.02586}
    assert percent(GENERAL, values) == pytest.approx(10.49, abs=0.005)


# Table 2, printed hazard ratios (read in a reprint). In men HDL cholesterol (0.40) and diabetes (1.78) differ from
# exp(coefficient) by one in the last digit; the woman's ratio for diabetes, 2.00, is from memory.
HAZARD_RATIOS = {
    ("men", "ln_age"): 21.35,
    ("men", "ln_total_cholesterol"): 3.08,
    ("men", "ln_hdl_cholesterol"): 0.40,
    ("men", "ln_systolic_bp_untreated"): 6.91,
    ("men", "ln_systolic_bp_treated"): 7.38,
    ("men", "smoker"): 1.92,
    ("men", "diabetes"): 1.78,
    ("women", "ln_age"): 10.27,
    ("women", "ln_total_cholesterol"): 3.35,
    ("women", "ln_hdl_cholesterol"): 0.49,
    ("women", "ln_systolic_bp_untreated"): 15.82,
    ("women", "ln_systolic_bp_treated"): 16.82,
    ("women", "smoker"): 1.70,
    ("women", "diabetes"): 2.00,
}
LAST_DIGIT_OFF_2008 = {("men", "ln_hdl_cholesterol"), ("men", "diabetes")}


def term_of(model: twin.Node, equation: str, term: str) -> Any:
    (found,) = [
        one for each in model["equations"] if each["id"] == equation for one in each["terms"] if one["id"] == term
    ]
    return found


@pytest.mark.parametrize(("where", "printed"), HAZARD_RATIOS.items(), ids=lambda key: str(key))
def test_2008_hazard_ratios(where: tuple[str, str], printed: float) -> None:
    ratio = math.exp(term_of(GENERAL, *where)["coefficient"])
    assert (round(ratio, 2) == printed) is (where not in LAST_DIGIT_OFF_2008)
    assert ratio == pytest.approx(printed, abs=0.0101)


def test_2008_hazard_ratios_name_every_term() -> None:
    assert set(HAZARD_RATIOS) == {(e["id"], t["id"]) for e in GENERAL["equations"] for t in e["terms"]}


# ---------------------------------------------------------------- 2013: Goff et al., Appendix 7, Table A

AT_55: Values = {
    "age": 55,
    "total_cholesterol": 213,
    "hdl_cholesterol": 50,
    "systolic_bp": 120,
    "bp_treated": "no",
    "smoker": "no",
    "diabetes": "no",
}


@pytest.mark.parametrize(
    ("sex", "group", "printed", "computed", "individual_sum"),
    [
        ("female", "white", 2.1, 2.05223, -29.67667),  # 2.1 from memory
        ("female", "african_american", 3.0, 3.026329, 86.1677),  # 3.0 from memory
        ("male", "white", 5.3, 5.384422, 60.69955),  # 5.3 printed in the footnote of Table A, from a sum of 60.69
        ("male", "african_american", 6.1, 6.073437, 18.9728),  # 6.1 from memory
        # no equation of their own; the equations for white people, from memory
        ("female", "other", 2.1, 2.05223, -29.67667),
        ("male", "other", 5.3, 5.384422, 60.69955),
    ],
)
def test_2013_worked_example(sex: str, group: str, printed: float, computed: float, individual_sum: float) -> None:
    values: Values = AT_55 | {"sex": sex, "ethnic_group": group}
    assert percent(POOLED, values) == pytest.approx(computed, abs=5e-6)
    # the printed sums (from memory: -29.67, 86.16, 60.69, 18.97) are these cut, not rounded, to two decimals
    assert twin.linear_sum(POOLED, values) == pytest.approx(individual_sum, abs=5e-5)
    # one man's figure is printed 0.1 lower than full precision gives
    assert abs(percent(POOLED, values) - printed) < (0.09 if sex == "male" and group != "african_american" else 0.05)


def test_2013_man_from_the_rounded_sum_is_as_printed() -> None:
    # the table's own 60.69 (from memory) with the file's baseline: 5.334655 computed, 5.3 printed
    (men,) = [one for one in POOLED["equations"] if one["id"] == "white_men"]
    (horizon,) = men["horizons"]
    risk = 1 - horizon["baseline_survival"] ** math.exp(60.69 - horizon["mean_linear_predictor"])
    assert 100 * risk == pytest.approx(5.334655, abs=5e-6)


@pytest.mark.parametrize(
    ("equation", "term", "reprint", "sex", "comes_out"),
    [
        ("white_women", "ln_systolic_bp_untreated", 1.857, "female", 1.3),
        ("white_men", "ln_age_ln_hdl_cholesterol", 1.767, "male", 5.2),
    ],
)
def test_2013_cells_of_the_reprint_fail(equation: str, term: str, reprint: float, sex: str, comes_out: float) -> None:
    # J Am Heart Assoc 2015;4:e001758, Table 1, prints these two cells otherwise: 1.3 and 5.2 %, not 2.1 and 5.3 %
    values: Values = AT_55 | {"sex": sex, "ethnic_group": "white"}
    (used,) = [one for one in POOLED["equations"] if one["id"] == equation]
    (horizon,) = used["horizons"]
    row = twin.design(used, twin.with_derived(POOLED, values))
    moved = (reprint - term_of(POOLED, equation, term)["coefficient"]) * row[term]
    lp = twin.linear_sum(POOLED, values) + moved - horizon["mean_linear_predictor"]
    # 5.2 is stated beside the printed 5.3, that is from the sum cut to two decimals; full precision gives 5.34
    lp -= 0.00955 if sex == "male" else 0.0
    assert 100 * (1 - horizon["baseline_survival"] ** math.exp(lp)) == pytest.approx(comes_out, abs=0.1)


# ---------------------------------------------------------------- 2021: Eur Heart J 2021;42:2439-2454

SMOKER_50: Values = {
    "age": 50,
    "smoker": "yes",
    "systolic_bp": 140,
    "total_cholesterol": 5.5,
    "hdl_cholesterol": 1.3,
}


@pytest.mark.parametrize(
    ("sex", "region", "computed", "printed"),
    [
        ("male", "low", 5.913255, 5.9),  # abstract
        ("male", "very-high", 14.04863, 14.0),  # abstract
        ("female", "low", 4.215489, 4.2),  # abstract
        ("female", "very-high", 13.70048, 13.7),  # abstract
        # computed only; no printed value was found
        ("male", "moderate", 7.56, None),
        ("female", "moderate", 5.07, None),
        ("male", "high", 8.12, None),
        ("female", "high", 6.88, None),
    ],
)
def test_2021_smoker_of_50(sex: str, region: str, computed: float, printed: float | None) -> None:
    risk = percent(REGIONAL, SMOKER_50 | {"sex": sex}, recalibration=region)
    assert risk == pytest.approx(computed, abs=0.005 if printed is None else 5e-6)
    if printed is not None:
        assert round(risk, 1) == printed


# ---------------------------------------------------------------- 2024: Khan et al., Circulation 2024;149:430-449

DIABETIC_50: Values = {
    "age": 50,
    "total_cholesterol": 200 * 0.02586,
    "hdl_cholesterol": 45 * 0.02586,
    "systolic_bp": 160,
    "bp_treated": "yes",
    "statin": "no",
    "diabetes": "yes",
    "smoker": "no",
    "egfr": 90,
}


def test_2024_worked_example_of_the_supplement() -> None:
    # 14.7 % for the woman from memory, 14.68394 computed; the man is computed only
    assert percent(TOTAL, DIABETIC_50 | {"sex": "female"}) == pytest.approx(14.68394, abs=5e-6)
    assert percent(TOTAL, DIABETIC_50 | {"sex": "male"}) == pytest.approx(16.3, abs=0.05)


@pytest.mark.parametrize(
    ("sex", "age", "creatinine", "egfr"),
    [  # computed from the equation of N Engl J Med 2021;385:1737; no authoritative printed check values exist
        ("female", 30, 0.6, 123.8),
        ("female", 50, 1.0, 68.6),
        ("female", 55, 0.7, 102.1),
        ("male", 50, 1.0, 91.7),
        ("male", 40, 0.8, 114.7),
        ("male", 60, 2.0, 37.5),
    ],
)
def test_2024_takes_creatinine_in_place_of_egfr(sex: str, age: int, creatinine: float, egfr: float) -> None:
    values: Values = {name: value for name, value in DIABETIC_50.items() if name != "egfr"}
    values |= {"sex": sex, "age": age, "creatinine": creatinine}
    worked_out = twin.with_derived(TOTAL, values)["egfr"]
    assert worked_out == pytest.approx(egfr, abs=0.05)
    assert percent(TOTAL, values) == percent(TOTAL, values | {"egfr": worked_out})


# ---------------------------------------------------------------- 2007: Wilson et al., Arch Intern Med 2007;167:1068

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


def test_2007_computed_patients() -> None:
    # computed from the printed coefficients: all in the reference class 0.40 %; four terms counted 11.2 %
    assert percent(DIABETES, REFERENCE, 8) == pytest.approx(0.40, abs=0.005)
    woman: Values = REFERENCE | {"age": 55, "bmi": 32, "glucose": 110, "parent_diabetes": "yes"}
    assert percent(DIABETES, woman, 8) == pytest.approx(11.2, abs=0.05)


# Printed odds ratios (read in a reprint); body mass index from 30 and glucose differ from exp(coefficient) by 0.01.
ODDS_RATIOS = {
    "age_50_to_64": 0.98,
    "age_from_65": 0.92,
    "male": 0.99,
    "parent_diabetes": 1.76,
    "bmi_25_to_30": 1.35,
    "bmi_from_30": 2.50,
    "raised_or_treated_bp": 1.65,
    "low_hdl_cholesterol": 2.57,
    "triglycerides_from_150": 1.78,
    "glucose_from_100": 7.25,
}
LAST_DIGIT_OFF_2007 = {"bmi_from_30", "glucose_from_100"}


@pytest.mark.parametrize(("term", "printed"), ODDS_RATIOS.items())
def test_2007_odds_ratios(term: str, printed: float) -> None:
    ratio = math.exp(term_of(DIABETES, "all", term)["coefficient"])
    assert (round(ratio, 2) == printed) is (term not in LAST_DIGIT_OFF_2007)
    assert ratio == pytest.approx(printed, abs=0.0101)
