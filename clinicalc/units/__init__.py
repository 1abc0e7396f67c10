"""Units, quantities and typed values: what "5.2 mmol/L" means, and into what it may be converted.

The tables lie in `resources/units.json` and `resources/quantities.json`. This room refuses to guess: a unit that is
not in the table, a conversion that would need a fact nobody has (lipoprotein(a), body surface) and a typed text that
can be read in two ways are each answered with a sentence. It does not judge a patient's value; that is `assessment`.
"""

from clinicalc.units.averaged import MOST_AVERAGED, Averaged
from clinicalc.units.conversion import Conversion, conversion
from clinicalc.units.fitting import UnitOverlap, fitting_units, overlapping_units, possible_in, usual_in
from clinicalc.units.quantity import (
    CrossCheck,
    Equation,
    MolarFactor,
    Quantity,
    Range,
    all_quantities,
    cross_checks,
    quantity,
)
from clinicalc.units.reading import Reading, Unreadable, UnreadableReason, read_value
from clinicalc.units.unit import Unit, all_units, find_unit, unit

__all__ = [
    "MOST_AVERAGED",
    "Averaged",
    "Conversion",
    "CrossCheck",
    "Equation",
    "MolarFactor",
    "Quantity",
    "Range",
    "Reading",
    "Unit",
    "UnitOverlap",
    "Unreadable",
    "UnreadableReason",
    "all_quantities",
    "all_units",
    "conversion",
    "cross_checks",
    "find_unit",
    "fitting_units",
    "overlapping_units",
    "possible_in",
    "quantity",
    "read_value",
    "unit",
    "usual_in",
]
