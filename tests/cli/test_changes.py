"""`--change` on the command line: what it takes, and what it answers to a slip."""

import pytest

from clinicalc.operations.bedside import take_changes
from tests.assessment.cases import DEMO, shipped
from tests.cli.calling import call, example

TARNWICK = example("tarnwick-cvd-10y")
VALUES = tuple(f"{id}={text}" for id, text in DEMO.items())


@pytest.mark.parametrize(
    ("words", "sentence"),
    [
        (("smoker",), "“smoker” is not a change. Write the field, an equals sign and the value: smoker=no."),
        (("smoker=",), "the change of smoker has no value. Write the changed value after it: smoker=…"),
        (("smoker=no", "smoker=yes"), "smoker is given twice. Give each field once."),
        (("smokr=no",), "“smokr” is not a field of this model. Did you mean smoker?"),
        (("age=50",), "Age is not something that can be changed. A comparison can change systolic_bp, total_chol"),
        (("bp_treated=yes",), "Takes tablets for blood pressure: a comparison cannot say what starting or stopping"),
    ],
)
def test_a_slip_is_answered_in_words(words: tuple[str, ...], sentence: str) -> None:
    options = [part for word in words for part in ("--change", word)]
    ended = call("assess", TARNWICK, *VALUES, *options)
    assert (ended.status, ended.out) == (2, "")
    assert ended.err.startswith(f"clinicalc: {sentence}")


def test_changes_are_taken_as_typed() -> None:
    taken = take_changes(shipped("tarnwick-cvd-10y"), [" smoker =no", "total_cholesterol=190 mg/dL"])
    assert {id: typed.text for id, typed in taken.items()} == {"smoker": "no", "total_cholesterol": "190 mg/dL"}


def test_a_call_without_changes_is_as_before() -> None:
    assert call("assess", TARNWICK, *VALUES).status == 0
