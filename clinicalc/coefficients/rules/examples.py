"""Worked examples: believable figures, names that exist, and one for every equation and every recalibration.

Whether they come out is not decided here: that takes the engine.
"""

from collections.abc import Iterator, Mapping

from msgspec import UnsetType

from clinicalc.coefficients.answers import find_answer, leaves_open
from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.coverage import select_equations
from clinicalc.coefficients.rules.horizons import check_span_known
from clinicalc.coefficients.schema import ChoicePredictor, Equation, ModelContent, NoBand, WorkedExample
from clinicalc.coefficients.spans import span_of
from clinicalc.errors import Problem

WIDEST_TOLERANCE = 0.02
"""A wider one would let a wrong coefficient through."""


def check_examples(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every worked example, and that none is lacking."""
    proven: set[str] = set()
    shown: set[str] = set()
    for index, example in enumerate(model.worked_examples):
        base = at("worked_examples", index)
        yield from _check_values(example, point(base, "values"), names)
        yield from _check_figures(example, base)
        yield from check_span_known(example, base, model)
        yield from _check_recalibration(example, base, model)
        equations = select_equations(model, read_answers(example.values, names))
        if len(equations) != 1:
            asked = dict.fromkeys(name for equation in model.equations for name in equation.applies_when)
            yield Problem(
                point(base, "values"),
                f"the answers select no one equation; {listed(map(quoted, asked))} must be answered.",
            )
            continue
        fault = _judge_limits(example, equations[0])
        if fault:
            yield Problem(base, fault)
        keys = {f"equation {quoted(equations[0].id)}"}
        if isinstance(example.recalibration, str):
            keys.add(f"recalibration {quoted(example.recalibration)}")
        shown |= keys
        if isinstance(equations[0].uncertainty, NoBand) or isinstance(example.lower, float):
            proven |= keys
    yield from _check_complete(model, shown, proven)


def read_answers(values: Mapping[str, str], names: Catalogue) -> dict[str, str]:
    """The answer ids that typed answers stand for (`find_answer`); what is no answer is left out."""
    answers: dict[str, str] = {}
    for name, text in values.items():
        predictor = names.predictors.get(name)
        known = [(answer, answer) for answer in names.answers_of(name)]
        if isinstance(predictor, ChoicePredictor):
            known = [(choice.id, choice.label) for choice in predictor.choices]
        place = find_answer(text, known)
        if place is not None:
            answers[name] = known[place][0]
    return answers


def _check_complete(model: ModelContent, shown: set[str], proven: set[str]) -> Iterator[Problem]:
    wanted = [f"equation {quoted(equation.id)}" for equation in model.equations]
    wanted += [f"recalibration {quoted(recalibration.id)}" for recalibration in model.recalibrations]
    for what in wanted:
        if what not in shown:
            yield Problem(at("worked_examples"), f"there is no worked example for the {what}; each must be shown once.")
        elif what not in proven:
            yield Problem(
                at("worked_examples"),
                f'no worked example for the {what} has "lower" and "upper", and there is a band to prove.',
            )


def _check_values(example: WorkedExample, base: str, names: Catalogue) -> Iterator[Problem]:
    known = (*names.typed, *names.exclusions)
    for name, typed in example.values.items():
        if name in names.derived and name not in names.typed:
            yield Problem(
                point(base, name), f'{quoted(name)} is worked out and may not be typed ("may_be_typed" is not true).'
            )
        elif name not in known:
            yield Problem(point(base, name), f"there is no value {quoted(name)}.{suggest(name, known)}")
        elif names.answers_of(name) and name not in read_answers({name: typed}, names):
            if names.predictors[name].may_be_missing is True and leaves_open(typed):
                continue
            hint = suggest(typed, names.answers_of(name))
            yield Problem(point(base, name), f"{quoted(typed)} is no answer to {quoted(name)}.{hint}")


def _check_figures(example: WorkedExample, base: str) -> Iterator[Problem]:
    probability, tolerance = example.probability, example.tolerance
    if not 0 < probability < 1:
        yield Problem(
            point(base, "probability"),
            f"{quoted(probability)} is no probability strictly between 0 and 1.{_percentage_slip(probability)}",
        )
    if tolerance > WIDEST_TOLERANCE:
        slip = _percentage_slip(tolerance) if tolerance > 1 else ""
        yield Problem(
            point(base, "tolerance"),
            f"{quoted(tolerance)} is too wide to prove anything: at most {WIDEST_TOLERANCE}; half a unit of the last "
            f"printed digit is usual (0.0005 for a printed 10.5\u202f%).{slip}",
        )
    if example.from_memory is True and example.computed is True:
        yield Problem(
            base, 'an example is either remembered ("from_memory") or "computed" from these coefficients, not both.'
        )


def _percentage_slip(number: float) -> str:
    if not 1 < number < 100:
        return ""
    return f" {quoted(number)} looks like a percentage: write {quoted(number / 100)}."


def _judge_limits(example: WorkedExample, equation: Equation) -> str:
    lower = None if isinstance(example.lower, UnsetType) else example.lower
    upper = None if isinstance(example.upper, UnsetType) else example.upper
    if lower is None and upper is None:
        return ""
    if lower is None or upper is None:
        return 'give both "lower" and "upper", or neither.'
    if isinstance(equation.uncertainty, NoBand):
        return f"the equation {quoted(equation.id)} has no band, so no limits can be recomputed. Leave them out."
    if 0 < example.probability < 1 and not lower < example.probability < upper:
        return "the limits must stand on the two sides of the probability."
    return ""


def _check_recalibration(example: WorkedExample, base: str, model: ModelContent) -> Iterator[Problem]:
    name = example.recalibration
    known = [recalibration.id for recalibration in model.recalibrations]
    if isinstance(name, str) and name not in known:
        yield Problem(point(base, "recalibration"), f"there is no recalibration {quoted(name)}.{suggest(name, known)}")
    for recalibration in model.recalibrations:
        if recalibration.id == name and span_of(recalibration) != span_of(example):
            yield Problem(base, f"the recalibration {quoted(name)} is for another time span than this example.")
    if not isinstance(name, str) and model.recalibration_required and known:
        yield Problem(base, "the model gives no number without a recalibration, so its examples must name one.")
