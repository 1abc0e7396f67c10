"""Score residuals of a proportional hazards fit, exact under Efron's rule, and the covariances made from them.

Lin & Wei, J Am Stat Assoc 1989;84:1074; under Efron's rule a death counts less in the later steps of its own tie, as
Therneau & Grambsch (2000), chapter 7, have it. Somebody's residual is (x - mean of x over those at risk) at his own
event, less the same at each step he was at risk in, times his hazard of that step.
"""

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.clusters import make_sandwich, sum_clusters
from clinicalc.estimation.cox import CoxFit
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.people_at_risk import RiskSets, find_risk_sets

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


def score_residuals(cohort: Cohort, coefficients: Array, ties: Ties, *, strata: Codes | None = None) -> Array:
    """One row for each person, (n, p), weights included; each column sums to the score."""
    residuals = np.zeros(cohort.x.shape)
    codes = np.zeros(len(cohort.times), dtype=np.int64) if strata is None else strata
    for rows in _strata(codes):
        weights = None if cohort.weights is None else cohort.weights[rows]
        entry = None if cohort.entry is None else cohort.entry[rows]
        offset = None if cohort.offset is None else cohort.offset[rows]
        part = Cohort(cohort.times[rows], cohort.events[rows], cohort.x[rows], entry, weights, offset)
        residuals[rows] = residuals_over(find_risk_sets(part, ties), part, coefficients)
    return residuals


def robust_covariance(
    cohort: Cohort, fit: CoxFit, ties: Ties, *, strata: Codes | None = None, cluster: Codes | None = None
) -> Array:
    """The covariance (p, p) of Lin & Wei; with `cluster`, a code for each person, residuals are first summed.

    No correction for few clusters, as R's coxph has none. Refuses fewer than two clusters.
    """
    rows = score_residuals(cohort, fit.coefficients, ties, strata=strata)
    if cluster is not None:
        rows = sum_clusters(rows, cluster)
    return make_sandwich(fit.covariance, rows)


def _strata(codes: Codes) -> list[NDArray[np.intp]]:
    order = np.argsort(codes, kind="stable")
    return np.split(order, np.flatnonzero(np.diff(codes[order])) + 1)


def residuals_over(sets: RiskSets, cohort: Cohort, coefficients: Array) -> Array:
    """The residuals (n, p) of one stratum, of which `sets` are those at risk."""
    # a mean taken off a column changes no residual and keeps its digits
    x = cohort.x - cohort.x.mean(axis=0)
    lp = np.zeros(len(cohort.times)) if cohort.offset is None else cohort.offset.copy()
    for column, slope in enumerate(coefficients):
        lp += x[:, column] * slope
    r = np.exp(lp)
    weights = np.ones(len(r)) if cohort.weights is None else cohort.weights
    weighted = weights * r
    left0 = sets.sum_left(weighted)
    jumps = sets.mass / left0
    gathered = _spread(sets, jumps)
    # within a tie each step is the same part of the event
    part = sets.mass / sets.sum_steps(sets.mass)[sets.place]
    residuals = np.empty(x.shape)
    for column in range(x.shape[1]):
        means = sets.sum_left(weighted * x[:, column]) / left0
        residuals[:, column] = r * (_spread(sets, jumps * means) - x[:, column] * gathered)
        own = sets.sum_steps(part * means)[sets.own]
        residuals[sets.dead, column] += x[sets.dead, column] - own
        residuals[:, column] *= weights
    return residuals


def _spread(sets: RiskSets, values: Array) -> Array:
    """What each person gathers of `values` (M,): each step at risk, less his share in his own tie."""
    gathered = sets.spread_steps(values)
    gathered[sets.dead] -= sets.sum_steps(sets.share * values)[sets.own]
    return gathered
