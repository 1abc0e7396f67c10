"""Where a value lies among its limits, and how limits are written beside a value that was typed."""

from collections.abc import Callable
from math import ceil, floor, log10

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import OPEN, NumberField
from clinicalc.assessment.numerals import plain_range
from clinicalc.coefficients.schema import Limits
from clinicalc.covariates.transforms import Column
from clinicalc.units.conversion import conversion
from clinicalc.units.unit import unit

_DIGITS = 9
"""Significant digits to which a value and a limit are compared: a limit met exactly in another unit is met."""

_DOUBTFUL = 1e-7
"""Of a limit: far more than comparing at 9 digits can move a value, far less than two values typed apart."""

_SHOWN_DIGITS = 3


def is_within(value: float, limits: Limits) -> bool:
    """Whether a value lies inside, both ends included, compared to 9 significant digits; an open side always holds."""
    low, high = limits
    rounded = _round(value)
    return (low is None or rounded >= _round(low)) and (high is None or rounded <= _round(high))


def within_column(column: Column, limits: Limits) -> NDArray[np.bool_]:
    """Whether each value lies inside, both ends included, compared to 9 significant digits, shape (n,).

    Rounding keeps the order of values, so only one that misses a limit by very little needs to be rounded.
    """
    low, high = limits
    inside = np.ones(len(column), dtype=np.bool_)
    doubtful = np.zeros(len(column), dtype=np.bool_)
    with np.errstate(invalid="ignore"):
        if low is not None:
            inside &= column >= low
            doubtful |= (column < low) & (column >= low - _DOUBTFUL * abs(low))
        if high is not None:
            inside &= column <= high
            doubtful |= (column > high) & (column <= high + _DOUBTFUL * abs(high))
    for row in np.flatnonzero(doubtful):
        inside[row] = is_within(float(column[row]), limits)
    return inside


def clamp(value: float, limits: Limits) -> float:
    """The value, or the limit beyond which it lies."""
    low, high = limits
    value = value if low is None else max(value, low)
    return value if high is None else min(value, high)


def clamp_column(column: Column, limits: Limits) -> Column:
    """The same for every value of a column, shape as given; what is not a number stays so."""
    low, high = limits
    return np.clip(column, -np.inf if low is None else low, np.inf if high is None else high)


def is_equal(one: float, other: float) -> bool:
    """Whether two values agree to 9 significant digits: one typed in another unit is then the same value."""
    return _round(one) == _round(other)


def giving_limits(field: NumberField) -> Limits:
    """The values for which the model gives a number: the possible ones, and of those the derivation's if that stops."""
    return _tighter(field.possible, field.derivation if field.derivation_stops else OPEN)


def words_for(field: NumberField, limits: Limits, code: str) -> str:
    """The limits in a unit as they stand in a sentence, rounded inwards so that they never hold a refused value."""
    return plain_range(*shown_limits(field, limits, code), "" if code == "1" else unit(code).spelling)


def shown_limits(field: NumberField, limits: Limits, code: str) -> Limits:
    """The limits in a unit as they are shown, in sentences and beside a range line: rounded inwards."""
    back = conversion(field.quantity, field.unit, code, field.factor)
    low, high = (None if end is None else back.apply(end) for end in limits)
    return (
        None if low is None else _round_inwards(low, ceil),
        None if high is None else _round_inwards(high, floor),
    )


def place_of(field: NumberField, value: float, limits: Limits, code: str) -> str:
    """Where a value outside the limits lies: "below 30–74 years", or "above 126 mg/dL" where one side is open."""
    low, high = limits
    side = "below" if low is not None and _round(value) < _round(low) else "above"
    if low is not None and high is not None:
        return f"{side} {words_for(field, limits, code)}"
    end = high if low is None else low
    return f"{side} {words_for(field, (end, end), code)}"


def _tighter(one: Limits, other: Limits) -> Limits:
    lows = [end for end in (one[0], other[0]) if end is not None]
    highs = [end for end in (one[1], other[1]) if end is not None]
    return (max(lows) if lows else None), (min(highs) if highs else None)


def _round(value: float) -> float:
    return float(f"{value:.{_DIGITS}g}")


def _round_inwards(value: float, direction: Callable[[float], int]) -> float:
    value = _round(value)
    if value == 0:
        return 0.0
    decimals = max(0, _SHOWN_DIGITS - 1 - floor(log10(abs(value))))
    scale = float(f"1e{decimals}")
    return float(direction(_round(value * scale)) / scale)
