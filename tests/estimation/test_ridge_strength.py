"""The strength that cross-validation chooses: written out anew over the same folds, and the same each time."""

from dataclasses import replace

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import minimize

from clinicalc.estimation.columns import scale_columns
from clinicalc.estimation.cox import look, split_strata
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.ridge_strength import (
    STRONGEST,
    choose_hazard_strength,
    choose_risk_strength,
    lay_folds,
    search,
)
from tests.estimation import cohorts

Array = NDArray[np.float64]


def test_folds_share_the_events_and_keep_clusters() -> None:
    y = (np.arange(200) < 40).astype(np.float64)
    folds = lay_folds(y)
    assert np.bincount(folds).tolist() == [20] * 10
    assert np.bincount(folds, weights=y).tolist() == [4.0] * 10
    assert (lay_folds(y) == folds).all()
    cluster = np.arange(200) // 4
    kept = lay_folds(y, cluster)
    assert all(len(set(kept[cluster == code])) == 1 for code in range(50))
    assert np.bincount(kept).tolist() == [20] * 10


def test_the_deviance_by_a_general_maximiser() -> None:
    people = cohorts.birthwt()
    y, x = people.y, people.x[:, [0, 1, 4, 5, 6]]
    found = choose_risk_strength(y, x)
    z = (x - x.mean(axis=0)) / x.std(axis=0, ddof=1)
    folds = lay_folds(y)

    def deviance(strength: float) -> float:
        total = 0.0
        for number in range(10):
            kept, out = folds != number, folds == number

            def lack(b: Array, kept: NDArray[np.bool_] = kept) -> float:
                eta = b[0] + z[kept] @ b[1:]
                return float(-(y[kept] * eta - np.logaddexp(0, eta)).sum() + strength / 2 * (b[1:] ** 2).sum())

            b = minimize(lack, np.zeros(6), method="BFGS", options={"gtol": 1e-7}).x
            eta = b[0] + z[out] @ b[1:]
            total -= 2 * float((y[out] * eta - np.logaddexp(0, eta)).sum())
        return total

    assert found.deviance == pytest.approx(deviance(found.strength), rel=1e-8)
    assert deviance(found.strength) < min(deviance(found.strength * 1.5), deviance(found.strength / 1.5))
    assert not found.at_edge
    assert choose_risk_strength(y, x) == found


def test_the_partial_likelihood_of_verweij_and_van_houwelingen() -> None:
    lung = cohorts.lung().cohort
    found = choose_hazard_strength(lung)
    folds, sd = lay_folds(lung.events), lung.x.std(axis=0, ddof=1)

    def loglik(rows: NDArray[np.bool_], b: Array) -> float:
        part = Cohort(lung.times[rows], lung.events[rows], lung.x[rows])
        columns = scale_columns(part.x)
        return look(split_strata(part, columns, Ties.EFRON, None), b * columns.spread).loglik

    everybody, total = np.ones(len(folds), dtype=bool), 0.0
    for number in range(10):
        kept = folds != number
        aim = lambda b, kept=kept: -loglik(kept, b / sd) + found.strength / 2 * (b**2).sum()  # noqa: E731
        b = minimize(aim, np.zeros(4), method="BFGS", options={"gtol": 1e-6}).x / sd
        total -= 2 * (loglik(everybody, b) - loglik(kept, b))
    assert found.deviance == pytest.approx(total, rel=1e-7)


def test_strata_and_clusters_are_taken() -> None:
    lung = cohorts.lung().cohort
    strata = (lung.x[:, 1] == 2).astype(np.int64)
    asked = replace(lung, x=lung.x[:, [0, 2, 3]])
    plain = choose_hazard_strength(asked)
    assert choose_hazard_strength(asked, strata=strata).deviance < plain.deviance
    assert choose_hazard_strength(asked, cluster=np.arange(len(lung.times)) // 5).deviance != plain.deviance


def test_noise_is_given_the_strongest() -> None:
    random = np.random.default_rng(2)
    found = choose_risk_strength((random.random(150) < 0.5).astype(np.float64), random.normal(size=(150, 8)))
    assert (found.strength, found.at_edge) == (STRONGEST, True)


def test_the_search_finds_a_smooth_minimum() -> None:
    found = search(lambda strength: (np.log(strength) - np.log(3.7)) ** 2)
    assert found.strength == pytest.approx(3.7, rel=0.02)
