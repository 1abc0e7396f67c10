"""From the text typed in a number field to a value in the file's unit, with what is to be said about it."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.numerals import join_words, plain_range
from clinicalc.coefficients.schema import Limits
from clinicalc.errors import UnitError
from clinicalc.units.conversion import Conversion, conversion
from clinicalc.units.fitting import fitting_units
from clinicalc.units.reading import Reading, Unreadable, read_value
from clinicalc.units.unit import unit


@dataclass(frozen=True, slots=True)
class TakenNumber:
    """A usable value: the reading, the unit it was taken in, the value in the file's unit.

    `half` is half a unit of the last digit typed, in the file's unit.
    """

    field: NumberField
    reading: Reading
    unit: str
    value: float
    half: float
    dated: date | None

    @property
    def typed(self) -> str:
        """The text with its unit as a UCUM code, ready to be typed again."""
        if self.reading.unit is not None or self.unit == "1":
            return self.reading.text
        number, mark, day = self.reading.text.partition(" on ")
        return f"{number} {self.unit}{mark}{day}"

    @property
    def shown(self) -> str:
        """The number as typed with the trade spelling of its unit."""
        return shown_number(self.reading, self.unit)


def shown_number(reading: Reading, code: str) -> str:
    """The number as typed, a decimal point and a true minus throughout, with the trade spelling of a unit."""
    number = f"{reading.number:.{reading.decimals}f}".replace("-", "−")
    return number if code == "1" else f"{number} {unit(code).spelling}"


def take_number(field: NumberField, typed: Typed, today: date) -> tuple[TakenNumber | None, tuple[Finding, ...]]:
    """The value to use (None where there is none) and the findings about it."""
    reading = read_value(typed.text, ask_about_comma=not field.is_bare)
    if isinstance(reading, Unreadable):
        return None, (_stop(field, FindingCode.UNREADABLE, f"{field.label}: {reading.message}"),)
    code = reading.unit or typed.unit or field.unit
    try:
        into = conversion(field.quantity, code, field.unit, field.factor)
    except UnitError as refusal:
        return None, (_stop(field, FindingCode.WRONG_UNIT, f"{field.label}: {refusal}"),)
    taken = TakenNumber(
        field=field,
        reading=reading,
        unit=code,
        value=into.apply(reading.number),
        half=abs(into.scale) * 0.5 * float(f"1e-{reading.decimals}"),
        dated=reading.dated or typed.dated,
    )
    findings = (*check_ranges(field, taken.value, taken.shown, reading.number, code), *_check_date(taken, today))
    stopped = any(finding.grade is Grade.STOP for finding in findings)
    return (None if stopped else taken), findings


def check_ranges(
    field: NumberField, value: float, shown: str, number: float | None = None, code: str | None = None
) -> Iterator[Finding]:
    """What a value's place among its ranges gives rise to: at most one finding.

    `number` and `code` are the digits as typed and their unit, None for a value that was worked out.
    """
    code = field.unit if code is None else code
    back = conversion(field.quantity, field.unit, code, field.factor)
    offer = () if number is None else fitting_units(field.quantity, number, code, field.factor)
    named = f"{field.label} {shown}"
    if not _within(value, field.possible):
        limits = _in_unit(field.possible, back, code)
        yield _stop(
            field,
            FindingCode.IMPOSSIBLE,
            f"{named} is not possible; the possible range is {limits}.{_remedy(shown, offer)}",
            offer,
        )
    elif not _within(value, field.derivation) and field.derivation_stops:
        limits = _in_unit(field.derivation, back, code)
        yield _stop(
            field,
            FindingCode.OUTSIDE_DERIVATION,
            f"{named} lies outside {limits}. This model was not made for such values and gives no number for them.",
        )
    elif not _within(value, field.usual) and number is not None:
        limits = _in_unit(field.usual, back, code)
        remedy = _remedy(shown, offer) or " Check that it was typed correctly."
        message = f"{named} is unusual; the usual range is {limits}.{remedy}"
        yield Finding(Grade.CAUTION, FindingCode.UNUSUAL, field.id, message, offer)
    elif not _within(value, field.derivation):
        limits = _in_unit(field.derivation, back, code)
        yield Finding(
            Grade.CAUTION,
            FindingCode.OUTSIDE_DERIVATION,
            field.id,
            f"{named} lies outside {limits}, the values this model was made from."
            " The number carries the model’s line beyond its data.",
        )


def _within(value: float, limits: Limits) -> bool:
    low, high = limits
    # compared to 9 significant digits, as cuts are: a limit met exactly in another unit is met
    rounded = float(f"{value:.9g}")
    return (low is None or rounded >= float(f"{low:.9g}")) and (high is None or rounded <= float(f"{high:.9g}"))


def _in_unit(limits: Limits, back: Conversion, code: str) -> str:
    low, high = (None if end is None else back.apply(end) for end in limits)
    return plain_range(low, high, "" if code == "1" else unit(code).spelling)


def _remedy(shown: str, offer: tuple[str, ...]) -> str:
    if not offer:
        return ""
    digits = shown.split(" ")[0]
    others = join_words([f"{digits} {unit(code).spelling}" for code in offer], "or")
    return f" {others} would be. Use that unit, or type the value again."


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
