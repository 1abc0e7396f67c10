"""Shares: what each value adds on the link scale against the reference person.

A share is the change of the linear predictor when one value moves from the reference person's to the patient's,
averaged over all orders in which the values can be moved (Shapley LS, in: Contributions to the Theory of Games II,
1953, 307-317). Shares therefore add up to the whole way, and none takes the sign of a product that another value
cancels. They are linear in the terms of an equation, so each term is averaged over its own few values alone.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, lru_cache
from itertools import combinations
from math import factorial, fsum, isfinite

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.case import Case
from clinicalc.assessment.limits import is_equal
from clinicalc.assessment.model import ModelEquation
from clinicalc.assessment.numerals import join_words
from clinicalc.assessment.reference_person import (
    ReferencePerson,
    find_reference,
    own_value,
    own_words,
    reference_words,
)
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.predict import predict

MOST_TOGETHER = 10
"""So many values may meet in one term: 1024 rows."""

_NOUGHT = 1e-12

_Subset = frozenset[str]
_Places = NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class Share:
    """The change of the linear predictor that one value brings, averaged over all orders of moving the values."""

    field: str
    label: str
    own: str
    reference: str
    amount: float


@dataclass(frozen=True, slots=True)
class Shares:
    """A walk from the reference person to the patient, largest step first; amounts add up to the whole way."""

    reference_eta: float
    reference_probability: float
    steps: tuple[Share, ...]
    """Shares of nought are left out."""


@dataclass(frozen=True, slots=True, eq=False)
class _Plan:
    """Which values are moved together, whoever the patient is.

    `together` holds, for each term, the moving values that change it, `subsets` the rows of all their subsets. `rows`
    has a row for each set of moved values that some term needs: the reference person's first, the patient's too.
    """

    together: tuple[tuple[str, ...], ...]
    rows: Mapping[_Subset, int]
    subsets: tuple[_Places, ...]


def shares_of(case: Case) -> Shares | None:
    """The walk on the adjusted link scale; None where there is none, for the reason that `why_no_shares` gives."""
    found = walk_from(case, find_reference(case))
    return None if isinstance(found, str) else found


def why_no_shares(case: Case) -> str:
    """Why there are no shares; "" where there are."""
    found = walk_from(case, find_reference(case))
    return found if isinstance(found, str) else ""


def walk_from(case: Case, reference: ReferencePerson) -> Shares | str:
    """The walk on the adjusted link scale from the case's reference person, or why there is none."""
    if reference.because:
        return reference.because
    moving = [id for id, value in reference.values.items() if not is_equal(own_value(case, id), value)]
    plan = _plan(case.equation, reference, tuple(moving))
    most = max(plan.together, key=len)
    if len(most) > MOST_TOGETHER:
        labels = join_words([case.model.by_id[id].label for id in most])
        return (
            f"{labels} meet in one term of the equation, more than {MOST_TOGETHER}: they have no shares of their own."
        )
    design = case.design_with(_moved(case, reference, moving, plan.rows))
    result = predict(case.line, design, adjustment=case.adjustment, band=False)
    slope = 1.0 if case.adjustment is None else case.adjustment.slope
    parts: dict[str, list[float]] = {id: [] for id in moving}
    for values, coefficient, ids, subsets in zip(
        design, case.line.coefficients, plan.together, plan.subsets, strict=True
    ):
        if ids:
            averaged = (_weights(len(ids)) * values[subsets]).sum(axis=1)
            for id, share in zip(ids, averaged.tolist(), strict=True):
                parts[id].append(slope * coefficient * share)
    start, way = float(result.eta[0]), float(result.eta[plan.rows[frozenset(moving)]] - result.eta[0])
    amounts = {id: fsum(some) for id, some in parts.items()}
    if not (isfinite(start) and isfinite(way) and all(map(isfinite, amounts.values()))):
        return "On the way from the reference person to these values the equation has no finite result."
    return Shares(start, float(result.probability[0]), _steps(case, reference, amounts, way))


def _steps(case: Case, reference: ReferencePerson, amounts: Mapping[str, float], way: float) -> tuple[Share, ...]:
    """By size, page order where sizes are equal; the smallest takes the last bits, so that the sum is the way."""
    kept = {id: amount for id, amount in amounts.items() if abs(amount) > _NOUGHT}
    order = sorted(kept, key=lambda id: -float(f"{abs(kept[id]):.12g}"))
    if order:
        kept[order[-1]] -= fsum((*kept.values(), -way))
    return tuple(
        Share(
            field=id,
            label=case.model.by_id[id].label,
            own=own_words(case, id),
            reference=reference_words(case, id, reference.values[id]),
            amount=kept[id],
        )
        for id in order
    )


@lru_cache(maxsize=16)
def _plan(equation: ModelEquation, reference: ReferencePerson, moving: tuple[str, ...]) -> _Plan:
    """Without subsets and rows where too many values meet in one term."""
    together = tuple(
        _moving_in_term(reference, frozenset(factor.of for factor in term.factors), moving) for term in equation.terms
    )
    if max(map(len, together)) > MOST_TOGETHER:
        return _Plan(together, {}, ())
    rows = _rows(moving, together)
    subsets = tuple(np.array([rows[subset] for subset in _subsets(ids)]) for ids in together)
    return _Plan(together, rows, subsets)


def _moving_in_term(reference: ReferencePerson, uses: frozenset[str], moving: tuple[str, ...]) -> tuple[str, ...]:
    """The moving values that change a term, themselves or through a value worked out from them, in page order."""
    reached = frozenset().union(*(reference.roots[id] for id in uses))
    return tuple(id for id in moving if id in reached)


def _rows(moving: tuple[str, ...], together: tuple[tuple[str, ...], ...]) -> dict[_Subset, int]:
    """A row for each set of moved values that some term needs; the reference person's first, the patient's too."""
    rows: dict[_Subset, int] = {frozenset(): 0}
    for ids in dict.fromkeys(together):
        for subset in _subsets(ids):
            rows.setdefault(subset, len(rows))
    rows.setdefault(frozenset(moving), len(rows))
    return rows


def _moved(case: Case, reference: ReferencePerson, moving: list[str], rows: Mapping[_Subset, int]) -> dict[str, Column]:
    """Every value of the reference person as a column over the rows; one that does not move is the patient's own."""
    columns: dict[str, Column] = {}
    for id, value in reference.values.items():
        own = own_value(case, id)
        start = value if id in moving else own
        columns[id] = np.array([own if id in subset else start for subset in rows])
    return columns


def _subsets(ids: tuple[str, ...]) -> list[_Subset]:
    return [frozenset(some) for size in range(len(ids) + 1) for some in combinations(ids, size)]


@cache
def _weights(count: int) -> NDArray[np.float64]:
    """For each of `count` values (rows) the weight of every subset, in the order of `_subsets`; shape (k, 2**k)."""
    subsets = [set(some) for size in range(count + 1) for some in combinations(range(count), size)]
    weights = np.empty((count, len(subsets)))
    for column, subset in enumerate(subsets):
        for value in range(count):
            before = len(subset - {value})
            weight = factorial(before) * factorial(count - before - 1) / factorial(count)
            weights[value, column] = weight if value in subset else -weight
    return weights
