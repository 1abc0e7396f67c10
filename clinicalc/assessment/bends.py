"""Where a model's equation jumps or bends in a number, so that an average over that number can be taken exactly."""

from collections.abc import Iterator, Mapping

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.limits import giving_limits
from clinicalc.coefficients.roles import ROLES
from clinicalc.covariates.derived import BENDS
from clinicalc.covariates.transforms import CUTS, Column, StepKind, Transform
from clinicalc.prediction.line import Array
from clinicalc.units.conversion import conversion

_PARTS, _PARTINGS = 32, 9
"""Into how many parts, and how often: to 3e-14 of the interval."""
_CLIPS = frozenset({StepKind.CLIP_LOW, StepKind.CLIP_HIGH})


def bends_in(
    case: Case, open: tuple[str, ...], id: str, before: Mapping[str, Column], ends: tuple[Column, Column]
) -> Array:
    """The places of jumps and bends in the number `id`, in its unit, shape (n, k); not a number where there is none.

    Cuts, clipped ends, knots and the limits of the model, in the number itself and in values worked out from it. `open`
    are all ids that are averaged over, `before` the columns, shape (n,), of those already settled; `ends` the lowest
    and highest value that counts, each of shape (n,).
    """
    rows = ends[0].size
    own = [np.full(rows, place) for place in _places(case, id)]
    for field in case.model.derived:
        if field.formula is None or field.id in case.columns or field.id not in case.equation.uses:
            continue
        others = [source for source in field.sources if source != id]
        if id in field.sources and not any(other in open and other not in before for other in others):
            own += [np.full(rows, place) for place in _formula_bends(case, field, id)]
            own += _solve(case, field, id, before, ends, _places(case, field.id))
    return np.stack(own, axis=1) if own else np.empty((rows, 0))


def _places(case: Case, id: str) -> list[float]:
    """Where the steps of the terms bend in a value, and its limits."""
    found: dict[float, None] = {}
    field = case.model.by_id[id]
    if isinstance(field, NumberField):
        found |= dict.fromkeys(end for end in giving_limits(field) if end is not None)
    for term in case.equation.terms:
        for factor in term.factors:
            if factor.of == id:
                found |= dict.fromkeys(_unwind(factor.transforms))
    return list(found)


def _formula_bends(case: Case, field: NumberField, id: str) -> Iterator[float]:
    """Where the formula of a worked-out value itself bends in one of its values, in that value's unit."""
    assert field.formula is not None
    source = case.model.by_id[id]
    for role in ROLES[field.formula.equation]:
        places = BENDS.get((field.formula.equation, role.name), ())
        if places and dict(field.formula.inputs)[role.name] == id and isinstance(source, NumberField):
            into = conversion(source.quantity, role.unit, source.unit, source.factor)
            yield from (into.apply(place) for place in places)


def _unwind(transforms: tuple[Transform, ...]) -> Iterator[float]:
    """The values before the first step at which a later one bends."""
    for place, transform in enumerate(transforms):
        ends: tuple[float, ...] = ()
        if transform.kind in CUTS or transform.kind in _CLIPS:
            ends = (transform.number,)
        elif transform.spline is not None:
            ends = transform.spline.knots
        for end in ends:
            yield from _before(transforms[:place], end)
        if transform.kind in CUTS or transform.kind in (StepKind.SPLINE, StepKind.IS):
            return


def _before(transforms: tuple[Transform, ...], value: float) -> list[float]:
    values = np.array([value])
    with np.errstate(all="ignore"):
        for transform in reversed(transforms):
            values = _undo(transform, values)
    return [float(value) for value in values if np.isfinite(value)]


def _undo(transform: Transform, x: Column) -> Column:
    c = transform.number
    match transform.kind:
        case StepKind.SUBTRACT:
            return x + c
        case StepKind.DIVIDE:
            return x * c
        case StepKind.MULTIPLY:
            return x / c
        case StepKind.LOG:
            return np.exp(x)
        case StepKind.POWER:
            root = np.power(x, 1.0 / c)
            return np.concatenate([root, -root])
        case _:
            return x


def _solve(
    case: Case,
    field: NumberField,
    id: str,
    before: Mapping[str, Column],
    ends: tuple[Column, Column],
    places: list[float],
) -> list[Column]:
    """For each place the values of `id` at which a worked-out value passes it, shape (n,); not a number for nowhere.

    The interval is parted again and again: every formula is monotone in each of its values.
    """
    if not places:
        return []
    wanted = np.array(places)
    low, high = (np.repeat(end[:, np.newaxis], wanted.size, axis=1) for end in ends)

    def beyond(values: Array) -> NDArray[np.bool_]:
        times = values.size // ends[0].size
        wide = {other: np.repeat(column, times) for other, column in before.items()}
        column = case.work_out_with(field, {**wide, id: values.ravel()})
        if column is None:
            return np.zeros(values.shape, dtype=np.bool_)
        with np.errstate(invalid="ignore"):
            return np.asarray(column.reshape(values.shape) > wanted[np.newaxis, :, np.newaxis])

    sides = beyond(np.stack([low, high], axis=2))
    passed = sides[:, :, 0] != sides[:, :, 1]
    if passed.any():
        inner = np.arange(1, _PARTS) / _PARTS
        for _ in range(_PARTINGS):
            part = (high - low) / _PARTS
            points = low[:, :, np.newaxis] + (high - low)[:, :, np.newaxis] * inner
            before_it = (beyond(points) == sides[:, :, :1]).sum(axis=2)
            low = low + part * before_it
            high = low + part
    return [np.ascontiguousarray(column) for column in np.where(passed, high, np.nan).T]
