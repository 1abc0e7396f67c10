"""Limits of a share from a count of people: Wilson, J Am Stat Assoc 1927;22:209-212, without continuity correction."""

from math import sqrt
from statistics import NormalDist


def wilson_limits(events: int, people: int, level: float = 0.95) -> tuple[float, float]:
    """Lower and upper limit of the share events / people; `people` is above 0."""
    z = NormalDist().inv_cdf(0.5 + level / 2.0)
    share, square = events / people, z * z
    centre = (share + square / (2.0 * people)) / (1.0 + square / people)
    spread = share * (1.0 - share) / people + square / (4.0 * people * people)
    half = z / (1.0 + square / people) * sqrt(spread)
    # centre and half width are equal there but for their last bits
    lower = 0.0 if events == 0 else max(0.0, centre - half)
    return lower, 1.0 if events == people else min(1.0, centre + half)
