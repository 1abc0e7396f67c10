"""Steps without a finite value somewhere in range are found, and where none is found there is none."""

from math import inf

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from clinicalc.coefficients.schema import (
    AtCentre,
    CompetingEvents,
    CovarianceBand,
    DrawsBand,
    Equation,
    Factor,
    Horizon,
    ModelContent,
    NoBand,
    Spline,
    Step,
    Term,
    Uncertainty,
    WorkedExample,
    YesNoPredictor,
)
from clinicalc.covariates.design import compile_terms, design_columns
from clinicalc.covariates.finiteness import Interval, find_nonfinite
from clinicalc.prediction.line import Adjustment, lines_of
from clinicalc.prediction.predict import predict
from tests.reference.packaging import content, numbers

FREE = Interval(-inf, inf)
LOG = Step(log="natural")


def model_with(*steps: Step) -> ModelContent:
    """A model whose only term is one value and these steps."""
    equation = Equation(
        id="all",
        applies_when={},
        link="logit",
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=(Term(id="x", coefficient=1.0, product=(Factor(of="x", steps=steps),)),),
        horizons=(Horizon(years=1.0, intercept=0.0),),
        uncertainty=NoBand("Not needed here."),
    )
    example = WorkedExample(values={"x": "1"}, probability=0.5, tolerance=0.01, source="None.", years=1.0)
    return content("Invented.", numbers(("x",)), (equation,), (example,))


def found(interval: Interval, *steps: Step) -> list[str]:
    return [problem.path for problem in find_nonfinite(model_with(*steps), {"x": interval})]


def step_path(place: int) -> list[str]:
    return [f"/model/equations/0/terms/0/product/0/steps/{place}"]


REFUSED = [
    ("log of a range that touches 0", Interval(0, 10), (LOG,), 0),
    ("log of a range that crosses 0", Interval(-1, 10), (LOG,), 0),
    ("log of an open range", Interval(-inf, 10), (LOG,), 0),
    ("log after a shift to 0", Interval(5, 10), (Step(subtract=5.0), LOG), 1),
    ("log after a sign change", Interval(5, 10), (Step(multiply=-1.0), LOG), 1),
    ("log of a cut", Interval(5, 10), (Step(above=7.0), LOG), 1),
    ("log of a log that reaches 0", Interval(1, 10), (LOG, LOG), 1),
    ("log of a spline that begins at 0", Interval(1, 10), (Step(spline=Spline((2, 3, 4), 1)), LOG), 1),
    ("log of a square that turns at 0", Interval(-3, 5), (Step(power=2.0), LOG), 1),
    ("power -1 across 0", Interval(-1, 1), (Step(power=-1.0),), 0),
    ("power -1 up to 0", Interval(-1, 0), (Step(power=-1.0),), 0),
    ("power -2 after a shift across 0", Interval(5, 10), (Step(subtract=7.0), Step(power=-2.0)), 1),
    ("root below 0", Interval(-0.001, 9), (Step(power=0.5),), 0),
    ("power that overflows", Interval(0, 1e5), (Step(power=100.0),), 0),
    ("power that overflows below", Interval(-1e5, 0), (Step(power=101.0),), 0),
    ("negative power of a tiny value", Interval(1e-200, 1), (Step(power=-2.0),), 0),
    ("multiplication that overflows", Interval(0, 1e10), (Step(multiply=1e300),), 0),
    ("division that overflows", Interval(0, 1e10), (Step(divide=1e-300),), 0),
    ("overflow of an open range", FREE, (Step(power=9.0),), 0),
    ("overflow of a range open above", Interval(1, inf), (Step(power=9.0),), 0),
    ("spline that overflows", Interval(0, 4e120), (Step(spline=Spline((1e120, 2e120, 3e120), 1)),), 0),
    ("a clip on the wrong side", Interval(-5, 5), (Step(clip_high=3.0), LOG), 1),
    ("the third of four steps", Interval(1, 9), (LOG, Step(subtract=1.0), LOG, Step(multiply=2.0)), 2),
]


@pytest.mark.parametrize(("interval", "steps", "place"), [case[1:] for case in REFUSED], ids=[c[0] for c in REFUSED])
def test_found(interval: Interval, steps: tuple[Step, ...], place: int) -> None:
    assert found(interval, *steps) == step_path(place)


ACCEPTED = [
    ("log above 0", Interval(0.001, 1e6), (LOG,)),
    ("log of a range open above", Interval(0.001, inf), (LOG,)),
    ("log after a clip", Interval(-5, 5), (Step(clip_low=0.5), LOG)),
    ("log of an open range after a clip", FREE, (Step(clip_low=0.5), LOG)),
    ("log of a square away from 0", Interval(-3, -1), (Step(power=2.0), LOG)),
    ("power -1 on one side of 0", Interval(-5, -1), (Step(power=-1.0),)),
    ("power 3 across 0", Interval(-5, 5), (Step(power=3.0),)),
    ("root from 0", Interval(0, 9), (Step(power=0.5),)),
    ("cuts of an open range", FREE, (Step(from_=5.0),)),
    ("spline of an open range", FREE, (Step(spline=Spline((2, 3, 4), 1)),)),
    ("overflow that a clip prevents", Interval(0, 1e5), (Step(clip_high=5.0), Step(power=100.0))),
    ("plain steps", FREE, (Step(subtract=5.0), Step(divide=3.0), Step(multiply=-2.0))),
]


@pytest.mark.parametrize(("interval", "steps"), [case[1:] for case in ACCEPTED], ids=[case[0] for case in ACCEPTED])
def test_accepted(interval: Interval, steps: tuple[Step, ...]) -> None:
    assert found(interval, *steps) == []


def test_the_sentence_names_value_range_and_remedy() -> None:
    (problem,) = find_nonfinite(model_with(LOG), {"x": Interval(0, 10)})
    assert problem.message.startswith("log has no value at or below 0 while x may be anything from 0 to 10.")
    assert "`possible`" in problem.message
    (problem,) = find_nonfinite(model_with(LOG), {"x": Interval(-inf, 10)})
    assert "while x may be anything up to 10." in problem.message


@pytest.mark.parametrize(
    ("interval", "step", "says"),
    [
        (Interval(-1, 1), Step(power=-1.0), "power of a negative exponent has no value at 0"),
        (Interval(-1, 1), Step(power=0.5), "power of a fractional exponent has no value below 0"),
        (Interval(0, 1e5), Step(power=100.0), "power is not finite"),
    ],
)
def test_the_sentence_names_the_reason(interval: Interval, step: Step, says: str) -> None:
    (problem,) = find_nonfinite(model_with(step), {"x": interval})
    assert problem.message.startswith(says)


def test_every_product_of_every_term_is_walked() -> None:
    plain = model_with()
    terms = (
        Term(id="a", coefficient=1.0, product=(Factor(of="x"), Factor(of="asked", steps=(Step(is_=("yes",)), LOG)))),
        Term(id="b", coefficient=1.0, sum=((Factor(of="x"),), (Factor(of="x", steps=(Step(power=-1.0),)),))),
    )
    equation = plain.equations[0]
    changed = Equation(
        id="all",
        applies_when={},
        link="logit",
        competing_events=equation.competing_events,
        terms=terms,
        horizons=equation.horizons,
        uncertainty=equation.uncertainty,
    )
    predictors = (*plain.predictors, YesNoPredictor(id="asked", label="Asked", group="Values"))
    model = content("Invented.", predictors, (equation, changed), plain.worked_examples)
    paths = [problem.path for problem in find_nonfinite(model, {"x": Interval(-1, 1)})]
    assert paths == [
        "/model/equations/1/terms/0/product/1/steps/1",
        "/model/equations/1/terms/1/sum/1/0/steps/0",
    ]


# ---------------------------------------------------------------- products, sums and what comes after them


def model_of_terms(*terms: Term, uncertainty: Uncertainty | None = None, intercept: float = 0.0) -> ModelContent:
    """A model in x, y and the question asked."""
    equation = Equation(
        id="all",
        applies_when={},
        link="logit",
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=terms,
        horizons=(Horizon(years=1.0, intercept=intercept),),
        uncertainty=NoBand("Not needed here.") if uncertainty is None else uncertainty,
    )
    example = WorkedExample(values={"x": "1"}, probability=0.5, tolerance=0.01, source="None.", years=1.0)
    predictors = (*numbers(("x", "y")), YesNoPredictor(id="asked", label="Asked", group="Values"))
    return content("Invented.", predictors, (equation,), (example,))


def raised(power: float, of: str = "x") -> Factor:
    return Factor(of=of, steps=(Step(power=power),))


ADULTS = {"x": Interval(30, 75), "y": Interval(-9, 4)}


@pytest.mark.parametrize(
    ("term", "size"),
    [
        # 75^150 is 1.8e281: each factor finite, the product not
        (Term("t", 1.0, product=(Factor(of="asked"), raised(150.0), raised(150.0))), "is not finite"),
        (Term("t", 1.0, product=(Factor(of="asked"), raised(80.0))), "can reach 1.0e+150"),
        (Term("t", 1.0, product=(Factor(of="x"), raised(106.0, "y"))), "can reach 1.1e+103"),
        # what is 1 at the end may be beyond all bounds on the way
        (Term("t", 1.0, product=(raised(150.0), raised(150.0), raised(-300.0))), "is not finite"),
    ],
)
def test_a_term_that_grows_beyond_use(term: Term, size: str) -> None:
    (problem,) = find_nonfinite(model_of_terms(term), ADULTS)
    assert problem.path == "/model/equations/0/terms/0"
    assert problem.message.startswith(f'the term "t" {size} while ')
    assert "at most 1e+100 can be reckoned with" in problem.message


def test_the_sentence_of_a_term_names_every_range() -> None:
    term = Term("t", 1.0, product=(Factor(of="asked"), raised(60.0), raised(60.0, "y")))
    (problem,) = find_nonfinite(model_of_terms(term), ADULTS)
    assert (
        "while asked may be anything from 0 to 1, x may be anything from 30 to 75 and y may be anything from -9 to 4;"
        in problem.message
    )


def test_the_products_of_a_sum_are_added() -> None:
    """75^53 is 2.4e99: four of them are within the limit, five are not."""
    four, five = (Term("t", 1.0, sum=((raised(53.0),),) * count) for count in (4, 5))
    assert find_nonfinite(model_of_terms(four), ADULTS) == ()
    (problem,) = find_nonfinite(model_of_terms(five), ADULTS)
    assert 'the term "t" can reach 1.2e+100' in problem.message


def test_a_step_that_fails_is_named_and_its_term_is_not_named_again() -> None:
    term = Term("t", 1.0, product=(Factor(of="y", steps=(LOG,)), raised(150.0), raised(150.0)))
    assert [p.path for p in find_nonfinite(model_of_terms(term), ADULTS)] == [
        "/model/equations/0/terms/0/product/0/steps/0"
    ]


@pytest.mark.parametrize("bare", [True, False])
def test_what_passes_is_finite_to_the_end_of_the_band(bare: bool) -> None:
    """Every number of the file at the largest a file may hold, and every term at its limit."""
    top = float(2**53 - 1)
    terms = tuple(Term(f"t{k}", top, product=(Factor(of="x"),)) for k in range(20))
    limits = {"x": Interval(-1e100, 1e100), "y": Interval(0, 1)}
    covariance = tuple(tuple(top if i == j else 0.999 * top for j in range(20)) for i in range(20))
    draws = tuple((top * (-1) ** k,) * 20 for k in range(200))
    for band in (
        CovarianceBand(covariance, (AtCentre(top, (-top,) * 20, years=1.0),)),
        DrawsBand(draws, tuple((top * (-1) ** k,) for k in range(200))),
    ):
        model = model_of_terms(*terms, uncertainty=band, intercept=top)
        assert find_nonfinite(model, limits) == ()
        (line,) = lines_of(model.equations[0])
        columns = {"x": np.array([-1e100, 0.0, 1.0, 1e100])}
        design = design_columns(compile_terms(model, model.equations[0]), columns)
        for spread in ((top, 0.0, top), (top, 0.0, 5e-324), (top, -1e-154, 5e-324)):
            adjustment = None if bare else Adjustment(-top, top, spread)
            result = predict(line, design, adjustment=adjustment)
            for column in (result.eta, result.eta_lower, result.eta_upper, result.probability, result.lower):
                assert column is not None
                assert np.isfinite(column).all()


# ---------------------------------------------------------------- silent means finite

CONSTANT = st.one_of(st.floats(1e-6, 1e6), st.floats(-1e6, -1e-6))
SPLINES = st.lists(st.integers(-10_000, 10_000), min_size=3, max_size=5, unique=True).flatmap(
    lambda knots: st.builds(
        lambda basis: Step(spline=Spline(tuple(sorted(k / 100 for k in knots)), basis)),
        st.integers(1, len(knots) - 2),
    )
)
STEPS = st.one_of(
    st.builds(lambda c: Step(subtract=c), CONSTANT),
    st.builds(lambda c: Step(divide=c), CONSTANT),
    st.builds(lambda c: Step(multiply=c), CONSTANT),
    st.just(LOG),
    st.builds(lambda p: Step(power=p), st.sampled_from([-3.0, -1.2, -1.0, -0.5, 0.5, 2.0, 3.0, 20.0])),
    st.builds(lambda c: Step(clip_low=c), CONSTANT),
    st.builds(lambda c: Step(clip_high=c), CONSTANT),
    st.builds(lambda c: Step(above=c), CONSTANT),
    st.builds(lambda c: Step(up_to=c), CONSTANT),
    SPLINES,
)
END = st.one_of(st.floats(-1e9, 1e9), st.sampled_from([-inf, 0.0, inf, 1e-300]))
# as far as a number can be typed: 32 characters
TYPEABLE = 1e32


@settings(max_examples=300)
@given(st.lists(STEPS, min_size=1, max_size=4), END, END, st.lists(st.floats(0, 1), min_size=1, max_size=20))
def test_silent_means_finite(steps: list[Step], one: float, other: float, shares: list[float]) -> None:
    interval = Interval(min(one, other), max(one, other))
    model = model_with(*steps)
    if interval.low == inf or interval.high == -inf or find_nonfinite(model, {"x": interval}):
        return
    low, high = max(interval.low, -TYPEABLE), min(interval.high, TYPEABLE)
    inside = [low + share * (high - low) for share in shares]
    near = [value for value in (0.0, 1.0, -1.0, 1e-9, low, high) if low <= value <= high]
    x = np.clip(np.array(inside + near), low, high)
    (column,) = design_columns(compile_terms(model, model.equations[0]), {"x": x})
    assert np.isfinite(column).all()
