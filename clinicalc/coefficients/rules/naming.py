"""Ids are unique, every name that is used exists, and sex has the two ids the equations need."""

import re
from collections.abc import Iterable, Iterator

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.rules.catalogue import YES_NO, Catalogue, at
from clinicalc.coefficients.schema import ChoicePredictor, Equation, ModelContent, NumberPredictor, Predictor
from clinicalc.errors import Problem

SEXES = {"female", "male"}
_DEVICES = re.compile(r"con|prn|aux|nul|com[1-9]|lpt[1-9]")


def check_names(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Uniqueness and reserved names."""
    del names
    if _DEVICES.fullmatch(model.id):
        yield Problem(at("id"), f"{quoted(model.id)} is the name of a device on some computers. Choose another id.")
    shared = [
        (at(kind, index, "id"), part.id)
        for kind, parts in (
            ("predictors", model.predictors),
            ("derived", model.derived),
            ("exclusions", model.exclusions),
        )
        for index, part in enumerate(parts)
    ]
    yield from _check_unique(shared, "predictors, derived values and exclusions share one set of names")
    for path, name in shared:
        if name in YES_NO:
            yield Problem(path, f"{quoted(name)} is an answer and cannot be an id. Name what is asked.")
    for index, predictor in enumerate(model.predictors):
        if isinstance(predictor, ChoicePredictor):
            base = at("predictors", index, "choices")
            answers = [(point(base, place, "id"), choice.id) for place, choice in enumerate(predictor.choices)]
            yield from _check_unique(answers, "the answers of one question must differ")
    yield from _check_unique(_ids_of("equations", model.equations), "equations must differ")
    yield from _check_unique(_ids_of("recalibrations", model.recalibrations), "recalibrations must differ")
    for index, equation in enumerate(model.equations):
        terms = [(at("equations", index, "terms", place, "id"), term.id) for place, term in enumerate(equation.terms)]
        yield from _check_unique(terms, "the terms of one equation must differ")


def check_sex(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The predictor called sex is a choice of exactly female and male."""
    for index, predictor in enumerate(model.predictors):
        if predictor.id == "sex" and set(names.answers_of("sex")) != SEXES:
            yield Problem(
                at("predictors", index),
                'the predictor "sex" must be a choice of exactly two answers, "female" and "male".',
            )


def check_applies_when(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Conditions of equations name choice or yes/no predictors and answers that these have."""
    for index, equation in enumerate(model.equations):
        for name, answers in equation.applies_when.items():
            base = at("equations", index, "applies_when", name)
            known = names.answers_of(name)
            if name in names.predictors and not known:
                yield Problem(
                    base,
                    f"{quoted(name)} is a number; an equation can only depend on an answer chosen from a list. "
                    "Use cuts in terms, or two files.",
                )
                continue
            if not known:
                yield Problem(base, f"there is no predictor {quoted(name)}.{suggest(name, names.questions)}")
                continue
            for place, answer in enumerate(answers):
                if answer not in known:
                    text = f"{quoted(answer)} is no answer to {quoted(name)}.{suggest(answer, known)}"
                    yield Problem(point(base, place), text)
            yield from _check_unique([(point(base, n), a) for n, a in enumerate(answers)], "answers must differ")


def check_reference_person(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The reference person has values that predictors can have."""
    for index, equation in enumerate(model.equations):
        if not isinstance(equation.reference_person, dict):
            continue
        for name, value in equation.reference_person.items():
            path = at("equations", index, "reference_person", name)
            message = _judge_reference(name, value, names) or _judge_condition(name, value, equation)
            if message:
                yield Problem(path, message)


def _judge_reference(name: str, value: float | str, names: Catalogue) -> str:
    if name not in names.typed:
        return f"there is no value {quoted(name)} that is typed about a patient.{suggest(name, names.typed)}"
    answers = names.answers_of(name)
    if answers and value not in answers:
        return f"{quoted(value)} is no answer to {quoted(name)}.{suggest(str(value), answers)}"
    if not answers and isinstance(value, str):
        return f"{quoted(name)} is a number; write it without quotation marks and in the predictor's unit."
    return ""


def _judge_condition(name: str, value: float | str, equation: Equation) -> str:
    answers = equation.applies_when.get(name)
    if answers is not None and value not in answers:
        return (
            f"the reference person answers {quoted(value)} to {quoted(name)}, and this equation is only for "
            f"{listed(map(quoted, answers), 'or')}."
        )
    return ""


def check_flags(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """A treatment may not be modifiable; sex, age and what selects an equation may not be missing."""
    del names
    selecting = {name for equation in model.equations for name in equation.applies_when}
    for index, predictor in enumerate(model.predictors):
        base = at("predictors", index)
        if predictor.treatment is True and predictor.modifiable is True:
            yield Problem(
                point(base, "modifiable"),
                f"{quoted(predictor.id)} is a treatment and may not be modifiable: its coefficient says who is "
                "treated, not what treating does. Leave one of the two away.",
            )
        if predictor.may_be_missing is True and (predictor.id in ("sex", "age") or _is_age(predictor)):
            yield Problem(
                point(base, "may_be_missing"), f"{quoted(predictor.id)} must always be known and may not be missing."
            )
        elif predictor.may_be_missing is True and predictor.id in selecting:
            yield Problem(
                point(base, "may_be_missing"),
                f'{quoted(predictor.id)} selects the equation ("applies_when") and may not be missing.',
            )


def _is_age(predictor: Predictor) -> bool:
    return isinstance(predictor, NumberPredictor) and predictor.quantity == "age"


def _ids_of(kind: str, parts: Iterable[object]) -> list[tuple[str, str]]:
    return [(at(kind, index, "id"), str(getattr(part, "id", ""))) for index, part in enumerate(parts)]


def _check_unique(places: Iterable[tuple[str, str]], why: str) -> Iterator[Problem]:
    first: dict[str, str] = {}
    for path, name in places:
        if name in first:
            yield Problem(path, f"{quoted(name)} stands already at {first[name]}; {why}.")
        first.setdefault(name, path)
