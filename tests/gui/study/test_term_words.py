"""Terms in words: what a coefficient is for one of."""

import pytest

from clinicalc.coefficients.equations import Factor, Step, Term
from clinicalc.coefficients.schema import NumberPredictor, YesNoPredictor
from clinicalc.gui.study.figure_words import figure
from clinicalc.gui.study.term_words import describe_term, say_per

PREDICTORS = (
    NumberPredictor("age", "Age", "age", "a", "Person"),
    NumberPredictor("systolic_bp", "Systolic blood pressure", "systolic_bp", "mm[Hg]", "Measured"),
    YesNoPredictor("smoker", "Smoker", "Answers"),
)


@pytest.mark.parametrize(
    ("product", "words"),
    [
        ((Factor("age"),), "1 year"),
        ((Factor("age", (Step(subtract=60.0), Step(divide=5.0))),), "5 years"),
        ((Factor("systolic_bp", (Step(divide=10.0),)),), "10 mmHg"),
        ((Factor("systolic_bp", (Step(log="natural"),)),), "systolic_bp: natural logarithm"),
        ((Factor("smoker"),), "yes against no"),
        ((Factor("age"), Factor("smoker")), "age x smoker"),
    ],
)
def test_what_a_coefficient_is_per(product: tuple[Factor, ...], words: str) -> None:
    assert say_per(Term("term", 1.0, product), PREDICTORS) == words


@pytest.mark.parametrize(
    ("term", "words"),
    [
        ({"spline_of": "age"}, "restricted cubic spline of age, 4 knots at the default quantiles"),
        ({"spline_of": "age", "knots": 5}, "restricted cubic spline of age, 5 knots at the default quantiles"),
        ({"spline_of": "age", "knots": [40.0, 60.5, 80.0]}, "restricted cubic spline of age, knots at 40, 60.5, 80"),
        ({"categories_of": "sex", "reference": "female"}, "one term for each answer of sex but female"),
        ({"id": "male", "product": [{"of": "sex", "steps": [{"is": ["male"]}]}]}, "sex is male"),
        ("a text", "a text"),
        ({"id": "x", "product": 3}, "not of a shape that can be read; its problem is listed above"),
    ],
)
def test_a_term_of_a_study_file_is_described(term: object, words: str) -> None:
    assert describe_term(term) == words


@pytest.mark.parametrize(
    ("value", "digits", "text"), [(1.8, 3, "1.80"), (-0.081837, 6, "−0.0818370"), (123.4, 3, "123"), (30.0, 3, "30.0")]
)
def test_figures_keep_their_digits(value: float, digits: int, text: str) -> None:
    assert figure(value, digits) == text
