"""Lowess curves of people drawn again, thousands of them as cheaply as hundreds: over groups of like predictions.

The people of each group with and without the event are drawn again as one multinomial sample of everybody (the
bootstrap of Efron, Ann Stat 1979;7:1, of people known by their group). At each of a few places the straight line of
Cleveland (J Am Stat Assoc 1979;74:829) is fitted with tricube weights that reach as far as in the people themselves;
between them a curve is straight.
"""

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.drawn_curves import DrawnCurves, Places

Array = NDArray[np.float64]

_FITTED = 50
"""Groups at which a line is fitted."""
_FLAT = 1e-12


def draw_lowess(places: Places, events: Array, span: float, draws: int, seed: int) -> DrawnCurves:
    """So many curves of people at the K places with so many events, (K,), there."""
    people = int(places.people.sum())
    rng = np.random.default_rng((seed, 0))
    cells = np.concatenate([events, places.people - events])
    drawn = rng.multinomial(people, cells / people, size=draws).astype(np.float64)
    with_event, counts = drawn[:, : len(events)], drawn[:, : len(events)] + drawn[:, len(events) :]
    lines = _Lines(places, span)
    return DrawnCurves(places, counts, lines.fit(counts, with_event), draw_chance(places, span, draws, seed, lines))


def draw_chance(places: Places, span: float, draws: int, seed: int, lines: "_Lines | None" = None) -> Array:
    """Curves of the same people where each has the event with the chance that is predicted, (draws, K)."""
    lines = _Lines(places, span) if lines is None else lines
    risks = np.clip(places.predicted, 0.0, 1.0)
    rng = np.random.default_rng((seed, 1))
    by_chance = rng.binomial(places.people.astype(np.int64), risks, size=(draws, len(risks))).astype(np.float64)
    return lines.fit(places.people[None], by_chance)


class _Lines:
    """The weight of each group at each place where a line is fitted, and where the groups lie between these."""

    def __init__(self, places: Places, span: float) -> None:
        at = places.predicted
        fitted = at[_choose(places)]
        self._away = at[None, :] - fitted[:, None]
        self._weights = _tricube(np.abs(self._away), places.people, span)
        self._below = np.clip(np.searchsorted(fitted, at, side="right") - 1, 0, len(fitted) - 2)
        self._part = (at - fitted[self._below]) / (fitted[self._below + 1] - fitted[self._below])

    def fit(self, counts: Array, events: Array) -> Array:
        """The curve of each draw at each group, from its people and events there, (D or 1, K) and (D, K)."""
        w, d = self._weights, self._away
        s0, s1, s2 = (_sum(counts, each) for each in (w, w * d, w * d * d))
        t0, t1 = (_sum(events, each) for each in (w, w * d))
        left = s0 * s2 - s1 * s1
        straight = left > _FLAT * s0 * s2
        line = (s2 * t0 - s1 * t1) / np.where(straight, left, 1.0)
        # where nobody near was drawn, the share of everybody
        share = (events.sum(axis=1) / counts.sum(axis=1))[:, None]
        level = np.where(s0 > 0.0, t0 / np.where(s0 > 0.0, s0, 1.0), share)
        fitted = np.where(straight, line, level)
        return fitted[:, self._below] * (1.0 - self._part) + fitted[:, self._below + 1] * self._part


def _choose(places: Places) -> NDArray[np.intp]:
    """The groups at which lines are fitted: all of a few, else half by even distances and half by numbers of people."""
    at = places.predicted
    if len(at) <= _FITTED:
        return np.arange(len(at))
    even = np.searchsorted(at, np.linspace(at[0], at[-1], _FITTED // 2))
    running = np.cumsum(places.people)
    equal = np.searchsorted(running, np.linspace(running[0], running[-1], _FITTED // 2))
    return np.unique(np.concatenate([even, equal]))


def _tricube(away: Array, people: Array, span: float) -> Array:
    """Weights that fall to nought at the farthest of the nearest `span` of the people, (places, K)."""
    order = np.argsort(away, axis=1, kind="stable")
    until = np.cumsum(people[order], axis=1)
    last = (until < int(span * people.sum())).sum(axis=1)
    reach = np.take_along_axis(away, order, 1)[np.arange(len(away)), last]
    return np.asarray(np.clip(1.0 - (away / reach[:, None]) ** 3, 0.0, None) ** 3, dtype=np.float64)


def _sum(values: Array, weights: Array) -> Array:
    """For each draw and place the weighted sum over groups; in one order of summing whatever the number of threads."""
    return np.asarray(np.einsum("dk,mk->dm", values, weights), dtype=np.float64)
