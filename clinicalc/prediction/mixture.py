"""Limits of a linear predictor that is known only as a mixture: one normal part for each set of open answers."""

from collections.abc import Sequence
from dataclasses import dataclass
from statistics import NormalDist

import numpy as np

from clinicalc.covariates.transforms import Column

_HALVINGS = 80
"""At the most; it ends sooner, where no number lies between the two ends any more."""


@dataclass(frozen=True, slots=True)
class Part:
    """A normal part: its weight, mean and standard deviation (nought for a single value)."""

    weight: float
    mean: float
    sd: float


def mixture_limits(parts: Sequence[Part], level: float) -> tuple[float, float]:
    """The values below and above which (1 - level) / 2 of the mixture lies; for one part its mean -+ q sd."""
    tail = 0.5 - level / 2.0
    if len(parts) == 1:
        half = NormalDist().inv_cdf(1.0 - tail) * parts[0].sd
        return parts[0].mean - half, parts[0].mean + half
    return _quantile(parts, tail), _quantile(parts, 1.0 - tail)


def weighted_quantiles(values: Column, weights: Column, shares: Sequence[float]) -> Column:
    """Quantiles of weighted values, shape (len(shares),); with equal weights of type 7 (Hyndman & Fan 1996)."""
    order = np.argsort(values, kind="stable")
    heavy = weights[order] > 0.0
    ordered, own = values[order][heavy], weights[order][heavy] / weights.sum()
    # each value sits at the middle of its weight, the ends moved out to nought and one
    middle = np.cumsum(own) - own / 2.0
    span = middle[-1] - middle[0]
    if not span:
        return np.full(len(shares), ordered[0])
    return np.asarray(np.interp(shares, (middle - middle[0]) / span, ordered), dtype=np.float64)


def _quantile(parts: Sequence[Part], share: float) -> float:
    """By halving: the mixture's distribution function has no inverse in closed form."""
    far = NormalDist().inv_cdf(max(share, 1.0 - share)) + 1.0
    low = min(part.mean - far * part.sd for part in parts)
    high = max(part.mean + far * part.sd for part in parts)
    for _ in range(_HALVINGS):
        middle = (low + high) / 2.0
        if not low < middle < high:
            break
        if _below(parts, middle) < share:
            low = middle
        else:
            high = middle
    return high


def _below(parts: Sequence[Part], value: float) -> float:
    total = 0.0
    for part in parts:
        if part.sd > 0.0:
            total += part.weight * NormalDist(part.mean, part.sd).cdf(value)
        elif value >= part.mean:
            total += part.weight
    return total
