"""Whether chains from different beginnings have come together: the ratio of Gelman and Rubin.

Gelman & Rubin, Stat Sci 1992;7:457, as in Gelman & others, Bayesian Data Analysis, 3rd ed. 2013, 11.4, chains whole.
"""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def find_mixing(traces: Array) -> float:
    """The ratio for traces (chains, rounds), of which the later half of the rounds counts; 1 where they have mixed.

    With n rounds, W the mean variance within chains and B/n that of their means, sqrt((n - 1)/n + (B/n)/W). inf where
    fewer than two rounds count, or where chains stand still at different values.
    """
    kept = traces[:, traces.shape[1] // 2 :]
    rounds = kept.shape[1]
    if rounds < 2 or len(kept) < 2:
        return float("inf")
    within = float(kept.var(axis=1, ddof=1).mean())
    between = float(kept.mean(axis=1).var(ddof=1))
    if within == 0.0:
        return 1.0 if between == 0.0 else float("inf")
    return float(np.sqrt((rounds - 1) / rounds + between / within))
