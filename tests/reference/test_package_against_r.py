"""R's fits through `package` and back out of `assess`: R's probabilities and R's limits, to the digits R gave.

The tables are written as R writes them; the baselines of hazard fits come once as sums and once as what survfit prints
for people. `packaging`, which works without the program's room, stands beside as a second opinion.
"""

from pathlib import Path

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.coefficients.baselines import baseline
from clinicalc.coefficients.schema import CovarianceBand, ModelContent, RobustBand
from clinicalc.coefficients.spans import Span
from tests.reference.figures import BinaryFit, HazardFit, SubdistributionFit, SubdistributionLimits, load
from tests.reference.packaging import UPPER_95, inverse_link, limits_by_hand, package_binary, package_hazard, texts
from tests.reference.test_against_r import BINARY, HAZARD, limits
from tests.reference.through_package import (
    package_binary_tables,
    package_incidence_limits,
    package_incidences,
    package_printed_people,
    package_sums,
)

CLOSE = 1e-9


def assert_same_figures(made: ModelContent, second: ModelContent) -> None:
    """Two packagings agree on coefficients, baselines, covariances, variances and centres of every equation."""
    for one, other in zip(made.equations, second.equations, strict=True):
        assert [term.coefficient for term in one.terms] == [term.coefficient for term in other.terms]
        lines = zip(one.horizons, other.horizons, strict=True)
        assert one.link == other.link
        for ours, theirs in [(baseline(a, one.link), baseline(b, one.link)) for a, b in lines]:
            assert ours == pytest.approx(theirs, rel=0, abs=1e-12)
        band, twin = one.uncertainty, other.uncertainty
        assert type(band) is type(twin)
        assert isinstance(band, CovarianceBand | RobustBand)
        assert isinstance(twin, CovarianceBand | RobustBand)
        assert np.array(band.covariance) == pytest.approx(np.array(twin.covariance), rel=1e-12)
        for mine, its in zip(band.at_centre, twin.at_centre, strict=True):
            assert mine.variance == pytest.approx(its.variance, rel=1e-9)
            assert mine.centre == pytest.approx(its.centre, rel=1e-9, abs=1e-9)


def assert_as_survfit_says(fit: HazardFit, model: Model) -> None:
    """Every profile at every horizon: R's survival and log-log limits."""
    assert len(fit.predictions) == len(fit.profiles) * len(model.spans)
    for expected in fit.predictions:
        profile = fit.profiles[expected.profile]
        entry = entry_from_texts(texts(fit.predictors, profile.values, profile.stratum))
        estimate = assess(model, entry, span=Span(expected.time, fit.unit)).estimate
        assert estimate is not None
        low, high = expected.loglog
        assert estimate.probability == pytest.approx(1 - expected.survival, rel=0, abs=CLOSE)
        assert estimate.complement == pytest.approx(expected.survival, rel=CLOSE, abs=0)
        assert limits(estimate) == pytest.approx((1 - high, 1 - low), rel=0, abs=CLOSE)


@pytest.mark.parametrize("name", BINARY)
def test_binary_fit(name: str, tmp_path: Path) -> None:
    fit = load(name, BinaryFit)
    model = package_binary_tables(fit, tmp_path)
    for expected in fit.predictions:
        estimate = assess(model, entry_from_texts(texts(fit.predictors, fit.profiles[expected.profile]))).estimate
        assert estimate is not None
        assert estimate.probability == pytest.approx(expected.probability, rel=0, abs=CLOSE)
        assert limits(estimate) == pytest.approx(expected.limits95, rel=0, abs=CLOSE)
    assert_same_figures(model.content, package_binary(fit))


@pytest.mark.parametrize("kind", ["HC0", "HC1", "CL_HC0_nocadjust", "CL_HC1_cadjust"])
def test_robust_covariance(kind: str, tmp_path: Path) -> None:
    fit = load("retinopathy_robust", BinaryFit)
    covariance = fit.robust[kind]
    model = package_binary_tables(fit, tmp_path, covariance)
    assert isinstance(model.content.equations[0].uncertainty, RobustBand)
    for expected in fit.predictions:
        x = fit.profiles[expected.profile]
        estimate = assess(model, entry_from_texts(texts(fit.predictors, x))).estimate
        assert limits(estimate) == pytest.approx(limits_by_hand(fit, covariance, x, UPPER_95), rel=0, abs=CLOSE)


@pytest.mark.parametrize("name", HAZARD)
def test_hazard_fit_from_sums(name: str, tmp_path: Path) -> None:
    fit = load(name, HazardFit)
    model = package_sums(fit, tmp_path)
    assert_as_survfit_says(fit, model)
    assert_same_figures(model.content, package_hazard(fit))


@pytest.mark.parametrize("form", ["cumhaz", "surv", "limits"])
@pytest.mark.parametrize(
    ("name", "people"),
    [
        # as few people as there can be, one more than terms; the others are predicted from them
        ("lung_efron", (0, 1, 2, 3, 4)),
        ("lung_breslow", (1, 2, 3, 4, 5)),
        ("retinopathy_cluster", (0, 1, 2, 4)),
    ],
)
def test_hazard_fit_from_printed_people(name: str, people: tuple[int, ...], form: str, tmp_path: Path) -> None:
    fit = load(name, HazardFit)
    model = package_printed_people(fit, tmp_path, people, form)
    assert len(people) == len(fit.predictors) + 1
    assert len(fit.profiles) > len(people)
    assert_as_survfit_says(fit, model)
    assert_same_figures(model.content, package_hazard(fit))


def test_incidences_without_a_band(tmp_path: Path) -> None:
    fit = load("mgus2_finegray", SubdistributionFit)
    model = package_incidences(fit, tmp_path)
    for expected in fit.predictions:
        entry = entry_from_texts(texts(fit.predictors, fit.profiles[expected.profile]))
        estimate = assess(model, entry, span=Span(expected.time, fit.unit)).estimate
        assert estimate is not None
        assert estimate.probability == pytest.approx(expected.probability, rel=0, abs=CLOSE)
        assert estimate.band is None


def test_incidences_with_robust_limits(tmp_path: Path) -> None:
    """As many people as are needed and no more: that the five come back shows the solution, not its check."""
    fit = load("mgus2_finegray_coxph", SubdistributionLimits)
    model = package_incidence_limits(fit, tmp_path)
    assert isinstance(model.content.equations[0].uncertainty, RobustBand)
    for expected in fit.predictions:
        entry = entry_from_texts(texts(fit.predictors, fit.profiles[expected.profile]))
        estimate = assess(model, entry, span=Span(expected.time, fit.unit)).estimate
        assert estimate is not None
        assert estimate.probability == pytest.approx(expected.probability, rel=0, abs=CLOSE)
        hazard = -np.log1p(-expected.probability)
        half = UPPER_95 * expected.se_cumulative_hazard / hazard
        wanted = [inverse_link("cloglog", float(np.log(hazard)) + side * half) for side in (-1, 1)]
        assert limits(estimate) == pytest.approx(wanted, rel=0, abs=CLOSE)
