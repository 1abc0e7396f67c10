"""The difference of two probabilities whose linear predictors move together: a function of one normal."""

from dataclasses import dataclass
from itertools import pairwise
from math import pi, sqrt
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.links import Link, difference_between, slope_at

FARTHEST = 8.5
"""Standard deviations: beyond them lies less than 1e-16 of a normal."""
_CELLS = 340
"""Twenty to a standard deviation: turns of D are looked for between their ends."""
_HALVINGS = 60

_NORMAL = NormalDist()


@dataclass(slots=True)
class TiedDifference:
    """D(z) = g(second + second_sd z) - g(first + first_sd z), z standard normal; `first_sd` is not negative.

    D may turn, as a shift of a logit does on its way through one half; between its turns it is monotone. `_nodes`
    hold every turn, so that D crosses a height at most once between two of them.
    """

    link: Link
    first: float
    second: float
    first_sd: float
    second_sd: float
    _nodes: Column
    _turns: bool

    def __init__(self, link: Link, first: float, second: float, first_sd: float, second_sd: float) -> None:
        self.link, self.first, self.second = link, first, second
        self.first_sd, self.second_sd = first_sd, second_sd
        grid = np.linspace(-FARTHEST, FARTHEST, _CELLS + 1)
        rising = self._rate(grid) > 0.0
        cells = np.flatnonzero(rising[1:] != rising[:-1])
        self._nodes = np.sort(np.concatenate([grid, self._find_turns(grid[cells], grid[cells + 1])]))
        self._turns = bool(cells.size)

    def quantile_if_monotone(self, share: float) -> float | None:
        """The quantile straight from that of the normal; None where D turns."""
        if self._turns:
            return None
        rising = self._rate(np.zeros(1))[0] > 0.0
        z = _NORMAL.inv_cdf(share if rising else 1.0 - share)
        return float(self._values(np.array([z]))[0])

    def guess(self, share: float) -> float:
        """Roughly the quantile: that of the nodes, each with the normal's share around it."""
        values = self._values(self._nodes)
        order = np.argsort(values, kind="stable")
        shares = (np.exp(-0.5 * self._nodes * self._nodes) * np.gradient(self._nodes))[order]
        reached = np.cumsum(shares) - 0.5 * shares
        return float(np.interp(share, reached / shares.sum(), values[order]))

    def distribution(self, difference: float) -> tuple[float, float]:
        """P(D <= difference) and its derivative."""
        under = self._values(self._nodes) <= difference
        cells = np.flatnonzero(under[1:] != under[:-1])
        crossings = self._find_crossings(difference, cells)
        ends = [-np.inf, *crossings.tolist(), np.inf]
        is_under, below = bool(under[0]), 0.0
        for low, high in pairwise(ends):
            if is_under:
                below += _share_between(low, high)
            is_under = not is_under
        rates = np.maximum(np.abs(self._rate(crossings)), 1e-300)
        density = float((np.exp(-0.5 * crossings * crossings) / rates).sum()) / sqrt(2.0 * pi)
        return below, density

    def _values(self, z: Column) -> Column:
        return difference_between(self.link, self.first + self.first_sd * z, self.second + self.second_sd * z)

    def _rate(self, z: Column) -> Column:
        """D'(z), shape as given."""
        with_second = self.second_sd * slope_at(self.link, self.second + self.second_sd * z)
        return with_second - self.first_sd * slope_at(self.link, self.first + self.first_sd * z)

    def _find_turns(self, lows: Column, highs: Column) -> Column:
        """Where D' changes its sign, once in each of the intervals, by halving."""
        rising = self._rate(lows) > 0.0
        for _ in range(_HALVINGS if lows.size else 0):
            middles = 0.5 * (lows + highs)
            same = (self._rate(middles) > 0.0) == rising
            lows, highs = np.where(same, middles, lows), np.where(same, highs, middles)
        return 0.5 * (lows + highs)

    def _find_crossings(self, difference: float, cells: NDArray[np.intp]) -> Column:
        """Where D meets the height, once in each of the cells: Newton, halving where a step leaves the cell."""
        lows, highs = self._nodes[cells], self._nodes[cells + 1]
        under = self._values(lows) <= difference
        at = 0.5 * (lows + highs)
        for _ in range(_HALVINGS if cells.size else 0):
            apart = self._values(at) - difference
            same = (apart <= 0.0) == under
            lows, highs = np.where(same, at, lows), np.where(same, highs, at)
            rate = self._rate(at)
            step = np.divide(apart, rate, out=np.full_like(apart, np.inf), where=rate != 0.0)
            following = at - step
            following = np.where((following > lows) & (following < highs), following, 0.5 * (lows + highs))
            settled = np.abs(following - at) <= 1e-15 * (1.0 + np.abs(at))
            at = following
            if settled.all():
                break
        return at


def _share_between(low: float, high: float) -> float:
    """The normal's share between two ends, taken in the tail in which both keep their precision."""
    if low > 0.0:
        low, high = -high, -low
    return _NORMAL.cdf(high) - _NORMAL.cdf(low)
