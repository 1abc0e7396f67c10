"""Cautions that come with the equation that answered, not with one value."""

from collections.abc import Iterator

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.assessment.unconfirmed import Basis, find_unconfirmed

COMPETING_AGE = 70.0
"""Years. Above it deaths from other causes are common enough to matter; the limit is common practice."""


def equation_cautions(model: Model, basis: Basis) -> Iterator[Finding]:
    """Unconfirmed figures, competing events that the fit censored in an old patient, and what the file itself says."""
    yield from find_unconfirmed(model, basis)
    competing = basis.equation.content.competing_events
    ages = [n for n in basis.numbers.values() if n.field.quantity.id == "age" and n.value > COMPETING_AGE]
    if competing.handled == "censored" and ages:
        which = competing.which or "other events that make the outcome impossible"
        yield Finding(
            Grade.CAUTION,
            FindingCode.COMPETING_EVENTS,
            ages[0].field.id,
            f"{ages[0].field.label} {ages[0].shown}: the fit censored other events ({which}). Above"
            f" {COMPETING_AGE:g} years that makes the number higher than the share of people who have the event.",
        )
    yield from say_own_cautions(model)


def say_own_cautions(model: Model) -> Iterator[Finding]:
    """What the file itself says with every number."""
    for caution in model.content.use.cautions:
        yield Finding(Grade.NOTE, FindingCode.MODEL, "", f"About this model: {caution}")
