"""Fits made by R, written as coefficient files, read back and assessed: R's probabilities and R's limits.

Limits are R's link-transformed ones; for proportional hazards the log-log ones of `survfit`.
"""

from math import log
from statistics import NormalDist

import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.result import Estimate
from clinicalc.coefficients.spans import Span
from tests.reference.figures import BinaryFit, HazardFit, SubdistributionFit, load
from tests.reference.packaging import (
    UPPER_95,
    limits_by_hand,
    package_binary,
    package_hazard,
    package_subdistribution,
    texts,
    through_file,
)

CLOSE = 1e-9
UPPER_90 = NormalDist().inv_cdf(0.95)

BINARY = ("birthwt_logit", "pima_logit", "pima_cloglog", "biopsy_tails", "esoph_freqweights", "retinopathy_robust")
HAZARD = (
    "lung_efron",
    "lung_breslow",
    "pbc_efron",
    "rotterdam_efron",
    "rotterdam_breslow",
    "veteran_strata",
    "retinopathy_cluster",
    "ties_tiny_efron",
    "ties_tiny_breslow",
)


def limits(estimate: Estimate | None) -> tuple[float, float]:
    assert estimate is not None
    assert estimate.band is not None
    return estimate.band.lower, estimate.band.upper


@pytest.mark.parametrize("name", BINARY)
@pytest.mark.parametrize(("level", "field"), [(0.95, "limits95"), (0.90, "limits90")])
def test_binary_fit(name: str, level: float, field: str) -> None:
    fit = load(name, BinaryFit)
    model = through_file(package_binary(fit))
    assert fit.predictions
    for expected in fit.predictions:
        entry = entry_from_texts(texts(fit.predictors, fit.profiles[expected.profile]))
        estimate = assess(model, entry, level=level).estimate
        assert estimate is not None
        assert estimate.eta == pytest.approx(expected.link, rel=0, abs=CLOSE)
        assert estimate.probability == pytest.approx(expected.probability, rel=0, abs=CLOSE)
        assert estimate.complement == pytest.approx(1 - expected.probability, rel=0, abs=CLOSE)
        assert limits(estimate) == pytest.approx(getattr(expected, field), rel=0, abs=CLOSE)


@pytest.mark.parametrize("kind", ["HC0", "HC1", "CL_HC0_nocadjust", "CL_HC1_cadjust"])
def test_robust_covariance(kind: str) -> None:
    """sandwich gives covariances and no limits: those follow from [1, x]'C[1, x] with the intercept's row in place."""
    fit = load("retinopathy_robust", BinaryFit)
    covariance = fit.robust[kind]
    model = through_file(package_binary(fit, covariance))
    for expected in fit.predictions:
        x = fit.profiles[expected.profile]
        estimate = assess(model, entry_from_texts(texts(fit.predictors, x))).estimate
        assert estimate is not None
        assert estimate.band is not None
        assert estimate.band.basis == "robust"
        assert estimate.probability == pytest.approx(expected.probability, rel=0, abs=CLOSE)
        assert limits(estimate) == pytest.approx(limits_by_hand(fit, covariance, x, UPPER_95), rel=0, abs=CLOSE)
        # and they are not those of the fit's own covariance
        assert max(abs(a - b) for a, b in zip(limits(estimate), expected.limits95, strict=True)) > 1e-4


@pytest.mark.parametrize("name", HAZARD)
def test_hazard_fit(name: str) -> None:
    fit = load(name, HazardFit)
    model = through_file(package_hazard(fit))
    assert len(fit.predictions) == len(fit.profiles) * len(model.spans)
    for expected in fit.predictions:
        profile = fit.profiles[expected.profile]
        entry = entry_from_texts(texts(fit.predictors, profile.values, profile.stratum))
        estimate = assess(model, entry, span=Span(expected.time, fit.unit)).estimate
        assert estimate is not None
        low, high = expected.loglog
        assert estimate.eta == pytest.approx(log(expected.cumulative_hazard), rel=0, abs=CLOSE)
        assert estimate.probability == pytest.approx(1 - expected.survival, rel=0, abs=CLOSE)
        # down to 1e-17: the complement keeps its relative accuracy
        assert estimate.complement == pytest.approx(expected.survival, rel=CLOSE, abs=0)
        assert limits(estimate) == pytest.approx((1 - high, 1 - low), rel=0, abs=CLOSE)


def test_subdistribution_fit() -> None:
    fit = load("mgus2_finegray", SubdistributionFit)
    model = through_file(package_subdistribution(fit))
    assert len(fit.predictions) == len(fit.profiles) * len(fit.times)
    for expected in fit.predictions:
        entry = entry_from_texts(texts(fit.predictors, fit.profiles[expected.profile]))
        estimate = assess(model, entry, span=Span(expected.time, fit.unit)).estimate
        assert estimate is not None
        assert estimate.probability == pytest.approx(expected.probability, rel=0, abs=CLOSE)
        assert estimate.band is None
        assert estimate.band_absent_because
