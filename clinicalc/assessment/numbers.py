"""From the text typed in a number field to a value in the file's unit, with what is to be said about it."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import clamp, giving_limits, is_within, place_of, words_for
from clinicalc.assessment.numerals import MINUS, join_words
from clinicalc.errors import UnitError
from clinicalc.units.averaged import Averaged
from clinicalc.units.conversion import conversion
from clinicalc.units.fitting import fitting_units
from clinicalc.units.quoting import visible
from clinicalc.units.reading import Reading, Unreadable, read_value
from clinicalc.units.unit import find_unit, unit


@dataclass(frozen=True, slots=True)
class TakenNumber:
    """A usable value: the reading, the unit it was taken in, the value in the file's unit.

    `half` is half a unit of the last digit typed, in the file's unit. `averaged` is what it is the mean of, None for
    one reading of one visit.
    """

    field: NumberField
    reading: Reading
    unit: str
    value: float
    half: float
    dated: date | None
    averaged: Averaged | None = None

    @property
    def typed(self) -> str:
        """What can be typed again for the same value: digits, unit, what it is the mean of, and date."""
        return typed_again(self.reading, self.unit, self.dated, self.averaged)

    @property
    def shown(self) -> str:
        """The number as typed with the trade spelling of its unit."""
        return shown_number(self.reading, self.unit)

    @property
    def counts_completed_years(self) -> bool:
        """Whether it is an age in whole years, which are completed, not rounded: 49 is not possibly 50."""
        return self.field.quantity.id == "age" and self.reading.decimals == 0


def typed_again(reading: Reading, code: str, dated: date | None, averaged: Averaged | None = None) -> str:
    """The digits of a reading with the UCUM code of its unit, what it is the mean of, and its date."""
    with_unit = reading.digits if code == "1" else f"{reading.digits} {code}"
    return f"{with_unit}{stated_after(averaged, dated)}"


def stated_after(averaged: Averaged | None, dated: date | None) -> str:
    """What is typed after a number and its unit: " of 2 visits on 2026-10-02", "" where nothing is stated."""
    mean = "" if averaged is None else f" {averaged.typed}"
    return mean if dated is None else f"{mean} on {dated.isoformat()}"


def averaged_of(reading: Reading, typed: Typed) -> Averaged | None:
    """What a value is the mean of; None for one reading of one visit, whether that is stated or not."""
    averaged = reading.averaged or typed.averaged
    return None if averaged is None or averaged.is_single else averaged


def shown_number(reading: Reading, code: str) -> str:
    """Every digit as typed, a decimal point and a true minus throughout, with the trade spelling of a unit."""
    number = reading.digits.replace("-", MINUS)
    return number if code == "1" else f"{number} {unit(code).spelling}"


def typed_unused(field: NumberField, typed: Typed) -> str:
    """Text that could not be used, with the unit that stood beside it: what can be typed again."""
    reading = read_unused(field, typed)
    return visible(typed.text) if reading is None else typed_again(*reading)


def read_unused(field: NumberField, typed: Typed) -> tuple[Reading, str, date | None, Averaged | None] | None:
    """A number read and not used, with its unit, date and mean; None where there is none, or the unit is unknown."""
    reading = read_value(typed.text, ask_about_comma=not field.is_bare)
    if not isinstance(reading, Reading):
        return None
    code = reading.unit or typed.unit or field.unit
    known = find_unit(code)
    return None if known is None else (reading, code, reading.dated or typed.dated, averaged_of(reading, typed))


def take_number(field: NumberField, typed: Typed, today: date) -> tuple[TakenNumber | None, tuple[Finding, ...]]:
    """The value to use (None where there is none) and the findings about it."""
    reading = read_value(typed.text, ask_about_comma=not field.is_bare)
    if isinstance(reading, Unreadable):
        return None, (_stop(field, FindingCode.UNREADABLE, f"{field.label}: {reading.message}"),)
    code = reading.unit or typed.unit or field.unit
    try:
        into = conversion(field.quantity, code, field.unit, field.factor)
    except UnitError as refusal:
        words = str(refusal)
        message = words if words.startswith(field.label) else f"{field.label}: {words}"
        return None, (_stop(field, FindingCode.WRONG_UNIT, message),)
    taken = TakenNumber(
        field=field,
        reading=reading,
        unit=code,
        value=clamp(into.apply(reading.number), giving_limits(field)),
        half=abs(into.scale) * 0.5 * float(f"1e-{reading.decimals}"),
        dated=reading.dated or typed.dated,
        averaged=averaged_of(reading, typed),
    )
    findings = (*check_ranges(field, into.apply(reading.number), taken.shown, typed=taken), *_check_date(taken, today))
    stopped = any(finding.grade is Grade.STOP for finding in findings)
    return (None if stopped else taken), findings


def check_ranges(
    field: NumberField, value: float, shown: str, *, typed: TakenNumber | None = None
) -> Iterator[Finding]:
    """What a value's place among its ranges gives rise to: one stop, or cautions; `typed` is None if worked out."""
    code = field.unit if typed is None else typed.unit
    named = f"{field.label} {shown}"
    if not is_within(value, field.possible):
        offer, remedy = _remedy(typed)
        limits = words_for(field, field.possible, code)
        message = f"{named} is not possible; the possible range is {limits}.{remedy}"
        yield _stop(field, FindingCode.IMPOSSIBLE, message, offer)
        return
    inside = is_within(value, field.derivation)
    lies = "" if inside else f"{named} lies {place_of(field, value, field.derivation, code)}"
    if not inside and field.derivation_stops:
        years = typed is not None and field.quantity.id == "age" and typed.reading.decimals > 0
        slip = " Age counts in completed years: type it without decimals." if years else ""
        message = f"{lies}. This model was not made for such values and gives no number for them.{slip}"
        yield _stop(field, FindingCode.OUTSIDE_DERIVATION, message)
        return
    if not is_within(value, field.usual):
        offer, remedy = _remedy(typed)
        remedy = remedy or " Check that it was typed correctly."
        message = f"{named} is unusual; the usual range is {words_for(field, field.usual, code)}.{remedy}"
        yield Finding(Grade.CAUTION, FindingCode.UNUSUAL, field.id, message, offer)
    if not inside:
        message = f"{lies}, the values this model was made from. Beyond them it only carries its line on."
        yield Finding(Grade.CAUTION, FindingCode.OUTSIDE_DERIVATION, field.id, message)


def _remedy(typed: TakenNumber | None) -> tuple[tuple[str, ...], str]:
    """The units in which the same digits would be believable, and the sentence that offers them."""
    if typed is None:
        return (), " Check the values it was worked out from."
    offer = fitting_units(typed.field.quantity, typed.reading.number, typed.unit, typed.field.factor)
    if not offer:
        return (), ""
    others = join_words([shown_number(typed.reading, code) for code in offer], "or")
    return offer, f" {others} would be believable: use that unit, or type the value again."


def _check_date(taken: TakenNumber, today: date) -> Iterator[Finding]:
    field, dated = taken.field, taken.dated
    if dated is None:
        return
    if dated > today:
        yield _stop(
            field,
            FindingCode.FUTURE_DATE,
            f"{field.label} is dated {dated.isoformat()}, after today ({today.isoformat()}). Correct the date.",
        )
    elif field.valid_days is not None and (today - dated).days > field.valid_days:
        yield Finding(
            Grade.CAUTION,
            FindingCode.OUT_OF_DATE,
            field.id,
            f"{field.label} of {dated.isoformat()} is {(today - dated).days} days old; this model takes values of up to"
            f" {field.valid_days} days. Measure again if the number matters.",
        )


def _stop(field: NumberField, code: FindingCode, message: str, offer: tuple[str, ...] = ()) -> Finding:
    return Finding(Grade.STOP, code, field.id, message, offer)
