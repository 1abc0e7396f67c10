"""Turns the figures of a fit into a coefficient file and back into a proved model, as a packaging tool would."""

import math
from collections.abc import Sequence
from decimal import Decimal
from statistics import NormalDist

import numpy as np

from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import prove_model
from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.schema import (
    AtCentre,
    Choice,
    ChoicePredictor,
    CoefficientFile,
    CompetingEvents,
    CovarianceBand,
    Equation,
    Factor,
    Horizon,
    ModelContent,
    NoBand,
    NumberPredictor,
    Plain,
    Predictor,
    RobustBand,
    Source,
    Term,
    Uncertainty,
    Use,
    WorkedExample,
)
from clinicalc.coefficients.writer import write_bytes
from tests.reference.figures import BinaryFit, HazardFit, Matrix, Pair, Row, SubdistributionFit

EXAMPLE_TOLERANCE = 1e-9
STRATUM = "stratum"
UPPER_95 = NormalDist().inv_cdf(0.975)


def package_binary(fit: BinaryFit, robust: Matrix | None = None) -> ModelContent:
    """A binomial fit; a `robust` covariance, intercept first, takes the place of the fit's own."""
    covariance = fit.covariance if robust is None else robust
    slopes, variance, centre = complete_square(covariance)
    at = (AtCentre(variance=variance, centre=centre, years=1.0),)
    b0 = fit.coefficients[0]
    equation = Equation(
        id="all",
        applies_when={},
        link=fit.link,
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=linear_terms(fit.predictors, fit.coefficients[1:]),
        horizons=(
            Horizon(years=1.0, intercept=b0) if fit.link == "logit" else Horizon(years=1.0, log_cumulative_hazard=b0),
        ),
        uncertainty=CovarianceBand(slopes, at) if robust is None else RobustBand(slopes, at),
    )
    first = fit.predictions[0]
    lower, upper = limits_by_hand(fit, covariance, fit.profiles[first.profile], UPPER_95)
    example = WorkedExample(
        values=texts(fit.predictors, fit.profiles[first.profile]),
        probability=first.probability,
        tolerance=EXAMPLE_TOLERANCE,
        source=fit.source,
        years=1.0,
        lower=lower,
        upper=upper,
        computed=True,
    )
    return content(fit.source, numbers(fit.predictors), (equation,), (example,))


def package_hazard(fit: HazardFit) -> ModelContent:
    """A proportional hazards fit: one equation a stratum, which is a question of its own where there are several."""
    predictors: tuple[Predictor, ...] = numbers(fit.predictors)
    if len(fit.strata) > 1:
        choices = tuple(Choice(stratum, stratum) for stratum in fit.strata)
        predictors += (ChoicePredictor(id=STRATUM, label="Stratum", group="Values", choices=choices),)
    return content(
        fit.source,
        predictors,
        tuple(_stratum_equation(fit, stratum) for stratum in fit.strata),
        tuple(_hazard_example(fit, stratum) for stratum in fit.strata),
    )


def package_subdistribution(fit: SubdistributionFit) -> ModelContent:
    """A subdistribution hazards fit without a band."""
    equation = Equation(
        id="all",
        applies_when={},
        link="cloglog",
        competing_events=CompetingEvents(handled="subdistribution", which="death"),
        terms=linear_terms(fit.predictors, fit.coefficients),
        horizons=tuple(
            Horizon(time=time, unit=fit.unit, log_cumulative_hazard=math.log(hazard))
            for time, hazard in zip(fit.times, fit.cumulative_hazards, strict=True)
        ),
        uncertainty=NoBand("Limits are not part of this comparison."),
    )
    first = fit.predictions[0]
    example = WorkedExample(
        values=texts(fit.predictors, fit.profiles[first.profile]),
        probability=first.probability,
        tolerance=EXAMPLE_TOLERANCE,
        source=fit.source,
        time=first.time,
        unit=fit.unit,
        computed=True,
    )
    return content(fit.source, numbers(fit.predictors), (equation,), (example,))


def complete_square(covariance: Matrix) -> tuple[Matrix, float, Row]:
    """V, a and c of var = a + (x - c)'V(x - c), from a covariance whose first row is the intercept's.

    c = -V^-1 v0 and a = v00 - v0'V^-1 v0.
    """
    full = np.array(covariance)
    v0 = (full[0, 1:] + full[1:, 0]) / 2
    slopes = (full[1:, 1:] + full[1:, 1:].T) / 2
    # solved on the correlation scale, where the units of the predictors cost no digits
    sd = np.sqrt(np.diag(slopes))
    solution = np.linalg.solve(slopes / np.outer(sd, sd), v0 / sd) / sd
    return matrix(slopes), float(full[0, 0] - v0 @ solution), row(-solution)


def limits_by_hand(fit: BinaryFit, covariance: Matrix, x: Sequence[float], quantile: float) -> Pair:
    """Limits from [1, x]'C[1, x] with the intercept's row in place: no square completed."""
    z = np.array([1.0, *x])
    eta = float(z @ np.array(fit.coefficients))
    half = quantile * math.sqrt(float(z @ np.array(covariance) @ z))
    low, high = (inverse_link(fit.link, end) for end in (eta - half, eta + half))
    return low, high


def inverse_link(link: str, eta: float) -> float:
    """g(eta), by the standard library."""
    return 1 / (1 + math.exp(-eta)) if link == "logit" else -math.expm1(-math.exp(eta))


def linear_terms(names: Sequence[str], coefficients: Sequence[float]) -> tuple[Term, ...]:
    """One untransformed term a predictor."""
    return tuple(
        Term(id=name, coefficient=coefficient, product=(Factor(of=name),))
        for name, coefficient in zip(names, coefficients, strict=True)
    )


def numbers(names: Sequence[str]) -> tuple[Predictor, ...]:
    """Bare numbers without limits."""
    return tuple(NumberPredictor(id=name, label=name, quantity="number", unit="1", group="Values") for name in names)


def texts(names: Sequence[str], values: Sequence[float], stratum: str = "all") -> dict[str, str]:
    """The values as a person would type them: all digits, no power of ten."""
    typed = {name: typed_number(value) for name, value in zip(names, values, strict=True)}
    return typed if stratum == "all" else typed | {STRATUM: stratum}


def typed_number(value: float) -> str:
    """The shortest decimal that reads back to the same double, written out."""
    return format(Decimal(repr(value)), "f")


def content(
    source: str,
    predictors: tuple[Predictor, ...],
    equations: tuple[Equation, ...],
    examples: tuple[WorkedExample, ...],
) -> ModelContent:
    """Everything else that a file must say."""
    return ModelContent(
        id="reference-fit",
        version="1.0.0",
        title="Reference fit",
        outcome="The outcome of the fit.",
        source=Source(kind="local", citation=source),
        unconfirmed=(),
        use=Use(
            population="The rows the fit was made from.",
            setting="Tests of the program.",
            not_for=("patients",),
            not_used=(),
            cautions=(),
            plain=Plain(outcome="the outcome", cautions=()),
        ),
        predictors=predictors,
        derived=(),
        exclusions=(),
        equations=equations,
        recalibration_required=False,
        recalibrations=(),
        decision_points=(),
        worked_examples=examples,
        population=None,
        documentation=(),
    )


def through_file(model: ModelContent) -> Model:
    """The model after it was written as a file, read back and proved."""
    written = write_bytes(CoefficientFile(format="clinicalc.coefficients/1", model=model, signatures=()))
    return prove_model(read_bytes(written, "reference-fit.json"))


def matrix(values: "np.ndarray[tuple[int, int], np.dtype[np.float64]]") -> Matrix:
    """An array as the file's rows."""
    return tuple(row(line) for line in values)


def row(values: "np.ndarray[tuple[int], np.dtype[np.float64]]") -> Row:
    """An array as one row of the file."""
    return tuple(float(value) for value in values)


def _stratum_equation(fit: HazardFit, stratum: str) -> Equation:
    x_ref, b = np.array(fit.x_ref), np.array(fit.coefficients)
    at = [baseline for baseline in fit.baselines if baseline.stratum == stratum]
    centres = tuple(
        AtCentre(time=s.time, unit=fit.unit, variance=s.A / (s.H * s.H), centre=row(x_ref + np.array(s.q) / s.H))
        for s in at
    )
    band: Uncertainty = RobustBand(fit.covariance, centres) if fit.robust else CovarianceBand(fit.covariance, centres)
    return Equation(
        id=stratum,
        applies_when={} if stratum == "all" else {STRATUM: (stratum,)},
        link="cloglog",
        competing_events=CompetingEvents(handled="not_applicable"),
        terms=linear_terms(fit.predictors, fit.coefficients),
        horizons=tuple(
            Horizon(time=s.time, unit=fit.unit, log_cumulative_hazard=math.log(s.H) - float(x_ref @ b)) for s in at
        ),
        uncertainty=band,
    )


def _hazard_example(fit: HazardFit, stratum: str) -> WorkedExample:
    shown = next(p for p in fit.predictions if fit.profiles[p.profile].stratum == stratum)
    low, high = shown.loglog
    return WorkedExample(
        values=texts(fit.predictors, fit.profiles[shown.profile].values, stratum),
        probability=1 - shown.survival,
        tolerance=EXAMPLE_TOLERANCE,
        source=fit.source,
        time=shown.time,
        unit=fit.unit,
        lower=1 - high,
        upper=1 - low,
        computed=True,
    )
