"""Columns whose missing values nothing can tell: known of nobody, alike for all, told by others, or apart from one.

Two columns are apart where nobody has both: what is filled in would be as if they had nothing to do with each other.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from clinicalc.estimation.chained_equations import ChainColumn

_EXACT = 1e-12
"""Share of a column's variance that may be left where it is said to follow from the others."""


class Unfillable(StrEnum):
    """Why a column cannot be filled in."""

    NOBODY = "nobody"
    CONSTANT = "constant"
    FOLLOWS = "follows"
    FEW = "few"
    APART = "apart"


@dataclass(frozen=True, slots=True)
class FoundUnfillable:
    """A column by its place, why it cannot be filled in, how many people have a value, and places of others.

    The others are those it follows from; for a column that few have, those it would be told from; for one that is apart
    from another, that one.
    """

    place: int
    why: Unfillable
    known: int
    others: tuple[int, ...] = ()
    value: float = 0.0


def find_unfillable(columns: Sequence[ChainColumn]) -> Iterator[FoundUnfillable]:
    """Every column with gaps that cannot be filled in."""
    for place, column in enumerate(columns):
        known = column.values[~np.isnan(column.values)]
        count = len(known)
        if count == len(column.values):
            continue
        others = tuple(other for other in range(len(columns)) if other != place)
        if not count:
            yield FoundUnfillable(place, Unfillable.NOBODY, 0)
        elif np.ptp(known) == 0:
            yield FoundUnfillable(place, Unfillable.CONSTANT, count, value=float(known[0]))
        elif count <= len(others) + len(column.products) + 2:
            yield FoundUnfillable(place, Unfillable.FEW, count, others)
        elif found := _follows_from(columns, place):
            yield FoundUnfillable(place, Unfillable.FOLLOWS, count, found)
        else:
            apart = (other for other in range(place) if _are_apart(column, columns[other]))
            yield from (FoundUnfillable(place, Unfillable.APART, count, (other,)) for other in apart)


def _are_apart(one: ChainColumn, other: ChainColumn) -> bool:
    known = ~np.isnan(other.values)
    return bool(known.any()) and bool(np.isnan(one.values[known]).all())


def _follows_from(columns: Sequence[ChainColumn], place: int) -> tuple[int, ...]:
    """The columns it is a sum of, among people who have everything; () where it is none, or too few have."""
    table = np.column_stack([column.values for column in columns])
    table = table[~np.isnan(table).any(axis=1)]
    if len(table) <= table.shape[1] + 1:
        return ()
    sd = table.std(axis=0)
    varied = [other for other in range(table.shape[1]) if other != place and sd[other] > 0]
    if not varied or sd[place] == 0:
        return ()
    z = (table[:, varied] - table[:, varied].mean(axis=0)) / sd[varied]
    y = (table[:, place] - table[:, place].mean()) / sd[place]
    slopes = np.linalg.lstsq(z, y, rcond=None)[0]
    left = y - (z * slopes).sum(axis=1)
    if (left * left).mean() > _EXACT:
        return ()
    return tuple(other for other, slope in zip(varied, slopes, strict=True) if abs(slope) > 1e-6)
