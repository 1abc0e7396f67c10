"""A logistic fit on restricted cubic splines by R's rms, as a coefficient file."""

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.coefficients.schema import (
    AtCentre,
    CompetingEvents,
    CovarianceBand,
    Equation,
    Factor,
    Horizon,
    ModelContent,
    Spline,
    Step,
    Term,
    WorkedExample,
)
from tests.reference.figures import SplineFit, load
from tests.reference.packaging import UPPER_95, complete_square, content, inverse_link, numbers, texts, through_file

NAMES = ("glu", "age", "bmi")


def splined(name: str, knots: tuple[float, ...], basis: int) -> Factor:
    return Factor(of=name, steps=(Step(spline=Spline(knots, basis)),))


def package_splines(fit: SplineFit) -> ModelContent:
    glu, age = fit.knots["glu"], fit.knots["age"]
    factors = {
        "glu": Factor(of="glu"),
        "glu_1": splined("glu", glu, 1),
        "glu_2": splined("glu", glu, 2),
        "age": Factor(of="age"),
        "age_1": splined("age", age, 1),
        "bmi": Factor(of="bmi"),
    }
    slopes, variance, centre = complete_square(fit.covariance)
    equation = Equation(
        id="all",
        applies_when={},
        link="logit",
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=tuple(
            Term(id=name, coefficient=coefficient, product=(factor,))
            for coefficient, (name, factor) in zip(fit.coefficients[1:], factors.items(), strict=True)
        ),
        horizons=(Horizon(years=1.0, intercept=fit.coefficients[0]),),
        uncertainty=CovarianceBand(slopes, (AtCentre(variance=variance, centre=centre, years=1.0),)),
    )
    low, middle, high = (inverse_link("logit", fit.link[0] + side * UPPER_95 * fit.se[0]) for side in (-1, 0, 1))
    example = WorkedExample(
        values=texts(NAMES, fit.profiles[0]),
        probability=middle,
        tolerance=1e-9,
        source=fit.source,
        years=1.0,
        lower=low,
        upper=high,
        computed=True,
    )
    return content(fit.source, numbers(NAMES), (equation,), (example,))


def test_spline_fit() -> None:
    fit = load("pima_rcs_logistic", SplineFit)
    model = through_file(package_splines(fit))
    for profile, link, se in zip(fit.profiles, fit.link, fit.se, strict=True):
        estimate = assess(model, entry_from_texts(texts(NAMES, profile))).estimate
        assert estimate is not None
        assert estimate.band is not None
        assert estimate.eta == pytest.approx(link, rel=0, abs=1e-9)
        limits = [inverse_link("logit", link + side * UPPER_95 * se) for side in (-1, 1)]
        assert np.array([estimate.band.lower, estimate.band.upper]) == pytest.approx(limits, rel=0, abs=1e-9)
