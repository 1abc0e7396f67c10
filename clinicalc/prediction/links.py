"""The two link scales, to a probability and back, and differences of probabilities, stable in both tails."""

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


def link_of(link: Link, share: Column, rest: Column) -> Column:
    """g^-1: the linear predictor of a probability `share`, given with its complement so that both tails keep theirs.

    Shape as given; nought goes to minus infinity and one to infinity.
    """
    with np.errstate(divide="ignore"):
        if link == "logit":
            return np.log(share) - np.log(rest)
        # -log(1 - p): from the smaller of the two, which is the one known precisely
        hazard = np.where(share < 0.5, -np.log1p(-np.minimum(share, 0.5)), -np.log(rest))
        return np.log(hazard)


def slope_at(link: Link, eta: Column) -> Column:
    """g'(eta), shape as given."""
    rest = complement(link, eta)
    if link == "logit":
        return probability(link, eta) * rest
    return np.exp(np.minimum(eta, _LARGEST)) * rest


def difference_between(link: Link, first: Column, second: Column) -> Column:
    """g(second) - g(first) without subtracting two numbers close to each other; shape as given."""
    low, apart = np.minimum(first, second), np.minimum(np.abs(second - first), _LARGEST)
    if link == "logit":
        size = probability(link, np.maximum(first, second)) * complement(link, low) * -np.expm1(-apart)
    else:
        hazard = np.exp(np.minimum(low, _LARGEST))
        # the product may overflow, and means then that nobody is left
        with np.errstate(over="ignore"):
            size = complement(link, low) * -np.expm1(-hazard * np.expm1(apart))
    return np.sign(second - first) * size
