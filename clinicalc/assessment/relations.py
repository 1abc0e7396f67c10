"""Values that contradict each other, by the cross-checks of the quantity table."""

from collections.abc import Iterator, Mapping

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.errors import UnitError
from clinicalc.units.conversion import conversion
from clinicalc.units.quantity import cross_checks


def check_relations(numbers: Mapping[str, TakenNumber]) -> Iterator[Finding]:
    """A finding for each pair of typed values of which the first may not exceed the second."""
    by_quantity: dict[str, list[TakenNumber]] = {}
    for number in numbers.values():
        by_quantity.setdefault(number.field.quantity.id, []).append(number)
    for check in cross_checks():
        for lower in by_quantity.get(check.lower, []):
            for upper in by_quantity.get(check.upper, []):
                low, high = _in_one_unit(lower, upper)
                if low > high or (low == high and not check.may_equal):
                    yield Finding(
                        Grade(check.grade),
                        FindingCode.CROSS_CHECK,
                        lower.field.id,
                        f"{lower.field.label} {lower.shown}, {upper.field.label} {upper.shown}: {check.message}",
                    )


def _in_one_unit(lower: TakenNumber, upper: TakenNumber) -> tuple[float, float]:
    """Both values in the upper one's unit as typed, to 9 significant digits."""
    low = lower.reading.number
    if lower.unit != upper.unit:
        try:
            into = conversion(lower.field.quantity, lower.unit, upper.unit, lower.field.factor)
        except UnitError:
            return 0.0, 1.0
        low = into.apply(low)
    return float(f"{low:.9g}"), float(f"{upper.reading.number:.9g}")
