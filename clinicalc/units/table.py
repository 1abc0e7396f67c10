"""The shape of `resources/units.json` and `resources/quantities.json`, and their strict decoding.

Exact figures stand as strings ("0.133322", "5/9"), so that no binary rounding enters before a conversion is made.
"""

from functools import cache
from typing import Literal, TypeVar

import msgspec

from clinicalc.errors import ShippedFileMissing
from clinicalc.resources import read_shipped


class _Row(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One row of a table: an unknown field is a misspelt one."""


class UnitRow(_Row, frozen=True):
    """One unit as the file has it; scale and offset are exact decimals."""

    code: str
    spelling: str
    dimension: str
    scale: str
    offset: str
    typed_as: tuple[str, ...]


class UnitTable(_Row, frozen=True):
    """The file of units."""

    notice: str
    units: tuple[UnitRow, ...]


class MolarRow(_Row, frozen=True):
    """An analyte's factor from a mass unit to a molar one."""

    mass_unit: str
    molar_unit: str
    factor: str
    source: str


class EquationRow(_Row, frozen=True):
    """A named affine equation between two units."""

    name: str
    from_unit: str
    to_unit: str
    scale: str
    offset: str
    source: str


class ApartRow(_Row, frozen=True):
    """Ranges of a unit that never converts into the others."""

    unit: str
    possible: tuple[float, float]
    usual: tuple[float, float]


class RefusedRow(_Row, frozen=True):
    """A unit that looks right and is refused, with the sentence why."""

    unit: str
    why: str


class QuantityRow(_Row, frozen=True):
    """One quantity as the file has it."""

    id: str
    label: str
    unit: str
    units: tuple[str, ...]
    possible: tuple[float, float] | None
    usual: tuple[float, float] | None
    source: str
    molar: MolarRow | None = None
    equation: EquationRow | None = None
    apart: tuple[ApartRow, ...] = ()
    refused: tuple[RefusedRow, ...] = ()
    no_conversion: str = ""


class CrossCheckRow(_Row, frozen=True):
    """Two quantities of which the first may not exceed the second."""

    lower: str
    upper: str
    grade: Literal["stop", "caution"]
    may_equal: bool
    message: str


class QuantityTable(_Row, frozen=True):
    """The file of quantities."""

    notice: str
    quantities: tuple[QuantityRow, ...]
    cross_checks: tuple[CrossCheckRow, ...]


_Table = TypeVar("_Table", UnitTable, QuantityTable)


def _decode(name: str, table: type[_Table]) -> _Table:
    try:
        return msgspec.json.decode(read_shipped(name), type=table, strict=True)
    except msgspec.MsgspecError as error:
        raise ShippedFileMissing(
            f"the file {name} of this installation is damaged.",
            why=f"It cannot be read: {error}.",
            do="Install clinicalc again from its wheel or checkout.",
        ) from error


@cache
def unit_table() -> UnitTable:
    """`resources/units.json`, decoded once. Raises ShippedFileMissing when it is missing or damaged."""
    return _decode("resources/units.json", UnitTable)


@cache
def quantity_table() -> QuantityTable:
    """`resources/quantities.json`, decoded once. Raises ShippedFileMissing when it is missing or damaged."""
    return _decode("resources/quantities.json", QuantityTable)
