"""The two link scales and their way back to a probability, stable in both tails."""

from typing import Literal

import numpy as np

from clinicalc.covariates.transforms import Column

Link = Literal["logit", "cloglog"]

# exp overflows above 709; a linear predictor beyond this is a probability of 0 or 1 to the last bit all the same
_LARGEST = 700.0


def probability(link: Link, eta: Column) -> Column:
    """g(eta): expit for logit, 1 - exp(-exp(eta)) for cloglog; shape as eta, relative accuracy kept near 0."""
    if link == "logit":
        return 1.0 / (1.0 + np.exp(np.minimum(-eta, _LARGEST)))
    return -np.expm1(-np.exp(np.minimum(eta, _LARGEST)))


def complement(link: Link, eta: Column) -> Column:
    """1 - g(eta), computed without subtracting from 1, so that it keeps its relative accuracy near 0."""
    if link == "logit":
        return 1.0 / (1.0 + np.exp(np.minimum(eta, _LARGEST)))
    return np.exp(-np.exp(np.minimum(eta, _LARGEST)))
