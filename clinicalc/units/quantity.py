"""Quantities: what is measured, in which units, within which limits, and how its units convert."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields
from difflib import get_close_matches
from fractions import Fraction
from functools import cache
from types import MappingProxyType
from typing import Literal

from clinicalc.errors import UnitError
from clinicalc.units.table import QuantityRow, quantity_table


def _round_to_nine(number: float) -> float:
    return float(f"{number:.9g}")


@dataclass(frozen=True, slots=True)
class Range:
    """An inclusive range of numbers."""

    low: float
    high: float

    def contains(self, number: float) -> bool:
        """Whether `number` lies in the range, all three rounded to nine significant digits; never for NaN.

        The rounding keeps a limit reached by way of another unit (77 °F is 25 °C) from being missed by the last bit.
        """
        return _round_to_nine(self.low) <= _round_to_nine(number) <= _round_to_nine(self.high)


@dataclass(frozen=True, slots=True)
class MolarFactor:
    """The analyte's own factor: a value in `mass_unit` times `factor` is the value in `molar_unit`."""

    mass_unit: str
    molar_unit: str
    factor: Fraction
    source: str


@dataclass(frozen=True, slots=True)
class Equation:
    """A named equation between two scales: value in `from_unit` * scale + offset = value in `to_unit`."""

    name: str
    from_unit: str
    to_unit: str
    scale: Fraction
    offset: Fraction
    source: str


@dataclass(frozen=True, slots=True)
class RangesApart:
    """The ranges in a permitted unit that does not convert to the base unit."""

    unit: str
    possible: Range
    usual: Range


@dataclass(frozen=True, slots=True)
class RefusedUnit:
    """A unit that is easily taken for one of the quantity's, and the sentence why it is none."""

    unit: str
    why: str


@dataclass(frozen=True, slots=True)
class Quantity:
    """One measured quantity. `possible` and `usual` stand in the base `unit`; both are None for the bare number only.

    `units` are the permitted codes in screen order. `no_conversion`, when not empty, says why they never convert
    into each other; the ranges of the others then stand in `apart`. `source` says where the ranges come from.
    """

    id: str
    label: str
    unit: str
    units: tuple[str, ...]
    possible: Range | None
    usual: Range | None
    source: str
    molar: MolarFactor | None
    equation: Equation | None
    apart: tuple[RangesApart, ...]
    refused: tuple[RefusedUnit, ...]
    no_conversion: str

    def __reduce__(self) -> tuple[Callable[..., "Quantity"], tuple[object, ...]]:
        """One of the table's stays the table's own in another process, where its conversions are kept."""
        if _by_id().get(self.id) is self:
            return quantity, (self.id,)
        return Quantity, tuple(getattr(self, part.name) for part in fields(self))


@dataclass(frozen=True, slots=True)
class CrossCheck:
    """The value of the quantity `lower` may not exceed that of `upper`, each in its base unit (the two are alike)."""

    lower: str
    upper: str
    grade: Literal["stop", "caution"]
    may_equal: bool
    message: str

    def holds(self, lower: float, upper: float) -> bool:
        """Whether the two values agree with each other, compared after rounding to nine significant digits."""
        low, high = _round_to_nine(lower), _round_to_nine(upper)
        return low < high or (self.may_equal and low == high)


def quantity(id: str) -> Quantity:
    """The quantity called `id`. Raises UnitError naming close matches."""
    found = _by_id().get(id)
    if found is not None:
        return found
    close = get_close_matches(id[:60], _by_id(), n=3)
    raise UnitError(
        f"{id[:60]!r} is not a quantity of the table.",
        do=f"Did you mean {' or '.join(close)}?"
        if close
        else 'Use one of the ids in resources/quantities.json, or "number" for a bare number.',
    )


@cache
def all_quantities() -> tuple[Quantity, ...]:
    """Every quantity of the table, in its order."""
    return tuple(_make_quantity(row) for row in quantity_table().quantities)


@cache
def cross_checks() -> tuple[CrossCheck, ...]:
    """Every pair of quantities that must stand in order."""
    return tuple(
        CrossCheck(row.lower, row.upper, row.grade, row.may_equal, row.message) for row in quantity_table().cross_checks
    )


@cache
def _by_id() -> Mapping[str, Quantity]:
    return MappingProxyType({entry.id: entry for entry in all_quantities()})


def _make_quantity(row: QuantityRow) -> Quantity:
    molar, equation = row.molar, row.equation
    return Quantity(
        id=row.id,
        label=row.label,
        unit=row.unit,
        units=row.units,
        possible=Range(*row.possible) if row.possible else None,
        usual=Range(*row.usual) if row.usual else None,
        source=row.source,
        molar=MolarFactor(molar.mass_unit, molar.molar_unit, Fraction(molar.factor), molar.source) if molar else None,
        equation=Equation(
            equation.name,
            equation.from_unit,
            equation.to_unit,
            Fraction(equation.scale),
            Fraction(equation.offset),
            equation.source,
        )
        if equation
        else None,
        apart=tuple(RangesApart(apart.unit, Range(*apart.possible), Range(*apart.usual)) for apart in row.apart),
        refused=tuple(RefusedUnit(refused.unit, refused.why) for refused in row.refused),
        no_conversion=row.no_conversion,
    )
