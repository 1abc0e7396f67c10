"""The values of an assessment line by line, as typed and as used."""

from collections.abc import Mapping
from datetime import date

from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numbers import TakenNumber, shown_number, typed_again
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.assessment.result import ValueLine
from clinicalc.units.quoting import visible
from clinicalc.units.reading import Reading, read_value
from clinicalc.units.unit import find_unit


def value_lines(
    model: Model,
    entry: PatientEntry,
    numbers: Mapping[str, TakenNumber],
    answers: Mapping[str, TakenAnswer],
    worked_out: Mapping[str, float],
) -> tuple[ValueLine, ...]:
    """One line a field, in page order; fields without any text have empty lines."""
    lines = []
    for field in model.fields:
        typed = entry.typed.get(field.id, Typed(""))
        if isinstance(field, QuestionField):
            lines.append(_answer_line(field, typed, answers.get(field.id)))
        else:
            lines.append(_number_line(field, typed, numbers.get(field.id), worked_out.get(field.id)))
    return tuple(lines)


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
        typed=_typed_with_unit(field, typed) if taken is None else taken.typed,
        shown=_shown_unused(field, typed) if taken is None else taken.shown,
        used="" if value is None else f"{plain(value, 4)}{after}",
        number=value,
        answer=None,
        unit=field.unit if value is not None else None,
        dated=None if taken is None else taken.dated,
        derived=field.formula is not None,
        worked_out=taken is None and worked_out is not None,
    )


def _typed_with_unit(field: NumberField, typed: Typed) -> str:
    """Text that could not be used, with the unit that stood beside it."""
    reading = _reading(field, typed)
    return visible(typed.text) if reading is None else typed_again(*reading)


def _shown_unused(field: NumberField, typed: Typed) -> str:
    reading = _reading(field, typed)
    return visible(typed.text) if reading is None else shown_number(reading[0], reading[1])


def _reading(field: NumberField, typed: Typed) -> tuple[Reading, str, date | None] | None:
    """A number that was read and not used, with its unit and date; None where there is none, or the unit is unknown."""
    reading = read_value(typed.text, ask_about_comma=not field.is_bare)
    if not isinstance(reading, Reading):
        return None
    code = reading.unit or typed.unit or field.unit
    known = find_unit(code)
    return None if known is None else (reading, code, reading.dated or typed.dated)
