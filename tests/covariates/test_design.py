"""Terms as the file states them: products, sums, answers, and the order of both."""

import numpy as np

from clinicalc.coefficients.schema import (
    Choice,
    ChoicePredictor,
    CompetingEvents,
    Equation,
    Factor,
    Horizon,
    ModelContent,
    NoBand,
    Step,
    Term,
    WorkedExample,
    YesNoPredictor,
)
from clinicalc.covariates.design import answer_codes, compile_terms, design_columns
from tests.reference.packaging import content, numbers

YES_NO = YesNoPredictor(id="treated", label="Treated", group="Values")
CHOICE = ChoicePredictor(
    id="group", label="Group", group="Values", choices=(Choice("a", "A"), Choice("b", "B"), Choice("c", "C"))
)
COLUMNS = {
    "x": np.array([2.0, 3.0, 5.0, 7.0]),
    "treated": np.array([0.0, 1.0, 0.0, 1.0]),
    "group": np.array([0.0, 1.0, 2.0, 0.0]),
}


def model_of(*terms: Term) -> ModelContent:
    equation = Equation(
        id="all",
        applies_when={},
        link="logit",
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=terms,
        horizons=(Horizon(years=1.0, intercept=0.0),),
        uncertainty=NoBand("Not needed here."),
    )
    example = WorkedExample(values={"x": "1"}, probability=0.5, tolerance=0.01, source="None.", years=1.0)
    return content("Invented.", (*numbers(("x",)), YES_NO, CHOICE), (equation,), (example,))


def column_of(term: Term) -> list[float]:
    model = model_of(term)
    (column,) = design_columns(compile_terms(model, model.equations[0]), COLUMNS)
    return [float(value) for value in column]


def asked(answer: str) -> Factor:
    return Factor(of="treated", steps=(Step(is_=(answer,)),))


def test_answers_and_their_numbers() -> None:
    assert answer_codes(model_of(Term(id="t", coefficient=1.0, product=(Factor(of="x"),)))) == {
        "treated": {"no": 0.0, "yes": 1.0},
        "group": {"a": 0.0, "b": 1.0, "c": 2.0},
    }


def test_yes_no_without_steps_is_nought_or_one() -> None:
    assert column_of(Term(id="t", coefficient=1.0, product=(Factor(of="treated"),))) == [0, 1, 0, 1]
    assert column_of(Term(id="t", coefficient=1.0, product=(asked("yes"),))) == [0, 1, 0, 1]
    assert column_of(Term(id="t", coefficient=1.0, product=(asked("no"),))) == [1, 0, 1, 0]


def test_choice_by_its_answers() -> None:
    factor = Factor(of="group", steps=(Step(is_=("a", "c")),))
    assert column_of(Term(id="t", coefficient=1.0, product=(factor,))) == [1, 0, 1, 1]


def test_product() -> None:
    squared = Factor(of="x", steps=(Step(subtract=1.0), Step(power=2.0)))
    assert column_of(Term(id="t", coefficient=1.0, product=(squared, Factor(of="treated")))) == [0, 4, 0, 36]


def test_steps_run_from_left_to_right() -> None:
    one = Factor(of="x", steps=(Step(subtract=1.0), Step(multiply=10.0)))
    other = Factor(of="x", steps=(Step(multiply=10.0), Step(subtract=1.0)))
    assert column_of(Term(id="t", coefficient=1.0, product=(one,))) == [10, 20, 40, 60]
    assert column_of(Term(id="t", coefficient=1.0, product=(other,))) == [19, 29, 49, 69]


def test_sum_of_products_is_one_term() -> None:
    """A cut that differs between two groups: from 3 for the treated, from 6 for the others."""
    high = (Factor(of="x", steps=(Step(from_=3.0),)), asked("yes"))
    higher = (Factor(of="x", steps=(Step(from_=6.0),)), asked("no"))
    assert column_of(Term(id="t", coefficient=1.0, sum=(high, higher))) == [0, 1, 0, 1]


def test_terms_keep_the_order_of_the_file() -> None:
    model = model_of(
        Term(id="second", coefficient=2.0, product=(Factor(of="treated"),), fixed=True),
        Term(id="first", coefficient=1.0, product=(Factor(of="x"),)),
    )
    terms = compile_terms(model, model.equations[0])
    assert [(term.id, term.coefficient, term.fixed) for term in terms] == [("second", 2.0, True), ("first", 1.0, False)]
    columns = design_columns(terms, COLUMNS)
    assert np.array_equal(columns[0], COLUMNS["treated"])
    assert np.array_equal(columns[1], COLUMNS["x"])
