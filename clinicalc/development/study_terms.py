"""The shorthands of a study's terms, spline_of and categories_of, written out as terms of a coefficient file."""

from collections.abc import Callable, Iterator, Mapping
from typing import TypeVar

import msgspec
import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.file_types import FileStruct
from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.development.study_tables import CategoriesOf, SplineOf
from clinicalc.errors import Problem

Tree = dict[str, object]
Knots = tuple[float, ...]
_Shorthand = TypeVar("_Shorthand", SplineOf, CategoriesOf)
_SHORTHANDS: Mapping[str, type[FileStruct]] = {"spline_of": SplineOf, "categories_of": CategoriesOf}

DEFAULT_QUANTILES: Mapping[int, tuple[float, ...]] = {
    3: (0.1, 0.5, 0.9),
    4: (0.05, 0.35, 0.65, 0.95),
    5: (0.05, 0.275, 0.5, 0.725, 0.95),
    6: (0.05, 0.23, 0.41, 0.59, 0.77, 0.95),
    7: (0.025, 11 / 60, 41 / 120, 0.5, 79 / 120, 49 / 60, 0.975),
}
"""Where knots are put: Harrell, Regression Modeling Strategies, 2nd ed. 2015, table 2.3; equally spaced within."""


def default_knots(values: NDArray[np.float64], count: int) -> Knots:
    """The knots at the default quantiles of the values (linear between order statistics: type 7), lowest first.

    They rise strictly only where the values do not heap at one of them.
    """
    return tuple(float(knot) for knot in np.quantile(values, DEFAULT_QUANTILES[count]))


def find_shorthand_problems(model: Mapping[str, object]) -> Iterator[Problem]:
    """What is wrong with the shorthands of a model's equations, at their places in it."""
    answers = answers_of(model)
    for place, equation in enumerate(parts(model, "equations")):
        for number, term in enumerate(parts(equation, "terms")):
            path = point("/model", "equations", place, "terms", number)
            kind = _kind_of(term)
            if kind is None:
                continue
            for problem in find_shape_problems(term, _SHORTHANDS[kind]):
                yield Problem(path + problem.path, problem.message)
            shorthand = _take(term, CategoriesOf) if kind == "categories_of" else None
            if shorthand is not None:
                yield from _judge_categories(shorthand, answers, path)


def splines_of(equation: Mapping[str, object]) -> Iterator[tuple[int, SplineOf]]:
    """Each spline in shorthand that is of its shape, with its number among the terms."""
    for number, term in enumerate(parts(equation, "terms")):
        spline = _take(term, SplineOf) if _kind_of(term) == "spline_of" else None
        if spline is not None:
            yield number, spline


def write_out(
    equation: Mapping[str, object],
    answers: Mapping[str, tuple[str, ...]],
    knots: Callable[[int, SplineOf], Knots],
) -> Tree:
    """The equation with its shorthands written out; those that are not of the right shape are left out.

    `knots` gives those of the spline that is the term of that number; `answers` are those of each question.
    """
    found = equation.get("terms")
    if not isinstance(found, list):
        return dict(equation)
    splines = dict(splines_of(equation))
    terms: list[object] = []
    for number, term in enumerate(found):
        kind = _kind_of(term) if isinstance(term, dict) else None
        if number in splines:
            terms += _spline_terms(splines[number], knots(number, splines[number]))
        elif kind == "categories_of" and (shorthand := _take(term, CategoriesOf)) is not None:
            others = [answer for answer in answers.get(shorthand.categories_of, ()) if answer != shorthand.reference]
            terms += [_category_term(shorthand, answer) for answer in others]
        elif kind is None:
            terms.append(term)
    return {**equation, "terms": terms}


def stand_in_knots(_: int, spline: SplineOf) -> Knots:
    """Knots that break no rule, for everything that is said before the people are read."""
    return spline.knots if isinstance(spline.knots, tuple) else tuple(float(k) for k in range(1, spline.knots + 1))


def answers_of(model: Mapping[str, object]) -> dict[str, tuple[str, ...]]:
    """The answers of each choice and yes/no question of the model, as far as they are given properly."""
    found: dict[str, tuple[str, ...]] = {}
    for predictor in parts(model, "predictors"):
        id = predictor.get("id")
        if isinstance(id, str) and predictor.get("kind") == "yes_no":
            found[id] = ("no", "yes")
        elif isinstance(id, str) and predictor.get("kind") == "choice":
            found[id] = tuple(str(choice.get("id")) for choice in parts(predictor, "choices"))
    return found


def parts(tree: Mapping[str, object], name: str) -> list[Tree]:
    """The tables of a list of tables, as far as they are tables; places count those only."""
    found = tree.get(name)
    return [part for part in found if isinstance(part, dict)] if isinstance(found, list) else []


def _kind_of(term: Mapping[str, object]) -> str | None:
    return next((name for name in _SHORTHANDS if name in term), None)


def _take(term: object, kind: type[_Shorthand]) -> _Shorthand | None:
    """The shorthand, or None where it is not of its shape, which is said with all that is wrong."""
    try:
        return msgspec.convert(term, kind) if not list(find_shape_problems(term, kind)) else None
    except msgspec.ValidationError:  # a number or a text was refused while it was read
        return None


def _judge_categories(term: CategoriesOf, answers: Mapping[str, tuple[str, ...]], path: str) -> Iterator[Problem]:
    known = answers.get(term.categories_of)
    if known is None:
        yield Problem(
            point(path, "categories_of"),
            f"there is no choice {quoted(term.categories_of)}.{suggest(term.categories_of, answers)}",
        )
    elif term.reference not in known:
        yield Problem(
            point(path, "reference"),
            f"{quoted(term.reference)} is no answer to {quoted(term.categories_of)}, which has "
            f"{listed(map(quoted, known))}.{suggest(term.reference, known) if len(known) > 8 else ''}",
        )


def _spline_terms(spline: SplineOf, knots: Knots) -> Iterator[Tree]:
    steps = [msgspec.to_builtins(step) for step in spline.steps]
    linear: Tree = {"of": spline.spline_of, **({"steps": steps} if steps else {})}
    yield {"id": spline.name, "product": [linear]}
    for basis in range(1, len(knots) - 1):
        step = {"spline": {"knots": list(knots), "basis": basis}}
        yield {"id": f"{spline.name}_spline_{basis}", "product": [{"of": spline.spline_of, "steps": [*steps, step]}]}


def _category_term(term: CategoriesOf, answer: str) -> Tree:
    return {
        "id": f"{term.name}_{answer}",
        "product": [{"of": term.categories_of, "steps": [{"is": [answer]}]}],
    }
