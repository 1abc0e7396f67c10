"""The equations of a coefficient file in words: terms, baselines, precision, recalibrations."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.assessment.model import Model
from clinicalc.coefficients.products import products_of
from clinicalc.coefficients.schema import (
    DrawsBand,
    Equation,
    Factor,
    Horizon,
    Interval,
    NoBand,
    PrintedInterval,
    ReconstructedBand,
    Step,
    Term,
)
from clinicalc.coefficients.spans import HasSpan, span_of
from clinicalc.covariates.transforms import StepKind, kind_of

_WORDS = {
    StepKind.SUBTRACT: "minus {}",
    StepKind.DIVIDE: "divided by {}",
    StepKind.MULTIPLY: "times {}",
    StepKind.POWER: "to the power {}",
    StepKind.CLIP_LOW: "at least {}",
    StepKind.CLIP_HIGH: "at most {}",
    StepKind.ABOVE: "above {}",
    StepKind.FROM: "{} or above",
    StepKind.BELOW: "below {}",
    StepKind.UP_TO: "{} or below",
}


def equation_sections(model: Model) -> Iterator[tuple[str, list[str]]]:
    """A section for each equation, then one for the recalibrations."""
    for equation in model.content.equations:
        yield f"Equation {equation.id}", list(_equation(equation))
    lines: list[str] = []
    for recalibration in model.content.recalibrations:
        lines.append(f"{recalibration.id}: {recalibration.label}, {_span(recalibration)} ({recalibration.source})")
        for id, line in recalibration.equations.items():
            known = (
                "covariance not known" if not isinstance(line.covariance, tuple) else f"covariance {line.covariance}"
            )
            lines.append(f"    {id}: {line.intercept!r} + {line.slope!r} x linear predictor, {known}")
    required = " (no number without one)" if model.content.recalibration_required else ""
    yield f"Recalibrations{required}", lines


def _equation(equation: Equation) -> Iterator[str]:
    conditions = "; ".join(f"{id} is {' or '.join(answers)}" for id, answers in equation.applies_when.items())
    yield f"applies when {conditions}" if conditions else "applies to everybody"
    competing = equation.competing_events
    which = "" if isinstance(competing.which, UnsetType) else f" ({competing.which})"
    yield f"link {equation.link}; competing events: {competing.handled.replace('_', ' ')}{which}"
    for term in equation.terms:
        yield f"{_figure(term.coefficient)} x {_term(term)}{_term_remarks(term)}"
    for horizon in equation.horizons:
        yield f"{_span(horizon)}: {_baseline(horizon)}"
    if not isinstance(equation.reference_person, UnsetType):
        person = ", ".join(
            f"{id} {_figure(value) if isinstance(value, float) else value}"
            for id, value in equation.reference_person.items()
        )
        yield f"reference person: {person}"
    yield from _uncertainty(equation)


def _term(term: Term) -> str:
    products = [" x ".join(_factor(factor) for factor in product) for product in products_of(term)]
    return products[0] if len(products) == 1 else f"sum of [{'; '.join(products)}]"


def _factor(factor: Factor) -> str:
    if isinstance(factor.steps, UnsetType) or not factor.steps:
        return factor.of
    return f"({factor.of}: {', '.join(_step(step) for step in factor.steps)})"


def _step(step: Step) -> str:
    kind = kind_of(step)
    if not isinstance(step.spline, UnsetType):
        knots = _figures(step.spline.knots)
        return f"restricted cubic spline basis {step.spline.basis}, knots {knots}"
    if not isinstance(step.is_, UnsetType):
        return f"is {' or '.join(step.is_)}"
    if kind is StepKind.LOG:
        return "natural logarithm"
    value = getattr(step, "from_" if kind is StepKind.FROM else kind.value)
    return _WORDS[kind].format(_figure(value))


def _term_remarks(term: Term) -> str:
    fixed = ", not estimated" if term.fixed is True else ""
    if not isinstance(term.interval, Interval):
        return fixed
    interval = term.interval
    scale = "ratio" if interval.scale == "ratio" else "coefficient"
    return f"{fixed}, printed interval of the {scale} at {interval.level:g}: {interval.lower:g} to {interval.upper:g}"


def _baseline(horizon: Horizon) -> str:
    parts = [
        f"{words} {_figure(value)}"
        for words, value in (
            ("intercept", horizon.intercept),
            ("baseline survival", horizon.baseline_survival),
            ("mean of the linear predictor", horizon.mean_linear_predictor),
            ("log cumulative hazard", horizon.log_cumulative_hazard),
            ("events", horizon.events),
            ("people", horizon.people),
            ("still at risk", horizon.still_at_risk),
        )
        if not isinstance(value, UnsetType)
    ]
    if isinstance(horizon.survival_interval, PrintedInterval):
        printed = horizon.survival_interval
        parts.append(f"printed interval of survival at {printed.level:g}: {printed.lower:g} to {printed.upper:g}")
    return ", ".join(parts)


def _uncertainty(equation: Equation) -> Iterator[str]:
    band = equation.uncertainty
    if isinstance(band, NoBand):
        yield f"no band: {band.because}"
        return
    approximate = isinstance(band, ReconstructedBand)
    yield f"band: {band.__struct_config__.tag}{': approximate, rebuilt from printed intervals' if approximate else ''}"
    if isinstance(band, ReconstructedBand) and not isinstance(band.assumptions, UnsetType):
        yield from (f"    assumption: {assumption}" for assumption in band.assumptions)
    if isinstance(band, DrawsBand):
        yield f"    {len(band.coefficients)} draws"
        return
    estimated = [term.id for term in equation.terms if term.fixed is not True]
    for id, row in zip(estimated, band.covariance, strict=True):
        yield f"    covariance of {id}: {_figures(row)}"
    for at in band.at_centre:
        yield f"    {_span(at)}: variance {_figure(at.variance)} at {_figures(at.centre)}"


def _figure(value: float) -> str:
    """A figure of the file as the shortest decimal that reads back to it."""
    return repr(value).removesuffix(".0")


def _figures(values: tuple[float, ...]) -> str:
    return " ".join(_figure(value) for value in values)


def _span(part: HasSpan) -> str:
    span = span_of(part)
    return "" if span is None else span.words
