"""A term in words: every kind of step, and every digit of its figures."""

import pytest

from clinicalc.coefficients.schema import Factor, Spline, Step, Term
from clinicalc.covariates.term_words import say_figure, say_figures, say_term


@pytest.mark.parametrize(
    ("step", "words"),
    [
        (Step(subtract=55.0), "minus 55"),
        (Step(divide=10.0), "divided by 10"),
        (Step(multiply=0.02586), "times 0.02586"),
        (Step(log="natural"), "natural logarithm"),
        (Step(power=-2.0), "to the power -2"),
        (Step(clip_low=0.5), "at least 0.5"),
        (Step(clip_high=20.0), "at most 20"),
        (Step(above=110.0), "above 110"),
        (Step(from_=30.0), "30 or above"),
        (Step(below=60.0), "below 60"),
        (Step(up_to=5.0), "5 or below"),
        (Step(is_=("a", "b")), "is a or b"),
        (Step(spline=Spline((36.0, 48.0, 62.0), 1)), "restricted cubic spline basis 1, knots 36 48 62"),
    ],
)
def test_each_step_in_words(step: Step, words: str) -> None:
    assert say_term(Term("t", 1.0, product=(Factor("age", (step,)),))) == f"(age: {words})"


def test_products_and_sums() -> None:
    age, smoker = Factor("age", (Step(subtract=55.0), Step(divide=10.0))), Factor("smoker")
    assert say_term(Term("t", 1.0, product=(age, smoker))) == "(age: minus 55, divided by 10) x smoker"
    assert say_term(Term("t", 1.0, sum=((smoker,), (smoker, smoker)))) == "sum of [smoker; smoker x smoker]"
    assert say_term(Term("t", 1.0, product=(Factor("age", ()),))) == "age"


def test_figures_keep_every_digit() -> None:
    assert say_figure(1.0956673218875703) == "1.0956673218875703"
    assert say_figures((36.0, -0.1, 1e-09)) == "36 -0.1 1e-09"
