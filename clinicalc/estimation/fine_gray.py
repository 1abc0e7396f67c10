"""A subdistribution hazards model of one event among competing ones, after Fine & Gray: the Newton steps of a Cox fit.

Fine & Gray, J Am Stat Assoc 1999;94:496. The sums run over those who count at each event time (`subdistribution`), so
that coefficients are those of R's coxph on the rows of survival::finegray. The inverse of the information is no
covariance here, as the weights stand for people: it is robust, Lin & Wei, J Am Stat Assoc 1989;84:1074, each person or
each cluster once; that G was estimated too is left out, as in R.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.clusters import make_sandwich, sum_clusters
from clinicalc.estimation.columns import (
    ScaledColumns,
    are_alike,
    has_inverse,
    invert,
    refuse_flat,
    scale_columns,
    straighten,
    turn_back,
)
from clinicalc.estimation.cox import SCORE_SLACK, State, Stratum, climb, look
from clinicalc.estimation.cox_residuals import residuals_over
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.hazard_sums import RunningSums, Ties, score_over, sums_over
from clinicalc.estimation.subdistribution import (
    CensoringTies,
    CompetingCohort,
    SubdistributionSets,
    find_subdistribution_sets,
)

__all__ = [
    "CensoringTies",
    "CompetingCohort",
    "FineGrayFit",
    "fit_fine_gray",
    "robust_subdistribution_covariance",
    "sum_subdistribution",
]

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class FineGrayFit:
    """Coefficients (p,) and the inverse of the information (p, p) on the scale of the columns given.

    The inverse is the bread of the robust covariance and no covariance itself. `score_max` is the largest score of a
    scaled column that was left, for each person: proven below 1e-8. `events` and `competing` count rows.
    """

    coefficients: Array
    inverse_information: Array
    loglik_null: float
    loglik: float
    score_max: float
    iterations: int
    people: int
    events: int
    competing: int


def fit_fine_gray(
    cohort: CompetingCohort,
    *,
    ties: Ties = Ties.BRESLOW,
    censoring: CensoringTies = CensoringTies.EVENT_FIRST,
    start: Array | None = None,
    tol: float = 1e-16,
    sets: SubdistributionSets | None = None,
) -> FineGrayFit:
    """The fit; raises FitRefused (code of FitFault, places of the columns).

    `start` are coefficients (p,) from which the steps begin, such as those of a like fit; the answer does not depend on
    them. Weights may be counts of rows drawn again, but not 0: leave such rows out. Under Breslow's rule that is the
    same as rows repeated; under Efron's it is not. Without a competing event it is the Cox fit. `sets` are those of
    these people and rules, who must then stand in the order of time.
    """
    events = _check_people(cohort)
    columns = scale_columns(cohort.x)
    if len(columns.centre) > events:
        raise refuse_fit(FitFault.MORE_COLUMNS_THAN_EVENTS)
    part = _sort(cohort, columns, ties, censoring, sets)
    null = look([part], np.zeros(len(columns.centre)))
    refuse_flat(null.information, len(cohort.times))
    found, steps = climb([part], null, tol, _begin(part, start, columns))
    worst = float(np.abs(score_over(part.sets, part.cohort, found.b)).max()) / len(cohort.times)
    if not worst <= SCORE_SLACK:
        raise refuse_fit(FitFault.NOT_CONVERGED)
    return FineGrayFit(
        coefficients=found.b / columns.spread,
        inverse_information=_invert_at(found, part) / np.outer(columns.spread, columns.spread),
        loglik_null=null.loglik,
        loglik=found.loglik,
        score_max=worst,
        iterations=steps,
        people=len(cohort.times),
        events=events,
        competing=int((cohort.status == 2).sum()),
    )


def robust_subdistribution_covariance(
    cohort: CompetingCohort,
    fit: FineGrayFit,
    *,
    ties: Ties = Ties.BRESLOW,
    censoring: CensoringTies = CensoringTies.EVENT_FIRST,
    cluster: Codes | None = None,
    sets: SubdistributionSets | None = None,
) -> Array:
    """The covariance (p, p) of Lin & Wei; with `cluster`, a code for each person, residuals are first summed.

    No correction for few clusters, as R's coxph has none. Refuses fewer than two clusters. `sets` are those of these
    people and rules, where they have been found already.
    """
    sets = find_subdistribution_sets(cohort, ties, censoring) if sets is None else sets
    rows = residuals_over(sets, cohort.as_cohort, fit.coefficients)
    return make_sandwich(fit.inverse_information, rows if cluster is None else sum_clusters(rows, cluster))


def sum_subdistribution(
    cohort: CompetingCohort,
    coefficients: Array,
    at: Sequence[float],
    *,
    ties: Ties = Ties.BRESLOW,
    censoring: CensoringTies = CensoringTies.EVENT_FIRST,
    sets: SubdistributionSets | None = None,
) -> tuple[RunningSums, ...]:
    """H, A and q of the subdistribution at each of the times `at`: the incidence at x = 0 is 1 - exp(-H).

    As R's survfit of coxph has them: the sums of a Cox fit over those who count. `sets` are those of these people and
    rules, where they have been found already.
    """
    sets = find_subdistribution_sets(cohort, ties, censoring) if sets is None else sets
    return sums_over(sets, cohort.as_cohort, coefficients, at)


def _check_people(cohort: CompetingCohort) -> int:
    """The number of events; raises FitRefused for what no fit can be made from."""
    if not len(cohort.times):
        raise refuse_fit(FitFault.NO_PEOPLE)
    if not np.isin(cohort.status, (0.0, 1.0, 2.0)).all():
        raise refuse_fit(FitFault.STATUS_UNKNOWN)
    for values in (cohort.times, cohort.weights, cohort.offset):
        if values is not None and not np.isfinite(values).all():
            raise refuse_fit(FitFault.NOT_FINITE)
    if (cohort.times <= 0).any():
        raise refuse_fit(FitFault.TIME_NOT_POSITIVE)
    if cohort.weights is not None and (cohort.weights <= 0).any():
        raise refuse_fit(FitFault.WEIGHT_NOT_POSITIVE)
    events = int((cohort.status == 1).sum())
    if not events:
        raise refuse_fit(FitFault.NO_EVENTS)
    return events


def _sort(
    cohort: CompetingCohort,
    columns: ScaledColumns,
    ties: Ties,
    censoring: CensoringTies,
    sets: SubdistributionSets | None,
) -> Stratum:
    """The people with scaled columns, in the order of time."""
    rows = np.argsort(cohort.times, kind="stable")
    z = np.empty((len(rows), len(columns.centre)), order="F")
    for place in range(len(columns.centre)):
        z[:, place] = columns.z[rows, place]
    there = CompetingCohort(
        cohort.times[rows],
        cohort.status[rows],
        z,
        None if cohort.weights is None else cohort.weights[rows],
        None if cohort.offset is None else cohort.offset[rows],
    )
    weights = np.ones(len(rows)) if there.weights is None else there.weights
    sets = find_subdistribution_sets(there, ties, censoring) if sets is None else sets
    return Stratum(there.as_cohort, sets, weights, weights * (there.status == 1))


def _begin(part: Stratum, start: Array | None, columns: ScaledColumns) -> State | None:
    """The state at the coefficients to begin with; None where there are none, or nothing can be begun with them."""
    if start is None:
        return None
    state = look([part], start * columns.spread)
    return state if np.isfinite(state.loglik) and has_inverse(state.information) else None


def _invert_at(state: State, part: Stratum) -> Array:
    """The inverse of the information at b, (p, p), on scaled columns; where they are alike, by way of straight ones."""
    if not are_alike(state.information):
        return invert(state.information)
    q, triangle = straighten(part.cohort.x)
    straight = look([replace(part, cohort=replace(part.cohort, x=q))], triangle @ state.b)
    return turn_back(invert(straight.information), triangle)
