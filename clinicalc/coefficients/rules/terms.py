"""Terms and the steps that turn a value into what a coefficient multiplies."""

import math
from collections.abc import Iterator
from itertools import pairwise

from msgspec import UNSET, UnsetType

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.products import place_products
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.schema import (
    ChoicePredictor,
    Factor,
    Interval,
    ModelContent,
    NumberPredictor,
    Spline,
    Step,
    Term,
)
from clinicalc.errors import Problem

MOST_TERMS = 500


def check_terms(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every term of every equation."""
    total = sum(len(equation.terms) for equation in model.equations)
    if total > MOST_TERMS:
        yield Problem(
            at("equations"), f"the equations have {total} terms together; at most {MOST_TERMS} may stand in a file."
        )
    for index, equation in enumerate(model.equations):
        for place, term in enumerate(equation.terms):
            yield from _check_term(term, at("equations", index, "terms", place), names)


def fields_of(step: Step) -> tuple[str, ...]:
    """The names, as the file spells them, of the fields that stand in a step."""
    spelled = zip(step.__struct_fields__, step.__struct_encode_fields__, strict=True)
    return tuple(name for field, name in spelled if getattr(step, field) is not UNSET)


def _check_term(term: Term, base: str, names: Catalogue) -> Iterator[Problem]:
    if isinstance(term.product, UnsetType) == isinstance(term.sum, UnsetType):
        both = "both stand here" if not isinstance(term.product, UnsetType) else "neither stands here"
        yield Problem(base, f'a term has either "product" or "sum"; {both}.')
    if not isinstance(term.interval, UnsetType):
        yield from _check_interval(term.interval, term.coefficient, point(base, "interval"))
    for path, product in place_products(term, base):
        for index, factor in enumerate(product):
            yield from _check_factor(factor, point(path, index), names)


def _check_interval(interval: Interval, coefficient: float, path: str) -> Iterator[Problem]:
    low, high = interval.lower, interval.upper
    if low >= high:
        yield Problem(path, f"lower ({quoted(low)}) must be less than upper ({quoted(high)}).")
        return
    if interval.scale == "ratio":
        if low <= 0:
            slip = 'a ratio is more than 0. If these are limits of the coefficient, say "link".'
            yield Problem(point(path, "lower"), slip)
            return
        low, high = math.log(low), math.log(high)
    if not low <= coefficient <= high:
        yield Problem(
            path,
            f"the coefficient {quoted(coefficient)} lies outside its own interval, {low:.4g} to {high:.4g} on the link "
            "scale. One of the three figures is mistyped, or the scale is the other one.".replace("-", "−"),
        )


def _check_factor(factor: Factor, path: str, names: Catalogue) -> Iterator[Problem]:
    part = names.find(factor.of)
    if part is None:
        yield Problem(
            point(path, "of"),
            f"there is no predictor or derived value {quoted(factor.of)}.{suggest(factor.of, names.values)}",
        )
    steps = () if isinstance(factor.steps, UnsetType) else factor.steps
    chosen = bool(steps) and not isinstance(steps[0].is_, UnsetType)
    if isinstance(part, ChoicePredictor) and not chosen:
        yield Problem(
            path, f'{quoted(factor.of)} is a choice and has no number of its own; begin its steps with {{"is": [...]}}.'
        )
    low: float | None = None
    high: float | None = None
    for index, step in enumerate(steps):
        here = point(path, "steps", index)
        yield from _check_step(step, here)
        if not isinstance(step.is_, UnsetType) and part is not None:
            yield from _check_answers(factor.of, step.is_, index, here, names)
        low, high = _clips(step, low, high)
        if low is not None and high is not None and low >= high:
            yield Problem(
                here, f"clip_low {quoted(low)} and clip_high {quoted(high)} leave one value only; look which is which."
            )
            low = high = None


def _clips(step: Step, low: float | None, high: float | None) -> tuple[float | None, float | None]:
    """The clips in force after a step; any other step moves the scale and begins anew."""
    if not isinstance(step.clip_low, UnsetType):
        return step.clip_low, high
    if not isinstance(step.clip_high, UnsetType):
        return low, step.clip_high
    return None, None


def _check_step(step: Step, path: str) -> Iterator[Problem]:
    fields = fields_of(step)
    if len(fields) != 1:
        found = listed(map(quoted, fields)) if fields else "nothing"
        yield Problem(path, f"a step does exactly one thing; {found} stand{'' if len(fields) > 1 else 's'} here.")
    if step.divide == 0:
        yield Problem(point(path, "divide"), "dividing by 0 has no result.")
    if step.multiply == 0:
        yield Problem(point(path, "multiply"), "multiplying by 0 takes the value out of the model.")
    if step.power == 0:
        yield Problem(point(path, "power"), "the power 0 makes every value 1 and takes it out of the model.")
    if isinstance(step.spline, Spline):
        yield from _check_spline(step.spline, point(path, "spline"))


def _check_spline(spline: Spline, path: str) -> Iterator[Problem]:
    count = len(spline.knots)
    if any(later <= earlier for earlier, later in pairwise(spline.knots)):
        yield Problem(point(path, "knots"), "knots must rise strictly from left to right.")
    if spline.basis > count - 2:
        yield Problem(
            point(path, "basis"),
            f"{spline.basis} is too high: {count} knots have the basis functions 1 to {count - 2}; the linear term "
            "is a term of its own.",
        )


def _check_answers(name: str, answers: tuple[str, ...], index: int, path: str, names: Catalogue) -> Iterator[Problem]:
    known = names.answers_of(name)
    base = point(path, "is")
    if index > 0:
        yield Problem(base, '"is" must be the first step: after another step there is no answer left to compare.')
    if not known:
        what = "a number" if isinstance(names.find(name), NumberPredictor) else "a derived value"
        yield Problem(base, f'{quoted(name)} is {what} and has no answers; use "above", "from", "below" or "up_to".')
        return
    for place, answer in enumerate(answers):
        if answer not in known:
            yield Problem(
                point(base, place), f"{quoted(answer)} is no answer to {quoted(name)}.{suggest(answer, known)}"
            )
    if known and set(known) <= set(answers):
        yield Problem(base, f"this is true of every answer to {quoted(name)}.")
