"""Subdistribution fits against R: coxph on the rows of survival::finegray, and cmprsk::crr by its own rule for ties."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.fine_gray import (
    CensoringTies,
    CompetingCohort,
    fit_fine_gray,
    robust_subdistribution_covariance,
    sum_subdistribution,
)
from clinicalc.estimation.hazard_sums import Ties
from tests.estimation import cohorts
from tests.estimation.r_fine_gray import (
    BRESLOW,
    BY_YEAR_OF_DIAGNOSIS,
    CRR_INVERSE,
    CRR_LOGLIK,
    EFRON,
    IN_YEARS,
    SubdistributionFigures,
)
from tests.reference.figures import SubdistributionFit, SubdistributionLimits, load

Array = NDArray[np.float64]

LIMIT = 1e-10  # the largest difference from R's fits is 5e-12, that of coxph's own end
FIGURES = {Ties.BRESLOW: BRESLOW, Ties.EFRON: EFRON}


def check(cohort: CompetingCohort, ties: Ties, expected: SubdistributionFigures) -> None:
    fit = fit_fine_gray(cohort, ties=ties)
    assert fit.coefficients == pytest.approx(expected.coefficients, rel=LIMIT)
    robust = robust_subdistribution_covariance(cohort, fit, ties=ties)
    assert robust == pytest.approx(np.array(expected.robust), rel=LIMIT)
    assert (robust == robust.T).all()
    assert fit.score_max < 1e-13
    if expected.logliks is not None:
        assert (fit.loglik_null, fit.loglik) == pytest.approx(expected.logliks, rel=1e-13)
    if expected.inverse:
        assert fit.inverse_information == pytest.approx(np.array(expected.inverse), rel=LIMIT)


def test_the_people_of_the_reference() -> None:
    cohort = cohorts.mgus2_competing()
    fit = fit_fine_gray(cohort)
    assert (fit.people, fit.events, fit.competing) == (1360, 114, 849)
    assert (cohort.status == 0).sum() == 397


@pytest.mark.parametrize("ties", Ties)
def test_coefficients_and_robust_covariance(ties: Ties) -> None:
    check(cohorts.mgus2_competing(), ties, FIGURES[ties])


@pytest.mark.parametrize("ties", Ties)
def test_heavy_ties_of_every_kind(ties: Ties) -> None:
    cohort = cohorts.mgus2_competing()
    check(replace(cohort, times=np.ceil(cohort.times / 12)), ties, IN_YEARS[ties])


@pytest.mark.parametrize("ties", Ties)
def test_clusters(ties: Ties) -> None:
    cohort, cluster = cohorts.mgus2_competing(), cohorts.mgus2_years_of_diagnosis()
    fit = fit_fine_gray(cohort, ties=ties)
    found = robust_subdistribution_covariance(cohort, fit, ties=ties, cluster=cluster)
    assert found == pytest.approx(np.array(BY_YEAR_OF_DIAGNOSIS[ties]), rel=LIMIT)
    alone = robust_subdistribution_covariance(cohort, fit, ties=ties, cluster=np.arange(len(cohort.times)))
    assert alone == pytest.approx(robust_subdistribution_covariance(cohort, fit, ties=ties), rel=1e-13)
    with pytest.raises(FitRefused) as refused:
        robust_subdistribution_covariance(cohort, fit, ties=ties, cluster=np.zeros(len(cohort.times), dtype=np.int64))
    assert refused.value.code == FitFault.TOO_FEW_CLUSTERS


def test_incidences_and_their_errors_at_profiles() -> None:
    """Var H(t|x) = r^2 {A + (z H - q)' V (z H - q)} with V robust, against survfit."""
    expected, cohort = load("mgus2_finegray_coxph", SubdistributionLimits), cohorts.mgus2_competing()
    fit = fit_fine_gray(cohort)
    covariance = robust_subdistribution_covariance(cohort, fit)
    middle = cohort.x.mean(axis=0)
    near = replace(cohort, x=cohort.x - middle)
    assert len(expected.predictions) == 15
    for told in expected.predictions:
        z = np.array(expected.profiles[told.profile]) - middle
        (sums,) = sum_subdistribution(near, fit.coefficients, [told.time])
        r = np.exp((z * fit.coefficients).sum())
        d = z * sums.hazard - sums.moments
        assert -np.expm1(-r * sums.hazard) == pytest.approx(told.probability, rel=1e-12)
        assert r * np.sqrt(sums.squares + d @ covariance @ d) == pytest.approx(told.se_cumulative_hazard, rel=1e-12)


def test_crr_by_its_rule_for_ties() -> None:
    """Its coefficients, information and baseline; its variance counts in that G was estimated, ours does not."""
    expected, cohort = load("mgus2_finegray", SubdistributionFit), cohorts.mgus2_competing()
    fit = fit_fine_gray(cohort, censoring=CensoringTies.TOGETHER)
    assert fit.coefficients == pytest.approx(expected.coefficients, rel=1e-12)
    assert fit.inverse_information == pytest.approx(np.array(CRR_INVERSE), rel=1e-12)
    assert fit.loglik == pytest.approx(CRR_LOGLIK, rel=1e-13)
    sums = sum_subdistribution(cohort, fit.coefficients, expected.times, censoring=CensoringTies.TOGETHER)
    assert [each.hazard for each in sums] == pytest.approx(expected.cumulative_hazards, rel=1e-11)
    apart = np.abs(fit_fine_gray(cohort).coefficients - fit.coefficients)
    assert 1e-4 < apart.max() < 1e-3


def test_an_offset_is_a_column_whose_coefficient_is_known() -> None:
    cohort = cohorts.mgus2_competing()
    whole = fit_fine_gray(cohort)
    held = replace(cohort, x=cohort.x[:, 1:], offset=cohort.x[:, 0] * whole.coefficients[0])
    part = fit_fine_gray(held)
    assert part.coefficients == pytest.approx(whole.coefficients[1:], rel=1e-10)
    assert part.loglik == pytest.approx(whole.loglik, rel=1e-13)
    sums = [sum_subdistribution(each, fit.coefficients, [120.0])[0] for each, fit in ((cohort, whole), (held, part))]
    assert sums[1].hazard == pytest.approx(sums[0].hazard, rel=1e-10)
    assert sums[1].squares == pytest.approx(sums[0].squares, rel=1e-10)


@pytest.mark.parametrize("away", [0.5, 1.5, -3.0, 1e4])
def test_where_the_steps_begin_does_not_matter(away: float) -> None:
    cohort = cohorts.mgus2_competing()
    fit = fit_fine_gray(cohort)
    again = fit_fine_gray(cohort, start=fit.coefficients * away)
    assert again.coefficients == pytest.approx(fit.coefficients, rel=1e-11)
    assert again.loglik_null == fit.loglik_null
    if away == 1.5:
        assert again.iterations <= fit.iterations


REFUSED: dict[FitFault, Callable[[CompetingCohort], CompetingCohort]] = {
    FitFault.NO_PEOPLE: lambda c: CompetingCohort(c.times[:0], c.status[:0], c.x[:0]),
    FitFault.STATUS_UNKNOWN: lambda c: replace(c, status=c.status + 1),
    FitFault.NO_EVENTS: lambda c: replace(c, status=np.where(c.status == 1, 0.0, c.status)),
    FitFault.TIME_NOT_POSITIVE: lambda c: replace(c, times=c.times - 1.0),
    FitFault.WEIGHT_NOT_POSITIVE: lambda c: replace(c, weights=np.zeros(len(c.times))),
    FitFault.NOT_FINITE: lambda c: replace(c, times=np.where(c.times > 100, np.nan, c.times)),
    FitFault.NO_COLUMNS: lambda c: replace(c, x=c.x[:, :0]),
    FitFault.CONSTANT: lambda c: replace(c, x=np.column_stack([c.x, np.full(len(c.times), 0.1)])),
    FitFault.COLLINEAR: lambda c: replace(c, x=np.column_stack([c.x, c.x[:, 0] + c.x[:, 2]])),
    FitFault.SEPARATED: lambda c: replace(c, x=np.column_stack([c.x, (c.status == 1) * 1.0])),
    FitFault.MORE_COLUMNS_THAN_EVENTS: lambda c: replace(c, status=np.where(np.cumsum(c.status == 1) > 3, 0, c.status)),
}
AT = {FitFault.CONSTANT: (4,), FitFault.COLLINEAR: (0, 2, 4), FitFault.SEPARATED: (4,)}


@pytest.mark.parametrize("fault", REFUSED)
def test_what_no_fit_is_made_from(fault: FitFault) -> None:
    with pytest.raises(FitRefused) as refused:
        fit_fine_gray(REFUSED[fault](cohorts.mgus2_competing()))
    assert (refused.value.code, refused.value.columns) == (fault, AT.get(fault, ()))
