"""The terms of an equation in words, as a study file has them: a term of the coefficient file, or a shorthand."""

from collections.abc import Mapping, Sequence

import msgspec
from msgspec import UnsetType

from clinicalc.coefficients.equations import Term
from clinicalc.coefficients.schema import NumberPredictor, Predictor, YesNoPredictor
from clinicalc.covariates.term_words import say_figure, say_term
from clinicalc.development.study_tables import SplineOf
from clinicalc.units.unit import unit as unit_of

_KNOTS = SplineOf("").knots
"""Where a study file gives none."""
_SPANS = ("years", "months", "weeks", "days")


def name_term(term: object, place: int) -> str:
    """What a term is called in a list."""
    if isinstance(term, Mapping):
        for key in ("id", "spline_of", "categories_of"):
            if isinstance(term.get(key), str):
                return str(term[key])
    return f"term {place + 1}"


def describe_term(term: object) -> str:
    """What a term is; the study file's own words where they are of no shape that can be said."""
    if not isinstance(term, Mapping):
        return str(term)
    if "spline_of" in term:
        knots = term.get("knots", _KNOTS)
        if isinstance(knots, list):
            return f"restricted cubic spline of {term['spline_of']}, knots at {', '.join(f'{k:g}' for k in knots)}"
        return f"restricted cubic spline of {term['spline_of']}, {knots} knots at the default quantiles"
    if "categories_of" in term:
        reference = term.get("reference")
        return f"one term for each answer of {term['categories_of']}" + (f" but {reference}" if reference else "")
    try:
        return _plainly(msgspec.convert({**term, "coefficient": 1.0}, Term))
    except (msgspec.ValidationError, ValueError, AttributeError):
        return "not of a shape that can be read; its problem is listed above"


def say_per(term: Term, predictors: Sequence[Predictor]) -> str:
    """What the coefficient is for one of: "10 mmHg" where that can be said shortly, else the term in words."""
    units = {one.id: one.unit for one in predictors if isinstance(one, NumberPredictor)}
    if isinstance(term.product, UnsetType) or len(term.product) > 1:
        return _plainly(term)
    factor = term.product[0]
    steps = () if isinstance(factor.steps, UnsetType) else factor.steps
    divided = 1.0
    for step in steps:
        if isinstance(step.divide, UnsetType) and isinstance(step.subtract, UnsetType):
            return _plainly(term)
        divided *= 1.0 if isinstance(step.divide, UnsetType) else step.divide
    if not steps and any(isinstance(one, YesNoPredictor) and one.id == factor.of for one in predictors):
        return "yes against no"
    if factor.of not in units:
        return _plainly(term)
    unit = unit_of(units[factor.of]).spelling
    if divided == 1.0 and unit in _SPANS:
        unit = unit.removesuffix("s")
    return f"{say_figure(divided)} {unit}".strip()


def _plainly(term: Term) -> str:
    """The term in words, without the brackets where it is one value put through steps."""
    words = say_term(term)
    if words.startswith("(") and words.endswith(")") and words.count("(") == 1:
        words = words[1:-1]
    return words.replace(": is ", " is ", 1) if words.count(": ") == 1 else words
