"""The matching age against a root finder's figures, the closed form of a linear age, and numeric differentiation."""

from dataclasses import replace
from math import log, sqrt

import numpy as np
import pytest

from clinicalc.assessment.case import Case
from clinicalc.assessment.matching_age import AgePlace, MatchingAge, match_age
from clinicalc.prediction.line import Draws, Line
from tests.assessment.cases import FULL, shipped
from tests.assessment.whole_case import case_of, model_of
from tests.coefficients.tiny_model import DROP, Tree, changed, tiny_logit_model, tree_of

PERSON = {"smoker": "yes", "prior_event": "no"}
LINEAR = [{"coefficient": 0.065, "product": [{"of": "age", "steps": [{"subtract": 60}]}]}]
CURVED = [
    *LINEAR,
    {"coefficient": 0.0006, "product": [{"of": "age", "steps": [{"subtract": 60}, {"power": 2}]}]},
]
LOGGED = [{"coefficient": 4.2, "product": [{"of": "age", "steps": [{"log": "natural"}]}]}]


def course(terms: list[Tree], ages: tuple[float, float], lp: float, intercept: float = 0.0) -> Case:
    """A patient of 60 whose linear predictor is `lp` by smoking, in a model with this course in age."""
    at_60 = {0.065: 0.0, 4.2: 4.2 * log(60)}.get(terms[0]["coefficient"], 0.0)
    smoker = {"coefficient": lp - intercept - at_60, "product": [{"of": "smoker"}]}
    numbered = [{"id": f"t{n}", **term} for n, term in enumerate([*terms, smoker])]
    tree = changed(
        tree_of(tiny_logit_model()),
        ("/model/predictors/0/derivation", list(ages)),
        ("/model/equations/0/terms", numbered),
        ("/model/equations/0/horizons/0/intercept", intercept),
        ("/model/equations/0/uncertainty", {"basis": "none", "because": "invented"}),
        ("/model/equations/0/reference_person", {"smoker": "no"}),
    )
    return case_of(model_of(tree), {"age": "60", **PERSON})


@pytest.mark.parametrize(
    ("terms", "intercept", "lp", "ages", "expected"),
    [
        (LINEAR, 0.0, 0.7, (30, 90), 70.76923076923077),
        (CURVED, 0.0, 1.1, (40, 85), 74.87941295492453),
        (LOGGED, -17.2, -0.9, (30, 95), 48.4703553394818),
        (LINEAR, 0.0, 3.0, (30, 90), AgePlace.ABOVE),
        (LINEAR, 0.0, -3.0, (30, 90), AgePlace.BELOW),
    ],
)
def test_ages_found_by_a_root_finder(
    terms: list[Tree], intercept: float, lp: float, ages: tuple[float, float], expected: float | AgePlace
) -> None:
    """Five courses in age, solved with Brent's method: scipy 1.17.1, numpy 2.4.6, Python 3.11."""
    found = match_age(course(terms, ages, lp, intercept))
    assert (found.lowest, found.highest, found.because) == (*ages, "")
    if isinstance(expected, AgePlace):
        assert (found.place, found.age, found.standard_error) == (expected, None, None)
    else:
        assert found.place is AgePlace.WITHIN
        assert found.age == pytest.approx(expected, abs=1e-9)


def test_a_linear_age_in_closed_form_with_its_standard_error() -> None:
    """age* = age + b_s / b_a; its variance by the delta method over V = [[0.0004, 0.001], [0.001, 0.04]].

    w = ((age - age*), 1) / b_a = (-b_s / b_a, 1) / b_a with b_a = 0.06 and b_s = 0.5, w'Vw written out.
    """
    case = case_of(model_of(tree_of(tiny_logit_model())), {"age": "52", **PERSON})
    found = match_age(case)
    assert found.age == pytest.approx(52 + 0.5 / 0.06, abs=1e-9)
    away = -0.5 / 0.06
    variance = (0.0004 * away * away + 2 * 0.001 * away + 0.04) / 0.06**2
    assert found.standard_error == pytest.approx(sqrt(variance), rel=1e-8)


def test_with_draws_the_spread_is_that_over_the_draws() -> None:
    case = case_of(model_of(tree_of(tiny_logit_model())), {"age": "52", **PERSON})
    rng = np.random.default_rng(20261201)
    rows = rng.normal([0.06, 0.5], [0.002, 0.05], size=(2000, 2))
    draws = Draws((0, 1), np.ascontiguousarray(rows.T), rng.normal(-5, 0.2, size=2000))
    drawn = match_age(with_band(case, draws))
    assert drawn.age == match_age(case).age
    # each draw's own age, solved: 52 + b_s / b_a; the delta method is its first order
    solved = 52 + rows[:, 1] / rows[:, 0]
    assert drawn.standard_error == pytest.approx(float(solved.std(ddof=1)), rel=0.02)


def with_band(case: Case, band: Draws | None) -> Case:
    return replace_line(case, replace(case.line, band=band))


def replace_line(case: Case, line: Line) -> Case:
    return replace(case, line=line)


def test_without_a_band_there_is_an_age_and_no_standard_error() -> None:
    case = case_of(model_of(tree_of(tiny_logit_model())), {"age": "52", **PERSON})
    found = match_age(with_band(case, None))
    assert found.place is AgePlace.WITHIN
    assert found.standard_error is None


def test_a_fixed_coefficient_adds_nothing_to_the_standard_error() -> None:
    tree = changed(
        tree_of(tiny_logit_model()),
        ("/model/equations/0/terms/1/fixed", True),
        ("/model/equations/0/uncertainty/covariance", [[0.0004]]),
        ("/model/equations/0/uncertainty/at_centre/0/centre", [55]),
    )
    found = match_age(case_of(model_of(tree), {"age": "52", **PERSON}))
    assert found.standard_error == pytest.approx(0.02 * 0.5 / 0.06 / 0.06, rel=1e-8)


@pytest.mark.parametrize("id", ["cvd-2021-regional", "tarnwick-cvd-10y", "general-cvd-2008-lipids"])
def test_the_reference_person_of_that_age_has_the_number_of_the_patient(id: str) -> None:
    texts = FULL[id] | {"age": "46", "systolic_bp": "139"}
    recalibrations = [None, "low", "high"] if id == "cvd-2021-regional" else [None]
    found = [match_age(case_of(shipped(id), texts, recalibration=name)) for name in recalibrations]
    assert all(age.place is AgePlace.WITHIN for age in found)
    first = found[0].age
    assert first is not None
    for age in found:
        assert age.age == pytest.approx(first, abs=1e-8)  # a recalibration cancels
    case = case_of(shipped(id), texts)
    named = case.equation.content.reference_person
    assert isinstance(named, dict)
    alike = {field: str(value) for field, value in named.items() if field in texts}
    at_age = case_of(shipped(id), texts | alike | {"age": f"{first:.10f}"})
    assert at_age.predict_with({}).eta[0] == pytest.approx(case.predict_with({}).eta[0], abs=1e-8)


def test_the_standard_error_of_a_curved_age_agrees_with_moving_the_coefficients() -> None:
    """Tarnwick has a spline of age and products with it: each coefficient is nudged and the age solved anew."""
    case = case_of(shipped("tarnwick-cvd-10y"), FULL["tarnwick-cvd-10y"] | {"age": "50"})
    found = match_age(case)
    band = case.line.band
    assert found.age is not None
    assert band is not None
    assert not isinstance(band, Draws)
    slopes = []
    for term in band.estimated:
        ages = []
        for nudge in (1e-4, -1e-4):
            moved = list(case.line.coefficients)
            moved[term] += nudge
            age = match_age(replace_line(case, replace(case.line, coefficients=tuple(moved)))).age
            assert age is not None
            ages.append(age)
        slopes.append((ages[0] - ages[1]) / 2e-4)
    covariance = band.root @ band.root.T
    assert found.standard_error == pytest.approx(sqrt(np.array(slopes) @ covariance @ np.array(slopes)), rel=1e-5)


def test_one_like_the_reference_person_has_their_own_age() -> None:
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/reference_person", {"smoker": "no"}))
    for age in ("30", "52", "75"):
        found = match_age(case_of(model_of(tree), {"age": age, "smoker": "no", "prior_event": "no"}))
        assert found.place is AgePlace.WITHIN
        assert found.age == pytest.approx(float(age), abs=1e-9)
        assert found.standard_error == pytest.approx(0, abs=1e-9)


def test_the_age_that_the_file_gives_the_reference_person_has_no_say() -> None:
    tree = tree_of(tiny_logit_model())
    assert tree["model"]["equations"][0]["reference_person"]["age"] == 50
    without = changed(tree, ("/model/equations/0/reference_person/age", DROP))
    texts = {"age": "52", **PERSON}
    assert match_age(case_of(model_of(tree), texts)) == match_age(case_of(model_of(without), texts))


def test_a_derived_value_follows_the_age_that_is_tried_unless_the_file_fixes_it() -> None:
    """eGFR falls with age: fixed at 90 in the file, and taken from the patient's creatinine where it is not."""
    id = "total-cvd-2024-base"
    texts = FULL[id] | {"creatinine": "1.0 mg/dL", "diabetes": "no"}
    del texts["egfr"]
    fixed = match_age(case_of(shipped(id), texts))
    assert fixed.age is not None
    case = case_of(shipped(id), texts)
    columns = {"age": np.array([fixed.age]), "egfr": np.array([90.0])}
    named = {"bp_treated": 0.0, "hdl_cholesterol": 1.3, "statin": 0.0, "systolic_bp": 130.0, "total_cholesterol": 4.8}
    columns |= {field: np.array([value]) for field, value in named.items()}
    assert case.predict_with(columns).eta[0] == pytest.approx(case.predict_with({}).eta[0], abs=1e-9)


AGE = {"of": "age"}


@pytest.mark.parametrize(
    ("terms", "because"),
    [
        ([{"coefficient": -0.05, "product": [AGE]}], "falls with Age"),
        (
            [{"coefficient": 0.001, "product": [{"of": "age", "steps": [{"subtract": 50}, {"power": 2}]}]}],
            "rises and falls with Age",
        ),
        ([{"coefficient": 0.5, "product": [{"of": "age", "steps": [{"from": 50}]}]}], "counts Age in steps"),
        ([{"coefficient": 0.05, "product": [{"of": "age", "steps": [{"clip_high": 60}]}]}], "not everywhere"),
        ([{"coefficient": 0.0, "product": [AGE]}], "is the same at every value of Age"),
    ],
)
def test_a_course_in_age_that_gives_no_one_age_is_refused_with_words(terms: list[Tree], because: str) -> None:
    found = match_age(course(terms, (30, 75), 0.1))
    assert_none(found, because)
    assert (found.lowest, found.highest) == (30, 75)


def test_a_number_that_is_jumped_over_matches_no_age() -> None:
    """A step of 1 at 65 years on a line of 0.05 a year, and a patient in the middle of the step."""
    jump = {"coefficient": 1.0, "product": [{"of": "age", "steps": [{"from": 65}]}]}
    terms = [{"coefficient": 0.05, "product": [{"of": "age", "steps": [{"subtract": 60}]}]}, jump]
    assert_none(match_age(course(terms, (30, 75), 0.75)), "jumps at Age 65.0 years")
    assert match_age(course(terms, (30, 75), 0.2)).age == pytest.approx(64)
    assert match_age(course(terms, (30, 75), 1.3)).age == pytest.approx(66)


def test_without_age_or_reference_person_it_says_so() -> None:
    tree = changed(
        tree_of(tiny_logit_model()),
        ("/model/equations/0/terms/0", DROP),
        ("/model/equations/0/uncertainty", {"basis": "none", "because": "invented"}),
    )
    assert_none(match_age(case_of(model_of(tree), {"age": "52", **PERSON})), "does not depend on age")
    tree = changed(tree_of(tiny_logit_model()), ("/model/equations/0/reference_person", DROP))
    assert_none(match_age(case_of(model_of(tree), {"age": "52", **PERSON})), "names no reference person")
    case = case_of(model_of(tree_of(tiny_logit_model())), {"age": "52", **PERSON})
    open_case = replace(case, answers={}, columns={"age": case.columns["age"]})
    assert_none(match_age(open_case), "Smokes now was not measured")


def assert_none(found: MatchingAge, because: str) -> None:
    assert (found.place, found.age, found.standard_error) == (None, None, None)
    assert because in found.because
