"""Cautions that come with the equation that answered, not with one value."""

from collections.abc import Iterator

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.coefficients.schema import Recalibration, Unconfirmed
from clinicalc.coefficients.spans import Span, span_of

COMPETING_AGE = 70.0
"""Years. Above it deaths from other causes are common enough to matter; the limit is common practice."""

_NOT_BEHIND_A_NUMBER = frozenset(
    {"worked_examples", "decision_points", "population", "documentation", "use", "source", "title", "outcome"}
)


def unconfirmed_behind(
    model: Model, equation: ModelEquation, span: Span, recalibration: Recalibration | None
) -> tuple[Unconfirmed, ...]:
    """The unconfirmed figures that a result of this equation, horizon and recalibration rests on, in file order."""
    return tuple(
        entry
        for entry in model.content.unconfirmed
        if _is_behind(model, entry.at.split("/")[1:], equation, span, recalibration)
    )


def _is_behind(
    model: Model, path: list[str], equation: ModelEquation, span: Span, recalibration: Recalibration | None
) -> bool:
    match path:
        case ["equations", place, "horizons", horizon, *_]:
            return int(place) == equation.place and span_of(equation.content.horizons[int(horizon)]) == span
        case ["equations", _, "terms", _, "interval", *_]:
            return False
        case ["equations", place, *_]:
            return int(place) == equation.place
        case ["recalibrations", place, "equations", id, *_]:
            return recalibration is model.content.recalibrations[int(place)] and id == equation.content.id
        case ["recalibrations", place, *_]:
            return recalibration is model.content.recalibrations[int(place)]
        case ["recalibrations"]:
            return recalibration is not None
        case [first, *_]:
            return first not in _NOT_BEHIND_A_NUMBER
        case _:
            return True


def equation_cautions(
    model: Model,
    equation: ModelEquation,
    span: Span,
    recalibration: Recalibration | None,
    numbers: dict[str, TakenNumber],
) -> Iterator[Finding]:
    """Unconfirmed figures that were used, and competing events that the fit censored in an old patient."""
    used = unconfirmed_behind(model, equation, span, recalibration)
    if used:
        reasons = "; ".join(
            f"{entry.why.rstrip('. ')} (compare with {entry.check_against.rstrip('. ')})" for entry in used
        )
        yield Finding(
            Grade.CAUTION,
            FindingCode.UNCONFIRMED,
            "",
            f"Figures behind this number were not checked against the source: {reasons}.",
        )
    competing = equation.content.competing_events
    ages = [n for n in numbers.values() if n.field.quantity.id == "age" and n.value > COMPETING_AGE]
    if competing.handled == "censored" and ages:
        which = competing.which or "other events that make the outcome impossible"
        yield Finding(
            Grade.CAUTION,
            FindingCode.COMPETING_EVENTS,
            ages[0].field.id,
            f"{ages[0].field.label} {ages[0].shown}: the model was fitted as if nobody had {which}. Above"
            f" {COMPETING_AGE:g} years that makes the number higher than the share of people who have the event.",
        )
