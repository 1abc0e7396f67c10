"""Whether the values of one column lie in two heaps that fit two units of the quantity, or in one that fits another."""

from dataclasses import dataclass

import numpy as np

from clinicalc.cohort.measure import Measure
from clinicalc.cohort.raw import Numbers
from clinicalc.cohort.sightings import Mask
from clinicalc.units.quantity import Range

_LEAST_HEAP = 0.01
"""The smaller heap is this share of the values at least, and two values; fewer are slips of their own."""
_MOST_SHARED = 0.2
"""Of the narrower usual range; units that share more of their digits cannot be told apart by them."""
_MOST = 0.9
"""The share of the values that has to be usual in another unit before that unit is offered for the column."""


@dataclass(frozen=True, slots=True, eq=False)
class Heaps:
    """Which values are usual in the column's unit only, and which in the unit `code` only."""

    own: Mask
    other: Mask
    code: str


def find_heaps(numbers: Numbers, measure: Measure) -> Heaps | None:
    """The two heaps of a column in two units, None where it is in one. NaN belongs to neither."""
    own_range = measure.usual_in(measure.code)
    if own_range is None:
        return None
    known = int(np.isfinite(numbers).sum())
    found: list[tuple[int, Heaps]] = []
    for code in measure.field.quantity.units:
        other_range = measure.usual_in(code)
        if code == measure.code or other_range is None or _shared(own_range, other_range) > _MOST_SHARED:
            continue
        in_own, in_other = _inside(numbers, own_range), _inside(numbers, other_range)
        heaps = Heaps(in_own & ~in_other, in_other & ~in_own, code)
        smaller = int(min(heaps.own.sum(), heaps.other.sum()))
        if smaller >= max(2.0, _LEAST_HEAP * known):
            found.append((smaller, heaps))
    return max(found, key=lambda one: one[0])[1] if found else None


def find_better_unit(numbers: Numbers, measure: Measure) -> str:
    """The unit in which nine tenths of the values would be usual where in their own most are not; "" for none."""
    known = numbers[np.isfinite(numbers)]
    own = measure.usual_in(measure.code)
    if own is None or not len(known) or 2 * _inside(known, own).sum() > len(known):
        return ""
    for code in measure.field.quantity.units:
        usual = measure.usual_in(code)
        if code != measure.code and usual is not None and _inside(known, usual).mean() >= _MOST:
            return code
    return ""


def _inside(numbers: Numbers, usual: Range) -> Mask:
    inside: Mask = (numbers >= usual.low) & (numbers <= usual.high)
    return inside


def _shared(one: Range, other: Range) -> float:
    """How much of the narrower range lies in the other too, on the logarithmic scale where both are above nought."""
    low, high = max(one.low, other.low), min(one.high, other.high)
    if low >= high:
        return 0.0
    if min(one.low, other.low) <= 0:
        return (high - low) / min(one.high - one.low, other.high - other.low)
    return float(np.log(high / low) / min(np.log(one.high / one.low), np.log(other.high / other.low)))
