"""Estimates from several imputed sets made one: Rubin's rules, with the degrees of freedom of Barnard and Rubin.

Rubin, Multiple Imputation for Nonresponse in Surveys, 1987, ch. 3; Barnard & Rubin, Biometrika 1999;86:948-955.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Pooled:
    """p estimates over m sets, and their covariances (p, p): total = within + (1 + 1/m) between.

    For each estimate, (p,): `degrees` of freedom of its t, `missing_information` as a share with the allowance for few
    sets, `increase`, by which share the missing values raise its variance.
    """

    sets: int
    estimates: Array
    within: Array
    between: Array
    total: Array
    degrees: Array
    missing_information: Array
    increase: Array

    @property
    def se(self) -> Array:
        """Standard errors, (p,)."""
        return np.asarray(np.sqrt(np.diag(self.total)), dtype=np.float64)


def pool(estimates: Array, covariances: Array, complete_degrees: float) -> Pooled:
    """Pools estimates (m, p) with covariances (m, p, p), m at least 2.

    `complete_degrees` are those that the estimates would have if nothing were missing, inf where they are normal. With
    U the mean covariance, B that between the sets (m - 1), T = U + (1 + 1/m) B; for each estimate r = (1 + 1/m) B/U and
    l = (1 + 1/m) B/T, df_old = (m - 1)/l^2, df_obs = (v + 1)/(v + 3) v (1 - l), df = df_old df_obs/(df_old + df_obs),
    missing information (r + 2/(df + 3))/(1 + r). An estimate that is the same in all sets has df_obs. Every entry is
    made of its own entries alone, so that a part is pooled to the same bits as the whole.
    """
    sets = len(estimates)
    mean = estimates.mean(axis=0)
    away = estimates - mean
    between = (away[:, :, None] * away[:, None, :]).sum(axis=0) / (sets - 1)
    within = covariances.mean(axis=0)
    more = 1.0 + 1.0 / sets
    total = within + more * between
    share = more * np.diag(between) / np.diag(total)
    increase = more * np.diag(between) / np.diag(within)
    degrees = _degrees(share, sets, complete_degrees)
    missing = (increase + 2.0 / (degrees + 3.0)) / (1.0 + increase)
    return Pooled(sets, mean, within, between, total, degrees, missing, increase)


def _degrees(share: Array, sets: int, complete: float) -> Array:
    with np.errstate(divide="ignore"):
        old = (sets - 1) / (share * share)
    if np.isinf(complete):
        return np.asarray(old, dtype=np.float64)
    observed = (complete + 1.0) / (complete + 3.0) * complete * (1.0 - share)
    # the same as old observed / (old + observed), which has no value where old is infinite
    return np.asarray(observed / (1.0 + observed / old), dtype=np.float64)
