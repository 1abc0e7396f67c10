"""The equations of a coefficient file in words: terms, baselines, precision, recalibrations."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import (
    DrawsBand,
    Equation,
    Horizon,
    Interval,
    NoBand,
    PrintedInterval,
    ReconstructedBand,
    Term,
)
from clinicalc.coefficients.spans import HasSpan, span_of
from clinicalc.covariates.term_words import say_figure, say_figures, say_term


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
        yield f"{say_figure(term.coefficient)} x {say_term(term)}{_term_remarks(term)}"
    for horizon in equation.horizons:
        yield f"{_span(horizon)}: {_baseline(horizon)}"
    if not isinstance(equation.reference_person, UnsetType):
        person = ", ".join(
            f"{id} {say_figure(value) if isinstance(value, float) else value}"
            for id, value in equation.reference_person.items()
        )
        yield f"reference person: {person}"
    yield from _uncertainty(equation)


def _term_remarks(term: Term) -> str:
    fixed = ", not estimated" if term.fixed is True else ""
    if not isinstance(term.interval, Interval):
        return fixed
    interval = term.interval
    scale = "ratio" if interval.scale == "ratio" else "coefficient"
    return f"{fixed}, printed interval of the {scale} at {interval.level:g}: {interval.lower:g} to {interval.upper:g}"


def _baseline(horizon: Horizon) -> str:
    parts = [
        f"{words} {say_figure(value)}"
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
        yield f"    covariance of {id}: {say_figures(row)}"
    for at in band.at_centre:
        yield f"    {_span(at)}: variance {say_figure(at.variance)} at {say_figures(at.centre)}"


def _span(part: HasSpan) -> str:
    span = span_of(part)
    return "" if span is None else span.words
