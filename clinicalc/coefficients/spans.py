"""A prediction horizon as a time span: `years`, or `time` with a UCUM time unit."""

from dataclasses import dataclass
from typing import Protocol

from msgspec import UnsetType

YEAR = "a"
_SPELLINGS = {"a": ("year", "years"), "mo": ("month", "months"), "wk": ("week", "weeks"), "d": ("day", "days")}
_DAYS = {"a": 365.25, "mo": 30.4375, "wk": 7.0, "d": 1.0}

TIME_UNITS = tuple(_SPELLINGS)
"""The UCUM codes in which a horizon may be given."""


@dataclass(frozen=True, slots=True)
class Span:
    """A time span in the unit in which it was given; two spans are the same only in the same unit."""

    time: float
    unit: str = YEAR

    @property
    def days(self) -> float:
        """Length in days (UCUM: a = 365.25 d, mo = 30.4375 d), for putting spans in order."""
        return self.time * _DAYS.get(self.unit, float("nan"))

    @property
    def words(self) -> str:
        """The span as it stands in a sentence: "10 years", "1 year", "90 days"."""
        one, many = _SPELLINGS.get(self.unit, (self.unit, self.unit))
        return f"{self.time:g} {one if self.time == 1 else many}"


class HasSpan(Protocol):
    """Anything in a coefficient file that is about one horizon."""

    @property
    def years(self) -> float | UnsetType: ...
    @property
    def time(self) -> float | UnsetType: ...
    @property
    def unit(self) -> str | UnsetType: ...


def span_of(part: HasSpan) -> Span | None:
    """The span a part of the file is about, or None where it says none (or says it twice or by half)."""
    years, time, unit = part.years, part.time, part.unit
    if not isinstance(years, UnsetType):
        return Span(years) if isinstance(time, UnsetType) and isinstance(unit, UnsetType) else None
    if isinstance(time, UnsetType) or isinstance(unit, UnsetType):
        return None
    return Span(time, unit)
