"""Binomial fits against R's glm and sandwich, and their score summed by hand."""

from collections.abc import Callable

import numpy as np
import pytest
import statsmodels.api as sm

from clinicalc.estimation import logistic
from clinicalc.estimation.logistic import Link, Sandwich, fit_logistic, robust_covariance
from tests.estimation import cohorts
from tests.estimation.cohorts import Answers
from tests.estimation.r_figures import BINARY
from tests.reference.figures import BinaryFit, load

ANSWERS: dict[str, Callable[[], Answers]] = {
    "birthwt_logit": cohorts.birthwt,
    "pima_logit": cohorts.pima,
    "pima_cloglog": cohorts.pima,
    "biopsy_tails": cohorts.biopsy,
    "esoph_freqweights": cohorts.esoph,
    "retinopathy_robust": cohorts.retinopathy_answers,
}


@pytest.mark.parametrize("name", ANSWERS)
def test_coefficients_covariance_and_likelihood(name: str) -> None:
    """R's covariance is that of the step before its last, some 1e-7 off for the steep and the cloglog fit."""
    answers, expected = ANSWERS[name](), load(name, BinaryFit)
    fit = fit_logistic(answers.y, answers.x, link=Link(expected.link), weights=answers.weights)
    assert fit.events == expected.events
    if answers.weights is None:
        assert fit.people == expected.people
    assert fit.coefficients == pytest.approx(expected.coefficients, rel=1e-7)
    deviations = np.sqrt(np.diag(fit.covariance))
    assert deviations == pytest.approx(np.sqrt(np.diag(expected.covariance)), rel=1e-6)
    assert fit.score_max < 1e-14
    if name in BINARY:
        loglik, null_deviance, _, _ = BINARY[name]
        assert (fit.loglik, -2 * fit.loglik_null) == pytest.approx((loglik, null_deviance), rel=1e-12)


@pytest.mark.parametrize("name", ANSWERS)
def test_limits_at_profiles(name: str) -> None:
    answers, expected = ANSWERS[name](), load(name, BinaryFit)
    fit = fit_logistic(answers.y, answers.x, link=Link(expected.link), weights=answers.weights)
    for told in expected.predictions:
        x = np.append(1.0, expected.profiles[told.profile])
        link, se = x @ fit.coefficients, np.sqrt(x @ fit.covariance @ x)
        assert (link, se) == pytest.approx((told.link, told.se), rel=1e-6, abs=1e-8)
        for z, limits in ((1.959963984540054, told.limits95), (1.6448536269514722, told.limits90)):
            eta = np.array([link - z * se, link + z * se])
            found = 1 / (1 + np.exp(-eta)) if fit.link is Link.LOGIT else -np.expm1(-np.exp(eta))
            assert found == pytest.approx(limits, abs=1e-7)


@pytest.mark.parametrize("link", Link)
@pytest.mark.parametrize("weighted", [False, True])
def test_the_score_is_zero_summed_by_hand(link: Link, weighted: bool) -> None:
    """The slope of y log p + (1 - y) log(1 - p) by each coefficient, from p alone."""
    answers = cohorts.pima()
    weights = np.where(np.arange(len(answers.y)) % 2 == 0, 3.0, 1.0) if weighted else None
    fit = fit_logistic(answers.y, answers.x, link=link, weights=weights)
    design = np.column_stack([np.ones(len(answers.y)), answers.x])
    eta = design @ fit.coefficients
    p = 1 / (1 + np.exp(-eta)) if link is Link.LOGIT else -np.expm1(-np.exp(eta))
    slope = p * (1 - p) if link is Link.LOGIT else np.exp(eta) * (1 - p)
    each = (answers.y - p) / (p * (1 - p)) * slope * (1.0 if weights is None else weights)
    assert np.abs((design * each[:, None]).sum(axis=0) / np.abs(design).sum(axis=0)).max() < 1e-13


@pytest.mark.parametrize(
    ("label", "sandwich", "clustered"),
    [
        ("HC0", Sandwich.HC0, False),
        ("HC1", Sandwich.HC1, False),
        ("CL_HC0_nocadjust", Sandwich.HC0, True),
        ("CL_HC1_cadjust", Sandwich.HC1, True),
    ],
)
def test_robust_covariances(label: str, sandwich: Sandwich, clustered: bool) -> None:
    """vcovHC and vcovCL of R's sandwich 3.0-2, in the file of the fit."""
    answers, expected = cohorts.retinopathy_answers(), load("retinopathy_robust", BinaryFit)
    fit = fit_logistic(answers.y, answers.x)
    cluster = answers.cluster if clustered else None
    found = robust_covariance(answers.y, answers.x, fit, cluster=cluster, sandwich=sandwich)
    assert found == pytest.approx(np.array(expected.robust[label]), rel=1e-9)


@pytest.mark.parametrize("link", Link)
@pytest.mark.parametrize("clustered", [False, True])
def test_a_weight_is_so_many_people(link: Link, clustered: bool) -> None:
    answers = cohorts.retinopathy_answers()
    assert answers.cluster is not None
    weights = np.where(np.arange(len(answers.y)) % 3 == 0, 2.0, 1.0)
    copies = np.repeat(np.arange(len(weights)), weights.astype(int))
    y, x, cluster = answers.y[copies], answers.x[copies], answers.cluster[copies]
    one = fit_logistic(answers.y, answers.x, link=link, weights=weights)
    other = fit_logistic(y, x, link=link)
    assert (one.people, one.events) == (other.people, other.events)
    assert one.coefficients == pytest.approx(other.coefficients, rel=1e-10)
    assert one.covariance == pytest.approx(other.covariance, rel=1e-9)
    own = answers.cluster if clustered else None
    robust = robust_covariance(answers.y, answers.x, one, weights=weights, cluster=own)
    assert robust == pytest.approx(robust_covariance(y, x, other, cluster=cluster if clustered else None), rel=1e-8)


def test_the_robust_covariance_of_a_cloglog_fit() -> None:
    """R 4.2.2, base: V crossprod(u) V, u = model.matrix(f) * residuals(f, "working") * f$weights, V = vcov(f).

    The bread is the expected information, as sandwich has it; statsmodels' GLM takes the observed one, 13 % off here.
    """
    answers = cohorts.pima()
    fit = fit_logistic(answers.y, answers.x, link=Link.CLOGLOG)
    found = robust_covariance(answers.y, answers.x, fit, sandwich=Sandwich.HC0)
    expected = (
        1.016437342446204761,
        0.039760945153693675,
        0.004277222525160663,
        0.024650397037614943,
        0.453094728262547819,
        0.013942364504595259,
    )
    assert np.sqrt(np.diag(found)) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("link", Link)
def test_own_steps_alone_end_where_statsmodels_ends(link: Link, monkeypatch: pytest.MonkeyPatch) -> None:
    """Above a number of rows GLM is not asked, for its memory."""
    answers = cohorts.pima()
    weights = np.ones(len(answers.y))
    asked = fit_logistic(answers.y, answers.x, link=link, weights=weights)
    monkeypatch.setattr(logistic, "MOST_ROWS_OF_GLM", 10)
    alone = fit_logistic(answers.y, answers.x, link=link, weights=weights)
    assert alone.coefficients == pytest.approx(asked.coefficients, rel=1e-12)
    assert alone.covariance == pytest.approx(asked.covariance, rel=1e-11)


def test_columns_with_a_long_tail_come_to_rest_under_the_cloglog() -> None:
    """IRLS of GLM swings to and fro here; invented values."""
    rng = np.random.default_rng(7)
    x = rng.normal(size=(500, 3))
    y = (rng.random(500) < 1 / (1 + np.exp(-x[:, 0]))).astype(np.float64)
    fit = fit_logistic(y, np.exp(x * 3), link=Link.CLOGLOG)
    assert fit.score_max < 1e-14
    assert fit.loglik > fit.loglik_null


@pytest.mark.parametrize("link", Link)
def test_an_offset_is_a_column_whose_coefficient_is_known(link: Link) -> None:
    """With the estimated coefficient of one column as its offset the others and the likelihood stay as they were."""
    answers = cohorts.pima()
    whole = fit_logistic(answers.y, answers.x, link=link)
    offset = answers.x[:, 1] * whole.coefficients[2]
    rest = np.delete(answers.x, 1, axis=1)
    part = fit_logistic(answers.y, rest, link=link, offset=offset)
    assert part.coefficients == pytest.approx(np.delete(whole.coefficients, 2), rel=1e-9)
    assert part.loglik == pytest.approx(whole.loglik, rel=1e-12)
    family = sm.families.Binomial(
        link=sm.families.links.CLogLog() if link is Link.CLOGLOG else sm.families.links.Logit()
    )
    model = sm.GLM(answers.y, sm.add_constant(rest), family=family, offset=offset)
    # its own beginning overflows under the cloglog
    beside = part.coefficients * 1.01
    results = model.fit(beside, tol=1e-14, maxiter=200)
    assert part.coefficients == pytest.approx(results.params, rel=1e-6)
    assert np.sqrt(np.diag(part.covariance)) == pytest.approx(results.bse, rel=1e-5)
    alone = sm.GLM(answers.y, np.ones(len(offset)), family=family, offset=offset).fit([-offset.mean()], tol=1e-14)
    assert part.loglik_null == pytest.approx(alone.llf, rel=1e-9)
    robust = robust_covariance(answers.y, rest, part, offset=offset, sandwich=Sandwich.HC0)
    # the observed and the expected information are the same for the logit only
    if link is Link.LOGIT:
        known = model.fit(tol=1e-14, maxiter=200, cov_type="HC0", use_t=False)
        assert np.sqrt(np.diag(robust)) == pytest.approx(known.bse, rel=1e-6)
