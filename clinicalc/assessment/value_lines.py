"""The values of an assessment line by line, as typed and as used."""

from collections.abc import Mapping, Set

from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numbers import TakenNumber, read_unused, shown_number, typed_unused
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.assessment.result import ValueLine
from clinicalc.coefficients.answers import NOT_MEASURED, NOT_MEASURED_WORDS
from clinicalc.units.quoting import visible


def value_lines(
    model: Model,
    entry: PatientEntry,
    numbers: Mapping[str, TakenNumber],
    answers: Mapping[str, TakenAnswer],
    worked_out: Mapping[str, float],
    open: Set[str] = frozenset(),
) -> tuple[ValueLine, ...]:
    """One line a field, in page order; fields without any text have empty lines. `open` are those not measured."""
    lines = []
    for field in model.fields:
        typed = entry.typed.get(field.id, Typed(""))
        if field.id in open:
            lines.append(_open_line(field))
        elif isinstance(field, QuestionField):
            lines.append(_answer_line(field, typed, answers.get(field.id)))
        else:
            lines.append(_number_line(field, typed, numbers.get(field.id), worked_out.get(field.id)))
    return tuple(lines)


def _open_line(field: Field) -> ValueLine:
    return ValueLine(
        id=field.id,
        label=field.label,
        typed=NOT_MEASURED,
        shown=NOT_MEASURED_WORDS,
        used=NOT_MEASURED_WORDS,
        number=None,
        answer=None,
        unit=None,
        dated=None,
        derived=isinstance(field, NumberField) and field.formula is not None,
        exclusion=isinstance(field, QuestionField) and bool(field.excludes),
        not_measured=True,
    )


def _answer_line(field: QuestionField, typed: Typed, taken: TakenAnswer | None) -> ValueLine:
    return ValueLine(
        id=field.id,
        label=field.label,
        typed=visible(typed.text),
        shown=visible(typed.text) if taken is None else taken.option.label,
        used="" if taken is None else taken.option.label,
        number=None,
        answer=None if taken is None else taken.option.id,
        unit=None,
        dated=None,
        exclusion=bool(field.excludes),
    )


def _number_line(field: NumberField, typed: Typed, taken: TakenNumber | None, worked_out: float | None) -> ValueLine:
    value = taken.value if taken is not None else worked_out
    after = "" if field.is_bare or field.unit == "1" else f" {field.spelling}"
    return ValueLine(
        id=field.id,
        label=field.label,
        typed=typed_unused(field, typed) if taken is None else taken.typed,
        shown=_shown_unused(field, typed) if taken is None else taken.shown,
        used="" if value is None else f"{plain(value, 4)}{after}",
        number=value,
        answer=None,
        unit=field.unit if value is not None else None,
        dated=None if taken is None else taken.dated,
        averaged=None if taken is None else taken.averaged,
        derived=field.formula is not None,
        worked_out=taken is None and worked_out is not None,
    )


def _shown_unused(field: NumberField, typed: Typed) -> str:
    reading = read_unused(field, typed)
    return visible(typed.text) if reading is None else shown_number(reading[0], reading[1])
