"""Rebuilt bands: what is lacking or cannot be is refused, all of it at once, with the place and the likely slip."""

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import msgspec
import numpy as np
import pytest
from msgspec import UNSET

from clinicalc.coefficients.schema import (
    CompetingEvents,
    CovarianceBand,
    Equation,
    Factor,
    Horizon,
    Interval,
    ModelContent,
    NoBand,
    NumberPredictor,
    Population,
    PopulationAnswer,
    PopulationNumber,
    PrintedInterval,
    Product,
    ReconstructedBand,
    Step,
    Term,
    YesNoPredictor,
)
from clinicalc.development.reconstruction import reconstruct_bands
from clinicalc.development.reconstruction_plan import (
    EquationPlan,
    ReconstructionPlan,
    ReferenceRows,
    StatedPatient,
    SurvivalLimits,
)
from clinicalc.development.reconstruction_sensitivity import judge_correlations
from clinicalc.errors import Problem, ReconstructionRefused
from tests.development.published import content_of, numbers

POPULATION = Population(
    source="Invented.",
    numbers=(PopulationNumber("age", 50.0, 10.0), PopulationNumber("pressure", 130.0, 20.0)),
    correlations=((1.0, 0.4), (0.4, 1.0)),
    yes_no=(PopulationAnswer("smoker", 1.0, {"age": -0.05}),),
)
PLAN = ReconstructionPlan(seed=3, people=20_000, equations=(EquationPlan("all", people=1000),))


def term(id: str, coefficient: float, lower: float, upper: float, *steps: Step, scale: Any = "link") -> Term:
    return Term(
        id,
        coefficient,
        product=(Factor(id, steps or UNSET),),
        interval=Interval(scale, 0.95, lower, upper),
    )


TERMS = (
    term("age", 0.05, 0.03, 0.07),
    term("pressure", 0.01, 0.004, 0.016),
    term("smoker", 0.6, 0.3, 0.9),
)
PRINTED = np.array([0.02, 0.006, 0.3]) / 1.959964
"""Their standard errors: half the intervals' widths over the normal quantile."""

HORIZON = Horizon(years=10.0, log_cumulative_hazard=-6.0)


def model(
    *terms: Term, population: Population | None = POPULATION, horizon: Horizon = HORIZON, link: Any = "cloglog"
) -> ModelContent:
    weight = NumberPredictor("weight", "Weight", "number", "1", "Values", possible=(30.0, 200.0))
    predictors = (*numbers(("age", "pressure")), weight, YesNoPredictor(id="smoker", label="Smokes", group="Values"))
    equation = Equation(
        "all", {}, link, CompetingEvents("censored"), terms or TERMS, (horizon,), NoBand("It is to be rebuilt.")
    )
    return content_of(predictors, (equation,), population=population)


def refused(content: ModelContent, plan: ReconstructionPlan = PLAN) -> tuple[Problem, ...]:
    with pytest.raises(ReconstructionRefused) as caught:
        reconstruct_bands(content, plan)
    assert str(len(caught.value.problems)) in str(caught.value).splitlines()[0]
    return caught.value.problems


def said(content: ModelContent, path: str, words: str, plan: ReconstructionPlan = PLAN) -> None:
    problems = refused(content, plan)
    assert any(p.path == path and words in p.message for p in problems), [str(p) for p in problems]


def band(content: ModelContent, plan: ReconstructionPlan = PLAN) -> ReconstructedBand:
    made = reconstruct_bands(content, plan).equations[0].uncertainty
    assert isinstance(made, ReconstructedBand)
    return made


def test_nothing_is_refused_that_is_whole() -> None:
    made = band(model())
    assert np.sqrt(np.diag(np.array(made.covariance))) == pytest.approx(
        np.array([0.02, 0.006, 0.3]) / 1.959964, rel=1e-6
    )
    assert any("seed 3" in text and "20,000 people who do not exist" in text for text in made.assumptions or ())


# ---------------------------------------------------------------- intervals

T0 = "/model/equations/0/terms/0"


@pytest.mark.parametrize(
    ("first", "path", "words"),
    [
        (Term("age", 0.05, product=(Factor("age"),)), T0, "neither a printed interval nor a standard error"),
        (term("age", 0.05, 0.06, 0.09), f"{T0}/interval", "does not hold its estimate: the coefficient is 0.05"),
        (term("age", 0.05, 1.03, 1.07), f"{T0}/interval", 'Is its scale "ratio"?'),
        (term("age", 0.05, 0.03, 0.07, scale="ratio"), f"{T0}/interval", 'Is its scale "link"?'),
        (term("age", 0.05, -0.1, 1.07, scale="ratio"), f"{T0}/interval", "a ratio is above 0"),
        (term("age", 0.05, 0.05, 0.05), f"{T0}/interval", "has no width above 0"),
        (term("age", 0.05, 0.07, 0.03), f"{T0}/interval", "its lower limit must be the smaller"),
        (term("age", 0.05, 0.03, float("inf")), f"{T0}/interval", "has no width above 0"),
    ],
)
def test_an_interval_that_gives_no_standard_error(first: Term, path: str, words: str) -> None:
    said(model(first, *TERMS[1:]), path, words)


@pytest.mark.parametrize("value", [0.0, -0.1, float("nan"), float("inf")])
def test_a_standard_error_is_above_nought(value: float) -> None:
    plan = replace(PLAN, equations=(EquationPlan("all", people=1000, standard_errors={"age": value}),))
    said(model(), T0, "must be above 0", plan)


def test_a_given_standard_error_counts_before_the_interval_and_is_said() -> None:
    plan = replace(PLAN, equations=(EquationPlan("all", people=1000, standard_errors={"age": 0.02}),))
    made = band(model(), plan)
    assert made.covariance[0][0] == pytest.approx(0.0004, rel=1e-12)
    assert any(
        text == "Standard errors were given, not taken from an interval, for age." for text in made.assumptions or ()
    )


def test_a_plan_for_what_is_not_there() -> None:
    plan = replace(
        PLAN,
        equations=(
            EquationPlan("all", people=1000, standard_errors={"weight": 1.0}, means={"height": 1.0}),
            EquationPlan("women"),
        ),
    )
    problems = refused(model(), plan)
    assert any('equation "women"; there is none' in p.message for p in problems)
    kept = replace(plan, equations=plan.equations[:1])
    said(model(), "/model/equations/0/terms", 'standard error for "weight", which is no estimated term', kept)
    said(model(), "/model/equations/0/terms", 'mean for "height", which is no term', kept)


def test_a_fixed_term_stays_out_of_the_band() -> None:
    fixed = msgspec.structs.replace(TERMS[0], interval=UNSET, fixed=True)
    made = band(model(fixed, *TERMS[1:]))
    assert np.array(made.covariance).shape == (2, 2)
    assert len(made.at_centre[0].centre) == 2
    every = [msgspec.structs.replace(one, fixed=True) for one in TERMS]
    said(model(*every), "/model/equations/0/terms", "every term is fixed")


# ---------------------------------------------------------------- people

Change = Callable[[Population], Population]


def changed(**fields: Any) -> Population:
    return msgspec.structs.replace(POPULATION, **fields)


@pytest.mark.parametrize(
    ("population", "path", "words"),
    [
        (changed(numbers=(PopulationNumber("age", 50.0, -1.0), POPULATION.numbers[1])), "/numbers/0/sd", "above 0"),
        (changed(numbers=(PopulationNumber("age", 50.0, 0.0), POPULATION.numbers[1])), "/numbers/0/sd", "above 0"),
        (changed(numbers=POPULATION.numbers[:1], correlations=((1.0,),)), "", 'does not describe "pressure"'),
        (changed(yes_no=()), "", 'does not describe "smoker"'),
        (changed(correlations=((1.0, 1.2), (1.2, 1.0))), "/correlations", "not positive definite"),
        (changed(correlations=((1.0, 1.0), (1.0, 1.0))), "/correlations", "not positive definite"),
        (changed(correlations=((1.0, 0.4), (0.3, 1.0))), "/correlations", "not symmetric"),
        (changed(correlations=((1.0,),)), "/correlations", "1 rows, and there are 2 numbers"),
    ],
)
def test_a_population_that_cannot_be_drawn_from(population: Population, path: str, words: str) -> None:
    said(model(population=population), f"/model/population{path}", words)


def test_a_term_that_nobody_has() -> None:
    nobody = changed(yes_no=(PopulationAnswer("smoker", -60.0, {}),))
    said(model(population=nobody), "/model/equations/0/terms", '"smoker": everybody among the reference people')


def test_terms_that_say_the_same() -> None:
    twin = Term(
        "again", 0.02, product=(Factor("age", (Step(multiply=2.0),)),), interval=Interval("link", 0.95, 0.0, 0.04)
    )
    said(model(*TERMS, twin), "/model/equations/0/terms", '"age" and "again" say the same of everybody')


def test_too_few_people_and_people_for_whom_there_is_no_number() -> None:
    said(model(), "", "at least 20,000 are needed", replace(PLAN, people=500))
    odd = model()
    age = msgspec.structs.replace(odd.predictors[0], derivation=(150.0, 160.0), outside_derivation="stop")
    away = msgspec.structs.replace(odd, predictors=(age, *odd.predictors[1:]))
    said(away, "/model/population", "people for whom the equation gives a number")


def test_rows_must_be_whole() -> None:
    columns = {"age": np.array([50.0, 60.0]), "pressure": np.array([120.0])}
    plan = replace(PLAN, rows=ReferenceRows(columns, "Two people."))
    said(model(), "", "must have one length", plan)
    said(model(), "/model/equations/0", 'lack the columns "smoker"', plan)


def test_a_band_of_the_fits_own_is_not_replaced() -> None:
    own = model()
    fit = CovarianceBand(((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)), ())
    held = msgspec.structs.replace(own, equations=(msgspec.structs.replace(own.equations[0], uncertainty=fit),))
    said(held, "/model/equations/0/uncertainty", "a rebuilt one would be worse")


def test_everything_is_said_at_once() -> None:
    bad = model(Term("age", 0.05, product=(Factor("age"),)), term("pressure", 0.01, 0.02, 0.03), TERMS[2])
    lacking = msgspec.structs.replace(bad, population=changed(yes_no=()))
    assert {p.path for p in refused(lacking)} == {T0, "/model/equations/0/terms/1/interval", "/model/population"}


# ---------------------------------------------------------------- the baseline


@pytest.mark.parametrize(
    ("limits", "deviation"),
    [  # by hand: S between 0.80 and 0.90, z 1.959964
        (SurvivalLimits.LOG_LOG, (np.log(-np.log(0.8)) - np.log(-np.log(0.9))) / 3.919928),
        (SurvivalLimits.LOG, np.log(0.9 / 0.8) / 3.919928 / -np.log(np.sqrt(0.72))),
        (SurvivalLimits.PLAIN, 0.1 / 3.919928 / -(0.85 * np.log(0.85))),
    ],
)
def test_a_printed_kaplan_meier_interval_comes_first(limits: SurvivalLimits, deviation: float) -> None:
    horizon = Horizon(
        years=10.0, log_cumulative_hazard=-6.0, events=90, survival_interval=PrintedInterval(0.95, 0.8, 0.9)
    )
    made = band(model(horizon=horizon), replace(PLAN, survival_limits=limits))
    assert made.at_centre[0].variance == pytest.approx(deviation**2, rel=1e-6)
    assert any(f"taken as {limits.value} limits" in text for text in made.assumptions or ())


def test_events_then_people_then_nothing() -> None:
    events = Horizon(years=10.0, log_cumulative_hazard=-6.0, events=90, people=1000, still_at_risk=60)
    made = band(model(horizon=events))
    assert made.at_centre[0].variance == pytest.approx(1 / 90)
    assert any("Only 60 of 1,000 people were still under observation" in text for text in made.assumptions or ())
    expected = band(model())
    assert any("1,000 people times the mean risk" in text for text in expected.assumptions or ())
    said(model(), "/model/equations/0/horizons", "nor the number of people", replace(PLAN, equations=()))
    whole = Horizon(years=10.0, log_cumulative_hazard=-6.0, survival_interval=PrintedInterval(0.95, 0.8, 1.0))
    said(model(horizon=whole), "/model/equations/0/horizons", "must rise and lie between 0 and 1")


def test_a_logistic_baseline_needs_people() -> None:
    horizon = Horizon(years=10.0, intercept=-4.0)
    made = band(model(horizon=horizon, link="logit"))
    assert any("times the mean of p(1 − p)" in text for text in made.assumptions or ())
    said(
        model(horizon=horizon, link="logit"),
        "/model/equations/0/horizons",
        "number of people",
        replace(PLAN, equations=()),
    )


# ---------------------------------------------------------------- without reference people

MEANS = {"age": 50.0, "pressure": 130.0, "smoker": 0.2}
ROUGH = replace(PLAN, equations=(EquationPlan("all", people=1000, means=MEANS),))


def test_the_rougher_form_is_labelled_so() -> None:
    made = band(model(population=None), ROUGH)
    assert np.array(made.covariance) == pytest.approx(np.diag(PRINTED**2), rel=1e-6)
    assert made.at_centre[0].centre == (50.0, 130.0, 0.2)
    # 1 over 1000 people times the risk of somebody who has all means
    eta = -6.0 + 0.05 * 50 + 0.01 * 130 + 0.6 * 0.2
    assert made.at_centre[0].variance == pytest.approx(1 / (1000 * -np.expm1(-np.exp(eta))), rel=1e-9)
    assert any(text.startswith("Rougher than with a description of the people") for text in made.assumptions or ())


BENT: tuple[tuple[Product, ...], ...] = (
    ((Factor("weight", (Step(power=2.0),)),),),
    ((Factor("age"), Factor("smoker")),),
    ((Factor("pressure", (Step(clip_low=110.0),)),),),
    ((Factor("smoker"),), (Factor("age", (Step(above=60.0),)),)),
    ((Factor("age", (Step(above=60.0),)),),),
)


@pytest.mark.parametrize("products", BENT)
def test_products_powers_and_the_like_need_people(products: tuple[Product, ...]) -> None:
    shape: dict[str, Any] = {"product": products[0]} if len(products) == 1 else {"sum": products}
    bent = Term("bent", 0.01, interval=Interval("link", 0.95, 0.0, 0.02), **shape)
    plan = replace(PLAN, equations=(EquationPlan("all", people=1000, means=MEANS | {"bent": 1.0}),))
    path, words = "/model/equations/0/terms", "too closely related for a band without. Describe a population."
    said(model(*TERMS, bent, population=None), path, words, plan)


def test_the_rougher_form_needs_every_mean() -> None:
    plan = replace(PLAN, equations=(EquationPlan("all", people=1000, means={"age": 50.0}),))
    said(model(population=None), "/model/equations/0/terms", 'there is none of "pressure" and "smoker"', plan)


# ---------------------------------------------------------------- sensitivity

PATIENT = StatedPatient("a smoker of 60", {"age": 60.0, "pressure": 150.0, "smoker": "yes"})


def test_other_correlations_are_tried_and_said() -> None:
    plan = replace(PLAN, patients=(PATIENT,))
    cases = judge_correlations(model(), plan)
    assert [case.words for case in cases] == ["as assumed", "nothing related to anything", "correlations times 1.5"]
    assert len({case.probability for case in cases}) == 1
    assert len({round(case.lower, 6) for case in cases}) == 3
    # nothing related: estimates hardly related either, so the variance is nearly a sum of parts
    text = (band(model(), plan).assumptions or ())[-1]
    assert text.startswith("What the assumed correlations do, for a smoker of 60: as assumed ")
    assert "; nothing related to anything " in text


def test_correlations_that_cannot_be_raised_so_far_are_raised_less() -> None:
    strong = changed(
        numbers=(*POPULATION.numbers, PopulationNumber("weight", 80.0, 10.0)),
        correlations=((1.0, 0.6, -0.5), (0.6, 1.0, 0.1), (-0.5, 0.1, 1.0)),
    )
    words = [case.words for case in judge_correlations(model(population=strong), replace(PLAN, patients=(PATIENT,)))]
    # at 1.5: determinant 1 - 0.81 - 0.5625 - 0.0225 - 0.2025 < 0; at 1.2: 1 - .5184 - .36 - .0144 - .1037 > 0
    assert words[2] == "correlations times 1.2"


def test_sensitivity_needs_a_description_and_a_whole_patient() -> None:
    rows = ReferenceRows({"age": np.array([50.0, 60.0])}, "Two.")
    with pytest.raises(ReconstructionRefused, match="no assumed correlations"):
        judge_correlations(model(), replace(PLAN, rows=rows, patients=(PATIENT,)))
    lacking = StatedPatient("somebody", {"age": 60.0, "smoker": "yes"})
    with pytest.raises(ReconstructionRefused, match='"somebody" lacks "pressure"'):
        judge_correlations(model(), replace(PLAN, patients=(lacking,)))
    odd = StatedPatient("somebody", {"age": 60.0, "pressure": 120.0, "smoker": "perhaps"})
    with pytest.raises(ReconstructionRefused, match='"perhaps" is no value of "smoker"'):
        judge_correlations(model(), replace(PLAN, patients=(odd,)))
