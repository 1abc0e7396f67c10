"""Quantities, derived values, examples and populations, broken on purpose: the place and words of the refusal."""

import pytest

from tests.coefficients.spoiling import BAND, BMI, CLOGLOG, E0, LOGIT, NONE, W0, Change, only_said, said
from tests.coefficients.tiny_model import DROP, Tree, changed, refusals

NUMBER: Tree = {"id": "score", "label": "Score", "kind": "number", "quantity": "number", "unit": "1", "group": "Tests"}
LOGGED: Tree = {
    "id": "ln",
    "coefficient": 1,
    "product": [{"of": "score", "steps": [{"log": "natural"}]}],
    "fixed": True,
}
WEIGHT: Tree = {
    "id": "weight",
    "label": "Weight",
    "kind": "number",
    "quantity": "weight",
    "unit": "kg",
    "group": "Person",
}
HEIGHT: Tree = {
    "id": "height",
    "label": "Height",
    "kind": "number",
    "quantity": "height",
    "unit": "m",
    "group": "Person",
}
EGFR: Tree = {
    "id": "egfr",
    "label": "eGFR",
    "quantity": "egfr_indexed",
    "unit": "mL/min/{1.73_m2}",
    "equation": "ckd_epi_2021",
    "inputs": {"creatinine": "age", "age": "age", "sex": "smoker"},
}
POPULATION: Tree = {
    "source": "invented",
    "numbers": [
        {"id": "age", "mean": 55, "sd": 9},
        {"id": "total_cholesterol", "mean": 1.6, "sd": 0.2, "log": "natural"},
    ],
    "correlations": [[1, 0.1], [0.1, 1]],
    "yes_no": [{"id": "bp_treated", "intercept": -3, "coefficients": {"age": 0.04}}],
    "choices": [{"id": "sex", "shares": {"female": 0.5, "male": 0.5}}],
}


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        (
            "/model/predictors/3/quantity",
            "Did you mean total_cholesterol",
            ("/model/predictors/3/quantity", "total_cholesterl"),
        ),
        ("/model/predictors/3/unit", "Did you mean mmol/L", ("/model/predictors/3/unit", "mmol/l")),
        ("/model/predictors/3/unit", "Use mg/dL or mmol/L", ("/model/predictors/3/unit", "kg")),
        (
            "/model/predictors/3/factor",
            "more than 0.5\u202f% away from 0.02586",
            ("/model/predictors/3/factor", 0.0257),
        ),
        ("/model/predictors/3/factor", "the other way round", ("/model/predictors/3/factor", 38.67)),
        ("/model/predictors/0/factor", "Leave the factor out", ("/model/predictors/0/factor", 1)),
        ("/model/predictors/3/loinc/0", "is no LOINC code", ("/model/predictors/3/loinc/0", "2093-4")),
        ("/model/predictors/3/loinc/0", "is no LOINC code", ("/model/predictors/3/loinc/0", "cholesterol")),
        ("/model/predictors/3/within_person", 'exactly one of "cv"', ("/model/predictors/3/within_person/sd", 0.2)),
        ("/model/predictors/3/within_person", 'exactly one of "cv"', ("/model/predictors/3/within_person/cv", DROP)),
        (
            "/model/predictors/3/within_person/cv",
            "It is a fraction, so this says 400\u202f%. Did you mean 0.04?",
            ("/model/predictors/3/within_person/cv", 4),
        ),
        ("/model/predictors/3/within_person/cv", "must be less than 1", ("/model/predictors/3/within_person/cv", 1)),
        (
            "/model/predictors/3/within_person/sd",
            "must be more than 0. Take the minus sign away",
            ("/model/predictors/3/within_person", {"source": "s", "sd": -9.7}),
        ),
        (
            "/model/predictors/3/within_person/within_visit_cv",
            '0.06 must be less than 0.06, the whole "cv" that it is a part of. Were the two exchanged?',
            ("/model/predictors/3/within_person/within_visit_cv", 0.06),
        ),
        (
            "/model/predictors/3/within_person/within_visit_sd",
            'the whole is given as "cv", so its part must be "within_visit_cv"',
            ("/model/predictors/3/within_person/within_visit_sd", 0.1),
        ),
        (
            "/model/predictors/3/within_person/within_visit_cv",
            'the whole is given as "sd", so its part must be "within_visit_sd"',
            ("/model/predictors/3/within_person", {"source": "s", "sd": 0.3, "within_visit_cv": 0.01}),
        ),
        (
            "/model/predictors/3/within_person",
            "at most one of",
            (
                "/model/predictors/3/within_person",
                {"source": "s", "cv": 0.1, "within_visit_cv": 0.01, "within_visit_sd": 0.01},
            ),
        ),
        ("/model/predictors/3/possible", "a file may only narrow it", ("/model/predictors/3/possible", [0.5, 20])),
        ("/model/predictors/3/usual", "a file may only narrow it", ("/model/predictors/3/usual", [3, 15])),
        (
            "/model/predictors/3/derivation",
            "outside the possible range",
            ("/model/predictors/3/derivation", [130, 320]),
        ),
        (
            "/model/predictors/3/derivation",
            "must be less than the high end",
            ("/model/predictors/3/derivation", [8, 3]),
        ),
        ("/model/predictors/3/derivation", "both sides are open", ("/model/predictors/3/derivation", [None, None])),
        (
            "/model/predictors/0/derivation",
            "outside the possible range, 18 to 100",
            ("/model/predictors/0/derivation", [17, 80]),
        ),
    ],
)
def test_quantities_units_factors_and_ranges(path: str, words: str, change: Change) -> None:
    only_said(CLOGLOG, path, words, change)


def test_a_file_may_narrow_the_ranges_of_the_table_and_leave_a_side_open() -> None:
    for limits in ([2, 12], [None, 12], [2, None], [1.0344, 20.688]):  # 40 and 800 mg/dL times 0.02586
        assert refusals(changed(CLOGLOG, ("/model/predictors/3/possible", limits))) == {}


def test_the_part_within_a_visit_stands_beside_the_whole() -> None:
    whole: Tree = {"source": "invented", "sd": 0.3, "within_visit_sd": 0.1}
    assert refusals(changed(CLOGLOG, ("/model/predictors/3/within_person", whole))) == {}
    relative: Tree = {"source": "invented", "cv": 0.06, "within_visit_cv": 0.03}
    assert refusals(changed(CLOGLOG, ("/model/predictors/3/within_person", relative))) == {}


def test_a_bare_number_that_is_logged_states_what_is_possible() -> None:
    add = ("/model/predictors/-", NUMBER), (f"{E0}/terms/-", LOGGED)
    only_said(LOGIT, "/model/predictors/2", 'must state "possible"', *add)
    only_said(LOGIT, "/model/predictors/2", 'must state "possible"', *add, ("/model/predictors/2/possible", [1, None]))
    assert refusals(changed(LOGIT, *add, ("/model/predictors/2/possible", [1, 9]))) == {}
    assert refusals(changed(LOGIT, *add, (f"{E0}/terms/2/product/0/steps", [{"subtract": 1}]))) == {}


def test_derived_values_have_the_inputs_their_equation_needs() -> None:
    tree = changed(
        LOGIT, ("/model/predictors", [*LOGIT["model"]["predictors"], WEIGHT, HEIGHT]), ("/model/derived", [BMI])
    )
    inputs = "/model/derived/0/inputs"
    assert refusals(tree) == {}
    only_said(tree, inputs, 'body_mass_index also needs "height"', (f"{inputs}/height", DROP))
    only_said(tree, f"{inputs}/heigth", 'has no input "heigth"', (f"{inputs}/heigth", "height"))
    only_said(
        tree, f"{inputs}/height", 'there is no predictor "hight". Did you mean "height"?', (f"{inputs}/height", "hight")
    )
    only_said(tree, f"{inputs}/height", "cannot be made from another", (f"{inputs}/height", "bmi"))
    only_said(tree, f"{inputs}/height", 'is of the quantity "weight"', (f"{inputs}/height", "weight"))
    only_said(tree, f"{inputs}/height", "is not a number", (f"{inputs}/height", "smoker"))
    said(tree, "/model/derived/0/quantity", 'gives "body_mass_index"', ("/model/derived/0/quantity", "weight"))
    egfr = refusals(changed(LOGIT, ("/model/derived", [EGFR])))
    assert '"creatinine" must stand here' in egfr[f"{inputs}/creatinine"]
    assert 'a choice of exactly two answers, "female" and "male"' in egfr[f"{inputs}/sex"]


def test_a_ratio_is_taken_of_values_that_convert_into_each_other() -> None:
    ratio = {**BMI, "id": "r", "quantity": "number", "unit": "1", "equation": "ratio"}
    ratio["inputs"] = {"numerator": "weight", "denominator": "height"}
    tree = changed(
        LOGIT, ("/model/predictors", [*LOGIT["model"]["predictors"], WEIGHT, HEIGHT]), ("/model/derived", [ratio])
    )
    only_said(tree, "/model/derived/0/inputs", '"height" does not convert into kg')
    assert refusals(changed(tree, ("/model/derived/0/inputs/denominator", "weight"))) == {}


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        ("/model/recalibrations/0/equations", '"men" is absent', ("/model/recalibrations/0/equations/men", DROP)),
        (
            "/model/recalibrations/0/equations/man",
            'Did you mean "men"?',
            ("/model/recalibrations/0/equations/man", {"intercept": 0, "slope": 1}),
        ),
        ("/model/recalibrations/0", "no horizon of 7 years", ("/model/recalibrations/0/years", 7)),
        (
            "/model/recalibrations/0/equations/men/covariance",
            "not positive definite",
            ("/model/recalibrations/0/equations/men/covariance", [[0.01, 0.1], [0.1, 0.02]]),
        ),
        (
            "/model/recalibrations/0/equations/men/covariance",
            "there are 2 numbers (intercept and slope)",
            ("/model/recalibrations/0/equations/men/covariance", [[0.01]]),
        ),
    ],
)
def test_recalibrations_cover_every_equation(path: str, words: str, change: Change) -> None:
    said(CLOGLOG, path, words, change)


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        (f"{W0}/probability", "10.5 looks like a percentage: write 0.105", (f"{W0}/probability", 10.5)),
        (f"{W0}/probability", "strictly between 0 and 1", (f"{W0}/probability", 1)),
        (f"{W0}/tolerance", "too wide to prove anything", (f"{W0}/tolerance", 0.05)),
        (f"{W0}/tolerance", "5 looks like a percentage: write 0.05", (f"{W0}/tolerance", 5)),
        (W0, "not both", (f"{W0}/from_memory", True)),
        (f"{W0}/values/aeg", 'Did you mean "age"?', (f"{W0}/values/aeg", "3")),
        (f"{W0}/values/smoker", '"perhaps" is no answer', (f"{W0}/values/smoker", "perhaps")),
        (W0, "no horizon of 5 years", (f"{W0}/years", 5)),
        (W0, 'give both "lower" and "upper"', (f"{W0}/upper", DROP)),
        (W0, "two sides of the probability", (f"{W0}/upper", 0.15)),
        (W0, "has no band", (BAND, NONE)),
        (f"{W0}/recalibration", 'there is no recalibration "north"', (f"{W0}/recalibration", "north")),
    ],
)
def test_worked_examples_are_believable(path: str, words: str, change: Change) -> None:
    only_said(LOGIT, path, words, change)


def test_a_required_recalibration_is_there_for_every_horizon() -> None:
    required = ("/model/recalibration_required", True)
    path = f"{E0}/horizons/0"
    said(CLOGLOG, path, "none stands in the file for 5 years: nobody could get a number there", required)
    twin = {**CLOGLOG["model"]["recalibrations"][0], "id": "north-5", "years": 5}
    assert path not in refusals(changed(CLOGLOG, required, ("/model/recalibrations/-", twin)))
    # the same length in another unit is another horizon
    months = {**twin, "time": 60, "unit": "mo"}
    del months["years"]
    assert path in refusals(changed(CLOGLOG, required, ("/model/recalibrations/-", months)))


def test_there_is_an_example_for_every_equation_and_recalibration() -> None:
    path = "/model/worked_examples"
    only_said(CLOGLOG, path, 'no worked example for the equation "men"', (f"{path}/2", DROP))
    only_said(CLOGLOG, path, 'no worked example for the recalibration "north"', (f"{path}/1/recalibration", None))
    only_said(
        CLOGLOG,
        f"{path}/2/values",
        "the answers select no one equation",
        (f"{path}/2/values/sex", DROP),
        (f"{path}/-", CLOGLOG["model"]["worked_examples"][2]),
    )
    without = (f"{W0}/lower", DROP), (f"{W0}/upper", None)
    only_said(LOGIT, path, 'no worked example for the equation "all" has "lower" and "upper"', *without)
    said(CLOGLOG, f"{path}/1", "another time span", (f"{path}/1/years", 5))
    found = refusals(changed(CLOGLOG, ("/model/recalibration_required", True)))
    assert set(found) == {f"{path}/0", f"{path}/2", f"{E0}/horizons/0"}
    assert refusals(changed(CLOGLOG, (f"{path}/2/values/sex", " MALE "))) == {}


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        ("/numbers/0/id", 'Did you mean "age"?', ("/numbers/0/id", "agee")),
        ("/numbers/0/id", '"bp_treated" is not a number', ("/numbers/0/id", "bp_treated")),
        ("/numbers/1/id", "stands twice", ("/numbers/1/id", "age")),
        ("/yes_no/0/id", '"sex" is not a yes/no question', ("/yes_no/0/id", "sex")),
        ("/yes_no/0/coefficients/sex", "no number of the population", ("/yes_no/0/coefficients/sex", 1)),
        ("/yes_no/0/coefficients/bp_treated", "nor a question before this", ("/yes_no/0/coefficients/bp_treated", 1)),
        ("/correlations", "1 rows, and there are 2 numbers", ("/correlations/1", DROP)),
        ("/correlations", "not positive definite", ("/correlations", [[1, 1.1], [1.1, 1]])),
        ("/correlations", "not symmetric", ("/correlations", [[1, 0.2], [0.1, 1]])),
        ("/correlations/0/0", "must be 1", ("/correlations/0/0", 1.5)),
        ("/choices/0/shares", "add up to 0.9", ("/choices/0/shares/male", 0.4)),
        ("/choices/0/shares", 'exactly these answers: "female" and "male"', ("/choices/0/shares/male", DROP)),
    ],
)
def test_a_population_describes_predictors_that_exist(path: str, words: str, change: Change) -> None:
    tree = changed(CLOGLOG, ("/model/population", POPULATION), ("/model/predictors/3/may_be_missing", True))
    assert refusals(tree) == {}
    said(tree, f"/model/population{path}", words, (f"/model/population{change[0]}", change[1]))


def test_a_worked_example_may_leave_open_what_the_file_lets_stand_open() -> None:
    """So that a file can prove the people it describes as well."""
    path = f"{W0}/values/smoker"
    free = ("/model/predictors/1/may_be_missing", True)
    assert refusals(changed(LOGIT, free, (path, "unknown"))) == {}
    said(LOGIT, path, '"unknown" is no answer to "smoker"', (path, "unknown"))
