"""Conversion between two units of one quantity: exact in fractions, rounded to floats once at the end."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from math import isfinite
from typing import TYPE_CHECKING, overload

from clinicalc.errors import UnitError
from clinicalc.units.quantity import Quantity
from clinicalc.units.quantity import quantity as known_quantity
from clinicalc.units.unit import unit

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray


@dataclass(frozen=True, slots=True)
class Conversion:
    """value * scale + offset, for one value or an array of them."""

    scale: float
    offset: float

    @overload
    def apply(self, value: float) -> float: ...
    @overload
    def apply(self, value: NDArray[np.float64]) -> NDArray[np.float64]: ...
    def apply(self, value: float | NDArray[np.float64]) -> float | NDArray[np.float64]:
        """The converted value; between a unit and itself the very same value, bit for bit."""
        if self.scale == 1.0 and self.offset == 0.0:
            return value
        return value * self.scale + self.offset


@dataclass(frozen=True, slots=True)
class _Line:
    """An exact straight line: what a conversion is before it is rounded."""

    scale: Fraction
    offset: Fraction

    def then(self, after: _Line) -> _Line:
        return _Line(self.scale * after.scale, self.offset * after.scale + after.offset)

    def turned(self) -> _Line:
        return _Line(1 / self.scale, -self.offset / self.scale)


def conversion(quantity: Quantity, from_code: str, to_code: str, factor: float | None = None) -> Conversion:
    """How a value of `quantity` in `from_code` becomes one in `to_code`.

    `factor` is a coefficient file's own factor from the quantity's mass unit to its molar unit (mg/dL to mmol/L;
    creatinine mg/dL to µmol/L) and replaces the table's. Raises UnitError with the reason when a unit is not one of
    the quantity's, when its units never convert, and when `factor` has no use here.
    """
    if quantity is known_quantity(quantity.id):
        return _conversion_of(quantity.id, from_code, to_code, factor)
    return _work_out(quantity, from_code, to_code, factor)


@lru_cache(maxsize=4096)
def _conversion_of(id: str, from_code: str, to_code: str, factor: float | None) -> Conversion:
    """The conversion of a quantity of the table, worked out once: the fractions cost more than all that uses them."""
    return _work_out(known_quantity(id), from_code, to_code, factor)


def _work_out(quantity: Quantity, from_code: str, to_code: str, factor: float | None) -> Conversion:
    for code in (from_code, to_code):
        _refuse_foreign(quantity, code)
    molar_factor = _choose_factor(quantity, factor)
    if from_code == to_code:
        return Conversion(1.0, 0.0)
    if quantity.no_conversion:
        raise UnitError(
            f"{quantity.label} in {unit(from_code).spelling} is not converted into {unit(to_code).spelling}.",
            why=quantity.no_conversion,
            do=f"Type the value as the laboratory gave it in {unit(to_code).spelling}, or leave it out.",
        )
    line = _by_equation(quantity, from_code, to_code) or _by_scale(quantity, from_code, to_code, molar_factor)
    return Conversion(float(line.scale), float(line.offset))


def _by_equation(quantity: Quantity, from_code: str, to_code: str) -> _Line | None:
    equation = quantity.equation
    if equation is None or {from_code, to_code} != {equation.from_unit, equation.to_unit}:
        return None
    line = _Line(equation.scale, equation.offset)
    return line if from_code == equation.from_unit else line.turned()


def _by_scale(quantity: Quantity, from_code: str, to_code: str, molar_factor: Fraction | None) -> _Line:
    start, end = unit(from_code), unit(to_code)
    inward = _Line(start.scale, start.offset)
    outward = _Line(end.scale, end.offset).turned()
    if start.dimension == end.dimension:
        return inward.then(outward)
    if quantity.molar is None or molar_factor is None:
        raise UnitError(
            f"{quantity.label} in {start.spelling} is not converted into {end.spelling}.",
            why=f"{start.spelling} measures {start.dimension} and {end.spelling} measures {end.dimension}, "
            "and the table has no factor between the two for this quantity.",
            do=f"Type the value in {end.spelling}.",
        )
    mass, molar = unit(quantity.molar.mass_unit), unit(quantity.molar.molar_unit)
    across = _Line(molar_factor * molar.scale / mass.scale, Fraction(0))
    return inward.then(across if start.dimension == mass.dimension else across.turned()).then(outward)


def _choose_factor(quantity: Quantity, factor: float | None) -> Fraction | None:
    if factor is None:
        return quantity.molar.factor if quantity.molar else None
    if quantity.molar is None:
        raise UnitError(
            f"{quantity.label} takes no factor.",
            why="It has no pair of a mass unit and a molar unit in the table.",
            do="Leave the factor out.",
        )
    if not isfinite(factor) or factor <= 0:
        raise UnitError(
            f"The factor {factor!r} of {quantity.label} cannot be used.",
            why="A factor from a mass unit to a molar unit is a positive, finite number.",
            do=f"The table's own factor is {float(quantity.molar.factor)!r}.",
        )
    # repr gives back the decimals that stand in the file, so 0.02586 is taken as exactly that
    return Fraction(repr(float(factor)))


def _refuse_foreign(quantity: Quantity, code: str) -> None:
    entry = unit(code)
    if code in quantity.units:
        return
    known = [refused.why for refused in quantity.refused if refused.unit == code]
    permitted = [unit(permitted) for permitted in quantity.units]
    spellings = " or ".join(permitted_unit.spelling or "a bare number" for permitted_unit in permitted)
    name = entry.spelling or "a bare number"
    other_kind = all(permitted_unit.dimension != entry.dimension for permitted_unit in permitted)
    general = f"{name} measures {entry.dimension}." if other_kind else f"{name} is not offered for this quantity."
    raise UnitError(
        f"{quantity.label} is not given in {name}.", why=known[0] if known else general, do=f"Use {spellings}."
    )
