"""Dates in a column turned into days, and the texts that are no dates."""

import re
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date

import numpy as np

from clinicalc.cohort.missing_cells import find_missing
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Mask

_YEAR_FIRST = re.compile(r"(\d{4})([-./])(\d{1,2})\2(\d{1,2})(?:[ T]\d{1,2}:\d{2}.*)?")
_YEAR_LAST = re.compile(r"(\d{1,2})([-./])(\d{1,2})\2(\d{4})(?: \d{1,2}:\d{2}.*)?")
_EARLIEST, _LATEST = date(1880, 1, 1), date(2100, 1, 1)


@dataclass(frozen=True, slots=True, eq=False)
class DateCells:
    """`days` counts from 1 January of the year 1, NaN where missing or no date; `odd` are cells that are no dates.

    `is_ambiguous` where no date tells whether the day or the month stands first: then all of them are odd.
    """

    days: Numbers
    odd: Mask
    is_ambiguous: bool


def take_dates(raw: RawColumn) -> DateCells:
    """The column as days: 2021-03-05, 20210305, or day and month first where the other dates tell which."""
    missing = find_missing(raw)
    order = _tell_order(raw.levels)
    days = np.full(len(raw.numbers), np.nan)
    if raw.codes is not None:
        read = np.array([_day(text, order) for text in raw.levels] + [np.nan])
        days = np.where(missing, np.nan, read[raw.codes])
    plain = np.isfinite(raw.numbers) & ~missing
    if plain.any():
        distinct, back = np.unique(raw.numbers[plain], return_inverse=True)
        days[plain] = np.array([_day_of_digits(float(number)) for number in distinct])[back]
    return DateCells(days, ~missing & np.isnan(days), order == "")


def _tell_order(texts: Sequence[str]) -> str:
    """Whether the day ("day") or the month ("month") stands first where the year stands last; "" where it is open."""
    pairs = [(int(found[1]), int(found[3])) for text in texts if (found := _YEAR_LAST.fullmatch(text))]
    days, months = any(first > 12 for first, _ in pairs), any(second > 12 for _, second in pairs)
    # "day" where nothing has to be decided: what does not fit is no date then
    return "" if pairs and not days and not months else "month" if months and not days else "day"


def _day(text: str, order: str) -> float:
    found = _YEAR_FIRST.fullmatch(text)
    if found:
        return _day_of(int(found[1]), int(found[3]), int(found[4]))
    found = _YEAR_LAST.fullmatch(text)
    if not found or not order:
        return np.nan
    first, second = int(found[1]), int(found[3])
    return _day_of(int(found[4]), *((second, first) if order == "day" else (first, second)))


def _day_of_digits(number: float) -> float:
    if not number.is_integer() or not 18_800_101 <= number <= 21_000_101:
        return np.nan
    digits = int(number)
    return _day_of(digits // 10_000, digits // 100 % 100, digits % 100)


def _day_of(year: int, month: int, day: int) -> float:
    try:
        found = date(year, month, day)
    except ValueError:
        return np.nan
    return float(found.toordinal()) if _EARLIEST <= found <= _LATEST else np.nan
