"""Updates against R's figures: closed testing, logistic and Cox, two-scale lines of groups."""

from typing import Any

import numpy as np
import pytest

from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.validation.updated import EquationUpdate, GroupWeights, UpdateMethod, UpdateWish
from clinicalc.validation.updating import update_model
from clinicalc.validation.updating_hazards import Followed, fit_slope
from tests.validation.updated_people import (
    FIVE_YEARS,
    figures_of,
    gbsg_people,
    pima_model,
    pima_people,
    rotterdam_model,
)

PIMA = figures_of("pima_updates")
GBSG = figures_of("rotterdam_gbsg_updates")
CASES = ("external", "shifted", "steep")
_NAMES = {"keep": "original", "intercept": "intercept", "intercept_slope": "intercept_slope", "refit": "refit"}


def update_pima(case: str, method: str) -> EquationUpdate:
    """One equation, updated to MASS::Pima.te."""
    people, outcome = pima_people()
    model = pima_model(*PIMA["cases"][case]["moved_by"])
    return update_model(model, people, outcome, UpdateWish(UpdateMethod(method))).equations[0]


def update_rotterdam(method: str, **more: Any) -> EquationUpdate:
    """One equation at five years, updated to survival::gbsg."""
    people, outcome = gbsg_people()
    wish = UpdateWish(UpdateMethod(method), spans=(FIVE_YEARS,), **more)
    return update_model(rotterdam_model(), people, outcome, wish).equations[0]


@pytest.mark.parametrize("case", CASES)
def test_closed_testing_chooses_as_in_r(case: str) -> None:
    expected = PIMA["cases"][case]
    testing = update_pima(case, "closed_test").testing
    assert testing is not None
    for method, loglik in testing.logliks:
        assert loglik == pytest.approx(expected["loglik"][_NAMES[method]], rel=1e-9)
    tests = [expected["tests"][name] for name in ("refit_vs_original", "refit_vs_intercept", "refit_vs_recalibration")]
    for test, r in zip(testing.tests, tests, strict=True):
        assert test.chi2 == pytest.approx(r["chi2"], rel=1e-8)
        assert test.df == r["df"]
        assert test.p == pytest.approx(r["p"], rel=1e-7)
    assert _NAMES[testing.chosen] == expected["tests"]["chosen"]


@pytest.mark.parametrize("case", CASES)
def test_lines_of_a_logistic_model_are_those_of_r(case: str) -> None:
    expected = PIMA["cases"][case]
    line = update_pima(case, "intercept").lines[0]
    assert line.intercept == pytest.approx(expected["intercept"]["delta"], rel=1e-7)
    assert np.sqrt(line.covariance[0]) == pytest.approx(expected["intercept"]["se"], rel=1e-7)
    assert (line.slope, line.covariance[1:]) == (1.0, (0.0, 0.0))
    line = update_pima(case, "intercept_slope").lines[0]
    assert line.intercept == pytest.approx(expected["line"]["intercept"], rel=1e-7)
    assert line.slope == pytest.approx(expected["line"]["slope"], rel=1e-7)
    (v00, v01), (_, v11) = expected["line"]["vcov"]
    assert line.covariance == pytest.approx((v00, v01, v11), rel=1e-7)


def test_a_refit_of_a_logistic_model_is_that_of_r() -> None:
    expected = PIMA["cases"]["external"]["refit"]
    refit = update_pima("external", "refit").refit
    assert refit is not None
    assert [refit.lines[0].lp0, *refit.coefficients] == pytest.approx(expected["coef"], rel=1e-7)
    assert refit.joint is not None
    np.testing.assert_allclose(refit.joint, expected["vcov"], rtol=1e-7)


def test_baseline_and_slope_of_a_cox_model_are_those_of_r() -> None:
    lp0 = rotterdam_model().equations[0].line_at(FIVE_YEARS).lp0
    assert np.exp(lp0) == pytest.approx(GBSG["H0_original"], rel=1e-9)
    line = update_rotterdam("intercept").lines[0]
    assert np.exp(lp0 + line.intercept) == pytest.approx(GBSG["baseline_only"]["H0_new_at_lp0"], rel=1e-9)
    expected = GBSG["slope_and_baseline"]
    found = update_rotterdam("intercept_slope")
    assert found.slope == pytest.approx(expected["slope"], rel=1e-7)
    assert found.slope_se == pytest.approx(expected["se"], rel=1e-7)
    line = found.lines[0]
    assert np.exp(line.intercept + line.slope * lp0) == pytest.approx(expected["H0_new_at_lp0"], rel=1e-7)
    # limits with the coefficients taken as fixed: var = [1, eta] V [1, eta]'
    for lp, risk, lower, upper in zip(*(expected["example"][k] for k in ("lp", "risk", "lower", "upper")), strict=True):
        eta = lp0 + lp
        v00, v01, v11 = line.covariance
        half = 1.959963984540054 * np.sqrt(v00 + 2 * eta * v01 + eta * eta * v11)
        middle = line.intercept + line.slope * eta
        ours = [-np.expm1(-np.exp(end)) for end in (middle - half, middle, middle + half)]
        assert ours == pytest.approx([lower, risk, upper], abs=1e-7)


def test_a_refit_of_a_cox_model_and_its_tests_are_those_of_r() -> None:
    expected, tests = GBSG["refit"], GBSG["tests"]
    refit = update_rotterdam("refit").refit
    assert refit is not None
    assert refit.coefficients == pytest.approx(expected["coef"], rel=1e-7)
    np.testing.assert_allclose(refit.covariance, expected["vcov"], rtol=1e-7, atol=1e-14)
    assert np.exp(refit.lines[0].lp0) == pytest.approx(expected["H0_new_at_zero"], rel=1e-7)
    testing = update_rotterdam("closed_test").testing
    assert testing is not None
    logliks = dict(testing.logliks)
    for method, part in (("intercept", "baseline_only"), ("intercept_slope", "slope_and_baseline"), ("refit", "refit")):
        assert logliks[UpdateMethod(method)] == pytest.approx(GBSG[part]["loglik"], rel=1e-9)
    _, baseline, slope = testing.tests
    assert [baseline.chi2, slope.chi2] == pytest.approx(
        [tests[name]["chi2"] for name in ("refit_vs_baseline_only", "refit_vs_slope")], rel=1e-7
    )
    assert [baseline.df, slope.df] == [6, 5]
    assert baseline.p == pytest.approx(tests["refit_vs_baseline_only"]["p"], rel=1e-6)
    assert testing.chosen is UpdateMethod.REFIT


@pytest.mark.parametrize("place", [0, 1])
def test_two_scale_lines_are_those_of_r(place: int) -> None:
    expected = GBSG["two_scale"]["fits"][place]
    for weights, name in ((GroupWeights.EQUAL, "ols"), (GroupWeights.INVERSE_VARIANCE, "inverse_variance")):
        found = update_rotterdam("two_scale", groups=expected["groups"], weights=weights)
        for figure, key in (("predicted", "mean_predicted"), ("observed", "observed_km"), ("se", "se_km")):
            assert [getattr(group, figure) for group in found.groups] == pytest.approx(expected[key], rel=1e-9)
        line = found.lines[0]
        assert (line.intercept, line.slope) == pytest.approx((expected[name]["a"], expected[name]["b"]), rel=1e-8)


def test_a_two_scale_line_moves_risks_as_in_r() -> None:
    expected = GBSG["two_scale"]["apply_first_ols"]
    line = update_rotterdam("two_scale", groups=4).lines[0]
    eta = np.log(-np.log1p(-np.array(expected["risk"])))
    moved = -np.expm1(-np.exp(line.intercept + line.slope * eta))
    assert moved == pytest.approx(expected["recalibrated"], rel=1e-9)


def test_several_horizons_have_a_shift_each_and_one_slope() -> None:
    people, outcome = gbsg_people()
    spans = tuple(span for span in rotterdam_model().spans if span.time < 3000)
    several = update_model(
        rotterdam_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT_SLOPE, spans=spans)
    ).equations[0]
    alone = update_rotterdam("intercept_slope")
    assert [line.span for line in several.lines] == list(spans)
    assert several.lines[1] == alone.lines[0]
    assert {line.slope for line in several.lines} == {alone.slope}
    by_groups = update_model(
        rotterdam_model(), people, outcome, UpdateWish(UpdateMethod.TWO_SCALE, spans=spans, groups=4)
    ).equations[0]
    assert len({line.slope for line in by_groups.lines}) == 1
    assert len(by_groups.groups) == 8


def test_what_fits_already_is_not_moved() -> None:
    # the fit of these very people: alpha 0 and beta 1 solve its score equations exactly
    people, outcome = gbsg_people()
    refit = update_rotterdam("refit").refit
    assert refit is not None
    lp = sum(people[name] * b for name, b in zip(refit.terms, refit.coefficients, strict=True))
    found = fit_slope(Followed(outcome.times, outcome.status, None, subdistribution=False), np.asarray(lp))
    assert found.slope == pytest.approx(1.0, abs=1e-9)
    assert found.worse_by == pytest.approx(0.0, abs=1e-8)


def test_late_entry_counts_only_those_who_are_there() -> None:
    people, outcome = gbsg_people()
    early = SurvivalOutcome(outcome.times, outcome.status, np.full(len(outcome.times), -1.0), "d")
    wish = UpdateWish(UpdateMethod.INTERCEPT_SLOPE, spans=(FIVE_YEARS,))
    plain = update_model(rotterdam_model(), people, outcome, wish).equations[0]
    assert update_model(rotterdam_model(), people, early, wish).equations[0].lines[0].intercept == pytest.approx(
        plain.lines[0].intercept, rel=1e-12
    )
    late = SurvivalOutcome(outcome.times, outcome.status, np.minimum(outcome.times / 2, 300.0), "d")
    other = update_model(rotterdam_model(), people, late, wish).equations[0]
    assert other.lines[0].intercept > plain.lines[0].intercept
