"""A Cox fit to arrays, as the packaging takes it: one equation, or several strata with a baseline for each."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.development.fit import Fit, FitBaseline, FitKind
from clinicalc.development.fitted import rows_of
from clinicalc.development.squares import square_of_sums
from clinicalc.estimation.cox import CoxFit, fit_cox
from clinicalc.estimation.cox_residuals import robust_covariance
from clinicalc.estimation.hazard_sums import Cohort, RunningSums, Ties, sum_hazards

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class HazardPlan:
    """How a Cox fit is made: how ties are counted, whose covariance, the horizons of each stratum in the fit's unit."""

    ties: Ties
    robust: bool
    cluster: Codes | None
    horizons: tuple[tuple[float, ...], ...]


@dataclass(frozen=True, slots=True, eq=False)
class FixedTerms:
    """Terms whose coefficients were not estimated: x of shape (n, q), (q,)."""

    x: Array
    coefficients: Array

    @property
    def sum(self) -> Array:
        """What they add to the linear predictor, (n,)."""
        total = np.zeros(len(self.x))
        for column, coefficient in enumerate(self.coefficients):
            total += self.x[:, column] * coefficient
        return total


def fit_hazards(
    cohort: Cohort, names: Sequence[str], fixed: FixedTerms, strata: Codes, plan: HazardPlan
) -> tuple[CoxFit, tuple[Fit, ...]]:
    """The engine's fit, and one Fit for each stratum (code 0, 1, ...), all with the same slopes and covariance.

    At each horizon lp0 = ln H - x_ref'b, variance = A / H^2 and centre = x_ref + q / H, where the sums H, A and q are
    those of the stratum about its means x_ref. A robust covariance takes the place of the model's beside the
    coefficients; the baseline's variance stays as it is (as in R's survfit). Raises FitRefused.
    """
    asked = centred_offset(cohort, fixed)
    several = strata if len(plan.horizons) > 1 else None
    fit = fit_cox(asked, ties=plan.ties, strata=several)
    covariance = fit.covariance
    if plan.robust:
        covariance = robust_covariance(asked, fit, plan.ties, strata=several, cluster=plan.cluster)
    return fit, fits_of(cohort, names, fixed, strata, plan, fit, covariance)


def centred_offset(cohort: Cohort, fixed: FixedTerms) -> Cohort:
    """The people with the fixed terms as an offset about its mean, as they are where there are none."""
    offset = fixed.sum
    return replace(cohort, offset=offset - offset.mean()) if len(fixed.coefficients) else cohort


def fits_of(
    cohort: Cohort,
    names: Sequence[str],
    fixed: FixedTerms,
    strata: Codes,
    plan: HazardPlan,
    fit: CoxFit,
    covariance: Array,
    how: str = "",
) -> tuple[Fit, ...]:
    """A Fit for each stratum with the engine's coefficients and this covariance; `how` are words of its remark."""
    where = f" in {len(plan.horizons)} strata" if len(plan.horizons) > 1 else ""
    ties = plan.ties.name.capitalize()
    remark = f"Cox fit{how}{where} to {fit.people:,} people with {fit.events:,} events, ties by {ties}."
    fits = []
    for code, horizons in enumerate(plan.horizons):
        rows = strata == code
        part = cohort if rows.all() else _part_of(cohort, rows)
        held = FixedTerms(fixed.x[rows], fixed.coefficients)
        fits.append(
            Fit(
                kind=FitKind.COX,
                names=tuple(names),
                coefficients=tuple(fit.coefficients.tolist()),
                covariance=rows_of(covariance),
                robust=plan.robust,
                baselines=_baselines(part, held, fit.coefficients, horizons, plan.ties),
                remarks=(remark,),
            )
        )
    return tuple(fits)


def _part_of(cohort: Cohort, rows: NDArray[np.bool_]) -> Cohort:
    entry = None if cohort.entry is None else cohort.entry[rows]
    return Cohort(cohort.times[rows], cohort.events[rows], cohort.x[rows], entry)


def lay_baselines(
    x: Array, fixed: FixedTerms, b: Array, sum_near: Callable[[Array, Array], Sequence[RunningSums]]
) -> tuple[FitBaseline, ...]:
    """The baselines of one stratum with terms x (n, p) of slopes b (p,).

    `sum_near` makes the sums of all columns, estimated and fixed, about their means, where exponentials keep their
    digits, with all coefficients; lp0 = ln H - x_ref'b, variance = A / H^2 and centre = x_ref + q / H.
    """
    x_ref, fixed_ref = x.mean(axis=0), fixed.x.mean(axis=0)
    near = np.empty((len(x), len(b) + len(fixed_ref)), order="F")
    for place in range(len(b)):
        near[:, place] = x[:, place] - x_ref[place]
    for place in range(len(fixed_ref)):
        near[:, len(b) + place] = fixed.x[:, place] - fixed_ref[place]
    away = float((x_ref * b).sum() + (fixed_ref * fixed.coefficients).sum())
    found = []
    for sums in sum_near(near, np.concatenate([b, fixed.coefficients])):
        square = square_of_sums(sums.hazard, sums.squares, sums.moments[: len(b)])
        centre = tuple((x_ref + square.centre).tolist())
        found.append(FitBaseline(sums.time, float(np.log(sums.hazard)) - away, square.variance, centre))
    return tuple(found)


def _baselines(
    cohort: Cohort, fixed: FixedTerms, b: Array, horizons: tuple[float, ...], ties: Ties
) -> tuple[FitBaseline, ...]:
    def sum_near(x: Array, coefficients: Array) -> Sequence[RunningSums]:
        return sum_hazards(replace(cohort, x=x), coefficients, horizons, ties)

    return lay_baselines(cohort.x, fixed, b, sum_near)
