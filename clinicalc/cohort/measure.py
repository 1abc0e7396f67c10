"""What a number predictor is measured in here: the unit of its column, its own unit, and its limits."""

from dataclasses import dataclass

from msgspec import UnsetType

from clinicalc.assessment.fields import OPEN, NumberField
from clinicalc.assessment.limits import words_for
from clinicalc.coefficients.schema import Limits, NumberPredictor
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.units.conversion import Conversion, conversion
from clinicalc.units.fitting import possible_in, usual_in
from clinicalc.units.quantity import Range, quantity
from clinicalc.units.unit import unit


@dataclass(frozen=True, slots=True)
class Measure:
    """The predictor as a field of numbers, the UCUM code of the column's unit, and the way from there to its own."""

    field: NumberField
    code: str
    into: Conversion

    @property
    def spelling(self) -> str:
        """The column's unit as people write it, "" for a bare number."""
        return unit(self.code).spelling

    def limit_words(self, limits: Limits) -> str:
        """Limits in the column's unit as they stand in a sentence."""
        return words_for(self.field, limits, self.code)

    def usual_in(self, code: str) -> Range | None:
        """The usual range in the digits of a unit."""
        return usual_in(self.field.quantity, code, self.field.factor)


def measure_of(predictor: NumberPredictor, entry: ColumnEntry) -> Measure:
    """How the column of a number predictor is measured. Raises UnitError where the two units do not convert."""
    kind = quantity(predictor.quantity)
    factor = None if isinstance(predictor.factor, UnsetType) else predictor.factor
    code = entry.unit or predictor.unit
    field = NumberField(
        id=predictor.id,
        label=predictor.label,
        group=predictor.group,
        quantity=kind,
        unit=predictor.unit,
        factor=factor,
        possible=_narrow(predictor.possible, possible_in(kind, predictor.unit, factor)),
        usual=_narrow(predictor.usual, usual_in(kind, predictor.unit, factor)),
        derivation=OPEN,
        derivation_stops=False,
        valid_days=None,
        meaning="",
    )
    return Measure(field, code, conversion(kind, code, predictor.unit, factor))


def _narrow(stated: Limits | UnsetType, table: Range | None) -> Limits:
    """The predictor's own range, each open side filled from the table's."""
    low, high = OPEN if isinstance(stated, UnsetType) else stated
    if table is None:
        return low, high
    return (table.low if low is None else low), (table.high if high is None else high)
