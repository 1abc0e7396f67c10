"""Harrell's C among people who were drawn so often each, the same figure as `find_concordance` of the rows drawn.

Without its standard error, which no bootstrap asks for; people are put in order once for all samples.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.ranks import RankCounter

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
Places = NDArray[np.intp]


@dataclass(frozen=True, slots=True, eq=False)
class ComparedStratum:
    """The people of a stratum by time, events first; `deaths` are the places of the events in `rows`.

    `group` (n,) is the number of each one's time, and where the events of a time have a number of their own before it.
    """

    rows: Places
    dead: NDArray[np.bool_]
    group: Codes


def order_people(times: Array, events: Array, strata: Codes | None = None) -> tuple[ComparedStratum, ...]:
    """Ready to be compared, each stratum by itself."""
    codes = np.zeros(len(times), dtype=np.int64) if strata is None else strata
    found = []
    for code in np.unique(codes):
        rows = np.flatnonzero(codes == code)
        dead = events[rows] == 1
        order = np.lexsort((~dead, times[rows]))
        rows, dead = rows[order], dead[order]
        changes = (np.diff(times[rows]) > 0) | (dead[:-1] != dead[1:])
        found.append(ComparedStratum(rows, dead, np.append(0, np.cumsum(changes)).astype(np.int64)))
    return tuple(found)


def find_drawn_c(strata: tuple[ComparedStratum, ...], predictions: Array, counts: Array | None = None) -> float:
    """C of predictions (n,) that are higher for those with earlier events. Raises FitRefused where no pair compares."""
    concordant = tied = pairs = 0
    for stratum in strata:
        copies = None if counts is None else counts[stratum.rows].astype(np.int64)
        rows, dead, group = (
            values if copies is None else np.repeat(values, copies)
            for values in (stratum.rows, stratum.dead, stratum.group)
        )
        _, ranks = np.unique(predictions[rows], return_inverse=True)
        places = np.flatnonzero(dead)
        # an event is compared with everybody after the events of its own time
        begin = np.searchsorted(group, group[places], side="right")
        lower, same = RankCounter(ranks).count(begin, np.full(len(places), len(rows)), ranks[places])
        concordant += int(lower.sum())
        tied += int(same.sum())
        pairs += int((len(rows) - begin).sum())
    if not pairs:
        raise refuse_fit(FitFault.NOBODY_COMPARED)
    return (concordant + tied / 2) / pairs


def find_drawn_area(y: Array, predictions: Array, counts: Array) -> float:
    """The same for a binary outcome, the area under the ROC curve, by counting ranks."""
    _, ranks = np.unique(predictions, return_inverse=True)
    events = np.bincount(ranks, weights=counts * y)
    others = np.bincount(ranks, weights=counts * (1 - y))
    pairs = float(events.sum() * others.sum())
    if not pairs:
        raise refuse_fit(FitFault.NOBODY_COMPARED)
    below = np.append(0.0, np.cumsum(others)[:-1])
    return float(((events * below).sum() + (events * others).sum() / 2) / pairs)
