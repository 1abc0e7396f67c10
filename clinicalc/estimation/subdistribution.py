"""Who counts at each event time of a subdistribution: those still at risk, and those whom another event came to before.

Fine & Gray, J Am Stat Assoc 1999;94:496: whoever had a competing event at T stays, at a later time s with the weight
G(s-) / G(T-), the chance not to have been censored in between; G is the Kaplan-Meier estimate of being uncensored.
Since the weight is a product of what belongs to s and what belongs to the person, sums over those at risk are a running
sum from the end and one from the beginning, and no row is split (Geskus, Biometrics 2011;67:39 splits them).
"""

from dataclasses import dataclass, fields, replace
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.people_at_risk import Cohort, Places, RiskSets, Ties, find_risk_sets
from clinicalc.estimation.ranks import part_values

Array = NDArray[np.float64]


class CensoringTies(StrEnum):
    """Who is at risk of being censored at a time at which others have an event.

    EVENT_FIRST: those with any event at that time no longer are, as in R's survival::finegray. TOGETHER: they still
    are, as in R's cmprsk::crr. Coefficients differ in their fourth digit where times are whole months.
    """

    EVENT_FIRST = "event_first"
    TOGETHER = "together"


@dataclass(frozen=True, slots=True, eq=False)
class CompetingCohort:
    """People, all watched from time nought: times, status 0 censored, 1 the event, 2 a competing event, x (n, p).

    `weights` are of cases: a weight of 2 is two such people, in G too (R's finegray makes G without them). `offset` is
    a part of the linear predictor that is not estimated. Times are compared exactly: round them before, where they come
    from sums.
    """

    times: Array
    status: Array
    x: Array
    weights: Array | None = None
    offset: Array | None = None

    @property
    def as_cohort(self) -> Cohort:
        """The same people with competing events as the end of watching."""
        return Cohort(self.times, (self.status == 1).astype(np.float64), self.x, None, self.weights, self.offset)

    @property
    def as_waiting(self) -> Cohort:
        """The same people as if whoever had a competing event were watched longer than anybody, and had no event.

        So C compares them: Wolbers, Koller, Witteman, Steyerberg, Epidemiology 2009;20:555-561.
        """
        times = np.where(self.status == 2, self.times.max() + 1.0, self.times)
        return replace(self.as_cohort, times=times)


@dataclass(frozen=True, slots=True, eq=False)
class SubdistributionSets(RiskSets):
    """Risk sets in which people with a competing event stay: `still` is G(s-) at each event time, (K,).

    `waiting` are the rows with a competing event, by time, `lent` their 1 / G(T-), `joined` how many of them had it
    before each event time.
    """

    still: Array
    waiting: Places
    lent: Array
    joined: Places

    def sum_at_risk(self, values: Array) -> Array:
        """For each event time the weighted sum of `values` (n,) over those who count, shape (K,)."""
        before = np.append(0.0, np.cumsum(values[self.waiting] * self.lent))
        return np.asarray(RiskSets.sum_at_risk(self, values) + self.still * before[self.joined], dtype=np.float64)

    def spread_steps(self, values: Array) -> Array:
        """For each person the weighted sum of `values` (M,) over the steps in which he counts, shape (n,)."""
        gathered = RiskSets.spread_steps(self, values)
        # added up from the end: what is still to come at each event time
        rest = np.append(np.cumsum((self.still * self.sum_steps(values))[::-1])[::-1], 0.0)
        gathered[self.waiting] += self.lent * rest[self.until[self.waiting]]
        return gathered


def find_subdistribution_sets(cohort: CompetingCohort, ties: Ties, censoring: CensoringTies) -> SubdistributionSets:
    """The sets of some people, from their times, status and weights; x is not looked at."""
    sets = find_risk_sets(cohort.as_cohort, ties)
    order = np.argsort(cohort.times, kind="stable")
    waiting = order[cohort.status[order] == 2]
    since = cohort.times[waiting]
    still, held = np.split(stay_uncensored(cohort, np.concatenate([sets.when, since]), censoring), [len(sets.when)])
    return SubdistributionSets(
        **{field.name: getattr(sets, field.name) for field in fields(RiskSets)},
        still=still,
        waiting=waiting,
        lent=1.0 / held,
        joined=np.searchsorted(since, sets.when, side="left"),
    )


def stay_uncensored(cohort: CompetingCohort, at: Array, ties: CensoringTies) -> Array:
    """G just before each of the times `at`: Kaplan-Meier with the end of watching as the event, same shape."""
    weights = np.ones(len(cohort.times)) if cohort.weights is None else cohort.weights
    when, place = part_values(cohort.times)
    ended = np.bincount(place, weights=weights * (cohort.status == 0), minlength=len(when))
    events = np.bincount(place, weights=weights * (cohort.status != 0), minlength=len(when))
    left = np.cumsum((ended + events)[::-1])[::-1]
    if ties is CensoringTies.EVENT_FIRST:
        # the running sum, not left - events: nobody left is then exactly 0
        left = ended + np.append(left[1:], 0.0)
    censored = ended > 0
    kept = np.where(censored, 1.0 - ended / np.where(censored, left, 1.0), 1.0)
    running = np.append(1.0, np.cumprod(kept))
    return running[np.searchsorted(when, at, side="left")]
