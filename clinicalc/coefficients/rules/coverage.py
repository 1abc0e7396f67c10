"""Exactly one equation applies to any patient."""

import math
from collections.abc import Iterator, Mapping, Sequence

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.schema import Equation, ModelContent
from clinicalc.errors import Problem

Box = Mapping[str, frozenset[str]]
"""For each deciding question the answers an equation covers: a box in the space of all answers."""


def check_coverage(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """No two equations overlap and none is missing; each message names a combination of answers that shows it."""
    asked = {name: names.answers_of(name) for equation in model.equations for name in equation.applies_when}
    if not all(asked.values()):
        return  # a condition names what does not exist; that is said elsewhere
    boxes = [_box_of(equation, asked) for equation in model.equations]
    overlaps = list(_find_overlaps(model.equations, boxes, asked))
    yield from overlaps
    if overlaps:
        return
    gap = _find_gap(boxes, asked)
    if gap is not None:
        yield Problem(
            at("equations"),
            f"no equation applies to {_spell(gap)}. Exactly one must apply to any patient; a group for which the "
            "source has no equation is not offered as an answer, or is made an exclusion.",
        )


def select_equations(model: ModelContent, answers: Mapping[str, str]) -> tuple[Equation, ...]:
    """The equations that apply to these answers (predictor id -> answer id)."""
    return tuple(
        equation
        for equation in model.equations
        if all(answers.get(name) in covered for name, covered in equation.applies_when.items())
    )


def _box_of(equation: Equation, asked: Mapping[str, Sequence[str]]) -> Box:
    return {name: frozenset(equation.applies_when.get(name, answers)) & set(answers) for name, answers in asked.items()}


def _find_overlaps(
    equations: Sequence[Equation], boxes: Sequence[Box], asked: Mapping[str, Sequence[str]]
) -> Iterator[Problem]:
    for later in range(len(boxes)):
        for earlier in range(later):
            shared = {name: boxes[earlier][name] & boxes[later][name] for name in asked}
            if all(shared.values()):
                example = {name: next(a for a in answers if a in shared[name]) for name, answers in asked.items()}
                pair = listed((quoted(equations[earlier].id), quoted(equations[later].id)))
                yield Problem(
                    at("equations", later, "applies_when"),
                    f"two equations apply to {_spell(example)}: {pair}. Exactly one must apply to any patient.",
                )


def _find_gap(boxes: Sequence[Box], asked: Mapping[str, Sequence[str]]) -> dict[str, str] | None:
    """A combination of answers in no box (the boxes being disjoint), found by counting, question by question."""
    fixed: dict[str, str] = {}
    if not _has_gap(boxes, asked, fixed):
        return None
    for name, answers in asked.items():
        fixed[name] = next(answer for answer in answers if _has_gap(boxes, asked, {**fixed, name: answer}))
    for name in tuple(fixed):  # name no more answers than it takes
        fewer = {other: answer for other, answer in fixed.items() if other != name}
        if _count_covered(boxes, asked, fewer) == 0:
            fixed = fewer
    return fixed


def _has_gap(boxes: Sequence[Box], asked: Mapping[str, Sequence[str]], fixed: Mapping[str, str]) -> bool:
    total = math.prod(len(set(answers)) for name, answers in asked.items() if name not in fixed)
    return _count_covered(boxes, asked, fixed) < total


def _count_covered(boxes: Sequence[Box], asked: Mapping[str, Sequence[str]], fixed: Mapping[str, str]) -> int:
    """How many combinations of the answers not yet fixed lie in a box."""
    free = [name for name in asked if name not in fixed]
    inside = [box for box in boxes if all(fixed[name] in box[name] for name in fixed)]
    return sum(math.prod(len(box[name]) for name in free) for box in inside)


def _spell(answers: Mapping[str, str]) -> str:
    return ", ".join(f"{name} = {answer}" for name, answer in answers.items()) or "any patient"
