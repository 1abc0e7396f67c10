"""The described population: moments, correlations and shares of predictors that exist."""

from collections.abc import Iterator
from typing import TypeVar

from msgspec import UnsetType

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.schema import (
    ChoicePredictor,
    ModelContent,
    NumberPredictor,
    Population,
    PopulationAnswer,
    PopulationChoice,
    PopulationNumber,
    YesNoPredictor,
)
from clinicalc.errors import Problem

SHARES_SLACK = 1e-6
_DIAGONAL_SLACK = 1e-8

_Row = TypeVar("_Row", PopulationNumber, PopulationAnswer, PopulationChoice)


def check_population(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The population, and that it describes every predictor that may be missing."""
    population = model.population
    described = set() if population is None else set(_list_described(population))
    for index, predictor in enumerate(model.predictors):
        if predictor.may_be_missing is True and predictor.id not in described:
            yield Problem(
                at("predictors", index, "may_be_missing"),
                f'{quoted(predictor.id)} may be missing, so "population" must describe it.',
            )
    if population is None:
        return
    base = at("population")
    yield from _check_ids(population.numbers, NumberPredictor, "a number", point(base, "numbers"), names)
    yield from _check_ids(population.yes_no, YesNoPredictor, "a yes/no question", point(base, "yes_no"), names)
    yield from _check_correlations(population, point(base, "correlations"))
    yield from _check_answers(population, point(base, "yes_no"))
    choices = () if isinstance(population.choices, UnsetType) else population.choices
    yield from _check_ids(choices, ChoicePredictor, "a choice", point(base, "choices"), names)
    for index, choice in enumerate(choices):
        fault = _judge_shares(choice, names)
        if fault:
            yield Problem(point(base, "choices", index, "shares"), fault)


def _list_described(population: Population) -> Iterator[str]:
    choices = () if isinstance(population.choices, UnsetType) else population.choices
    for rows in (population.numbers, population.yes_no, choices):
        yield from (row.id for row in rows)


def _check_ids(rows: tuple[_Row, ...], kind: type, words: str, base: str, names: Catalogue) -> Iterator[Problem]:
    seen: set[str] = set()
    fitting = [name for name, predictor in names.predictors.items() if isinstance(predictor, kind)]
    for index, row in enumerate(rows):
        path = point(base, index, "id")
        if row.id in seen:
            yield Problem(path, f"{quoted(row.id)} stands twice here.")
        elif row.id not in names.predictors:
            yield Problem(path, f"there is no predictor {quoted(row.id)}.{suggest(row.id, fitting)}")
        elif row.id not in fitting:
            yield Problem(path, f"{quoted(row.id)} is not {words}.")
        seen.add(row.id)


def _check_correlations(population: Population, path: str) -> Iterator[Problem]:
    size = len(population.numbers)
    if size == 0 and not population.correlations:
        return
    fault = judge_matrix(population.correlations, size, "numbers of the population")
    if fault:
        yield Problem(path, fault)
        return
    for index, row in enumerate(population.correlations):
        if abs(row[index] - 1) > _DIAGONAL_SLACK:
            yield Problem(
                point(path, index, index), f"{quoted(row[index])} must be 1: a value's correlation with itself."
            )


def _check_answers(population: Population, base: str) -> Iterator[Problem]:
    known = {number.id for number in population.numbers}
    for index, row in enumerate(population.yes_no):
        for name in row.coefficients:
            if name not in known:
                yield Problem(
                    point(base, index, "coefficients", name),
                    f"{quoted(name)} is no number of the population nor a question before this.{suggest(name, known)}",
                )
        known.add(row.id)


def _judge_shares(choice: PopulationChoice, names: Catalogue) -> str:
    known = names.answers_of(choice.id)
    if not known:
        return ""  # said at its id
    if set(choice.shares) != set(known):
        return f"the shares must be given for exactly these answers: {listed(map(quoted, known))}."
    total = sum(choice.shares.values())
    if abs(total - 1) > SHARES_SLACK:
        return f"the shares add up to {quoted(total)}; they must add up to 1."
    return ""
