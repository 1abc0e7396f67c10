"""Labels that a person could not tell apart are refused, with the place of the other."""

import pytest

from tests.coefficients.spoiling import BMI, CLOGLOG, LOGIT, only_said, said
from tests.coefficients.tiny_model import changed, refusals

SEX = "/model/predictors/1"


@pytest.mark.parametrize("label", ["Female", "FEMALE", "  female", "Fe\uff4dale", "female\u00a0"])
def test_the_answers_of_a_question_are_labelled_apart(label: str) -> None:
    words = f"reads like the text at {SEX}/choices/0/label; nobody could tell the two answers apart"
    said(CLOGLOG, f"{SEX}/choices/1/label", words, (f"{SEX}/choices/1/label", label))


def test_an_answer_is_not_labelled_with_the_id_of_another() -> None:
    path = f"{SEX}/choices/0/label"
    only_said(
        CLOGLOG,
        path,
        f"is the id of another answer, at {SEX}/choices/1/id",
        (path, "MALE "),
        (f"{SEX}/choices/1/label", "Man"),
    )
    assert refusals(changed(CLOGLOG, (path, "female"))) == {}  # its own id is a good label


@pytest.mark.parametrize("label", ["Age", " aGE", "\u00a0Age\u202f"])
def test_two_fields_are_labelled_apart(label: str) -> None:
    path = "/model/predictors/1/label"
    words = "reads like the text at /model/predictors/0/label; whoever fills in the page could not tell"
    only_said(LOGIT, path, words, (path, label))


def test_exclusions_and_derived_values_are_fields_too() -> None:
    path = "/model/exclusions/0/ask"
    only_said(LOGIT, path, "reads like the text at /model/predictors/1/label", (path, "Smokes  NOW"))
    derived = {**BMI, "label": "smokes now"}
    said(
        LOGIT,
        "/model/derived/0/label",
        "reads like the text at /model/predictors/1/label",
        ("/model/derived", [derived]),
    )


def test_composed_and_decomposed_letters_read_alike() -> None:
    path = "/model/predictors/1/label"
    said(LOGIT, path, "reads like the text at", ("/model/predictors/0/label", "\u00c9tat"), (path, "E\u0301tat"))


def test_labels_that_differ_in_one_letter_pass() -> None:
    assert refusals(changed(LOGIT, ("/model/predictors/1/label", "Ages"))) == {}
