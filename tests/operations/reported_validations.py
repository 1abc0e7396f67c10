"""Validations to report: invented people and predictions measured for real, with counts and faults put down by hand."""

from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model
from clinicalc.coefficients.spans import Span
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.operations.validation_report import ReportedUpdate, ReportedValidation
from clinicalc.validation.measuring import measure_group, measure_horizon
from clinicalc.validation.predicted import FlagPoint, Outcome, PredictedPeople, YesNo
from clinicalc.validation.updated import (
    CalibrationGroup,
    EquationUpdate,
    GroupWeights,
    Refit,
    RefittedLine,
    Shrinkage,
    Testing,
    Update,
    UpdatedLine,
    UpdateMethod,
    UpdateTest,
    UpdateWish,
)
from clinicalc.validation.validated import Fault, FaultKind, HorizonValidation, PeopleCount, Validation
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import model_of

EXAMPLES = Path(__file__).parents[2] / "example_models"
COHORT = "Tarnwick Northgate, everybody registered on 2012-01-01"
POINTS = (FlagPoint(0.1, "Practice setting"), FlagPoint(0.05), FlagPoint(0.075), FlagPoint(0.2), FlagPoint(0.99))
YEARS = (Span(5.0), Span(10.0))
Rows = NDArray[np.bool_]


@cache
def shipped_model() -> Model:
    """The invented Cox model that is shipped."""
    return load_model(EXAMPLES / "tarnwick-cvd-10y-cox.json")


def _people(people: int, competing: bool) -> tuple[NDArray[np.float64], Watched]:
    """Ten-year hazards of which 1.3 times the predicted ones are true, and what was seen within 12 years."""
    rng = np.random.default_rng(20261201)
    hazard = np.exp(rng.normal(-2.6, 0.9, people))
    event = rng.exponential(10.0 / (1.3 * hazard))
    lost = np.minimum(rng.uniform(2.0, 25.0, people), 12.0)
    other = rng.exponential(60.0, people) if competing else np.full(people, np.inf)
    times = np.minimum(np.minimum(event, other), lost)
    status = np.where(event <= times, 1.0, np.where(other <= times, 2.0, 0.0))
    return hazard, Watched(times, status)


def _count(used: int, beyond: dict[str, int]) -> PeopleCount:
    refused = {"systolic_bp": 3, "total_cholesterol": 2}
    left = {"prior_cvd": 88}
    return PeopleCount(
        in_file=used + 88 + 7 + 41 + 60 + 4, excluded=left, not_covered=7, no_outcome=41, missing=60,
        missing_by={"hdl_cholesterol": 45, "egfr": 21}, refused=4, refused_by=refused, used=used, beyond=beyond,
    )  # fmt: skip


def _validation(
    model: Model, horizons: tuple[HorizonValidation, ...], parts: tuple[PredictedPeople, Outcome], faulty: bool
) -> Validation:
    predicted, outcome = parts
    people = len(predicted.probability)
    rng = np.random.default_rng(4)
    sex, place = rng.integers(0, 2, people), rng.integers(0, 40, people)
    picks: list[tuple[str, str, Rows]] = [
        ("sex", "Female", sex == 0),
        ("sex", "Male", sex == 1),
        ("practice", "Northgate", place > 0),
        ("practice", "Old Quay by the harbour, the practice of the mill", np.arange(people) < 3),
    ]
    span = horizons[-1].span
    groups = [measure_group(predicted.part(rows), outcome.part(rows), span, by, level) for by, level, rows in picks]
    faults = (
        Fault(FaultKind.TOO_LOW, "The model is too low: 1.3 times as many have the event as it expects.", p=2e-9),
        Fault(FaultKind.GROUP_TOO_LOW, "It is too low for women.", "sex", "Female", 0.00213),
        Fault(FaultKind.UNIT, "HDL cholesterol looks like mg/dL.", "hdl_cholesterol", p=0.0000312),
    )
    clean = ("The model holds in these people: nothing was found wrong.",)
    said = ("The model does not hold in these people as it is.", *(each.sentence for each in faults[:2]))
    return Validation(
        title=model.content.title,
        version=model.content.version,
        fingerprint=model.fingerprint,
        recalibration="",
        cohort=COHORT,
        count=_count(people, {"age": min(31, people // 2)}),
        horizons=horizons,
        groups=tuple(groups),
        faults=faults if faulty else (),
        verdict=said if faulty else clean,
        remarks=("Twelve people were watched for less than a day.",),
    )


def _timed(spans: tuple[Span, ...], people: int, factor: float, competing: bool, faulty: bool) -> Validation:
    hazard, watched = _people(people, competing)
    horizons = []
    for span in spans:
        h = factor * hazard * span.time / 10.0
        predicted = PredictedPeople(-np.expm1(-h), np.exp(-h))
        horizons.append(measure_horizon(predicted, watched, span, POINTS))
    return _validation(shipped_model(), tuple(horizons), (predicted, watched), faulty)


@cache
def timed() -> Validation:
    """Times, two horizons, faults."""
    return _timed(YEARS, 3000, 1.0, competing=False, faulty=True)


@cache
def mended() -> Validation:
    """The same people by an updated model."""
    return _timed(YEARS, 3000, 1.3, competing=False, faulty=False)


@cache
def competed() -> Validation:
    """Other events come first; no fault."""
    return _timed(YEARS[1:], 2000, 1.3, competing=True, faulty=False)


@cache
def answered() -> Validation:
    """A yes or no, without a horizon."""
    rng = np.random.default_rng(12)
    eta = rng.normal(-2.0, 1.0, 1500)
    predicted = PredictedPeople(1 / (1 + np.exp(-eta)))
    outcome = YesNo((rng.random(1500) < predicted.probability).astype(np.float64))
    at = measure_horizon(predicted, outcome, None, POINTS, resamples=20)
    return _validation(model_of(tiny_logit_model()), (at,), (predicted, outcome), faulty=False)


@cache
def scarce() -> Validation:
    """Twenty-five people of one prediction: nearly nothing can be worked out."""
    rng = np.random.default_rng(13)
    predicted = PredictedPeople(np.full(25, 0.08))
    outcome = YesNo((rng.random(25) < 0.1).astype(np.float64))
    at = measure_horizon(predicted, outcome, None, POINTS)
    return _validation(model_of(tiny_logit_model()), (at,), (predicted, outcome), faulty=False)


def updated(method: UpdateMethod = UpdateMethod.INTERCEPT_SLOPE) -> Update:
    """An update of the shipped model to 3,000 people: figures put down by hand."""
    terms = ("age", "male", "smoker")
    refit = Refit(
        terms, np.array([0.0712, -0.345, 0.61]), np.diag([0.0001, 0.01, 0.04]), None, True,
        (RefittedLine(YEARS[1], -2.4, 0.01, (1.0, 0.5, 0.2), 3000, 401),), Shrinkage(120.0, 3),
    )  # fmt: skip
    lines = tuple(
        UpdatedLine(span, 0.2624, 1.0432, (0.0025, 0.0001, 0.0036), 3000, events)
        for span, events in zip(YEARS, (180, 401), strict=True)
    )
    tests = (
        UpdateTest(UpdateMethod.REFIT, UpdateMethod.KEEP, 43.27, 13, 0.00004),
        UpdateTest(UpdateMethod.REFIT, UpdateMethod.INTERCEPT, 24.11, 12, 0.01967),
        UpdateTest(UpdateMethod.REFIT, UpdateMethod.INTERCEPT_SLOPE, 15.02, 11, 0.1815),
    )
    logliks: tuple[tuple[UpdateMethod, float | None], ...] = ((UpdateMethod.KEEP, None), (UpdateMethod.REFIT, -2931.2))
    groups = tuple(CalibrationGroup(YEARS[1], 300, 0.02 * k, 0.025 * k, 0.004 * k) for k in range(1, 6))
    one = EquationUpdate(
        id="all", method=method, people=3000, events=401, competing=0, slope=1.0432, slope_se=0.06,
        lines=() if method in (UpdateMethod.REFIT, UpdateMethod.KEEP) else lines,
        refit=refit if method is UpdateMethod.REFIT else None,
        testing=Testing(logliks, tests, 0.05, method)
        if method is UpdateMethod.INTERCEPT_SLOPE
        else None,
        groups=groups if method is UpdateMethod.TWO_SCALE else (),
    )  # fmt: skip
    wish = UpdateWish(UpdateMethod.CLOSED_TEST, weights=GroupWeights.EQUAL)
    return Update(wish, YEARS, (one,), 3000, 401, ("all: 3 people lack an outcome.",))


def reported(kind: str) -> ReportedValidation:
    """One of them, ready for its report."""
    tiny = model_of(tiny_logit_model())
    match kind:
        case "timed":
            return ReportedValidation(timed(), shipped_model(), "northgate.csv", (0.1,))
        case "competed":
            return ReportedValidation(competed(), shipped_model(), "northgate.csv")
        case "answered":
            return ReportedValidation(answered(), tiny)
        case "scarce":
            return ReportedValidation(scarce(), tiny)
        case _:
            more = ReportedUpdate(updated(UpdateMethod(kind)), after=mended())
            return ReportedValidation(timed(), shipped_model(), "northgate.csv", (0.1,), more)


KINDS = ("timed", "competed", "answered", "scarce", "intercept_slope", "refit", "two_scale", "keep")
