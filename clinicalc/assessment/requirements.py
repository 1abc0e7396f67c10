"""What is still to be answered before there can be a number."""

from collections.abc import Iterator, Mapping, Set

from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numerals import join_words
from clinicalc.assessment.questions import TakenAnswer


def possible_equations(model: Model, answers: Mapping[str, TakenAnswer]) -> tuple[ModelEquation, ...]:
    """The equations that may still apply, given the answers there are; one is left when enough is answered."""
    return tuple(
        equation
        for equation in model.equations
        if all(
            id not in answers or answers[id].option.id in wanted for id, wanted in equation.content.applies_when.items()
        )
    )


def find_missing(
    model: Model, equations: tuple[ModelEquation, ...], available: Set[str], typed: Set[str]
) -> Iterator[Finding]:
    """A stop for each field that is needed and not there, in page order.

    `available` are the ids with a usable value, `typed` those with any text: what was typed and cannot be used has a
    stop of its own already.
    """
    fields = model.by_id
    needed = {id for e in equations for id in (*e.uses, *e.content.applies_when)} | {e.id for e in model.exclusions}
    direct = {id for id in needed if not _is_derived(fields[id])}
    wanted: dict[str, str] = {id: "" for id in direct if id not in available and id not in typed}
    for field in model.derived:
        if field.id not in needed or field.id in available or field.id in typed:
            continue
        absent = [id for id in field.sources if id not in available and id not in typed and id not in direct]
        if absent and field.may_be_typed:
            labels = join_words([fields[id].label for id in absent])
            wanted[field.id] = f"{field.label} is missing: type it, or type {labels}."
        else:
            wanted |= dict.fromkeys(absent, "")
    for field_ in model.fields:
        if field_.id in wanted:
            yield Finding(Grade.STOP, FindingCode.MISSING, field_.id, wanted[field_.id] or _say_missing(field_))


def _is_derived(field: Field) -> bool:
    return isinstance(field, NumberField) and field.formula is not None


def _say_missing(field: Field) -> str:
    if isinstance(field, NumberField):
        others = " or another unit of it" if len(field.quantity.units) > 1 else ""
        unit = "" if field.unit == "1" else f", in {field.spelling}{others}"
        return f"{field.label} is missing: type a value{unit}."
    answers = join_words([option.label for option in field.options], "or")
    return f"Not answered: {field.label.rstrip('?')}? Answer {answers}."
