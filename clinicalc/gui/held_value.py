"""The text and the unit of one number field: what was typed stays the truth, whatever unit it is shown in."""

import re
from dataclasses import dataclass, replace
from datetime import date
from math import ceil, log10

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.numbers import shown_number, stated_after, take_number
from clinicalc.errors import UnitError
from clinicalc.units.conversion import conversion
from clinicalc.units.reading import Reading, read_value
from clinicalc.units.unit import unit as unit_of

_MOST_DECIMALS = 6
_NUMBER = re.compile(r"\s*[-+−]?[0-9]+(?:[.,][0-9]+)?")
_MEAN_AFTER = re.compile(r"\s+of\s+[0-9]+\s+(?:visit|reading).*?(?=\s+on\s|$)", re.IGNORECASE)
_DAY_AFTER = re.compile(r"\s+on\s.*$", re.IGNORECASE)
"""A mean and a day after a number, as the reader of values knows them."""


@dataclass(frozen=True, slots=True)
class HeldValue:
    """One number field at one moment.

    `typed` is the truth that is assessed; `by_hand` the last keystrokes with the unit that stood beside them; `text`
    and `unit` are what the field shows; `remark` says how the two differ, "" where they do not.
    """

    typed: Typed
    by_hand: Typed
    text: str
    unit: str
    remark: str = ""


def choosable_units(field: NumberField) -> tuple[str, ...]:
    """The units in which a value of this field can be shown and typed, in screen order, by UCUM code."""
    found = []
    for code in field.quantity.units:
        try:
            conversion(field.quantity, code, field.unit, field.factor)
        except UnitError:
            continue
        found.append(code)
    return tuple(found)


def first_unit(field: NumberField, preferred: str) -> str:
    """The unit beside an empty field: the one preferred where this file offers it, else the file's own."""
    return preferred if preferred in choosable_units(field) else field.unit


def hold(field: NumberField, text: str, unit: str) -> HeldValue:
    """What was typed, with the unit chosen beside it; a unit typed after the number goes before the chosen one."""
    reading = read_value(text)
    if isinstance(reading, Reading) and reading.unit and reading.unit in choosable_units(field):
        unit = reading.unit
    typed = Typed(text, unit)
    return HeldValue(typed, typed, text, unit)


def hold_entry(field: NumberField, typed: Typed | None) -> HeldValue:
    """A value from an entry made elsewhere."""
    if typed is None:
        return hold(field, "", field.unit)
    text = typed.text
    reading = read_value(text)
    if not isinstance(reading, Reading):
        text = f"{text}{stated_after(typed.averaged, typed.dated)}"
    elif typed.averaged is not None or typed.dated is not None:  # what the text states counts before it
        before = _DAY_AFTER.sub("", _MEAN_AFTER.sub("", text))
        text = f"{before}{stated_after(reading.averaged or typed.averaged, reading.dated or typed.dated)}"
    return settle(field, hold(field, text, typed.unit or field.unit))


def settle(field: NumberField, held: HeldValue) -> HeldValue:
    """The same value when its field is left: a unit typed after the number stands in the chooser only."""
    reading = read_value(held.text)
    if not isinstance(reading, Reading) or reading.unit is None or reading.unit not in choosable_units(field):
        return held
    number = _NUMBER.match(held.text)
    assert number is not None  # read_value has found one there
    return hold(field, f"{number.group().strip()}{_stated(reading)}", reading.unit)


def switch_unit(field: NumberField, held: HeldValue, unit: str, today: date) -> HeldValue:
    """The value shown in another unit.

    It is converted, except where its digits were not believable in the old unit and are in the new one: then the
    digits stay. In the unit it was typed in, every character stands again as it was typed.
    """
    if unit == held.by_hand.unit:
        return HeldValue(held.by_hand, held.by_hand, held.by_hand.text, unit)
    _, findings = take_number(field, held.typed, today)
    if any(unit in finding.offer for finding in findings):
        return read_as(field, held, unit)
    if unit == held.typed.unit:
        return replace(held, text=held.typed.text, unit=unit, remark=_read_as_words(held.typed.text, unit))
    return _show_in(field, held, unit) or hold(field, held.typed.text, unit)


def read_as(field: NumberField, held: HeldValue, unit: str) -> HeldValue:
    """The same digits taken in another unit, as an offer proposes."""
    reading = read_value(held.typed.text)
    if not isinstance(reading, Reading):
        return replace(hold(field, held.typed.text, unit), by_hand=held.by_hand)
    number = _NUMBER.match(held.typed.text)
    assert number is not None
    text = number.group().strip()
    remark = _read_as_words(text, unit)
    text = f"{text}{_stated(reading)}"
    return HeldValue(Typed(text, unit), held.by_hand, text, unit, remark)


def digits_on_screen(held: HeldValue) -> str:
    """The number as its field shows it, without the unit and whatever else was typed after it; "" where it is none."""
    reading = read_value(held.text)
    number = _NUMBER.match(held.text) if isinstance(reading, Reading) else None
    return "" if number is None else number.group().strip()


def without_stated(held: HeldValue, *, mean: bool, day: bool) -> HeldValue:
    """The same value once its mean, its day or both stand in fields of their own: its texts without them."""

    def stripped(text: str) -> str:
        text = _DAY_AFTER.sub("", text) if day else text
        return _MEAN_AFTER.sub("", text) if mean else text

    typed, by_hand = (replace(t, text=stripped(t.text)) for t in (held.typed, held.by_hand))
    return replace(held, typed=typed, by_hand=by_hand, text=stripped(held.text))


def _stated(reading: Reading) -> str:
    return stated_after(reading.averaged, reading.dated)


def _read_as_words(text: str, unit: str) -> str:
    return f"read as {text} {unit_of(unit).spelling}"


def _show_in(field: NumberField, held: HeldValue, unit: str) -> HeldValue | None:
    """The typed value converted for the screen; None where it cannot be read as one of this field's values."""
    reading = read_value(held.typed.text)
    if not isinstance(reading, Reading):
        return None
    code = reading.unit or held.typed.unit or field.unit
    try:
        into = conversion(field.quantity, code, unit, field.factor)
    except UnitError:
        return None
    text = _written(into.apply(reading.number), abs(into.scale) * 10.0**-reading.decimals)
    return replace(held, text=f"{text}{_stated(reading)}", unit=unit, remark=f"{shown_number(reading, code)} as typed")


def _written(value: float, step: float) -> str:
    """A converted value with no more decimals than the last typed digit, `step` in the new unit, is worth."""
    decimals = min(max(0, ceil(-log10(step))), _MOST_DECIMALS)
    return f"{value:.{decimals}f}"
