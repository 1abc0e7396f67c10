"""What may stand beside a value, worked out from what its field holds: words, or its range in the unit on screen."""

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.limits import shown_limits
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.held_value import HeldValue
from clinicalc.report.range_line import RangeOfValues
from clinicalc.units.conversion import conversion
from clinicalc.units.reading import Reading, read_value


class ValueRemarks:
    """The remarks about the values of one field; no widget."""

    def __init__(self, field: NumberField) -> None:
        self._field = field
        self._ranges: dict[str, RangeOfValues] = {}

    def words(self, held: HeldValue, line: ValueLine | None) -> str:
        """What is to be said in words: how it is read, what was worked out, or of how many and of which day it is."""
        if held.remark:
            return held.remark
        if line is not None and line.worked_out:
            digits = "" if line.number is None else plain(line.number)  # as many as the findings name
            unit = "" if self._field.is_bare or self._field.unit == "1" else f" {self._field.spelling}"
            return f"{digits}{unit} worked out"
        if line is None or line.averaged is None:
            return "" if line is None or line.dated is None else f"of {line.dated.isoformat()}"
        total = line.averaged.total
        return f"mean of {total} readings" if line.dated is None else f"mean of {total}, {line.dated.isoformat()}"

    def range_in(self, unit: str) -> RangeOfValues | None:
        """The derivation range in this unit; None where the file states none."""
        low, high = self._field.derivation
        if low is None and high is None:
            return None
        if unit not in self._ranges:
            texts = ("" if end is None else plain(end) for end in shown_limits(self._field, (low, high), unit))
            self._ranges[unit] = RangeOfValues(self._in_unit(low, unit), self._in_unit(high, unit), *texts)
        return self._ranges[unit]

    def number(self, held: HeldValue, line: ValueLine | None, *, inside: bool) -> float | None:
        """The value in the unit on screen; where the model refuses it for its range, as it was typed."""
        if line is not None and line.number is not None:
            return self._in_unit(line.number, held.unit)
        reading = None if inside else read_value(held.typed.text)
        if not isinstance(reading, Reading):
            return None
        code = reading.unit or held.typed.unit or self._field.unit
        return conversion(self._field.quantity, code, held.unit, self._field.factor).apply(reading.number)

    def _in_unit(self, value: float | None, unit: str) -> float | None:
        """A value of the file's unit in another."""
        if value is None:
            return None
        return conversion(self._field.quantity, self._field.unit, unit, self._field.factor).apply(value)
