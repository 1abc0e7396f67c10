"""Uno's C at a horizon: Harrell's, with each event weighed for those whom the end of watching hid.

Uno, Cai, Pencina, D'Agostino & Wei, Stat Med 2011;30:1105: a pair whose earlier time T is an event by the horizon
weighs 1 / G(T-)^2, G being the chance of still being watched. Where other events come first, whoever had one at S stays
without the event, and his pair with a later event at T weighs 1 / (G(S-) G(T-)) (Wolbers, Blanche, Koller, Witteman &
Gerds, Biostatistics 2014;15:526). An event comes before the end of watching at the same time; two events at one time
are not compared.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.ranks import RankCounter, rank
from clinicalc.estimation.watching_weights import Watching, find_watching
from clinicalc.estimation.weighed_ranks import WeighedRanks

Array = NDArray[np.float64]
Places = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class UnoConcordance:
    """C; its standard error with G as estimated, and that with G as known (as concordance() of R's survival has it)."""

    c: float
    se: float
    se_known: float


@dataclass(frozen=True, slots=True, eq=False)
class _Roles:
    """Concordant weight and all weight of each person's pairs, (2, n): as the earlier, as the later of them."""

    earlier: Array
    later: Array


def find_uno(
    times: Array,
    status: Array,
    predictions: Array,
    horizon: float,
    watching: Watching | None = None,
    ranks: Places | None = None,
) -> UnoConcordance | None:
    """C of predictions that are higher for those with earlier events; None where no two people can be compared.

    Shapes (n,); status 0 is the end of watching, 1 the event, 2 another event. `ranks` are those of the
    predictions (`rank`), and `watching` G, where they have been found already.
    """
    watching = find_watching(times, status) if watching is None else watching
    dead = (status == 1) & (times <= horizon)
    # whoever was left after the last event weighs nothing, and G may be 0
    lent = 1.0 / np.where(status != 0, watching.before(times), 1.0)
    ranks = rank(predictions) if ranks is None else ranks
    order = np.lexsort((~dead, times))
    rows = times[order], dead[order], ranks[order], lent[order]
    pairs, others = _pair_watched(*rows), _pair_others(*rows, (status == 2)[order])
    early, late = pairs.earlier + others.earlier, pairs.later + others.later
    concordant, whole = early.sum(axis=1).tolist()
    if not whole:
        return None
    c = concordant / whole
    moved = np.empty(len(times))
    moved[order] = (early[0] + late[0] - c * (early[1] + late[1])) / whole
    # the derivative by log G, at the event twice where his partner was watched, else once for each of the two
    by_weight = np.empty(len(times))
    once = others.earlier + others.later
    by_weight[order] = -(2.0 * (pairs.earlier[0] - c * pairs.earlier[1]) + once[0] - c * once[1]) / whole
    full = moved + watching.spread(times, by_weight)
    return UnoConcordance(c, float(np.sqrt((full * full).sum())), float(np.sqrt((moved * moved).sum())))


def _pair_watched(times: Array, dead: NDArray[np.bool_], ranks: Places, lent: Array) -> _Roles:
    """Pairs of an event with somebody watched for longer, people in the order of time, events first."""
    people, places = len(times), np.flatnonzero(dead)
    when, weights = times[places], lent[places] * lent[places]
    begin = np.searchsorted(times, when, side="left")
    begin += np.searchsorted(when, when, side="right") - np.searchsorted(when, when, side="left")
    lower, same = RankCounter(ranks).count(begin, np.full(len(places), people), ranks[places])
    earlier, later = np.zeros((2, people)), np.zeros((2, people))
    earlier[:, places] = weights * (lower + 0.5 * same), weights * (people - begin)
    before = np.where(
        dead, np.searchsorted(when, times, side="left"), np.searchsorted(when, times, side="right")
    ).astype(np.int64)
    counter = WeighedRanks(ranks[places], weights, int(ranks.max()))
    below, level = counter.sum_first(before, ranks)
    later[1] = np.append(0.0, np.cumsum(weights))[before]
    later[0] = later[1] - below - 0.5 * level
    return _Roles(earlier, later)


def _pair_others(times: Array, dead: NDArray[np.bool_], ranks: Places, lent: Array, other: NDArray[np.bool_]) -> _Roles:
    """Pairs of an event with somebody who had another event before it."""
    earlier, later = np.zeros((2, len(times))), np.zeros((2, len(times)))
    rows, places = np.flatnonzero(other), np.flatnonzero(dead)
    if not (len(rows) and len(places)):
        return _Roles(earlier, later)
    highest = int(ranks.max())
    before = np.searchsorted(times[rows], times[places], side="left")
    below, level = WeighedRanks(ranks[rows], lent[rows], highest).sum_first(before, ranks[places])
    whole = np.append(0.0, np.cumsum(lent[rows]))[before]
    earlier[:, places] = lent[places] * (below + 0.5 * level), lent[places] * whole
    # events after each: all but those up to his time
    until = np.searchsorted(times[places], times[rows], side="right")
    first, first_level = WeighedRanks(ranks[places], lent[places], highest).sum_first(until, ranks[rows])
    each = np.bincount(ranks[places], weights=lent[places], minlength=highest + 1)
    below = (np.cumsum(each) - each)[ranks[rows]] - first
    level = each[ranks[rows]] - first_level
    running = np.append(0.0, np.cumsum(lent[places]))
    whole = running[-1] - running[until]
    later[:, rows] = lent[rows] * (whole - below - 0.5 * level), lent[rows] * whole
    return _Roles(earlier, later)
