"""Derived values: worked out where their inputs are there, and set beside a typed one."""

from collections.abc import Mapping
from math import isfinite

import numpy as np

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.assessment.numbers import TakenNumber, check_ranges
from clinicalc.assessment.numerals import NARROW_SPACE, join_words, plain
from clinicalc.coefficients.roles import RESULT_UNIT, ROLES
from clinicalc.covariates.derived import derive
from clinicalc.covariates.transforms import Column
from clinicalc.units.conversion import conversion

APART = 0.05
"""Typed and worked-out values further apart than this share of the typed one are pointed out."""


def work_out(model: Model, field: NumberField, columns: Mapping[str, Column]) -> Column | None:
    """The derived column in the file's unit, shape (n,), or None while an input is not there."""
    assert field.formula is not None
    inputs = dict(field.formula.inputs)
    if any(id not in columns for id in inputs.values()):
        return None
    fields = model.by_id
    converted: dict[str, Column] = {}
    for role in ROLES[field.formula.equation]:
        source = fields[inputs[role.name]]
        column = columns[source.id]
        if isinstance(source, NumberField):
            wanted = role.unit or field.unit
            if wanted == "numerator":
                numerator = fields[inputs["numerator"]]
                assert isinstance(numerator, NumberField)
                wanted = numerator.unit
            column = conversion(source.quantity, source.unit, wanted, source.factor).apply(column)
        elif role.unit == "sex":
            female = next(place for place, option in enumerate(source.options) if option.id == "female")
            column = np.where(column == female, 1.0, 0.0)
        converted[role.name] = column
    result = derive(field.formula.equation, converted)
    given_in = RESULT_UNIT.get(field.formula.equation, field.unit)
    return np.ascontiguousarray(conversion(field.quantity, given_in, field.unit, field.factor).apply(result))


def check_worked_out(model: Model, field: NumberField, value: float, typed: TakenNumber | None) -> tuple[Finding, ...]:
    """What is to be said about a worked-out value, and about a typed one that stands beside it."""
    fields = model.by_id
    sources = join_words([fields[id].label for id in field.sources])
    if not isfinite(value):
        if typed is not None:
            return ()
        remedy = " Type a measured value instead." if field.may_be_typed else ""
        message = f"{field.label} cannot be worked out from {sources} as they stand.{remedy}"
        return (Finding(Grade.STOP, FindingCode.NOT_COMPUTABLE, field.id, message),)
    shown = plain(value) if field.unit == "1" else f"{plain(value)} {field.spelling}"
    if typed is None:
        return tuple(check_ranges(field, value, f"{shown} (worked out from {sources})"))
    if abs(value - typed.value) > APART * abs(typed.value):
        message = (
            f"{field.label} typed is {typed.shown}, worked out from {sources} it is {shown}: more than"
            f" {100 * APART:g}{NARROW_SPACE}% apart. The typed value counts. Check both."
        )
        return (Finding(Grade.CAUTION, FindingCode.TYPED_AND_COMPUTED, field.id, message),)
    return ()
