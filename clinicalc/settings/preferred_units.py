"""The unit in which a practice types a quantity: one per quantity, out of those that the quantity's table knows."""

from dataclasses import dataclass
from difflib import get_close_matches

from clinicalc.errors import UnitError, UsageError
from clinicalc.settings.toml_text import shown_text
from clinicalc.units.quantity import Quantity, all_quantities, quantity
from clinicalc.units.unit import find_unit


@dataclass(frozen=True, slots=True)
class PreferredUnit:
    """A quantity's id and one of its units by UCUM code. Raises UsageError, naming the closest, where either is not."""

    quantity: str
    unit: str

    def __post_init__(self) -> None:
        known = _quantity(self.quantity)
        if self.unit not in known.units:
            raise UsageError(_fault_of_unit(known, self.unit))


def take_preferred_unit(key: str, value: object) -> PreferredUnit:
    """The preferred unit that one line of the table `units` states. Raises UsageError where it states none."""
    if not isinstance(value, str):
        known = _quantity(key)
        raise UsageError(f"{key} is a unit between quotation marks: {_listed(known)}.")
    return PreferredUnit(key, value)


def choosable_quantities() -> tuple[Quantity, ...]:
    """Every quantity that has more than one unit, in the table's order."""
    return tuple(entry for entry in all_quantities() if len(entry.units) > 1)


def _quantity(id: str) -> Quantity:
    try:
        return quantity(id)
    except UnitError as fault:
        known = [entry.id for entry in choosable_quantities()]
        close = get_close_matches(id[:60], known, n=1)
        end = f"; did you mean {close[0]}?" if close else ", so it has no preferred unit."
        raise UsageError(f"{shown_text(id)} is not a quantity that is known{end}") from fault


def _fault_of_unit(known: Quantity, text: str) -> str:
    meant = find_unit(text)
    close = [meant.code] if meant is not None and meant.code in known.units else []
    folded = {code.casefold(): code for code in known.units}
    close = close or [folded[match] for match in get_close_matches(text[:60].casefold(), folded, n=1, cutoff=0.5)]
    ask = f' Did you mean "{close[0]}"?' if close else ""
    return f"{known.id} cannot be in {shown_text(text)}; its units are {_listed(known)}.{ask}"


def _listed(known: Quantity) -> str:
    return " or ".join(f'"{code}"' for code in known.units)
