"""The sums of rows by cluster, as robust covariances take them."""

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.faults import FitFault, refuse_fit

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


def sum_clusters(rows: Array, cluster: Codes) -> Array:
    """The sum of the rows (n, p) of each cluster, (G, p), by code; refuses fewer than two clusters."""
    codes, places = np.unique(cluster, return_inverse=True)
    if len(codes) < 2:
        raise refuse_fit(FitFault.TOO_FEW_CLUSTERS)
    sums = np.empty((len(codes), rows.shape[1]))
    for column in range(rows.shape[1]):
        sums[:, column] = np.bincount(places, weights=rows[:, column], minlength=len(codes))
    return sums


def make_sandwich(bread: Array, rows: Array) -> Array:
    """bread (rows' rows) bread, with mirrored entries the same, (p, p)."""
    half = rows @ bread
    filled = half.T @ half
    return np.asarray((filled + filled.T) / 2, dtype=np.float64)
