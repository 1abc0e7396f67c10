"""The cumulative hazard of Nelson and Aalen that each person has been under while he was watched."""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def find_hazards(times: Array, events: NDArray[np.bool_], entry: Array | None = None) -> Array:
    """The sum of events by those at risk over (entry, time] of each person, (n,).

    Nelson, Technometrics 1972;14:945; Aalen, Ann Stat 1978;6:701. Somebody entering at a time is not at risk then.
    """
    at, count = np.unique(times[events], return_counts=True)
    ordered = np.sort(times)
    risk = len(times) - np.searchsorted(ordered, at, side="left")
    if entry is not None:
        risk = risk - (len(entry) - np.searchsorted(np.sort(entry), at, side="left"))
    summed = np.concatenate([[0.0], np.cumsum(count / risk)])
    reached = summed[np.searchsorted(at, times, side="right")]
    if entry is not None:
        reached = reached - summed[np.searchsorted(at, entry, side="right")]
    return np.asarray(reached, dtype=np.float64)
