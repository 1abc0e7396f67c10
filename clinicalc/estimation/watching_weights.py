"""How much somebody stands for whose outcome by a horizon is known, for those like him who were lost before.

With G the Kaplan-Meier estimate of still being watched, whoever had any event by the horizon weighs 1 / G just before
it, whoever was watched to the horizon without one 1 / G just before the horizon, all others nothing (Graf, Schmoor,
Sauerbrei & Schumacher, Stat Med 1999;18:2529). An event comes before the end of watching at the same time, so someone
who leaves at the horizon itself is known not to have had it by then. Graf et al. weigh only who stayed beyond, by G at
the horizon: the same where nobody leaves at it, and nobody at all where a follow-up was cut off there. What each person
does to G, and through it to a sum of weighted terms, is the derivative by his weight (infinitesimal jackknife), so that
limits count G as estimated.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.ranks import part_values

Array = NDArray[np.float64]
Places = NDArray[np.intp]


@dataclass(frozen=True, slots=True, eq=False)
class Watching:
    """G of n people: at each of the K times `when` at which watching ended, how many were left and how many ended.

    `until` (n,) counts the steps in which each person could have been lost; `own` is the step of each of `lost`.
    """

    when: Array
    at_risk: Array
    ended: Array
    until: Places
    lost: Places
    own: Places

    def before(self, at: Array) -> Array:
        """G just before each of the times `at`, same shape."""
        running = np.append(1.0, np.cumprod(1.0 - self.ended / self.at_risk))
        return np.asarray(running[np.searchsorted(self.when, at, side="left")], dtype=np.float64)

    def spread(self, at: Array, moves: Array) -> Array:
        """For each person the sum of `moves` times the derivative of log G just before `at` by his weight, (n,)."""
        steps = len(self.when)
        later = np.bincount(np.searchsorted(self.when, at, side="left"), weights=moves, minlength=steps + 1)
        # whoever is judged after a step moves with it; after a step that leaves nobody there is nobody
        rest = np.cumsum(later[::-1])[::-1][1:]
        stay = self.at_risk - self.ended
        each = np.where(stay > 0, rest / np.where(stay > 0, stay, 1.0), 0.0)
        gained = np.append(0.0, np.cumsum(each * self.ended / self.at_risk))[self.until]
        gained[self.lost] -= each[self.own]
        return np.asarray(gained, dtype=np.float64)


def find_watching(times: Array, status: Array) -> Watching:
    """G of people watched from time nought; status 0 is the end of watching."""
    censored = status == 0
    lost = np.flatnonzero(censored)
    when, own = part_values(times[lost])
    ended = np.bincount(own, minlength=len(when))
    # those with an event at the same time are gone already
    events = np.sort(times[~censored])
    censorings = np.append(0, np.cumsum(ended))
    at_risk = len(lost) - censorings[:-1] + len(events) - np.searchsorted(events, when, side="right")
    until = np.searchsorted(when, times, side="left")
    until[lost] = own + 1
    return Watching(when, at_risk.astype(np.float64), ended.astype(np.float64), until, lost, own)


@dataclass(frozen=True, slots=True, eq=False)
class Known:
    """By a horizon who had the event (1 or 0), and what each weighs, (n,); for times also when he is judged, and G."""

    happened: Array
    weights: Array
    at: Array | None = None
    watching: Watching | None = None

    def influence(self, terms: Array) -> Array:
        """What each person's weight does to the sum of `terms`, each in proportion to a person's weight, (n,)."""
        if self.watching is None or self.at is None:
            return terms
        return terms - self.watching.spread(self.at, terms)


def know_risks(y: Array) -> Known:
    """People whose outcome, 1 or 0, is known of everybody."""
    return Known(y, np.ones(len(y)))


def know_times(times: Array, status: Array, horizon: float, watching: Watching | None = None) -> Known:
    """People watched from time nought; status 2 is another event, after which the event does not come."""
    watching = find_watching(times, status) if watching is None else watching
    ended = (status != 0) & (times <= horizon)
    at = np.where(ended, times, horizon)
    known = ended | (times >= horizon)
    left = watching.before(at)
    weights = np.where(known, 1.0 / np.where(known, left, 1.0), 0.0)
    return Known((ended & (status == 1)).astype(np.float64), weights, at, watching)
