"""A described population made ready to be asked: what is to be expected of values that nobody measured.

Numbers are jointly normal on the scale described (their own, or the natural logarithm); each yes/no answer is logistic
given the numbers and the answers before it; a choice has its shares, independent of the rest.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import log

import numpy as np
from msgspec import UnsetType

from clinicalc.coefficients.described import population_of
from clinicalc.coefficients.schema import Equation, ModelContent, Population
from clinicalc.covariates.design import answer_codes
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Array


@dataclass(frozen=True, slots=True)
class AnswerRow:
    """log odds of yes = intercept + sum of coefficients times the numbers (on their scale) and answers (0 or 1)."""

    id: str
    intercept: float
    coefficients: tuple[tuple[str, float], ...]

    def log_odds(self, values: Mapping[str, Column | float], rows: int) -> Column:
        """The log odds for each row, shape (rows,); `values`, on the described scale, has each id named."""
        total: Column = np.full(rows, self.intercept)
        for id, coefficient in self.coefficients:
            total = total + coefficient * values[id]
        return total


@dataclass(frozen=True, slots=True, eq=False)
class People:
    """The people an equation was made from."""

    source: str
    numbers: tuple[str, ...]
    logged: frozenset[str]
    """Ids of the numbers that are described by their natural logarithm."""
    mean: Array
    sd: Array
    correlation: Array
    precision: tuple[tuple[float, ...], ...]
    """The inverse of the correlations of all numbers."""
    answers: tuple[AnswerRow, ...]
    shares: Mapping[str, tuple[tuple[float, float], ...]]
    """Choice -> its answers' codes in a column, each with its share."""

    @property
    def described(self) -> frozenset[str]:
        """Ids of all predictors that are described."""
        return frozenset((*self.numbers, *(row.id for row in self.answers), *self.shares))

    def scaled(self, known: Mapping[str, float]) -> dict[str, float]:
        """The described numbers among `known`, from the file's unit to the scale described.

        One that has no logarithm where that is the scale is left out: it says nothing of the others.
        """
        found = {id: known[id] for id in self.numbers if id in known}
        return {
            id: log(value) if id in self.logged else value
            for id, value in found.items()
            if id not in self.logged or value > 0.0
        }

    def carried_distance(self, known: Mapping[str, float]) -> list[float]:
        """What each known number, on its scale, carries of their squared Mahalanobis distance: z times its R^-1 z."""
        at = [self.numbers.index(id) for id in known]
        z = [
            (value - float(self.mean[place])) / float(self.sd[place])
            for place, value in zip(at, known.values(), strict=True)
        ]
        precision = self.precision_of(tuple(known))
        return [own * sum(a * b for a, b in zip(row, z, strict=True)) for own, row in zip(z, precision, strict=True)]

    def precision_of(self, known: Sequence[str]) -> tuple[tuple[float, ...], ...]:
        """The inverse of the correlations of some of the numbers, in their order here."""
        # all of them are known in almost every case, and this is asked at every key
        if len(known) == len(self.numbers):
            return self.precision
        at = [self.numbers.index(id) for id in known]
        return _inverse(self.correlation[np.ix_(at, at)])

    def given(self, open: tuple[str, ...], known: Mapping[str, float]) -> tuple[Array, Array]:
        """Mean, shape (m,), and covariance, shape (m, m), of the `open` numbers given the known ones, on their scale.

        mu_m + S_mo S_oo^-1 (x_o - mu_o) and S_mm - S_mo S_oo^-1 S_om: the conditional normal distribution (Anderson, An
        Introduction to Multivariate Statistical Analysis, 3rd ed. 2003, theorem 2.5.1), on the correlation scale.
        """
        m = [self.numbers.index(id) for id in open]
        o = [self.numbers.index(id) for id in known]
        sd = self.sd[m]
        inner = self.correlation[np.ix_(m, m)]
        if not o:
            return self.mean[m], inner * np.outer(sd, sd)
        away = (np.array([*known.values()]) - self.mean[o]) / self.sd[o]
        across = self.correlation[np.ix_(m, o)]
        weights = np.linalg.solve(self.correlation[np.ix_(o, o)], across.T).T
        inner = inner - (weights[:, np.newaxis, :] * across[np.newaxis, :, :]).sum(axis=2)
        expected = (weights * away).sum(axis=1)
        return self.mean[m] + sd * expected, (inner + inner.T) / 2.0 * np.outer(sd, sd)


def people_of(model: ModelContent, equation: Equation) -> People | None:
    """The people of one of the model's equations; None where nobody described them."""
    population = population_of(model, equation)
    return None if population is None else _prepare(model, population)


def _prepare(model: ModelContent, population: Population) -> People:
    codes = answer_codes(model)
    choices = () if isinstance(population.choices, UnsetType) else population.choices
    size = len(population.numbers)
    given = np.array(population.correlations, dtype=np.float64).reshape(size, size)
    correlation = (given + given.T) / 2.0
    return People(
        source=population.source,
        numbers=tuple(number.id for number in population.numbers),
        logged=frozenset(number.id for number in population.numbers if not isinstance(number.log, UnsetType)),
        mean=np.array([number.mean for number in population.numbers]),
        sd=np.array([number.sd for number in population.numbers]),
        correlation=correlation,
        precision=_inverse(correlation),
        answers=tuple(AnswerRow(row.id, row.intercept, tuple(row.coefficients.items())) for row in population.yes_no),
        shares={
            choice.id: tuple((codes[choice.id][answer], share) for answer, share in choice.shares.items())
            for choice in choices
        },
    )


def _inverse(matrix: Array) -> tuple[tuple[float, ...], ...]:
    return tuple(tuple(float(value) for value in row) for row in np.linalg.inv(matrix))
