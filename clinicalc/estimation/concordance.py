"""Harrell's C with its infinitesimal-jackknife standard error.

Harrell et al., JAMA 1982;247:2543. A pair can be compared where the earlier time is an event (an event comes before a
censoring at the same time; two events at one time are not compared); it counts 1 where the earlier has the higher
prediction and 1/2 where the predictions are the same. With c_i the count and m_i the number of the pairs of person i,
N all pairs and C = sum c / 2N, se^2 = sum ((c_i - C m_i) / N)^2, as concordance() of R's survival has it. For a binary
outcome, times 1 - y and events y, it is the area under the ROC curve.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.clusters import sum_clusters
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.ranks import RankCounter, rank

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
Places = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class Concordance:
    """C and its standard error; the pairs that were compared: concordant, discordant, tied in the prediction."""

    c: float
    se: float
    concordant: int
    discordant: int
    tied: int


@dataclass(frozen=True, slots=True, eq=False)
class _PairCounts:
    """For each person the pairs he is in: concordant, discordant, tied."""

    concordant: Places
    discordant: Places
    tied: Places


def find_concordance(
    times: Array,
    events: Array,
    predictions: Array,
    *,
    strata: Codes | None = None,
    cluster: Codes | None = None,
    ranks: Places | None = None,
) -> Concordance:
    """C of predictions that are higher for those with earlier events; people of different strata are not compared.

    With `cluster` the standard error sums what each cluster adds. `ranks` are those of the predictions, where they have
    been found already. Times and predictions are compared exactly. Raises FitRefused where a value is not finite, or no
    two people can be compared.
    """
    if not (np.isfinite(times).all() and np.isfinite(predictions).all()):
        raise refuse_fit(FitFault.NOT_FINITE)
    codes = np.zeros(len(times), dtype=np.int64) if strata is None else strata
    ranks = rank(predictions) if ranks is None else ranks
    counts = np.zeros((3, len(times)), dtype=np.int64)
    order = np.argsort(codes, kind="stable")
    for rows in np.split(order, np.flatnonzero(np.diff(codes[order])) + 1):
        found = _count_pairs(times[rows], events[rows], ranks[rows])
        counts[:, rows] = found.concordant, found.discordant, found.tied
    concordant, discordant, tied = (int(each) // 2 for each in counts.sum(axis=1))
    pairs = concordant + discordant + tied
    if not pairs:
        raise refuse_fit(FitFault.NOBODY_COMPARED)
    c = (concordant + tied / 2) / pairs
    influence = (counts[0] + counts[2] / 2 - c * counts.sum(axis=0)) / pairs
    if cluster is not None:
        influence = sum_clusters(influence[:, None], cluster)[:, 0]
    return Concordance(c, float(np.sqrt((influence * influence).sum())), concordant, discordant, tied)


def _count_pairs(times: Array, events: Array, ranks: Places) -> _PairCounts:
    """The pairs of each person of one stratum, in the order given."""
    dead = events == 1
    order = np.lexsort((~dead, times))
    ranks, dead, times = ranks[order], dead[order], times[order]
    places = np.flatnonzero(dead)
    # as the earlier of a pair: an event against everybody after the events of its own time
    later = RankCounter(ranks)
    # the censored of the same time stand after its events, so this is where the compared begin
    begin = np.searchsorted(times, times[places], side="left") + _tied_events(times[places])
    lower, same = later.count(begin, np.full(len(places), len(times)), ranks[places])
    rows = np.zeros((3, len(times)), dtype=np.int64)
    rows[:, places] = lower, len(times) - begin - lower - same, same
    # as the later of a pair: everybody against the events before him, at his own time too where he is censored
    earlier = RankCounter(ranks[places])
    before = np.where(
        dead,
        np.searchsorted(times[places], times, side="left"),
        np.searchsorted(times[places], times, side="right"),
    )
    lower, same = earlier.count(np.zeros(len(times), dtype=np.int64), before, ranks)
    rows += np.array([before - lower - same, lower, same])
    found = np.empty_like(rows)
    found[:, order] = rows
    return _PairCounts(found[0], found[1], found[2])


def _tied_events(times: Array) -> Places:
    """How many events there are at the time of each event; `times` in order."""
    _, places, counts = np.unique(times, return_inverse=True, return_counts=True)
    return np.asarray(counts[places], dtype=np.int64)
