"""Names, answers, conditions and statements of a model, broken on purpose: the place and the words of the refusal."""

import json

import pytest

from tests.coefficients.spoiling import BMI, CLOGLOG, E0, E1, LOGIT, W0, Change, only_said, said
from tests.coefficients.tiny_model import DROP, changed, refusals


def test_the_two_small_models_pass() -> None:
    assert refusals(LOGIT) == {}
    assert refusals(CLOGLOG) == {}


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        ("/model/id", "is the name of a device", ("/model/id", "lpt1")),
        (f"{E0}/terms/1/id", '"age" stands already', (f"{E0}/terms/1/id", "age")),
        (f"{E0}/reference_person/aeg", 'Did you mean "age"?', (f"{E0}/reference_person/aeg", 3)),
        (
            f"{E0}/reference_person/smoker",
            '"maybe" is no answer to "smoker"',
            (f"{E0}/reference_person/smoker", "maybe"),
        ),
        (f"{E0}/reference_person/age", "without quotation marks", (f"{E0}/reference_person/age", "50")),
        (f"{E0}/terms/0/product/0/of", 'Did you mean "age"?', (f"{E0}/terms/0/product/0/of", "agee")),
        (f"{E0}/terms/0", "neither stands here", (f"{E0}/terms/0/product", DROP)),
        (f"{E0}/terms/0", "both stand here", (f"{E0}/terms/0/sum", [[{"of": "age"}]])),
        ("/model/predictors/0/may_be_missing", "must always be known", ("/model/predictors/0/may_be_missing", True)),
        ("/model/recalibration_required", "none stands in the file", ("/model/recalibration_required", True)),
        (
            "/model/decision_points/1/probability",
            "stands already",
            ("/model/decision_points/-", {"probability": 0.1, "label": "x", "source": "y"}),
        ),
        (
            "/model/source/derivation/events",
            "11 events cannot come from 10",
            ("/model/source/derivation", {"people": 10, "events": 11}),
        ),
        (
            "/model/unconfirmed/0/at",
            "leads to nothing",
            ("/model/unconfirmed/-", {"at": "/equations/7", "why": "x", "check_against": "y"}),
        ),
        (
            "/model/unconfirmed/0/at",
            "leads to nothing",
            ("/model/unconfirmed/-", {"at": "title", "why": "x", "check_against": "y"}),
        ),
    ],
)
def test_names_and_statements(path: str, words: str, change: Change) -> None:
    only_said(LOGIT, path, words, change)


def test_unconfirmed_may_mean_the_whole_model_or_one_number() -> None:
    for pointer in ("", "/title", "/equations/0/uncertainty/covariance/1/0", "/predictors/0/derivation"):
        note = {"at": pointer, "why": "x", "check_against": "y"}
        assert refusals(changed(LOGIT, ("/model/unconfirmed/-", note))) == {}


def test_predictors_derived_values_and_exclusions_share_their_names() -> None:
    words = '"smoker" stands already at /model/predictors/1/id'
    said(LOGIT, "/model/exclusions/0/id", words, ("/model/exclusions/0/id", "smoker"))
    said(LOGIT, "/model/derived/0/id", words, ("/model/derived", [{**BMI, "id": "smoker"}]))


def test_no_predictor_is_called_yes() -> None:
    said(LOGIT, "/model/predictors/1/id", "is an answer and cannot be an id", ("/model/predictors/1/id", "yes"))


def test_a_treatment_may_not_be_modifiable() -> None:
    path = "/model/predictors/2/modifiable"
    only_said(CLOGLOG, path, "is a treatment and may not be modifiable", (path, True))
    assert refusals(changed(CLOGLOG, (path, False))) == {}


def test_what_selects_the_equation_may_not_be_missing() -> None:
    twins = [
        {**LOGIT["model"]["equations"][0], "id": id, "applies_when": {"smoker": [answer]}}
        for id, answer in (("smokers", "yes"), ("others", "no"))
    ]
    path = "/model/predictors/1/may_be_missing"
    said(LOGIT, path, "selects the equation", ("/model/equations", twins), (path, True))


def test_what_may_be_missing_is_described_for_every_equation_or_for_none() -> None:
    people = {"source": "invented", "numbers": [], "correlations": [], "yes_no": []}
    treated = {"id": "bp_treated", "intercept": -1, "coefficients": {}}
    path = "/model/predictors/2/may_be_missing"
    free = (path, True)
    described = {**people, "yes_no": [treated]}
    # nowhere: there is then no single number, only a range
    assert refusals(changed(CLOGLOG, free)) == {}
    assert refusals(changed(CLOGLOG, free, ("/model/population", people))) == {}
    assert refusals(changed(CLOGLOG, free, ("/model/population", described))) == {}
    only_said(CLOGLOG, path, '"population" of "men" must describe it', free, (f"{E0}/population", described))
    assert refusals(changed(CLOGLOG, free, (f"{E0}/population", described), (f"{E1}/population", described))) == {}


def test_answers_and_recalibrations_are_unique() -> None:
    twin = CLOGLOG["model"]["recalibrations"][0]
    only_said(CLOGLOG, "/model/recalibrations/1/id", "stands already", ("/model/recalibrations/-", twin))
    choice = {"id": "female", "label": "Woman"}
    only_said(CLOGLOG, "/model/predictors/1/choices/2/id", "stands already", ("/model/predictors/1/choices/-", choice))
    said(CLOGLOG, f"{E1}/id", '"women" stands already', (f"{E1}/id", "women"))


def test_sex_has_exactly_the_two_ids_the_equations_need() -> None:
    words = 'exactly two answers, "female" and "male"'
    said(CLOGLOG, "/model/predictors/1", words, ("/model/predictors/1/choices/0/id", "woman"))
    said(CLOGLOG, "/model/predictors/1", words, ("/model/predictors/1/choices/-", {"id": "other", "label": "Other"}))


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        (f"{E0}/applies_when/sxe", 'Did you mean "sex"?', (f"{E0}/applies_when", {"sxe": ["female"]})),
        (f"{E0}/applies_when/age", "is a number", (f"{E0}/applies_when", {"age": ["female"]})),
        (f"{E0}/applies_when/sex/0", 'Did you mean "female"?', (f"{E0}/applies_when/sex/0", "femal")),
        (
            f"{E1}/applies_when",
            'two equations apply to sex = male: "women" and "men"',
            (f"{E0}/applies_when", {"sex": ["male", "female"]}),
        ),
        (f"{E1}/applies_when", "two equations apply to sex = female", (f"{E1}/applies_when/sex", ["female"])),
        (
            f"{E1}/applies_when",
            "two equations apply to sex = female, bp_treated = no",
            (f"{E1}/applies_when", {"bp_treated": ["no"]}),
        ),
        (
            "/model/equations",
            "no equation applies to sex = male, bp_treated = no",
            (f"{E1}/applies_when/bp_treated", ["yes"]),
        ),
    ],
)
def test_exactly_one_equation_applies(path: str, words: str, change: Change) -> None:
    said(CLOGLOG, path, words, change)


def test_sixty_conditions_are_judged_without_trying_every_combination() -> None:
    questions = [
        {"id": f"q{number}", "label": "Q", "kind": "yes_no", "group": "History"} for number in range(60)
    ]  # 2^60 combinations
    tree = changed(
        CLOGLOG,
        ("/model/predictors", CLOGLOG["model"]["predictors"] + questions),
        (f"{E0}/applies_when", {"sex": ["female"], **{f"q{number}": ["yes"] for number in range(60)}}),
    )
    assert "no equation applies to q9 = no, sex = female." in refusals(tree)["/model/equations"]


def test_problems_of_several_rules_come_all_at_once() -> None:
    found = refusals(
        changed(
            CLOGLOG,
            ("/model/predictors/2/modifiable", True),
            ("/model/predictors/3/unit", "mg/l"),
            (f"{E0}/terms/0/product/0/of", "aeg"),
            (f"{E1}/horizons/0/baseline_survival", 96),
            ("/model/recalibrations/0/years", 3),
            (f"{W0}/probability", 3.5),
        )
    )
    assert set(found) == {
        "/model/predictors/2/modifiable",
        "/model/predictors/3/unit",
        f"{E0}/terms/0/product/0/of",
        f"{E1}/horizons/0/baseline_survival",
        "/model/recalibrations/0",
        "/model/worked_examples/1",  # it is for the 10 years that the recalibration was
        f"{W0}/probability",
    }


def test_no_sentence_is_left_half_made() -> None:
    """A message that shows Python's own spelling of a value was forgotten."""
    spoilt = json.loads(
        json.dumps(CLOGLOG).replace('"age"', '"aeg"', 1).replace("0.4", "0").replace("female", "woman", 1)
    )
    for message in refusals(spoilt).values():
        assert not any(word in message for word in ("None", "UNSET", "True", "False", "frozenset", "  ", "{", "("))
