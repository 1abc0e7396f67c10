"""Who is at risk at each event time of a sample of people, from one sorting of the people it was drawn from.

Whoever was drawn so often counts so often, and the deaths of those drawn often are tied, as they are among the rows
drawn: of d deaths at one time the l-th counts against those at risk less l/d of the deaths (Efron), d with copies.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.people_at_risk import Cohort, Ties

Array = NDArray[np.float64]
Places = NDArray[np.intp]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class SortedStratum:
    """The people of one stratum from the last time to the first; K event times, also from the last.

    `rows` are their places in the cohort, `ends` how many have a time at or after each event time, `until` the place
    of the first event time at or before a person's own (K where there is none), `own` that of each of the `dead`.
    """

    rows: Places
    ends: Places
    until: Places
    dead: Places
    own: Places
    when: Array


@dataclass(frozen=True, slots=True, eq=False)
class DrawnStratum:
    """Those of a stratum who were drawn: `rows` in the cohort, `counts`, and the steps of their deaths.

    `place` is a step's event time, `share` the part of the deaths left out of it, `mass` its weight; `starts` are where
    the dead of an event time begin in `dead`, `counted` is how many events each person stands for.
    """

    rows: Places
    counts: Array
    counted: Array
    ends: Places
    until: Places
    dead: Places
    own: Places
    starts: Places
    place: Places
    share: Array
    mass: Array
    when: Array

    def sum_at_risk(self, values: Array) -> Array:
        """Sums of values (..., n) over those at risk at each event time, (..., K)."""
        return np.asarray(np.cumsum(values, axis=-1)[..., self.ends - 1], dtype=np.float64)

    def sum_left(self, values: Array) -> Array:
        """Sums of values (..., n) over those at risk less the share of the deaths, for each step, (..., M)."""
        left = self.sum_at_risk(values)[..., self.place]
        if not self.share.any():
            return left
        deaths = np.add.reduceat(values[..., self.dead], self.starts, axis=-1)
        return np.asarray(left - self.share * deaths[..., self.place], dtype=np.float64)

    def sum_steps(self, values: Array) -> Array:
        """Sums of values (M,) over the steps of each event time, (K,)."""
        return np.bincount(self.place, weights=values, minlength=len(self.when)).astype(np.float64, copy=False)

    def run(self, values: Array) -> Array:
        """For each person the sum of values (K,) over the event times up to his own, (n,)."""
        return np.append(np.cumsum(values[::-1])[::-1], 0.0)[self.until]


def sort_strata(cohort: Cohort, strata: Codes | None) -> tuple[SortedStratum, ...]:
    """The strata of people who were all watched from time nought, in the order of their codes."""
    codes = np.zeros(len(cohort.times), dtype=np.int64) if strata is None else strata
    return tuple(_sort(cohort, np.flatnonzero(codes == code)) for code in np.unique(codes))


def draw_stratum(stratum: SortedStratum, cohort: Cohort, counts: Array, ties: Ties) -> DrawnStratum | None:
    """Those drawn, of counts (people of the cohort,); None where they have no event."""
    own_counts = counts[stratum.rows]
    kept = own_counts > 0
    number = np.cumsum(kept)
    still = kept[stratum.dead]
    dead, places = stratum.dead[still], stratum.own[still]
    if not len(dead):
        return None
    deaths = np.bincount(places, weights=own_counts[dead], minlength=len(stratum.when))
    there = deaths > 0
    # the event times that are left take new places; somebody's first is the first of those left
    renumbered = np.append(0, np.cumsum(there))
    own, deaths = renumbered[places], deaths[there].astype(np.int64)
    rows = stratum.rows[kept]
    place: Places = np.arange(len(deaths))
    share, mass = np.zeros(len(deaths)), deaths.astype(np.float64)
    if ties is Ties.EFRON:
        place = np.repeat(place, deaths)
        starts = np.cumsum(deaths) - deaths
        share, mass = (np.arange(len(place)) - starts[place]) / deaths[place], np.ones(len(place))
    drawn = own_counts[kept]
    return DrawnStratum(
        rows=rows,
        counts=drawn,
        counted=drawn * cohort.events[rows],
        ends=np.asarray(number[stratum.ends[there] - 1], dtype=np.intp),
        until=renumbered[stratum.until[kept]],
        dead=number[dead] - 1,
        own=own,
        starts=np.flatnonzero(np.append(1, np.diff(own))),
        place=place,
        share=share,
        mass=mass,
        when=stratum.when[there],
    )


def _sort(cohort: Cohort, people: Places) -> SortedStratum:
    rows = people[np.argsort(-cohort.times[people], kind="stable")]
    times = cohort.times[rows]
    dead = np.flatnonzero(cohort.events[rows] == 1)
    back, own = np.unique(-times[dead], return_inverse=True)
    return SortedStratum(
        rows=rows,
        ends=np.searchsorted(-times, back, side="right"),
        until=np.searchsorted(back, -times, side="left"),
        dead=dead,
        own=own,
        when=-back,
    )
