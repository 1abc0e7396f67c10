"""The calibration slope in the people of the fit: 1 where likelihood makes it so, worked out under a penalty."""

from pathlib import Path

import numpy as np
import pytest
import statsmodels.api as sm

from clinicalc.development.study_slopes import find_slope
from tests.development.method_studies import binary_study, fitted_of, random_people, timed_study


def test_a_ridge_has_a_slope_of_its_own(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, binary_study(penalty="ridge", ridge_strength=40.0))
    (figures,) = fitted.figures
    found = find_slope(fitted, figures)
    assert found is not None
    assert not found.is_exact
    # a second opinion: statsmodels' Logit of the answer on x b, in those who have every value
    columns = random_people()
    used = ~np.isnan(columns["x"])
    b = fitted.fits["all"].coefficients
    eta = columns["x"][used] * b[0] + columns["z"][used] * b[1]
    refit = sm.Logit(columns["y"][used], sm.add_constant(eta)).fit(disp=0, tol=1e-12)
    assert found.value == pytest.approx(refit.params[1], rel=1e-7)
    assert found.value > 1.05


def test_a_ridge_of_times_has_one_too(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study("cox") | {"estimate": {"all": {"kind": "cox", "penalty": "ridge"}}})
    (figures,) = fitted.figures
    found = find_slope(fitted, figures)
    assert found is not None
    columns = random_people()
    used = ~np.isnan(columns["x"])
    b = fitted.fits["all"].coefficients
    eta = columns["x"][used] * b[0] + columns["z"][used] * b[1]
    refit = sm.PHReg(columns["time"][used], eta, status=columns["status"][used] == 1, ties="efron").fit(
        tol=1e-12, disp=0
    )
    assert found.value == pytest.approx(refit.params[0], rel=1e-6)


@pytest.mark.parametrize("kind", ["cox", "fine-gray"])
def test_without_a_penalty_it_is_one(kind: str, tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study(kind))
    found = find_slope(fitted, fitted.figures[0])
    assert found is not None
    assert (found.value, found.is_exact) == (1.0, True)


def test_with_values_filled_in_it_is_not_stated(tmp_path: Path) -> None:
    fitted = fitted_of(tmp_path, timed_study("cox", imputation={"sets": 2, "rounds": 2, "seed": 1}))
    assert find_slope(fitted, fitted.figures[0]) is None


def test_where_it_has_no_end_it_is_not_stated(tmp_path: Path) -> None:
    columns = random_people()
    columns["x"] = np.where(columns["y"] == 1, 70.0, 40.0) + np.arange(400) / 100
    fitted = fitted_of(tmp_path, binary_study(penalty="firth"), columns)
    assert find_slope(fitted, fitted.figures[0]) is None
