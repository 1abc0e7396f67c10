"""The values of an assessment line by line, as typed and as used."""

from collections.abc import Mapping

from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numbers import TakenNumber, shown_number
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.assessment.result import ValueLine
from clinicalc.units.reading import Reading, read_value

LONGEST_SHOWN = 80


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
        typed=_visible(typed.text),
        shown=_visible(typed.text) if taken is None else taken.option.label,
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


def _typed_with_unit(field: Field, typed: Typed) -> str:
    """Text that could not be used, with the unit that stood beside it."""
    text = _visible(typed.text)
    reading = read_value(typed.text)
    if not text or not isinstance(field, NumberField) or not isinstance(reading, Reading) or reading.unit is not None:
        return text
    code = typed.unit or field.unit
    return text if code == "1" else f"{text} {code}"


def _shown_unused(field: NumberField, typed: Typed) -> str:
    reading = read_value(typed.text)
    if isinstance(reading, Reading):
        return shown_number(reading, reading.unit or typed.unit or field.unit)
    return _visible(typed.text)


def _visible(text: str) -> str:
    """Typed text cut short, with control characters made visible."""
    shown = "".join(c if c.isprintable() else f"\\u{ord(c):04x}" for c in text.strip())
    return f"{shown[:LONGEST_SHOWN]}…" if len(shown) > LONGEST_SHOWN else shown
