"""Shape problems: each with its JSON Pointer, in words, with a close match where there is one."""

from typing import Any

import pytest

from tests.coefficients.tiny_model import DROP, changed, refusals, tiny_cloglog_model, tiny_logit_model, tree_of

LOGIT = tree_of(tiny_logit_model())
CLOGLOG = tree_of(tiny_cloglog_model())


@pytest.mark.parametrize(
    ("pointer", "value", "path", "words"),
    [
        ("/model/title", DROP, "/model", 'the field "title" is missing'),
        ("/model/titel", "x", "/model/titel", 'the field "titel" is not known here'),
        ("/model/predictors/0/derivatoin", [1, 2], "/model/predictors/0/derivatoin", 'Did you mean "derivation"?'),
        ("/model/predictors/0/kind", DROP, "/model/predictors/0", 'the field "kind" is missing; it must be "number"'),
        ("/model/predictors/0/kind", "nummer", "/model/predictors/0/kind", 'Did you mean "number"?'),
        ("/model/predictors/0/kind", 3, "/model/predictors/0/kind", '3 is not one of "number", "choice" or "yes_no"'),
        ("/model/predictors/0", [], "/model/predictors/0", "an object must stand here; found a list"),
        ("/model/predictors", [], "/model/predictors", "0 entries; at least 1"),
        ("/model/predictors", {}, "/model/predictors", "a list must stand here; found an object"),
        ("/model/equations/0/link", "logits", "/model/equations/0/link", 'Did you mean "logit"?'),
        ("/model/equations/0/terms/0/coefficient", True, "/model/equations/0/terms/0/coefficient", "found true"),
        ("/model/equations/0/terms/0/coefficient", "0.06", "/model/equations/0/terms/0/coefficient", "quotation marks"),
        ("/model/equations/0/terms/0/coefficient", None, "/model/equations/0/terms/0/coefficient", "found null"),
        ("/model/equations/0/horizons/0/years", 0, "/model/equations/0/horizons/0/years", "must be more than 0"),
        ("/model/equations/0/horizons/0/events", 1.5, "/model/equations/0/horizons/0/events", "a whole number"),
        ("/model/equations/0/horizons/0/events", -1, "/model/equations/0/horizons/0/events", "must be at least 0"),
        (
            "/model/predictors/1/modifiable",
            1,
            "/model/predictors/1/modifiable",
            "true or false must stand here; found 1",
        ),
        ("/model/predictors/0/derivation", [30], "/model/predictors/0/derivation", "two entries must stand here"),
        ("/model/predictors/0/derivation", [30, "75"], "/model/predictors/0/derivation/1", "a number or null must"),
        ("/model/predictors/0/label", "x" * 121, "/model/predictors/0/label", "121 characters; at most 120"),
        ("/model/predictors/0/id", "Age", "/model/predictors/0/id", "begin with a small letter"),
        ("/model/version", "1.0", "/model/version", 'such as "1.0.0"'),
        ("/model/id", "tiny_logit", "/model/id", "hold only a-z, 0-9 and -"),
        ("/model/population", [], "/model/population", "an object or null must stand here; found a list"),
        ("/model/source/kind", "found", "/model/source/kind", 'is not one of "local" or "published"'),
        ("/model/decision_points/0/probability", 1, "/model/decision_points/0/probability", "must be less than 1"),
        ("/format", "clinicalc.coefficients/2", "/format", 'must be "clinicalc.coefficients/1"'),
        ("/signatures", DROP, "", 'the field "signatures" is missing'),
        ("/extra", 1, "/extra", "is not known here"),
        ("/model/a~1b", 1, "/model/a~01b", "is not known here"),
        ("/model/worked_examples/0/values/age", 50, "/model/worked_examples/0/values/age", "a text must stand here"),
        ("/model/equations/0/applies_when", {"Sex": ["x"]}, "/model/equations/0/applies_when/Sex", "small letter"),
    ],
)
def test_each_shape_problem_is_said_at_its_place(pointer: str, value: Any, path: str, words: str) -> None:
    found = refusals(changed(LOGIT, (pointer, value)))
    assert list(found) == [path]
    assert words in found[path]


@pytest.mark.parametrize("top", [[], "x", 1, None, True])
def test_a_file_that_is_no_object_is_refused(top: object) -> None:
    assert "an object must stand here" in refusals(top)[""]


def test_fields_of_the_wrong_kind_are_said_for_the_kind_that_was_named() -> None:
    found = refusals(changed(CLOGLOG, ("/model/predictors/1/kind", "yes_no")))
    assert found == {"/model/predictors/1/choices": found["/model/predictors/1/choices"]}
    assert "is not known here" in found["/model/predictors/1/choices"]


def test_every_missing_field_is_named() -> None:
    found = refusals({"format": "clinicalc.coefficients/1", "model": {}, "signatures": []})
    lines = found["/model"].splitlines()
    assert len(lines) == 17
    assert 'the field "id" is missing.' in lines
    assert 'the field "documentation" is missing.' in lines
