"""What values that nobody measured may be, given those that are known: weighted points that stand for such people.

Numbers: conditional normal. A yes/no answer: its logistic row. A known answer whose row depends on an open value counts
by its likelihood (Bayes' theorem), so that the points stand for the exact conditional distribution.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from itertools import product
from math import prod, sqrt

import numpy as np
from numpy.typing import NDArray

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Array
from clinicalc.prediction.people import AnswerRow, People
from clinicalc.prediction.quadrature import MOST_VARIABLES, normal_points

MOST_COMBINATIONS = 256
"""Of answers that are open: those not measured and those that theirs depend on."""

_REACH = 8.5
"""Standard deviations to either side within which bends of a function are asked for; beyond lies less than 1e-16."""

Bends = Callable[[str, Mapping[str, Column], Column, Column], Array]
"""Where a function of an open number jumps or bends: of its id, the open numbers placed before it, and the lowest and
highest value it may take, each of shape (n,). Gives places in the file's unit, shape (n, k), not a number for none."""


@dataclass(frozen=True, slots=True, eq=False)
class Cloud:
    """Weighted points, shape (K,); `columns` has the open values in the file's units and codes.

    `combination` says which of `combinations`, sets of open answers by id, a point belongs to.
    """

    weights: Column
    columns: Mapping[str, Column]
    combination: NDArray[np.intp]
    combinations: tuple[Mapping[str, float], ...]


@dataclass(frozen=True, slots=True, eq=False)
class _Placed:
    """Points for the numbers alone: on their scale, in the file's unit, and the weights."""

    scaled: Mapping[str, Column]
    raw: Mapping[str, Column]
    weights: Column


def spread_open(
    people: People,
    open: tuple[str, ...],
    numbers: Mapping[str, float],
    answers: Mapping[str, float],
    bends: Bends,
) -> Cloud | None:
    """The points for the `open` predictors given known numbers (in the file's units) and answers (codes).

    None where the description of the people does not reach: it leaves one of them out, or makes them depend on too much
    else that is not known.
    """
    if not set(open) <= people.described:
        return None
    known = people.scaled(numbers)
    rows = {row.id: row for row in people.answers}
    said = {id: code for id, code in answers.items() if id in rows and id not in open}
    latent = _find_latent(open, {*known, *said}, rows)
    free = tuple(id for id in latent if id in people.numbers)
    answered = {id: ((0.0, 0.0), (1.0, 0.0)) for id in latent if id in rows}
    chosen = {
        id: tuple((code, float(np.log(share))) for code, share in people.shares[id] if share > 0.0)
        for id in latent
        if id in people.shares
    }
    options = answered | chosen
    if len(free) > MOST_VARIABLES or prod(len(codes) for codes in options.values()) > MOST_COMBINATIONS:
        return None
    placed = _place_numbers(people, free, known, bends)
    return _combine(open, placed, options, tuple(rows[id] for id in rows if id in said or id in latent), known | said)


def _find_latent(open: tuple[str, ...], known: set[str], rows: Mapping[str, AnswerRow]) -> tuple[str, ...]:
    """The open values and all that nobody knows either and that a known or open answer depends on."""
    latent = dict.fromkeys(open)
    while True:
        asked = [row for id, row in rows.items() if id in latent or id in known]
        more = [id for row in asked for id, b in row.coefficients if b and id not in known and id not in latent]
        if not more:
            return tuple(latent)
        latent |= dict.fromkeys(more)


def _place_numbers(people: People, free: tuple[str, ...], known: Mapping[str, float], bends: Bends) -> _Placed:
    """One number after the other: each has its points for every point of those before it."""
    placed = _Placed({}, {}, np.ones(1))
    if not free:
        return placed
    mean, covariance = people.given(free, known)
    root = _root_of(covariance)
    standard: list[Column] = []
    for place, id in enumerate(free):
        middle: Column = np.full(placed.weights.size, mean[place])
        for before, z in enumerate(standard):
            middle = middle + root[place, before] * z
        spread, logged = float(root[place, place]), id in people.logged
        z, rule = normal_points(_standardised_bends(id, placed, middle, spread, logged, bends), len(free))
        points = z.shape[1]
        standard = [*(np.repeat(step, points) for step in standard), z.ravel()]
        column = np.repeat(middle, points) + spread * z.ravel()
        with np.errstate(over="ignore"):
            raw = np.exp(column) if logged else column
        placed = _Placed(
            scaled={other: np.repeat(values, points) for other, values in placed.scaled.items()} | {id: column},
            raw={other: np.repeat(values, points) for other, values in placed.raw.items()} | {id: raw},
            weights=np.repeat(placed.weights, points) * rule.ravel(),
        )
    return placed


def _standardised_bends(id: str, placed: _Placed, middle: Column, spread: float, logged: bool, bends: Bends) -> Array:
    """How many standard deviations from its expected value the number bends, shape (n, k); not a number for nowhere."""
    with np.errstate(all="ignore"):
        low, high = middle - _REACH * spread, middle + _REACH * spread
        at = bends(id, placed.raw, np.exp(low), np.exp(high)) if logged else bends(id, placed.raw, low, high)
        away: Array = ((np.log(at) if logged else at) - middle[:, np.newaxis]) / spread
    return away


def _root_of(covariance: Array) -> Array:
    """The lower root of a covariance, nought where rounding or a number without spread leaves nothing."""
    size = covariance.shape[0]
    root = np.zeros((size, size))
    for j in range(size):
        rest = covariance[j, j] - (root[j, :j] * root[j, :j]).sum()
        root[j, j] = sqrt(max(float(rest), 0.0))
        for i in range(j + 1, size):
            across = covariance[i, j] - (root[i, :j] * root[j, :j]).sum()
            root[i, j] = across / root[j, j] if root[j, j] > 0.0 else 0.0
    return root


def _combine(
    open: tuple[str, ...],
    placed: _Placed,
    options: Mapping[str, tuple[tuple[float, float], ...]],
    rows: tuple[AnswerRow, ...],
    known: Mapping[str, float],
) -> Cloud:
    """The points of the numbers once for each combination of answers, weighted by how likely it is there."""
    points = placed.weights.size
    combinations: dict[tuple[float, ...], int] = {}
    logs, parts, belongs = [], [], []
    with np.errstate(divide="ignore"):
        base = np.log(placed.weights)
    for combination in product(*options.values()):
        codes = {id: code for id, (code, _) in zip(options, combination, strict=True)}
        values: dict[str, Column | float] = {**known, **placed.scaled, **codes}
        weight = base + sum(share for _, share in combination)
        for row in rows:
            odds = row.log_odds(values, points)
            weight = weight - np.logaddexp(0.0, -odds if values[row.id] == 1.0 else odds)
        key = tuple(codes[id] for id in options if id in open)
        belongs.append(np.full(points, combinations.setdefault(key, len(combinations))))
        parts.append(codes)
        logs.append(weight)
    together = np.concatenate(logs)
    weights = np.exp(together - together.max())
    asked = [id for id in options if id in open]
    return Cloud(
        weights=weights / weights.sum(),
        columns={
            id: np.repeat([codes[id] for codes in parts], points)
            if id in options
            else np.tile(placed.raw[id], len(parts))
            for id in open
        },
        combination=np.concatenate(belongs),
        combinations=tuple(dict(zip(asked, key, strict=True)) for key in combinations),
    )
