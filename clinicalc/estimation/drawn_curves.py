"""Curves a smooth curve might have been, at a few places, and how far from the diagonal they lie.

A draw is a curve made from people drawn again, or from coefficients drawn from their joint normal. Beside it stands one
of people whose predictions are right, drawn as imprecisely: its distance from the diagonal is chance alone. Places are
groups of people of like predictions, so that many people cost no more than a few; all from a seed.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.calibrated import IndexLimits, Limits

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

DRAWS = 500
_MOST_PLACES = 300
_PARTS = (0.025, 0.975)
_CHANCE = 0.95


@dataclass(frozen=True, slots=True, eq=False)
class Places:
    """K groups of people of like predictions, ascending: mean prediction, people and highest prediction, each (K,).

    The lowest and the highest prediction are groups of their own.
    """

    predicted: Array
    people: Array
    highest: Array

    def find_codes(self, predictions: Array) -> Codes:
        """The group of each of the predictions, (n,)."""
        return np.asarray(np.searchsorted(self.highest, predictions, side="left"), dtype=np.int64)

    def count(self, predictions: Array, weights: Array) -> Array:
        """The sum of the weights, (n,), of the people of each group, (K,)."""
        codes = self.find_codes(predictions)
        return np.bincount(codes, weights=weights, minlength=len(self.people)).astype(np.float64, copy=False)


@dataclass(frozen=True, slots=True, eq=False)
class DrawnCurves:
    """D drawn curves at K places and the people who stand there in each draw, and the curves of chance alone, (D, K).

    A place where nobody stands in a draw may be NaN in it. `people` has one row where everybody stays.
    """

    places: Places
    people: Array
    curves: Array
    by_chance: Array

    def find_limits(self) -> IndexLimits:
        """Percentiles of each index over the draws."""
        indices = _measure(self.curves, self.places.predicted, self.people)
        lows, highs = np.quantile(indices, _PARTS, axis=1).tolist()
        ici, e50, e90, emax = (Limits(*each) for each in zip(lows, highs, strict=True))
        chance = _measure(self.by_chance, self.places.predicted, self.places.people[None])[0]
        return IndexLimits(
            ici=ici,
            e50=e50,
            e90=e90,
            emax=emax,
            draws=len(self.curves),
            chance=float(chance.mean()),
            chance_bound=float(np.quantile(chance, _CHANCE)),
        )


def find_places(predictions: Array, most: int = _MOST_PLACES) -> Places:
    """The places of predictions, (n,): each different one, or about `most` groups of equal numbers of people."""
    at, counts = np.unique(predictions, return_counts=True)
    if len(at) <= most:
        return Places(at, counts.astype(np.float64), at)
    parts = 1 + (np.cumsum(counts) - counts) * (most - 2) // len(predictions)
    parts[0], parts[-1] = 0, most
    begins = np.flatnonzero(np.diff(parts, prepend=-1))
    people = np.add.reduceat(counts, begins).astype(np.float64)
    return Places(np.add.reduceat(at * counts, begins) / people, people, at[np.append(begins[1:], len(at)) - 1])


def draw_normal(covariance: Array, draws: int, seed: int) -> Array:
    """One column of standard normals, and p of a joint normal about 0 with the covariance (p, p), (draws, 1 + p)."""
    size = len(covariance)
    drawn = np.random.default_rng((seed, 0)).standard_normal((draws, 1 + size))
    spread, axes = np.linalg.eigh(covariance)
    root = axes * np.sqrt(np.maximum(spread, 0.0))
    found = np.zeros((draws, 1 + size))
    found[:, 0] = drawn[:, 0]
    for row in range(size):
        for column in range(size):
            found[:, 1 + row] += root[row, column] * drawn[:, 1 + column]
    return found


def _measure(curves: Array, predicted: Array, people: Array) -> Array:
    """ICI, E50, E90 and Emax of each of D curves over the people at each place, (4, D)."""
    weights = np.broadcast_to(people, curves.shape)
    stands = (weights > 0.0) & ~np.isnan(curves)
    weights = np.where(stands, weights, 0.0)
    away = np.where(stands, np.abs(curves - predicted), 0.0)
    order = np.argsort(away, axis=1)
    lined, until = np.take_along_axis(away, order, 1), np.cumsum(np.take_along_axis(weights, order, 1), axis=1)
    all_people = until[:, -1]
    rows = np.arange(len(curves))
    e50, e90 = (lined[rows, (until < part * all_people[:, None]).sum(axis=1)] for part in (0.5, 0.9))
    return np.array([(weights * away).sum(axis=1) / all_people, e50, e90, lined[:, -1]])
