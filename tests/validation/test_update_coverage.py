"""The band of an updated model holds the truth about as often as it says: two samples a time, a rule that is known.

The parent is fitted to 1,500 invented people and updated to 600 others whose risk is higher and less spread. The band
counts the imprecision of both, and is a little wide: what the new baseline makes good of the old one is not counted.
"""

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.development.squares import Square, square_of_intercept, square_of_sums
from clinicalc.estimation.binomial import Link
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.validation.updating_hazards import Followed, SlopeFit, find_levels, fit_slope
from clinicalc.validation.updating_risks import fit_line, fit_shift

Array = NDArray[np.float64]
B = np.array([0.5, 0.4, -0.3, 0.2, 0.6])
TIMES, PROFILES = 150, 40


def _covered(square: Square, v: Array, x: Array, eta: Array, line: tuple[float, float, Array], truth: Array) -> float:
    """The share of the profiles whose limits hold the truth."""
    away = x - square.centre
    own = square.variance + ((away @ v) * away).sum(axis=1)
    intercept, slope, ab = line
    variance = slope**2 * own + ab[0, 0] + 2 * eta * ab[0, 1] + eta**2 * ab[1, 1]
    return float((np.abs(intercept + slope * eta - truth) < 1.96 * np.sqrt(variance)).mean())


@pytest.mark.parametrize("steep", [1.0, 0.8])
def test_hazards(steep: float) -> None:
    generator = np.random.default_rng(1)
    profiles, shares = generator.normal(size=(PROFILES, 5)), []

    def follow(x: Array, level: float, slope: float) -> tuple[Array, Array]:
        times = generator.exponential(1 / (level * np.exp(slope * (x @ B))))
        ends = generator.uniform(3, 12, len(x))
        return np.minimum(times, ends), (times <= ends).astype(float)

    for _ in range(TIMES):
        a, b = generator.normal(size=(1500, 5)), generator.normal(size=(600, 5))
        cohort = Cohort(*follow(a, 0.02, 1.0), a)
        fit = fit_cox(cohort)
        sums = sum_hazards(cohort, fit.coefficients, [5.0], Ties.EFRON)[0]
        followed = Followed(*follow(b, 0.03, steep), None, subdistribution=False)
        lp, lp0 = b @ fit.coefficients, float(np.log(sums.hazard))
        slope = SlopeFit(1.0, 0.0, None, None, 0.0) if steep == 1 else fit_slope(followed, lp)
        level = find_levels(followed, lp, slope.slope, [5.0])[0]
        c, v = level.centre + lp0, slope.variance
        ab = np.array([[level.own + c * c * v, -c * v], [-c * v, v]])
        line = (level.g - slope.slope * lp0, slope.slope, ab)
        square = square_of_sums(sums.hazard, sums.squares, sums.moments)
        truth = np.log(0.03 * 5) + steep * (profiles @ B)
        shares.append(_covered(square, fit.covariance, profiles, lp0 + profiles @ fit.coefficients, line, truth))
    assert 0.945 < np.mean(shares) < 0.985


@pytest.mark.parametrize("steep", [1.0, 0.8])
def test_risks(steep: float) -> None:
    generator = np.random.default_rng(2)
    profiles, shares = generator.normal(size=(PROFILES, 5)), []

    def answer(x: Array, level: float, slope: float) -> Array:
        share = 1 / (1 + np.exp(-(level + slope * (x @ B))))
        return np.asarray(generator.random(len(x)) < share, dtype=np.float64)

    for _ in range(TIMES):
        a, b = generator.normal(size=(1500, 5)), generator.normal(size=(600, 5))
        fit = fit_logistic(answer(a, -2.0, 1.0), a)
        etas = [fit.coefficients[0] + x @ fit.coefficients[1:] for x in (b, profiles)]
        y = answer(b, -1.5, steep)
        found = fit_shift(y, etas[0], Link.LOGIT) if steep == 1 else fit_line("", y, etas[0], Link.LOGIT)
        v00, v01, v11 = found.covariance
        line = (found.intercept, found.slope, np.array([[v00, v01], [v01, v11]]))
        truth = -1.5 + steep * (profiles @ B)
        square = square_of_intercept(fit.covariance)
        shares.append(_covered(square, fit.covariance[1:, 1:], profiles, etas[1], line, truth))
    assert 0.945 < np.mean(shares) < 0.985
