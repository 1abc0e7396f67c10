"""Columns that say the same: exactly (rank), or nearly (variance inflation, condition number).

Columns are centred and scaled to length 1, so that neither units nor the place of nought matter. Variance inflation
factor: the diagonal of the inverse of their correlation matrix (Marquardt, Technometrics 1970;12:591). Condition
number: their largest singular value over the smallest (Belsley, Kuh & Welsch, Regression Diagnostics, 1980: harm from
30 on; theirs are not centred). Both are read off the triangle of a QR decomposition made block by block.
"""

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.screened import Array, Figure, Screen, Screened, ScreenedColumn
from clinicalc.estimation.screening_columns import is_constant

INFLATED = 10.0
ILL_CONDITIONED = 30.0

_EXACT = 1e-7
"""What is left of a column of length 1 without the columns before it; R's lm takes the same limit."""
_TAKES_PART = 1e-6
_ENOUGH = 2.0
"""Columns are named with an inflated one until they alone inflate it this many times less than all together."""
_DECOMPOSED = 0.5
_BLOCK = 65536


def screen_collinearity(columns: Sequence[ScreenedColumn], complete: NDArray[np.bool_]) -> Iterator[Screened]:
    """Relations among the columns over the rows that are complete; constant columns are left aside.

    Every exact relation is a STOP that names a column and those before it of which it is made. A near one is a CAUTION,
    or a NOTE where every column in it shares a predictor with the first (curves, products, levels of one question).
    """
    varying = [column for column in columns if not is_constant(column.values[complete])]
    people = int(complete.sum())
    if len(varying) < 2 or people < 2:
        return
    triangle = _triangle(varying, complete)
    kept: list[int] = []
    for place, column in enumerate(varying):
        left = _left_over(triangle, kept, place)
        if left is None:
            kept.append(place)
            continue
        partners = tuple(varying[kept[at]].name for at in np.flatnonzero(np.abs(left) > _TAKES_PART))
        yield Screened(Grade.STOP, (column.name, *partners), Screen.DEPENDENT, ((Figure.OF_PEOPLE, float(people)),))
    if len(kept) > 1:
        yield from _near([varying[place] for place in kept], triangle[:, kept])


def _triangle(columns: Sequence[ScreenedColumn], complete: NDArray[np.bool_]) -> Array:
    """The upper triangle R of the centred columns of length 1, shape (up to p, p)."""
    rows = np.flatnonzero(complete)
    size = len(columns)
    centres, lengths = np.empty(size), np.empty(size)
    for place, column in enumerate(columns):
        known = column.values[rows]
        centres[place] = known.mean()
        away = known - centres[place]
        largest = float(np.abs(away).max())
        scaled = away / largest
        lengths[place] = largest * float(np.sqrt((scaled * scaled).sum()))
    triangle = np.zeros((0, size))
    for start in range(0, len(rows), _BLOCK):
        chosen = rows[start : start + _BLOCK]
        block = np.column_stack([column.values[chosen] for column in columns])
        triangle = np.asarray(np.linalg.qr(np.vstack([triangle, (block - centres) / lengths]), mode="r"))
    return triangle


def _left_over(triangle: Array, kept: Sequence[int], place: int) -> Array | None:
    """How a column is made of those kept so far (shape (kept,)), or None where something of its own is left."""
    if not kept:
        return None
    before = triangle[:, kept]
    weights: Array = np.asarray(np.linalg.lstsq(before, triangle[:, place], rcond=None)[0], dtype=np.float64)
    rest = triangle[:, place] - (before * weights).sum(axis=1)
    return weights if float(np.sqrt((rest * rest).sum())) < _EXACT else None


def _near(columns: Sequence[ScreenedColumn], triangle: Array) -> Iterator[Screened]:
    _, singular, right = np.linalg.svd(triangle, full_matrices=False)
    inflation = np.square(right / singular[:, None]).sum(axis=0)
    condition = float(singular[0] / singular[-1])
    groups = _groups(triangle, inflation)
    if not groups and condition >= ILL_CONDITIONED:
        shares = right[-1] * right[-1] / (singular[-1] * singular[-1]) / inflation
        order = np.argsort(-shares, kind="stable")
        groups = [[int(at) for at in order if shares[at] >= _DECOMPOSED or at in order[:2]]]
    for group in groups:
        named = [columns[at] for at in group]
        figures = (
            (Figure.INFLATION, float(inflation[group[0]])),
            (Figure.CONDITION, _condition(triangle[:, group])),
            (Figure.VALUE, condition),
        )
        gravity = Grade.NOTE if _are_of_one(named) else Grade.CAUTION
        yield Screened(gravity, tuple(column.name for column in named), Screen.COLLINEAR, figures)


def _groups(triangle: Array, inflation: Array) -> list[list[int]]:
    """Inflated columns with their partners, joined where they overlap; in each the most inflated first."""
    groups: list[set[int]] = []
    for at in np.flatnonzero(inflation >= INFLATED).tolist():
        mine = {at, *_partners(triangle, at, float(inflation[at]))}
        touching = [group for group in groups if group & mine]
        groups = [group for group in groups if not group & mine]
        groups.append(mine.union(*touching))
    # two columns inflated alike but for rounding stay in their order
    return [sorted(group, key=lambda at: (-float(f"{inflation[at]:.6g}"), at)) for group in groups]


def _partners(triangle: Array, at: int, inflation: float) -> list[int]:
    """The fewest columns, taken one by one as each leaves least over, that inflate this one half as much as all do."""
    rest = triangle.copy()
    partners: list[int] = []
    while (rest[:, at] * rest[:, at]).sum() * inflation > _ENOUGH:
        lengths = (rest * rest).sum(axis=0)
        shared = (rest * rest[:, [at]]).sum(axis=0)
        gain = shared * shared / np.maximum(lengths, _EXACT * _EXACT)
        gain[[at, *partners]] = -1.0
        best = int(np.argmax(gain))
        if gain[best] <= 0.0:
            break
        partners.append(best)
        unit = rest[:, best] / np.sqrt(lengths[best])
        rest = rest - np.outer(unit, (rest * unit[:, None]).sum(axis=0))
    return partners


def _condition(triangle: Array) -> float:
    singular = np.linalg.svd(triangle, compute_uv=False)
    return float(singular[0] / singular[-1])


def _are_of_one(columns: Sequence[ScreenedColumn]) -> bool:
    """Whether they hang together by predictors that they share: age, its square, its product with something."""
    reached = set(columns[0].made_of)
    waiting = list(columns[1:])
    while waiting:
        joined = [column for column in waiting if reached & set(column.made_of)]
        if not joined:
            return False
        reached.update(*(column.made_of for column in joined))
        waiting = [column for column in waiting if column not in joined]
    return True
