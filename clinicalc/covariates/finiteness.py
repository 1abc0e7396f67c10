"""Which steps and terms have no finite value somewhere in the range for which a model gives a number.

The range goes through the steps as an interval. Every step is monotone, or has its only turn at nought, so the ends
of the interval (and nought where the interval holds it) bound every value in between. An open side is taken as far as
any number can be typed, and further. The largest magnitudes of the factors then bound their products and sums.

A term that keeps within `LARGEST_TERM` keeps everything after it finite, because no number of a file is beyond 2^53:
500 terms under such coefficients reach 1e119; a variance, at most 500 x 500 x 1e16 x 1e200, reaches 1e222; and a
recalibration, which multiplies by 1e16 once or twice more and squares, reaches 1e272. A double goes to 1e308.
"""

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from itertools import accumulate
from math import inf, isfinite
from operator import mul

import numpy as np
from msgspec import UnsetType

from clinicalc.coefficients.pointers import listed, point, quoted
from clinicalc.coefficients.products import place_products, products_of
from clinicalc.coefficients.schema import Factor, ModelContent, Term
from clinicalc.covariates.design import answer_codes
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

LARGEST_TERM = 1e100
"""A product of factors may not go beyond this, nor may any part of it on the way."""

# a typed number has at most 32 characters, and no conversion of units multiplies it by a hundred million
_FARTHEST = 1e40


def find_nonfinite(model: ModelContent, ranges: Mapping[str, Interval]) -> tuple[Problem, ...]:
    """A problem for each step that is not finite everywhere in its range, and for each term that grows beyond use.

    `ranges` maps each number and derived id to the values for which the model gives a number, in the file's unit.
    """
    codes = answer_codes(model)
    known = {id: Interval(0, max(len(answers) - 1, 1)) for id, answers in codes.items()} | dict(ranges)
    return tuple(
        problem
        for e, equation in enumerate(model.equations)
        for t, term in enumerate(equation.terms)
        for problem in _find_in_term(term, f"/model/equations/{e}/terms/{t}", known, codes)
    )


def _find_in_term(
    term: Term, base: str, ranges: Mapping[str, Interval], codes: Mapping[str, Mapping[str, float]]
) -> Iterator[Problem]:
    reach = 0.0
    sound = True
    for path, product in place_products(term, base):
        walked = [
            _walk_steps(factor, point(path, place), ranges, codes.get(factor.of, {}))
            for place, factor in enumerate(product)
        ]
        yield from (result for result in walked if isinstance(result, Problem))
        ends = [max(abs(result.low), abs(result.high)) for result in walked if isinstance(result, Interval)]
        sound = sound and len(ends) == len(product)
        reach += max(accumulate(ends, mul), default=0.0)
    if sound and not reach <= LARGEST_TERM:
        factors = [factor for product in products_of(term) for factor in product]
        size = f"can reach {reach:.1e}" if isfinite(reach) else "is not finite"
        yield Problem(
            base,
            f"the term {quoted(term.id)} {size} while {_range_words(factors, ranges)}; at most {LARGEST_TERM:.0e} can"
            " be reckoned with. Is a power mistyped? State a narrower `possible` or `derivation` that stops, or change"
            " the steps.",
        )


def _walk_steps(
    factor: Factor, path: str, ranges: Mapping[str, Interval], codes: Mapping[str, float]
) -> Interval | Problem:
    """What the steps of a factor make of its range, or what is wrong with one of them."""
    interval = _closed(ranges.get(factor.of, EVERYTHING))
    for place, step in enumerate(() if isinstance(factor.steps, UnsetType) else factor.steps):
        transform = compile_step(step, codes)
        try:
            interval = advance(transform, interval)
        except ValueError as fault:
            return Problem(
                point(path, "steps", place),
                f"{transform.kind.value} {fault} while {_range_words((factor,), ranges)}. State a narrower `possible`"
                " or `derivation` that stops, or change the step.",
            )
    return interval


def _range_words(factors: Iterable[Factor], ranges: Mapping[str, Interval]) -> str:
    """The values and their ranges as they stand in a sentence."""
    ids = dict.fromkeys(factor.of for factor in factors)
    return listed(f"{id} may be {interval_words(ranges.get(id, EVERYTHING))}" for id in ids)


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
