"""The closed vocabulary of steps that turn a value into a factor of a term."""

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.coefficients.schema import Spline, Step

Column = NDArray[np.float64]
"""One value for each patient, shape (n,), contiguous."""

CUT_DIGITS = 9
_POWERS = np.array([float(f"1e{k}") for k in range(-300, 301)])


class StepKind(StrEnum):
    """The name of a step in the file."""

    SUBTRACT = "subtract"
    DIVIDE = "divide"
    MULTIPLY = "multiply"
    LOG = "log"
    POWER = "power"
    CLIP_LOW = "clip_low"
    CLIP_HIGH = "clip_high"
    SPLINE = "spline"
    ABOVE = "above"
    FROM = "from"
    BELOW = "below"
    UP_TO = "up_to"
    IS = "is"


CUTS = frozenset({StepKind.ABOVE, StepKind.FROM, StepKind.BELOW, StepKind.UP_TO})
"""The steps that give 0 or 1 by comparing with a number."""


@dataclass(frozen=True, slots=True)
class Transform:
    """One step, ready to apply: its number, its answer codes (`is`) or its spline, whichever it has."""

    kind: StepKind
    number: float = 0.0
    codes: tuple[float, ...] = ()
    spline: Spline | None = None


def kind_of(step: Step) -> StepKind:
    """Which step this is. A file whose step names none or several was refused before."""
    return next(kind for kind in StepKind if not isinstance(_value(step, kind), UnsetType))


def compile_step(step: Step, codes: Mapping[str, float]) -> Transform:
    """The step with its answers replaced by the codes that stand for them in a column."""
    kind = kind_of(step)
    value = _value(step, kind)
    if isinstance(value, Spline):
        return Transform(kind, spline=value)
    if isinstance(value, tuple):
        return Transform(kind, codes=tuple(codes[answer] for answer in value))
    number = value if isinstance(value, float) else 0.0
    # a cut is rounded once, here, as every value is when it is compared with it
    return Transform(kind, number=float(round_significant(np.array([number]))[0]) if kind in CUTS else number)


def apply_transform(transform: Transform, x: Column) -> Column:
    """The column after one step, shape (n,); not finite where the step has no value there."""
    c = transform.number
    match transform.kind:
        case StepKind.SUBTRACT:
            return x - c
        case StepKind.DIVIDE:
            return x / c
        case StepKind.MULTIPLY:
            return x * c
        case StepKind.LOG:
            return np.log(x)
        case StepKind.POWER:
            return x * x if c == 2 else np.power(x, c)
        case StepKind.CLIP_LOW:
            return np.maximum(x, c)
        case StepKind.CLIP_HIGH:
            return np.minimum(x, c)
        case StepKind.SPLINE:
            assert transform.spline is not None
            return restricted_cubic(x, transform.spline.knots, transform.spline.basis)
        case StepKind.IS:
            return _as_column(np.logical_or.reduce([x == code for code in transform.codes]))
        case _:
            return _as_column(_cut(transform.kind, round_significant(x), c))


def restricted_cubic(x: Column, knots: tuple[float, ...], basis: int) -> Column:
    """Basis function `basis` (1..K-2) of a restricted cubic spline, shape (n,), linear outside the outer knots.

    Scaled by (last knot - first knot)^2, so that it is in the unit of x. Source: Harrell, Regression Modeling
    Strategies, 2nd ed. 2015, eq. 2.25.
    """
    first, inner, last = knots[0], knots[-2], knots[-1]
    at = knots[basis - 1]
    scale = (last - first) * (last - first)
    # a straight line from the last knot on, written as one: as a difference of cubes it would lose its digits far out
    slope = 3.0 * (last - at) * (inner - at) / scale
    within = np.minimum(x, last)

    def cubed(knot: float) -> Column:
        over = np.maximum(within - knot, 0.0)
        return over * over * over

    curve = (cubed(at) - cubed(inner) * ((last - at) / (last - inner))) / scale
    return _as_column(curve + slope * np.maximum(x - last, 0.0))


def round_significant(x: Column, digits: int = CUT_DIGITS) -> Column:
    """The column rounded to so many significant digits, so that 100 mg/dL by way of mmol/L is still 100."""
    with np.errstate(divide="ignore"):
        exponent = np.floor(np.log10(np.abs(x)))
    exponent = np.where(np.isfinite(exponent), exponent, 0.0)
    # looked up, not computed: a power of ten that is one bit off would move a cut
    scale = _POWERS[np.clip(digits - 1 - exponent, -300, 300).astype(np.intp) + 300]
    return _as_column(np.rint(x * scale) / scale)


def _cut(kind: StepKind, x: Column, c: float) -> NDArray[np.bool_]:
    if kind is StepKind.ABOVE:
        return x > c
    if kind is StepKind.FROM:
        return x >= c
    return x < c if kind is StepKind.BELOW else x <= c


def _value(step: Step, kind: StepKind) -> object:
    name = {StepKind.FROM: "from_", StepKind.IS: "is_"}.get(kind, kind.value)
    return getattr(step, name)


def _as_column(x: NDArray[np.bool_] | Column) -> Column:
    return np.ascontiguousarray(x, dtype=np.float64)
