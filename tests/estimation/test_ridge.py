"""Ridge fits against R, against a general maximiser, and by what must hold at the ends of the strength."""

from dataclasses import replace

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import minimize

from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.hazard_sums import Ties
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.ridge import fit_ridge_hazards, fit_ridge_risks
from tests.estimation import cohorts
from tests.estimation.r_penalised import BIRTHWT_RIDGE, LUNG_RIDGE, Ridge

Array = NDArray[np.float64]


def birthwt() -> cohorts.Answers:
    people = cohorts.birthwt()
    return replace(people, x=people.x[:, [0, 1, 4, 5, 6]])


@pytest.mark.parametrize("expected", BIRTHWT_RIDGE, ids=lambda one: str(one.strength))
def test_ridge_path_of_r(expected: Ridge) -> None:
    people = birthwt()
    found = fit_ridge_risks(people.y, people.x, expected.strength)
    b, sd = found.fit.coefficients, people.x.std(axis=0, ddof=1)
    assert b == pytest.approx(np.array(expected.coefficients), rel=1e-10)
    at_means = b[0] + (people.x.mean(axis=0) * b[1:]).sum()
    assert np.append(at_means, b[1:] * sd) == pytest.approx(np.array(expected.standardised), rel=1e-10)
    assert found.degrees == pytest.approx(expected.degrees, rel=1e-12)


def test_covariance_after_gray_written_out() -> None:
    people, strength = birthwt(), 10.0
    found = fit_ridge_risks(people.y, people.x, strength)
    design = np.column_stack([np.ones(len(people.y)), people.x])
    p = 1 / (1 + np.exp(-(design @ found.fit.coefficients)))
    information = design.T @ (design * (p * (1 - p))[:, None])
    inverse = np.linalg.inv(information + np.diag(np.append(0.0, strength * people.x.var(axis=0, ddof=1))))
    assert found.inverse == pytest.approx(inverse, rel=1e-8)
    assert found.fit.covariance == pytest.approx(inverse @ information @ inverse, rel=1e-8)


def test_the_mean_of_the_predictions_is_that_of_the_people() -> None:
    people = birthwt()
    b = fit_ridge_risks(people.y, people.x, 30.0).fit.coefficients
    assert (1 / (1 + np.exp(-(b[0] + people.x @ b[1:])))).mean() == pytest.approx(people.y.mean(), rel=1e-13)


def test_a_general_maximiser_with_counts_and_offset() -> None:
    """Counts are that many people, in the standard deviation too."""
    people = birthwt()
    random = np.random.default_rng(4)
    counts, offset = random.integers(1, 4, len(people.y)).astype(np.float64), random.normal(0, 0.5, len(people.y))
    rows = np.repeat(np.arange(len(counts)), counts.astype(int))
    y, x, away = people.y[rows], people.x[rows], offset[rows]
    z = (x - x.mean(axis=0)) / x.std(axis=0, ddof=1)

    def lack(b: Array) -> float:
        eta = b[0] + z @ b[1:] + away
        return float(-(y * eta - np.logaddexp(0, eta)).sum() + 7.0 / 2 * (b[1:] ** 2).sum())

    best = minimize(lack, np.zeros(6), method="BFGS", options={"gtol": 1e-7})
    found = fit_ridge_risks(people.y, people.x, 7.0, weights=counts, offset=offset, start=np.full(6, 0.01))
    assert found.fit.coefficients[1:] * x.std(axis=0, ddof=1) == pytest.approx(best.x[1:], rel=1e-5)
    again = fit_ridge_risks(y, x, 7.0, offset=away)
    assert found.fit.coefficients == pytest.approx(again.fit.coefficients, rel=1e-10)
    assert found.fit.covariance == pytest.approx(again.fit.covariance, rel=1e-10)


def test_the_ends_of_the_strength() -> None:
    people, lung = birthwt(), cohorts.lung().cohort
    weak, plain = fit_ridge_risks(people.y, people.x, 1e-9), fit_logistic(people.y, people.x)
    assert weak.fit.coefficients == pytest.approx(plain.coefficients, rel=1e-8)
    assert weak.fit.covariance == pytest.approx(plain.covariance, rel=1e-8)
    assert weak.degrees == pytest.approx(5, rel=1e-9)
    assert np.abs(fit_ridge_risks(people.y, people.x, 1e9).fit.coefficients[1:]).max() < 1e-6
    assert fit_ridge_hazards(lung, 1e-9).fit.coefficients == pytest.approx(fit_cox(lung).coefficients, rel=1e-8)
    assert fit_ridge_hazards(lung, 1e9).degrees < 1e-5


def test_ridge_of_coxph() -> None:
    found = fit_ridge_hazards(cohorts.lung().cohort, LUNG_RIDGE.strength)
    assert found.fit.coefficients == pytest.approx(np.array(LUNG_RIDGE.coefficients), rel=1e-9)
    assert found.fit.covariance == pytest.approx(np.array(LUNG_RIDGE.covariance).reshape(4, 4), rel=1e-9)
    assert np.diag(found.inverse) == pytest.approx(np.array(LUNG_RIDGE.inverse), rel=1e-9)
    assert found.degrees == pytest.approx(LUNG_RIDGE.degrees, rel=1e-9)


@pytest.mark.parametrize("ties", list(Ties))
def test_cox_in_strata_begun_elsewhere(ties: Ties) -> None:
    """At the maximum the score is the penalty's slope: strength x variance x coefficient."""
    people = cohorts.lung().cohort
    strata = (people.x[:, 1] == 2).astype(np.int64)
    asked = replace(people, x=people.x[:, [0, 2, 3]])
    one = fit_ridge_hazards(asked, 15.0, ties=ties, strata=strata)
    other = fit_ridge_hazards(asked, 15.0, ties=ties, strata=strata, start=np.array([0.3, -0.2, 0.1]))
    assert one.fit.coefficients == pytest.approx(other.fit.coefficients, rel=1e-10)
    assert one.fit.score_max < 1e-12
    assert np.abs(one.fit.coefficients[1]) < np.abs(fit_cox(asked, ties=ties, strata=strata).coefficients[1])
