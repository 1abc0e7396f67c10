"""Units: one UCUM code, its trade spelling, and the spellings people type for it."""

import re
from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from fractions import Fraction
from functools import cache
from types import MappingProxyType

from clinicalc.errors import UnitError
from clinicalc.units.table import unit_table

# the longest spelling in the table has about 30 characters; nothing longer is worth a search
_LONGEST_UNIT = 60
_PER = re.compile(r"\bper\b", re.IGNORECASE)
_SAME_SIGN = str.maketrans("µμ⁰¹²³⁴⁵⁶⁷⁸⁹×º∕⁄,", "uu0123456789x°//.", "^*")


@dataclass(frozen=True, slots=True)
class Unit:
    """One unit. A value v in it is v * scale + offset in the base unit of its dimension.

    The dimensions are the table's own words. An annotated code has a dimension of its own, because UCUM's braces carry
    no meaning and would make mL/min/{1.73_m2} equal to mL/min.
    """

    code: str
    spelling: str
    dimension: str
    scale: Fraction
    offset: Fraction
    typed_as: tuple[str, ...]


@cache
def all_units() -> tuple[Unit, ...]:
    """Every unit of the table, in its order."""
    return tuple(
        Unit(row.code, row.spelling, row.dimension, Fraction(row.scale), Fraction(row.offset), row.typed_as)
        for row in unit_table().units
    )


def unit(code: str) -> Unit:
    """The unit with exactly this UCUM code. Raises UnitError naming close matches."""
    found = _by_code().get(code)
    if found is not None:
        return found
    meant = find_unit(code)
    close = [meant.code] if meant else get_close_matches(code[:_LONGEST_UNIT], _by_code(), n=3, cutoff=0.5)
    raise UnitError(
        f"{code[:_LONGEST_UNIT]!r} is not a unit of the table.",
        why="Units in files are UCUM codes, where capital and small letters differ and body surface stands in braces.",
        do=f"Did you mean {' or '.join(close)}?" if close else "Use one of the codes in resources/units.json.",
    )


def find_unit(typed: str) -> Unit | None:
    """The unit somebody typed, by code, trade spelling or another usual spelling; None when it is none or two of them.

    Spaces, µ, superscripts, carets and "per" are evened out first. Case counts only where folding it would leave
    two units.
    """
    if len(typed) > _LONGEST_UNIT:
        return None
    exact = _by_code().get(typed)
    if exact is not None:
        return exact
    even = _even_out(typed)
    claimed = _by_spelling().get(even) or _by_spelling(fold_case=True).get(even.casefold(), frozenset())
    return next(iter(claimed)) if len(claimed) == 1 else None


def find_close_spellings(typed: str) -> tuple[str, ...]:
    """Up to three trade spellings that look like what somebody typed, the closest first."""
    close = get_close_matches(
        _even_out(typed[:_LONGEST_UNIT]).casefold(), _by_spelling(fold_case=True), n=6, cutoff=0.6
    )
    spellings = (entry.spelling for name in close for entry in _by_spelling(fold_case=True)[name] if entry.spelling)
    return tuple(dict.fromkeys(spellings))[:3]


@cache
def _by_code() -> Mapping[str, Unit]:
    return MappingProxyType({entry.code: entry for entry in all_units()})


@cache
def _by_spelling(*, fold_case: bool = False) -> Mapping[str, frozenset[Unit]]:
    claims: dict[str, set[Unit]] = {}
    for entry in all_units():
        for spelling in (entry.code, entry.spelling, *entry.typed_as):
            even = _even_out(spelling)
            if even:
                claims.setdefault(even.casefold() if fold_case else even, set()).add(entry)
    return MappingProxyType({name: frozenset(units) for name, units in claims.items()})


def _even_out(typed: str) -> str:
    """One spelling for all that differ only in spaces, micro signs, superscripts, carets or "per"."""
    return "".join(_PER.sub("/", typed).translate(_SAME_SIGN).split())
