"""The Brier score at a time by which some were lost from sight, each of the others standing for those like him.

Graf, Schmoor, Sauerbrei & Schumacher, Stat Med 1999;18:2529: with G the Kaplan-Meier estimate of being watched, who had
any event by the time weighs 1 / G just before it, who was watched for longer 1 / G at the time, all others nothing. An
event comes before the end of watching at the same time.
"""

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.subdistribution import CensoringTies, CompetingCohort, stay_uncensored

Array = NDArray[np.float64]


def weigh_watched(times: Array, status: Array, horizon: float, counts: Array) -> Array:
    """The weight of each person (n,) who was drawn so often, his count included; status 0 is the end of watching."""
    drawn = CompetingCohort(times, status, np.empty((len(times), 0)), counts)
    ended = (status != 0) & (times <= horizon)
    at = np.where(ended, times, np.nextafter(horizon, np.inf))
    left = stay_uncensored(drawn, at, CensoringTies.EVENT_FIRST)
    known = (ended | (times > horizon)) & (counts > 0)
    return np.where(known, counts / np.where(known, left, 1.0), 0.0)


def find_brier(weights: Array, happened: Array, risks: Array, people: float) -> float:
    """The mean over all people of weight times squared error; `happened` is 1 for the event by the time."""
    errors = happened - risks
    return float((weights * errors * errors).sum() / people)
