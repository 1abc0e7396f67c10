"""Averages over a normal variable against adaptive quadrature (scipy.integrate.quad) and closed forms."""

from collections.abc import Callable
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.stats import norm

from clinicalc.prediction.line import Array
from clinicalc.prediction.links import Link, probability
from clinicalc.prediction.quadrature import POINTS, hermite_rule, normal_points

NONE = np.empty((1, 0))


def adaptive(function: Callable[[Array], Array], at: list[float]) -> float:
    """The average by quad, with the places given at which it must divide."""
    ends = sorted({-12.0, *at, 12.0})
    return sum(
        float(quad(lambda z: float(function(np.array([z]))[0] * norm.pdf(z)), low, high, epsabs=1e-14, limit=200)[0])
        for low, high in pairwise(ends)
    )


def ours(function: Callable[[Array], Array], bends: Array = NONE, variables: int = 1) -> float:
    z, weights = normal_points(bends, variables)
    return float((weights[0] * function(z[0])).sum())


@pytest.mark.parametrize("points", POINTS)
def test_hermite_rule_has_the_moments_of_the_normal(points: int) -> None:
    z, weights = hermite_rule(points)
    moments = [float((weights * z**k).sum()) for k in range(9)]
    # 1, 0, 1, 0, 3, 0, 15, 0, 105: the double factorials of odd numbers
    assert moments == pytest.approx([1, 0, 1, 0, 3, 0, 15, 0, 105], abs=1e-9)


@pytest.mark.parametrize("link", ["logit", "cloglog"])
@pytest.mark.parametrize("mean", [-6.0, -2.0, 0.0, 1.0])
@pytest.mark.parametrize(("sd", "close"), [(0.3, 1e-13), (0.93, 1e-12), (1.5, 5e-8)])
def test_probability_averaged_over_a_normal_predictor(link: Link, mean: float, sd: float, close: float) -> None:
    def risk(z: Array) -> Array:
        return probability(link, mean + sd * z)

    assert ours(risk) == pytest.approx(adaptive(risk, [0.0]), rel=close)


def test_a_jump_is_taken_exactly() -> None:
    """Above 0.4 SD a term counts: the average of a step is the normal tail."""

    def step(z: Array) -> Array:
        return np.asarray(z > 0.4, dtype=np.float64)

    assert ours(step, np.array([[0.4]])) == pytest.approx(float(norm.sf(0.4)), abs=1e-13)
    # points that do not know of it would be some per cent off
    assert abs(ours(step) - float(norm.sf(0.4))) > 0.001


@pytest.mark.parametrize("variables", [1, 2])
def test_bends_and_jumps_of_a_risk(variables: int) -> None:
    def risk(z: Array) -> Array:
        return probability("logit", -2.0 + 0.5 * np.maximum(z, -0.7) + 0.8 * (z > 0.3) - 0.3 * np.minimum(z - 1.1, 0.0))

    bends = np.array([[0.3, np.nan, -0.7, 1.1, 40.0]])
    assert ours(risk, bends, variables) == pytest.approx(adaptive(risk, [-0.7, 0.3, 1.1]), abs=2e-11)


def test_each_row_has_its_own_places() -> None:
    ends = np.array([[-1.0], [0.0], [2.5]])
    z, weights = normal_points(ends)
    assert weights.sum(axis=1) == pytest.approx([1.0] * 3, abs=1e-14)
    shares = (weights * (z < ends)).sum(axis=1)
    assert shares == pytest.approx(norm.cdf(ends[:, 0]), abs=1e-13)
