"""The reference person of an equation: whom shares and matching age set the patient against."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import lru_cache

from msgspec import UnsetType

from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.limits import clamp, giving_limits, is_within
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numerals import join_words, plain
from clinicalc.units.conversion import conversion
from clinicalc.units.unit import unit

_KEPT = 8
"""Reference persons that are remembered."""
_SHOWN_DIGITS = 3
_FILE_DIGITS = 9
"""A number of the file is shown with all its digits, one turned into another unit is rounded."""


@dataclass(frozen=True, slots=True, eq=False)
class ReferencePerson:
    """The values in which the reference person is fixed; all others are the patient's own.

    `values` are in the file's units and codes, in page order, and only those that the number depends on. `roots` says
    for every value that the equation uses which values it is moved by: itself, or its inputs where it is worked out.
    Without a reference person `because` says why and `values` is empty.
    """

    values: Mapping[str, float]
    roots: Mapping[str, frozenset[str]]
    because: str = ""


def find_reference(case: Case) -> ReferencePerson:
    """The reference person of the equation that answered, as far as the patient's values let it be used.

    A derived value that the file names is fixed as a whole: it is not worked out anew when its inputs move.
    """
    return _find(case.model, case.equation, frozenset(case.columns), frozenset(case.worked_out))


def describe_reference(case: Case) -> str:
    """The reference person in a phrase: "Systolic blood pressure 120 mmHg; Smokes now: No; Age and Sex as entered".

    "" where there is none. Values that the number does not depend on are left out.
    """
    return _describe(case.model, find_reference(case))


@lru_cache(maxsize=_KEPT)
def _find(model: Model, equation: ModelEquation, typed: frozenset[str], worked_out: frozenset[str]) -> ReferencePerson:
    """It depends on which values there are, not on what they are, so it stays the same from key to key."""
    stated = equation.content.reference_person
    named = {} if isinstance(stated, UnsetType) else stated
    roots = {id: _roots_of(model, id, typed | named.keys()) for id in equation.uses}
    if not named:
        return ReferencePerson({}, roots, "The file names no reference person for this equation.")
    reached = frozenset().union(*roots.values())
    fields = [field for field in model.fields if field.id in named]
    because = _find_unknown(model, reached - typed - worked_out) or next(
        _find_faults(model, fields, named, reached), ""
    )
    if because:
        return ReferencePerson({}, roots, because)
    values = {field.id: _value(field, named[field.id]) for field in fields if field.id in reached}
    return ReferencePerson(values, roots)


@lru_cache(maxsize=_KEPT)
def _describe(model: Model, reference: ReferencePerson) -> str:
    if not reference.values:
        return ""
    reached = frozenset().union(*reference.roots.values())
    parts = [_named(model.by_id[id], value) for id, value in reference.values.items()]
    kept = [field.label for field in model.fields if field.id in reached and field.id not in reference.values]
    if kept:
        parts.append(f"{join_words(kept)} as entered")
    return "; ".join(parts)


def own_value(case: Case, id: str) -> float:
    """The patient's value in the file's unit or code, typed or worked out."""
    return float(case.columns[id][0]) if id in case.columns else case.worked_out[id]


def own_words(case: Case, id: str) -> str:
    """The patient's value as it was typed, or as it was worked out, with its unit."""
    if id in case.answers:
        return case.answers[id].option.label
    if id in case.numbers:
        return case.numbers[id].shown
    field = case.model.by_id[id]
    assert isinstance(field, NumberField)  # only numbers are worked out
    return _with_unit(case.worked_out[id], field.unit, _SHOWN_DIGITS)


def reference_words(case: Case, id: str, value: float) -> str:
    """The reference person's value; where the patient's was typed in another unit, in that unit as well."""
    field = case.model.by_id[id]
    if isinstance(field, QuestionField):
        return _answer(field, value)
    stated = _with_unit(value, field.unit, _FILE_DIGITS)
    taken = case.numbers.get(id)
    if taken is None or taken.unit == field.unit:
        return stated
    turned = conversion(field.quantity, field.unit, taken.unit, field.factor).apply(value)
    return f"{_with_unit(turned, taken.unit, _SHOWN_DIGITS)} ({stated})"


def _roots_of(model: Model, id: str, fixed: frozenset[str]) -> frozenset[str]:
    field = model.by_id[id]
    if not isinstance(field, NumberField) or field.formula is None or id in fixed:
        return frozenset((id,))
    return frozenset(field.sources)


def _find_unknown(model: Model, unknown: frozenset[str]) -> str:
    """The reason where values that the number depends on are not there: they were marked as not measured."""
    open_values = [field.label for field in model.fields if field.id in unknown]
    if not open_values:
        return ""
    verb = "was" if len(open_values) == 1 else "were"
    return f"{join_words(open_values)} {verb} not measured, so there is no value to set against another."


def _find_faults(
    model: Model, fields: list[Field], named: Mapping[str, float | str], reached: frozenset[str]
) -> Iterator[str]:
    """Values of the reference person that cannot be used."""
    for field in fields:
        value = named[field.id]
        if field.id not in reached:
            for derived in model.derived:
                if field.id in derived.sources and derived.id in reached and derived.id not in named:
                    labels = join_words([model.by_id[id].label for id in derived.sources])
                    yield (
                        f"The file gives the reference person a value of {field.label}, but {derived.label} was typed"
                        f" instead: type {labels} to compare."
                    )
        elif isinstance(field, NumberField) and not is_within(float(value), giving_limits(field)):
            yield (
                f"The file’s reference person has {_named(field, float(value))}, for which the model gives no number."
                " Tell the file’s author."
            )


def _value(field: Field, stated: float | str) -> float:
    if isinstance(field, NumberField):
        return clamp(float(stated), giving_limits(field))
    return float(next(place for place, option in enumerate(field.options) if option.id == stated))


def _named(field: Field, value: float) -> str:
    if isinstance(field, QuestionField):
        return f"{field.label}: {_answer(field, value)}"
    return f"{field.label} {_with_unit(value, field.unit, _FILE_DIGITS)}"


def _answer(field: QuestionField, value: float) -> str:
    return field.options[int(value)].label


def _with_unit(value: float, code: str, digits: int) -> str:
    number = plain(value, digits)
    return number if code == "1" else f"{number} {unit(code).spelling}"
