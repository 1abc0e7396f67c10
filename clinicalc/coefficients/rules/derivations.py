"""Derived values: the roles their named equation needs, filled by predictors of fitting quantities."""

from collections.abc import Iterator

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.roles import RESULT_QUANTITY, SEX, role_names
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.naming import SEXES
from clinicalc.coefficients.rules.quantities import factor_of, fits_table
from clinicalc.coefficients.schema import Derived, ModelContent, NumberPredictor
from clinicalc.errors import Problem, UnitError
from clinicalc.units import conversion, quantity


def check_derived(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every derived value."""
    for index, derived in enumerate(model.derived):
        base = at("derived", index)
        result = RESULT_QUANTITY.get(derived.equation, derived.quantity)
        if derived.quantity != result:
            yield Problem(
                point(base, "quantity"), f"{derived.equation} gives {quoted(result)}, not {quoted(derived.quantity)}."
            )
        yield from _check_roles(derived, point(base, "inputs"))
        for role in role_names(derived.equation):
            if role in derived.inputs:
                fault = _judge_input(role, derived, names)
                if fault:
                    yield Problem(point(base, "inputs", role), fault)
        fault = _judge_units(derived, names)
        if fault:
            yield Problem(point(base, "inputs"), fault)


def _check_roles(derived: Derived, base: str) -> Iterator[Problem]:
    roles = role_names(derived.equation)
    absent = [role for role in roles if role not in derived.inputs]
    if absent:
        yield Problem(base, f"{derived.equation} also needs {listed(map(quoted, absent))}.")
    for role in derived.inputs:
        if role not in roles:
            yield Problem(
                point(base, role), f"{derived.equation} has no input {quoted(role)}.{suggest(role, absent or roles)}"
            )


def _judge_input(role: str, derived: Derived, names: Catalogue) -> str:
    name = derived.inputs[role]
    predictor = names.predictors.get(name)
    if predictor is None:
        also = (
            " A derived value cannot be made from another."
            if name in names.derived
            else suggest(name, names.predictors)
        )
        return f"there is no predictor {quoted(name)}.{also}"
    if role == SEX:
        fits = set(names.answers_of(name)) == SEXES
        return "" if fits else f'{quoted(name)} must be a choice of exactly two answers, "female" and "male".'
    if not isinstance(predictor, NumberPredictor):
        return f"{quoted(name)} is not a number."
    if derived.equation in RESULT_QUANTITY and predictor.quantity != role:
        return f"{quoted(name)} is of the quantity {quoted(predictor.quantity)}; {quoted(role)} must stand here."
    return ""


def _judge_units(derived: Derived, names: Catalogue) -> str:
    """A difference is taken in the result's unit, a ratio in the numerator's; what does not convert has neither."""
    if derived.equation not in ("difference", "ratio") or not fits_table(derived):
        return ""
    found = [names.predictors.get(derived.inputs.get(role, "")) for role in role_names(derived.equation)]
    inputs = [part for part in found if isinstance(part, NumberPredictor) and fits_table(part)]
    if len(inputs) < len(found):
        return ""
    target = derived.unit if derived.equation == "difference" else inputs[0].unit
    for part in inputs:
        try:
            conversion(quantity(part.quantity), part.unit, target, factor_of(part))
        except UnitError as fault:
            return (
                f"{quoted(part.id)} does not convert into {target}, in which the {derived.equation} is taken: {fault}"
            )
    if derived.equation == "ratio" and derived.unit != "1":
        return f'a ratio of two values in the same unit has the unit "1", not {quoted(derived.unit)}.'
    return ""
