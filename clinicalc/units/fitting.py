"""Which digits are believable in which units: the unit somebody may have meant, and the slips no check can see."""

from dataclasses import dataclass
from itertools import combinations
from math import log

from clinicalc.units.conversion import conversion
from clinicalc.units.quantity import Quantity, Range, all_quantities


@dataclass(frozen=True, slots=True)
class UnitOverlap:
    """Two units of one quantity in which some of the same digits are believable, so that no check can tell them apart.

    `share` (0-1) is how much of the narrower of the two usual ranges, each in its own unit's digits, lies in the
    other one too: measured on the logarithmic scale, and on the plain scale where a range begins at zero.
    """

    quantity: str
    one: str
    other: str
    share: float


def possible_in(quantity: Quantity, code: str, factor: float | None = None) -> Range | None:
    """The quantity's possible range in the digits of the unit `code`; None for the bare number.

    `factor` as for `conversion`. Raises UnitError when the unit is not one of the quantity's.
    """
    apart = [entry.possible for entry in quantity.apart if entry.unit == code]
    return apart[0] if apart else _carry_over(quantity, quantity.possible, code, factor)


def usual_in(quantity: Quantity, code: str, factor: float | None = None) -> Range | None:
    """The quantity's usual range in the digits of the unit `code`; None for the bare number.

    `factor` as for `conversion`. Raises UnitError when the unit is not one of the quantity's.
    """
    apart = [entry.usual for entry in quantity.apart if entry.unit == code]
    return apart[0] if apart else _carry_over(quantity, quantity.usual, code, factor)


def fitting_units(quantity: Quantity, number: float, code: str, factor: float | None = None) -> tuple[str, ...]:
    """The permitted units other than `code` in which the same digits would lie in the usual range, in screen order."""
    others = (other for other in quantity.units if other != code)
    ranges = ((other, usual_in(quantity, other, factor)) for other in others)
    return tuple(other for other, usual in ranges if usual is not None and usual.contains(number))


def overlapping_units() -> tuple[UnitOverlap, ...]:
    """Every pair of units whose usual ranges share digits, the largest share first.

    Pairs that name the same size (mmol/L and mEq/L of sodium) are left out: mistaking one for the other does no harm.
    """
    found = [
        UnitOverlap(quantity.id, one, other, share)
        for quantity in all_quantities()
        for one, other in combinations(quantity.units, 2)
        if (share := _share_digits(quantity, one, other)) > 0
    ]
    return tuple(sorted(found, key=lambda overlap: -overlap.share))


def _carry_over(quantity: Quantity, base: Range | None, code: str, factor: float | None) -> Range | None:
    into = conversion(quantity, quantity.unit, code, factor)
    return None if base is None else Range(*sorted((into.apply(base.low), into.apply(base.high))))


def _share_digits(quantity: Quantity, one: str, other: str) -> float:
    first, second = usual_in(quantity, one), usual_in(quantity, other)
    if first is None or second is None or first == second:
        return 0.0
    low, high = max(first.low, second.low), min(first.high, second.high)
    if low >= high:
        return 0.0
    shared = Range(low, high)
    plain = min(first.low, second.low) <= 0
    return _measure(shared, plain) / min(_measure(first, plain), _measure(second, plain))


def _measure(span: Range, plain: bool) -> float:
    return span.high - span.low if plain else log(span.high / span.low)
