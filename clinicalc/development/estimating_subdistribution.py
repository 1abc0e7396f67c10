"""A Fine–Gray fit to arrays, as the packaging takes it: slopes, their robust covariance, a baseline at each horizon."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.development.estimated_hazards import FixedTerms, lay_baselines
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fitted import rows_of
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.fine_gray import (
    CompetingCohort,
    FineGrayFit,
    fit_fine_gray,
    robust_subdistribution_covariance,
    sum_subdistribution,
)
from clinicalc.estimation.hazard_sums import RunningSums, Ties

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class SubdistributionPlan:
    """How a Fine–Gray fit is made: how ties are counted, the clusters if any, the horizons in the unit of the times."""

    ties: Ties
    cluster: Codes | None
    horizons: tuple[float, ...]


def fit_subdistribution(
    cohort: CompetingCohort, names: Sequence[str], fixed: FixedTerms, plan: SubdistributionPlan
) -> tuple[FineGrayFit, Fit]:
    """The engine's fit, and the Fit of its equation.

    At each horizon lp0 = ln H - x_ref'b, variance = A / H^2 and centre = x_ref + q / H with the sums of the
    subdistribution; the covariance beside the coefficients is robust, as in R's survfit of a clustered coxph. Raises
    FitRefused.
    """
    offset = fixed.sum if len(fixed.coefficients) else None
    asked = cohort if offset is None else replace(cohort, offset=offset - offset.mean())
    engine = fit_fine_gray(asked, ties=plan.ties)
    covariance = robust_subdistribution_covariance(asked, engine, ties=plan.ties, cluster=plan.cluster)

    def sum_near(x: Array, coefficients: Array) -> Sequence[RunningSums]:
        return sum_subdistribution(replace(cohort, x=x), coefficients, plan.horizons, ties=plan.ties)

    remark = (
        f"Fine–Gray fit to {engine.people:,} people with {engine.events:,} events and {engine.competing:,} competing "
        f"events, ties by {plan.ties.name.capitalize()}; an event comes before a censoring at the same time."
    )
    fit = Fit(
        kind=FitKind.FINE_GRAY,
        names=tuple(names),
        coefficients=tuple(engine.coefficients.tolist()),
        covariance=rows_of(covariance),
        robust=True,
        baselines=lay_baselines(cohort.x, fixed, engine.coefficients, sum_near),
        remarks=(remark,),
    )
    return engine, fit


def require_competing(id: str, status: Array) -> None:
    """Raises DescriptionRefused where nobody used has a competing event, and a Fine–Gray fit is a Cox fit; (n,)."""
    if (status == 2).any():
        return
    what = (
        f"none of the {len(status):,} people used has a competing event, and without one a Fine–Gray "
        "fit is a Cox fit by another name: the file would say that competing events were allowed for where none was "
        "seen. Check competing in [cohort]; if there really is none, leave it out there and say "
        'kind = "cox" and competing_events = {handled = "not_applicable"}.'
    )
    raise DescriptionRefused(id, (Problem(f"estimate.{id}.kind", what),))
