"""Fits to stored imputed sets, pooled, packaged and assessed at the bedside, against mice::pool and by hand."""

from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.development.description import take_description
from clinicalc.development.estimated_hazards import FixedTerms, HazardPlan, fit_hazards
from clinicalc.development.estimated_risks import fit_risks
from clinicalc.development.fit import FitKind
from clinicalc.development.fitted import fit_with_intercept
from clinicalc.development.package import package_model
from clinicalc.development.pooled_fit import PooledFit, pool_fits
from clinicalc.estimation.hazard_sums import Cohort, Ties
from tests.development.describing import bare_number, linear_terms, plain_model, spell_toml
from tests.estimation.imputed_sets import fit_as_glm, pima_sets, pooled_figures

Array = NDArray[np.float64]
NORMAL = 1.959963984540054


def glm_fits(names: tuple[str, ...]) -> PooledFit:
    fits = [fit_as_glm(y, x) for y, x in pima_sets(names)]
    at_zero = [0.0] * len(names)
    return pool_fits(
        [fit_with_intercept(FitKind.LOGISTIC, names, b.tolist(), v, reference=at_zero) for b, v in fits], 294.0
    )


def test_the_pooled_linear_predictor_at_the_bedside() -> None:
    """lp_pooled and its total standard error: mice 3.15.0 by way of x'bbar and sqrt(x'T x), R 4.2.2."""
    printed = pooled_figures("pima_tr2")
    names = printed.names[1:]
    pooled = glm_fits(names)
    equation = {"id": "all", "competing_events": {"handled": "not_applicable"}, "horizons": [{"years": 1}]}
    equation["terms"] = linear_terms(names)
    tree = plain_model("A pooled fit.", [bare_number(name) for name in names], [equation])
    tree["patients"] = [{"values": {name: repr(printed.profiles[0][name]) for name in names}}]
    model = package_model(take_description(spell_toml(tree), "d.toml", Path()), {"all": pooled.fit}).model
    for profile, lp, se in zip(printed.profiles, printed.lp, printed.lp_se, strict=True):
        found = assess(model, entry_from_texts({name: repr(profile[name]) for name in names})).estimate
        assert found is not None
        assert found.band is not None
        assert log_odds(found.probability) == pytest.approx(lp, abs=1e-9)
        assert (log_odds(found.band.upper) - lp) / NORMAL == pytest.approx(se, abs=1e-9)
        assert (lp - log_odds(found.band.lower)) / NORMAL == pytest.approx(se, abs=1e-9)


def log_odds(p: float) -> float:
    return float(np.log(p / (1.0 - p)))


def test_the_engine_of_a_study_comes_to_the_same() -> None:
    printed = pooled_figures("pima_tr2")
    names = printed.names[1:]
    none = FixedTerms(np.empty((300, 0)), np.empty(0))
    fits = [
        fit_risks(y, np.asfortranarray(x), names, none, FitKind.LOGISTIC, robust=False, cluster=None)[1]
        for y, x in pima_sets(names)
    ]
    pooled = pool_fits(fits, 294.0)
    baseline = pooled.fit.baselines[0]
    assert baseline.variance is not None
    assert baseline.centre is not None
    for profile, lp, se in zip(printed.profiles, printed.lp, printed.lp_se, strict=True):
        x = np.array([profile[name] for name in names])
        away = x - np.array(baseline.centre)
        assert baseline.lp0 + float(x @ np.array(pooled.fit.coefficients)) == pytest.approx(lp, rel=1e-10)
        variance = baseline.variance + float(away @ np.array(pooled.fit.covariance) @ away)
        # the covariance is at the maximum here, glm's a step before it
        assert np.sqrt(variance) == pytest.approx(se, rel=1e-6)


def test_hazards_are_pooled_as_the_linear_predictor_of_each_person() -> None:
    """By hand: the variance of eta of a person is the mean of those of the sets, and 1 + 1/m times that between."""
    rng = np.random.default_rng(3)
    names, horizons = ("a", "b"), (1.0, 2.0)
    fits = []
    x = rng.normal(size=(120, 2))
    times = rng.exponential(np.exp(-x[:, 0])) + 0.01
    for _ in range(3):
        noisy = np.asfortranarray(x + rng.normal(scale=0.3, size=x.shape))
        cohort = Cohort(times, (rng.random(120) < 0.8).astype(np.float64), noisy)
        plan = HazardPlan(Ties.EFRON, robust=False, cluster=None, horizons=(horizons,))
        none = FixedTerms(np.empty((120, 0)), np.empty(0))
        fits.append(fit_hazards(cohort, names, none, np.zeros(120, dtype=np.int64), plan)[1][0])
    pooled = pool_fits(fits, 90.0).fit
    for place in range(len(horizons)):
        for person in (np.array([0.0, 0.0]), np.array([1.5, -2.0])):
            each = [eta_of(fit.baselines[place], fit.coefficients, fit.covariance, person) for fit in fits]
            lp, variance = eta_of(pooled.baselines[place], pooled.coefficients, pooled.covariance, person)
            assert lp == pytest.approx(np.mean([one for one, _ in each]), rel=1e-12)
            between = np.var([one for one, _ in each], ddof=1)
            assert variance == pytest.approx(np.mean([two for _, two in each]) + 4 / 3 * between, rel=1e-10)


def eta_of(baseline: object, b: object, v: object, person: Array) -> tuple[float, float]:
    """eta and its variance of a person, as a coefficient file has them."""
    lp0, a, c = (getattr(baseline, name) for name in ("lp0", "variance", "centre"))
    away = person - np.array(c)
    return lp0 + float(person @ np.array(b)), a + float(away @ np.array(v) @ away)
