"""The tree of errors: parts that read as one text, and survive being copied to another process."""

import copy
import pickle

import pytest

from clinicalc.errors import ClinicalcError, CoefficientFileRefused, Problem, UsageError


@pytest.mark.parametrize(
    "error",
    [
        UsageError("it is not there.", where="age", why="It was left out.", do="Add it."),
        CoefficientFileRefused("a.json", (Problem("/model", "is missing."), Problem("", "is short."))),
    ],
)
def test_errors_can_be_copied_and_sent(error: ClinicalcError) -> None:
    for again in (pickle.loads(pickle.dumps(error)), copy.copy(error)):
        assert type(again) is type(error)
        assert str(again) == str(error)
        assert again.exit_status == error.exit_status


def test_the_parts_read_as_one_text() -> None:
    error = UsageError("it is not there.", where="age", why="It was left out.", do="Add it.")
    assert str(error) == "age: it is not there. It was left out. Add it."
    refused = CoefficientFileRefused("a.json", (Problem("/model", "is missing."),))
    assert str(refused) == "a.json: this coefficient file is refused (1 problem).\n/model: is missing."
