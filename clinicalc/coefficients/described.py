"""Which description of people holds for an equation: its own, or the model's where it has none."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.coefficients.schema import Equation, ModelContent, Population


def population_of(model: ModelContent, equation: Equation) -> Population | None:
    """The described people of one of the model's equations, or None where nobody described them."""
    return model.population if isinstance(equation.population, UnsetType) else equation.population


def list_described(population: Population) -> Iterator[str]:
    """The ids of the predictors that a population describes: numbers, yes/no questions, choices."""
    yield from (row.id for row in population.numbers)
    yield from (row.id for row in population.yes_no)
    if not isinstance(population.choices, UnsetType):
        yield from (row.id for row in population.choices)
