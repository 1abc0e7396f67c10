"""People described for single equations: they hold instead of the model's, and keep to the same rules."""

import msgspec
import pytest

from clinicalc.coefficients.described import list_described, population_of
from clinicalc.coefficients.schema import ModelContent
from tests.coefficients.spoiling import CLOGLOG, Change, said
from tests.coefficients.tiny_model import DROP, Tree, changed, refusals

MEN: Tree = {
    "source": "invented men",
    "numbers": [
        {"id": "age", "mean": 54, "sd": 10},
        {"id": "total_cholesterol", "mean": 1.5, "sd": 0.2, "log": "natural"},
    ],
    "correlations": [[1, 0.2], [0.2, 1]],
    "yes_no": [{"id": "bp_treated", "intercept": -3, "coefficients": {"age": 0.04}}],
}
EVERYBODY: Tree = MEN | {
    "source": "invented people",
    "choices": [{"id": "sex", "shares": {"female": 0.5, "male": 0.5}}],
}
OF_MEN = "/model/equations/1/population"


def content_of(tree: Tree) -> ModelContent:
    return msgspec.convert(tree["model"], ModelContent)


def test_an_equation_has_its_own_people_or_the_models() -> None:
    content = content_of(changed(CLOGLOG, ("/model/population", EVERYBODY), (OF_MEN, MEN)))
    women, men = (population_of(content, equation) for equation in content.equations)
    assert women is not None
    assert men is not None
    assert (women.source, men.source) == ("invented people", "invented men")
    assert list(list_described(women)) == ["age", "total_cholesterol", "bp_treated", "sex"]
    assert list(list_described(men)) == ["age", "total_cholesterol", "bp_treated"]
    nobody = content_of(changed(CLOGLOG, (OF_MEN, MEN)))
    assert population_of(nobody, nobody.equations[0]) is None


def test_what_may_be_missing_may_be_described_by_equation() -> None:
    missing: Change = ("/model/predictors/3/may_be_missing", True)
    assert refusals(changed(CLOGLOG, missing, ("/model/equations/0/population", MEN), (OF_MEN, MEN))) == {}
    said(CLOGLOG, "/model/predictors/3/may_be_missing", "describe", missing, (OF_MEN, MEN))


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        ("/numbers/0/id", 'Did you mean "age"?', ("/numbers/0/id", "agee")),
        ("/yes_no/0/id", '"sex" is not a yes/no question', ("/yes_no/0/id", "sex")),
        ("/correlations", "not positive definite", ("/correlations", [[1, 1.1], [1.1, 1]])),
        ("/correlations", "1 rows, and there are 2 numbers", ("/correlations/1", DROP)),
        ("/numbers/1/mean", 'Then leave "log" out.', ("/numbers/1/mean", 5.2)),
        (
            "/numbers/1/mean",
            'Then state "log": "natural".',
            ("/numbers/1", {"id": "total_cholesterol", "mean": 0.9, "sd": 0.2}),
        ),
        ("/numbers/1/mean", "a logarithm of 215.1, lies outside its possible values", ("/numbers/1/mean", 5.371)),
        ("/numbers/0/mean", "Is it in the unit of the predictor?", ("/numbers/0/mean", 540)),
        ("/extra", "", ("/extra", 1)),
    ],
)
def test_people_of_an_equation_keep_to_the_rules(path: str, words: str, change: Change) -> None:
    tree = changed(CLOGLOG, (OF_MEN, MEN))
    assert refusals(tree) == {}
    said(tree, f"{OF_MEN}{path}", words, (f"{OF_MEN}{change[0]}", change[1]))
