"""What a coefficient file asks: exclusions, predictors and derived values, with units and ranges."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import NARROW_SPACE, plain_range
from clinicalc.coefficients.schema import Limits, NumberPredictor, Predictor, WithinPerson


def field_sections(model: Model) -> Iterator[tuple[str, list[str]]]:
    """Sections for exclusions, predictors and derived values."""
    content = model.content
    yield "Exclusion questions", [f"{e.id}: {e.ask} Yes stops: {e.because}" for e in content.exclusions]
    fields = model.by_id
    lines: list[str] = []
    for predictor in content.predictors:
        field = fields[predictor.id]
        lines += _number(field) if isinstance(field, NumberField) else _question(field)
        lines += [f"    {remark}" for remark in _remarks(predictor)]
    yield "Predictors", lines
    derived: list[str] = []
    for field in model.derived:
        assert field.formula is not None
        inputs = ", ".join(f"{role} = {id}" for role, id in field.formula.inputs)
        derived += [*_number(field), f"    worked out by {field.formula.equation} from {inputs}"]
        derived.append("    may be typed instead" if field.may_be_typed else "    is not typed")
    yield "Derived values", derived


def _number(field: NumberField) -> list[str]:
    lines = [f"{field.id}: {field.label} in {field.unit} ({field.quantity.label})"]
    lines.append(
        f"    possible {_range(field, field.possible)}, usual {_range(field, field.usual)}, derivation"
        f" {_range(field, field.derivation)}{_outside(field)}"
    )
    if field.factor is not None:
        lines.append(f"    mass to molar factor of this model: {field.factor:g}")
    if field.valid_days is not None:
        lines.append(f"    values of up to {field.valid_days} days")
    return [*lines, *([f"    {field.meaning}"] if field.meaning else [])]


def _outside(field: NumberField) -> str:
    if field.derivation == (None, None):
        return ""
    return " (outside it: stop)" if field.derivation_stops else " (outside it: caution)"


def _range(field: NumberField, limits: Limits) -> str:
    if limits == (None, None):
        return "not stated"
    return plain_range(*limits, "" if field.unit == "1" else field.spelling)


def _question(field: QuestionField) -> list[str]:
    answers = ", ".join(f"{option.id} ({option.label})" for option in field.options)
    lines = [f"{field.id}: {field.label}; answers {answers}"]
    lines += [f"    with {option.id}: {option.caution}" for option in field.options if option.caution]
    return [*lines, *([f"    {field.meaning}"] if field.meaning else [])]


def _remarks(predictor: Predictor) -> Iterator[str]:
    flags = [
        word
        for word, flag in (
            ("may be modified", predictor.modifiable),
            ("a treatment", predictor.treatment),
            ("may be left not measured", predictor.may_be_missing),
        )
        if flag is True
    ]
    if flags:
        yield ", ".join(flags)
    if not isinstance(predictor.loinc, UnsetType):
        yield f"LOINC {', '.join(predictor.loinc)}"
    if isinstance(predictor, NumberPredictor) and not isinstance(predictor.within_person, UnsetType):
        within = predictor.within_person
        yield f"varies within a person: {_variation(within, predictor.unit)} ({within.source})"


def _variation(within: WithinPerson, code: str) -> str:
    """The whole variation, and the part of it among readings of one visit."""
    whole = _size(within.sd, within.cv, code)
    part = _size(within.within_visit_sd, within.within_visit_cv, code)
    return f"{whole}, of which among readings of one visit {part}" if part else whole


def _size(sd: float | UnsetType, cv: float | UnsetType, code: str) -> str:
    if not isinstance(sd, UnsetType):
        return f"SD {sd:g}" if code == "1" else f"SD {sd:g} {code}"
    return "" if isinstance(cv, UnsetType) else f"CV {100 * cv:g}{NARROW_SPACE}%"
