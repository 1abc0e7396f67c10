"""Which steps have no finite value somewhere in the range for which a model gives a number.

The range goes through the steps as an interval. Every step is monotone, or has its only turn at nought, so the ends
of the interval (and nought where the interval holds it) bound every value in between. An open side is taken as far as
any number can be typed, and further.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from math import inf, isfinite

import numpy as np
from msgspec import UnsetType

from clinicalc.coefficients.schema import ModelContent
from clinicalc.covariates.design import answer_codes, products_of
from clinicalc.covariates.transforms import CUTS, StepKind, Transform, apply_transform, compile_step
from clinicalc.errors import Problem


@dataclass(frozen=True, slots=True)
class Interval:
    """All values from `low` to `high`, both included."""

    low: float
    high: float

    def __contains__(self, value: float) -> bool:
        return self.low <= value <= self.high


EVERYTHING = Interval(-inf, inf)

# a typed number has at most 32 characters, and no conversion of units multiplies it by a hundred million
_FARTHEST = 1e40


def find_nonfinite(model: ModelContent, ranges: Mapping[str, Interval]) -> tuple[Problem, ...]:
    """A problem for each step that is not finite everywhere in its range.

    `ranges` maps each number and derived id to the values for which the model gives a number, in the file's unit.
    """
    return tuple(_walk(model, ranges))


def _walk(model: ModelContent, ranges: Mapping[str, Interval]) -> Iterator[Problem]:
    codes = answer_codes(model)
    for e, equation in enumerate(model.equations):
        for t, term in enumerate(equation.terms):
            for p, product in enumerate(products_of(term)):
                place = f"sum/{p}" if isinstance(term.product, UnsetType) else "product"
                for f, factor in enumerate(product):
                    steps = () if isinstance(factor.steps, UnsetType) else factor.steps
                    known = codes.get(factor.of, {})
                    interval = _closed(ranges.get(factor.of, Interval(0, max(len(known) - 1, 1))))
                    for s, step in enumerate(steps):
                        transform = compile_step(step, known)
                        try:
                            interval = advance(transform, interval)
                        except ValueError as fault:
                            yield Problem(
                                f"/model/equations/{e}/terms/{t}/{place}/{f}/steps/{s}",
                                f"{transform.kind.value} {fault} while {factor.of} may be"
                                f" {interval_words(ranges.get(factor.of, EVERYTHING))}. State a narrower `possible`"
                                " or `derivation` that stops, or change the step.",
                            )
                            break


def interval_words(interval: Interval) -> str:
    """The interval as it stands in a sentence."""
    low, high = f"{interval.low:g}", f"{interval.high:g}"
    if isfinite(interval.low):
        return f"anything from {low} to {high}" if isfinite(interval.high) else f"anything from {low} upwards"
    return f"anything up to {high}" if isfinite(interval.high) else "anything"


def advance(transform: Transform, interval: Interval) -> Interval:
    """The interval after one step. Raises ValueError, saying why, where the step has no finite value in it."""
    kind, c = transform.kind, transform.number
    if kind in CUTS or kind is StepKind.IS:
        return Interval(0, 1)
    if kind is StepKind.LOG and interval.low <= 0:
        raise ValueError("has no value at or below 0")
    if kind is StepKind.POWER:
        if c < 0 and 0 in interval:
            raise ValueError("of a negative exponent has no value at 0")
        if c != int(c) and interval.low < 0:
            raise ValueError("of a fractional exponent has no value below 0")
    corners = [interval.low, interval.high, *([0.0] if 0 in interval and kind is not StepKind.LOG else [])]
    with np.errstate(all="ignore"):
        ends = [float(apply_transform(transform, np.array([corner]))[0]) for corner in corners]
    if not all(isfinite(end) for end in ends):
        raise ValueError("is not finite")
    return Interval(min(ends), max(ends))


def _closed(interval: Interval) -> Interval:
    low = interval.low if isfinite(interval.low) else -_FARTHEST
    return Interval(low, interval.high if isfinite(interval.high) else _FARTHEST)
