"""Rubin's rules against mice::pool: a linear fit to five sets of 25 people, a logistic one to ten sets of 300."""

from math import inf

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.rubin import Pooled, pool
from tests.estimation.imputed_sets import PooledFigures, fit_as_glm, nhanes_sets, pima_sets, pooled_figures

Array = NDArray[np.float64]
EXACT = 1e-10


def fit_line(y: Array, x: Array) -> tuple[Array, Array]:
    """Least squares and their covariance; the intercept first."""
    design = np.column_stack([np.ones(len(y)), x])
    inverse = np.linalg.inv(design.T @ design)
    b = inverse @ design.T @ y
    left = y - design @ b
    return b, inverse * float(left @ left) / (len(y) - design.shape[1])


def agree(found: Pooled, printed: PooledFigures) -> None:
    assert found.estimates == pytest.approx(printed.pooled, rel=EXACT)
    assert found.within == pytest.approx(printed.within, rel=EXACT)
    assert found.between == pytest.approx(printed.between, rel=EXACT)
    assert found.total == pytest.approx(printed.total, rel=EXACT)
    assert found.degrees == pytest.approx(printed.degrees, rel=EXACT)
    assert found.increase == pytest.approx(printed.increase, rel=EXACT)
    assert found.missing_information == pytest.approx(printed.missing_information, rel=EXACT)
    assert found.se == pytest.approx(np.sqrt(np.diag(printed.total)), rel=EXACT)


def test_a_linear_fit_to_five_sets() -> None:
    """mice::pool(with(..., glm(chl ~ bmi + hyp, gaussian))), R 4.2.2, mice 3.15.0."""
    printed = pooled_figures("nhanes2")
    fits = [fit_line(y, x) for y, x in nhanes_sets()]
    estimates = np.array([b for b, _ in fits])
    assert estimates == pytest.approx(printed.coefficients, rel=EXACT)
    agree(pool(estimates, np.array([v for _, v in fits]), printed.complete_degrees), printed)


def test_a_logistic_fit_to_ten_sets() -> None:
    """mice::pool(with(..., glm(y ~ glu + bp + skin + bmi + ped, binomial))), R 4.2.2, mice 3.15.0."""
    printed = pooled_figures("pima_tr2")
    sets = pima_sets(printed.names[1:])
    theirs = [fit_as_glm(y, x) for y, x in sets]
    estimates = np.array([b for b, _ in theirs])
    # one coefficient of 2e-5 is the difference of larger ones
    assert estimates == pytest.approx(printed.coefficients, rel=EXACT, abs=1e-11)
    agree(pool(estimates, np.array([v for _, v in theirs]), printed.complete_degrees), printed)
    own = [fit_logistic(y, x) for y, x in sets]
    found = pool(np.array([fit.coefficients for fit in own]), np.array([fit.covariance for fit in own]), 294.0)
    assert found.estimates == pytest.approx(printed.pooled, rel=EXACT)
    # the covariance is at the maximum here, and glm's a step before it
    assert found.se == pytest.approx(np.sqrt(np.diag(printed.total)), rel=1e-8)
    assert found.degrees == pytest.approx(printed.degrees, rel=1e-8)


def test_a_part_is_pooled_to_the_bits_of_the_whole() -> None:
    fits = [fit_logistic(y, x) for y, x in pima_sets(("glu", "bp", "skin", "bmi"))]
    b, v = np.array([fit.coefficients for fit in fits]), np.array([fit.covariance for fit in fits])
    whole, part = pool(b, v, 295.0), pool(b[:, 1:], v[:, 1:, 1:], 295.0)
    assert (whole.estimates[1:] == part.estimates).all()
    assert (whole.total[1:, 1:] == part.total).all()
    assert (whole.degrees[1:] == part.degrees).all()


def test_an_estimate_without_missing_information_keeps_its_own_degrees() -> None:
    """By the formula with B = 0: df = (v + 1) v / (v + 3), no increase, missing information 2 / (df + 3)."""
    found = pool(np.full((4, 1), 2.0), np.full((4, 1, 1), 0.25), 57.0)
    assert found.total[0, 0] == 0.25
    assert found.increase[0] == 0.0
    assert found.degrees[0] == pytest.approx(58 * 57 / 60, rel=1e-15)
    assert found.missing_information[0] == pytest.approx(2 / (58 * 57 / 60 + 3), rel=1e-15)


def test_a_normal_estimate_has_the_degrees_of_rubin() -> None:
    """(m - 1) (1 + 1 / r)^2 with r = (1 + 1/m) B / U: Rubin 1987, (3.1.6); B = 1 and U = 2 of 0, 1, 2."""
    found = pool(np.array([[0.0], [1.0], [2.0]]), np.full((3, 1, 1), 2.0), inf)
    r = (4 / 3) / 2
    assert found.degrees[0] == pytest.approx(2 * (1 + 1 / r) ** 2, rel=1e-14)
