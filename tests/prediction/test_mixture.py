"""Limits of mixtures: against one normal, against scipy's root of the distribution function, and numpy's quantiles."""

import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.stats import norm

from clinicalc.prediction.mixture import Part, mixture_limits, weighted_quantiles

PARTS = (Part(0.6, -2.5, 0.2), Part(0.3, -1.4, 0.35), Part(0.1, 0.4, 0.1))


def test_one_part_has_the_limits_of_its_normal() -> None:
    assert mixture_limits([Part(1.0, -2.0, 0.5)], 0.95) == pytest.approx(norm.interval(0.95, -2.0, 0.5), abs=1e-14)


@pytest.mark.parametrize("level", [0.5, 0.9, 0.95, 0.999])
def test_limits_are_quantiles_of_the_mixture(level: float) -> None:
    def below(x: float) -> float:
        return float(sum(part.weight * norm.cdf(x, part.mean, part.sd) for part in PARTS))

    wanted = [brentq(lambda x, p=p: below(x) - p, -9, 9, xtol=1e-13) for p in (0.5 - level / 2, 0.5 + level / 2)]
    assert mixture_limits(PARTS, level) == pytest.approx(wanted, abs=1e-10)


def test_equal_parts_are_as_one() -> None:
    halves = [Part(0.5, -2.0, 0.5), Part(0.5, -2.0, 0.5)]
    assert mixture_limits(halves, 0.95) == pytest.approx(mixture_limits([Part(1.0, -2.0, 0.5)], 0.95), abs=1e-12)


def test_values_without_spread_are_limits_themselves() -> None:
    parts = [Part(0.4, -2.0, 0.0), Part(0.6, -1.0, 0.0)]
    assert mixture_limits(parts, 0.95) == pytest.approx((-2.0, -1.0), abs=1e-12)
    rare = [Part(0.01, -2.0, 0.0), Part(0.99, -1.0, 0.0)]
    assert mixture_limits(rare, 0.95) == pytest.approx((-1.0, -1.0), abs=1e-12)


def test_quantiles_with_equal_weights_are_of_type_7() -> None:
    values = np.random.default_rng(1).normal(size=501)
    shares = (0.025, 0.5, 0.975)
    assert weighted_quantiles(values, np.ones(501), shares) == pytest.approx(np.quantile(values, shares), abs=1e-14)


def test_weights_count_as_repeated_values() -> None:
    rng = np.random.default_rng(2)
    values, times = rng.normal(size=2000), rng.integers(1, 5, size=2000)
    wanted = np.quantile(np.repeat(values, times), (0.025, 0.5, 0.975))
    assert weighted_quantiles(values, np.asarray(times * 0.7, dtype=np.float64), (0.025, 0.5, 0.975)) == pytest.approx(
        wanted, abs=0.01
    )
    assert weighted_quantiles(np.array([3.0]), np.array([2.0]), (0.1, 0.9)).tolist() == [3.0, 3.0]
