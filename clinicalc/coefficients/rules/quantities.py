"""Quantities, units, factors and ranges of predictors and derived values, against the unit table."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.coefficients.pointers import listed, point, quoted
from clinicalc.coefficients.products import products_of
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.within_person import check_within_person
from clinicalc.coefficients.schema import Derived, Limits, ModelContent, NumberPredictor
from clinicalc.errors import Problem, UnitError
from clinicalc.units import Quantity, Range, conversion, possible_in, quantity, unit, usual_in

FACTOR_SLACK = 0.005
"""How far a file's own molar factor may lie from the table's: published factors differ by rounding, up to 0.3 %."""

Measured = NumberPredictor | Derived


def check_quantities(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every number predictor and derived value."""
    del names
    bent = set(_list_bent(model))
    for part, base in list_measured(model):
        yield from _check_measured(part, base)
        if part.id in bent and part.quantity == "number" and not _is_closed(part.possible):
            yield Problem(
                base,
                f"{quoted(part.id)} is a bare number that is logged, raised to a power or divided by, so it must state "
                '"possible" as [low, high]: the table has no limits for it.',
            )
        if isinstance(part, NumberPredictor) and not isinstance(part.within_person, UnsetType):
            yield from check_within_person(part.within_person, point(base, "within_person"))


def check_loinc(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The check digit of every LOINC code."""
    del names
    for kind, parts in (("predictors", model.predictors), ("derived", model.derived)):
        for index, part in enumerate(parts):
            for place, code in enumerate(() if isinstance(part.loinc, UnsetType) else part.loinc):
                if not _is_loinc(code):
                    yield Problem(
                        at(kind, index, "loinc", place),
                        f'{quoted(code)} is no LOINC code: digits, a hyphen, a check digit (modulo 10): "2093-3".',
                    )


def list_measured(model: ModelContent) -> Iterator[tuple[Measured, str]]:
    """Every number predictor and derived value with its pointer."""
    for index, predictor in enumerate(model.predictors):
        if isinstance(predictor, NumberPredictor):
            yield predictor, at("predictors", index)
    for index, derived in enumerate(model.derived):
        yield derived, at("derived", index)


def factor_of(part: Measured) -> float | None:
    """The file's own molar factor, or None where the table's counts."""
    return None if isinstance(part.factor, UnsetType) else part.factor


def fits_table(part: Measured) -> bool:
    """Whether the table knows the quantity, permits the unit and can use the factor."""
    try:
        conversion(quantity(part.quantity), part.unit, part.unit, factor_of(part))
    except UnitError:
        return False
    return True


def possible_of(part: Measured) -> Range | None:
    """The values possible for it, the file's own range inside the table's; None where there is no end to them."""
    return _narrow(possible_in(quantity(part.quantity), part.unit, factor_of(part)), part.possible)


def _check_measured(part: Measured, base: str) -> Iterator[Problem]:
    try:
        known = quantity(part.quantity)
    except UnitError as fault:
        yield Problem(point(base, "quantity"), str(fault))
        return
    try:
        unit(part.unit)
        conversion(known, part.unit, part.unit)
    except UnitError as fault:
        yield Problem(point(base, "unit"), str(fault))
        return
    fault_of_factor = _judge_factor(known, factor_of(part))
    if fault_of_factor:
        yield Problem(point(base, "factor"), fault_of_factor)
        return
    yield from _check_ranges(part, known, base)


def _judge_factor(known: Quantity, factor: float | None) -> str:
    if factor is None:
        return ""
    if known.molar is None:
        return f"{known.label} has no pair of a mass unit and a molar unit in the table. Leave the factor out."
    right = float(known.molar.factor)
    if abs(factor / right - 1) <= FACTOR_SLACK:
        return ""
    slip = " Is it the factor the other way round?" if abs(factor * right - 1) <= FACTOR_SLACK else ""
    return (
        f"{quoted(factor)} is more than 0.5\u202f% away from {quoted(right)}, the factor of {known.label} from "
        f"{unit(known.molar.mass_unit).spelling} to {unit(known.molar.molar_unit).spelling}.{slip}"
    )


def _check_ranges(part: Measured, known: Quantity, base: str) -> Iterator[Problem]:
    factor = factor_of(part)
    widest = possible_in(known, part.unit, factor)
    for name, limits, table in (
        ("possible", part.possible, widest),
        ("usual", part.usual, usual_in(known, part.unit, factor)),
        ("derivation", part.derivation, _narrow(widest, part.possible)),
    ):
        if isinstance(limits, UnsetType):
            continue
        fault = _judge_limits(limits, table, part.unit, "possible" if name == "derivation" else "table's")
        if fault:
            yield Problem(point(base, name), fault)


def _judge_limits(limits: Limits, table: Range | None, code: str, whose: str) -> str:
    low, high = limits
    if low is None and high is None:
        return "both sides are open, so this says nothing. Leave it out."
    if low is not None and high is not None and low >= high:
        return f"the low end {quoted(low)} must be less than the high end {quoted(high)}."
    outside = [] if table is None else [end for end in limits if end is not None and not table.contains(end)]
    if table is None or not outside:
        return ""
    spelling = f" {unit(code).spelling}".rstrip()
    return (
        f"{listed(map(quoted, outside))} lies outside the {whose} range, {quoted(table.low)} to {quoted(table.high)}"
        f"{spelling}; a file may only narrow it. Is the value in {spelling.strip() or 'the right unit'}?"
    )


def _narrow(widest: Range | None, possible: Limits | UnsetType) -> Range | None:
    low, high = (None, None) if isinstance(possible, UnsetType) else possible
    if widest is not None:
        low = widest.low if low is None else low
        high = widest.high if high is None else high
    if low is None and high is None:
        return None
    return Range(float("-inf") if low is None else low, float("inf") if high is None else high)


def _is_closed(limits: Limits | UnsetType) -> bool:
    return not isinstance(limits, UnsetType) and None not in limits


def _list_bent(model: ModelContent) -> Iterator[str]:
    """Ids of the values that are logged, raised to a power or divided by: 0 or less may have no result."""
    for derived in model.derived:
        if derived.equation == "ratio" and "denominator" in derived.inputs:
            yield derived.inputs["denominator"]
    for equation in model.equations:
        for term in equation.terms:
            for product in products_of(term):
                for factor in product:
                    steps = () if isinstance(factor.steps, UnsetType) else factor.steps
                    if any(
                        not isinstance(step.log, UnsetType) or not isinstance(step.power, UnsetType) for step in steps
                    ):
                        yield factor.of


def _is_loinc(code: str) -> bool:
    body, hyphen, check = code.partition("-")
    if not (
        hyphen and len(check) == 1 and 1 <= len(body) <= 7 and (body + check).isascii() and (body + check).isdigit()
    ):
        return False
    total = 0
    for place, digit in enumerate(reversed(body)):
        number = int(digit) * (2 if place % 2 == 0 else 1)
        total += number - 9 if number > 9 else number
    return (10 - total % 10) % 10 == int(check)
