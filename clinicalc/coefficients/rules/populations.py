"""Described populations, the model's or an equation's: moments, correlations and shares of predictors that exist."""

from collections.abc import Iterator
from math import exp
from typing import TypeVar

from msgspec import UnsetType

from clinicalc.coefficients.described import list_described, population_of
from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.rules.quantities import fits_table, possible_of
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
from clinicalc.units import unit

SHARES_SLACK = 1e-6
_DIAGONAL_SLACK = 1e-8

_Row = TypeVar("_Row", PopulationNumber, PopulationAnswer, PopulationChoice)


def check_populations(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every described population, and that what may be missing is described for all equations or for none."""
    yield from _check_missing(model)
    if model.population is not None:
        yield from _check_population(model.population, at("population"), names)
    for index, equation in enumerate(model.equations):
        if not isinstance(equation.population, UnsetType):
            yield from _check_population(equation.population, at("equations", index, "population"), names)


def _check_missing(model: ModelContent) -> Iterator[Problem]:
    described = {}
    for equation in model.equations:
        population = population_of(model, equation)
        described[equation.id] = set() if population is None else set(list_described(population))
    for index, predictor in enumerate(model.predictors):
        if predictor.may_be_missing is not True:
            continue
        lacking = [name for name, known in described.items() if predictor.id not in known]
        # described nowhere is no fault: there is then no single number where it was not measured, only a range
        if lacking and len(lacking) < len(described):
            whose = f" of {listed(map(quoted, lacking))}"
            yield Problem(
                at("predictors", index, "may_be_missing"),
                f'{quoted(predictor.id)} may be missing, so "population"{whose} must describe it.',
            )


def _check_population(population: Population, base: str, names: Catalogue) -> Iterator[Problem]:
    yield from _check_ids(population.numbers, NumberPredictor, "a number", point(base, "numbers"), names)
    yield from _check_ids(population.yes_no, YesNoPredictor, "a yes/no question", point(base, "yes_no"), names)
    yield from _check_means(population.numbers, point(base, "numbers"), names)
    yield from _check_correlations(population, point(base, "correlations"))
    yield from _check_answers(population, point(base, "yes_no"))
    choices = () if isinstance(population.choices, UnsetType) else population.choices
    yield from _check_ids(choices, ChoicePredictor, "a choice", point(base, "choices"), names)
    for index, choice in enumerate(choices):
        fault = _judge_shares(choice, names)
        if fault:
            yield Problem(point(base, "choices", index, "shares"), fault)


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


def _check_means(numbers: tuple[PopulationNumber, ...], base: str, names: Catalogue) -> Iterator[Problem]:
    """A mean that no patient could have: a logarithm not said to be one, or the other way round, or another unit."""
    for index, number in enumerate(numbers):
        predictor = names.predictors.get(number.id)
        if not isinstance(predictor, NumberPredictor) or not fits_table(predictor):
            continue
        possible = possible_of(predictor)
        logged, raised = not isinstance(number.log, UnsetType), exp(min(number.mean, 700.0))
        if possible is None or possible.contains(raised if logged else number.mean):
            continue
        spelling = f" {unit(predictor.unit).spelling}".rstrip()
        slip = " Is it in the unit of the predictor?"
        if logged and possible.contains(number.mean):
            slip = ' Is it the mean of the value itself? Then leave "log" out.'
        elif not logged and possible.contains(raised):
            slip = ' Is it the mean of the logarithm? Then state "log": "natural".'
        yield Problem(
            point(base, index, "mean"),
            f"the mean {quoted(number.mean)} of {quoted(number.id)}{f', a logarithm of {raised:.4g},' * logged} lies"
            f" outside its possible values, {quoted(possible.low)} to {quoted(possible.high)}{spelling}.{slip}",
        )


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
