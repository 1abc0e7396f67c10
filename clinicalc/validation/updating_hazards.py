"""Hazard models updated to people who were followed: baseline, baseline and slope, refit; Cox, and Fine & Gray.

The baseline comes from the sums of those at risk with the coefficients as they stand (Breslow's or Efron's): with
g = ln H of somebody whose x'b is 0, H and A and q as in `hazard_sums`, var g = A / H^2 + c^2 V and cov(g, slope) =
-c V, where V is the variance of the slope (0 where it stays 1) and c the mean x'b of those at risk by event.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.fine_gray import (
    CompetingCohort,
    fit_fine_gray,
    robust_subdistribution_covariance,
    sum_subdistribution,
)
from clinicalc.estimation.hazard_sums import Cohort, RunningSums, Ties, sum_hazards
from clinicalc.validation.updating_people import EquationPeople, sum_terms

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Followed:
    """Times (n,), status 0, 1, 2, entry or None; with `subdistribution` whoever had another event stays at risk."""

    times: Array
    status: Array
    entry: Array | None
    subdistribution: bool

    @property
    def events(self) -> Array:
        """1 for whoever had the event, (n,)."""
        return np.asarray(self.status == 1, dtype=np.float64)

    @property
    def ties(self) -> Ties:
        """How events at one time are counted: Efron for a Cox model, Breslow for a subdistribution."""
        return Ties.BRESLOW if self.subdistribution else Ties.EFRON

    def cohort(self, x: Array, offset: Array | None = None) -> Cohort:
        """The people with these terms; other events are the end of watching."""
        return Cohort(self.times, self.events, x, self.entry, None, offset)

    def competing(self, x: Array, offset: Array | None = None) -> CompetingCohort:
        """The people with these terms, other events as such."""
        return CompetingCohort(self.times, self.status, x, None, offset)


@dataclass(frozen=True, slots=True)
class SlopeFit:
    """The slope of x'b, its variance, and how much a slope of 1 is worse than it, as chi2 (Fine & Gray: Wald's)."""

    slope: float
    variance: float
    loglik_one: float | None
    loglik: float | None
    worse_by: float


@dataclass(frozen=True, slots=True)
class Level:
    """At one horizon g = ln H of somebody with x'b = 0: `own` is A / H^2 and `centre` c."""

    g: float
    own: float
    centre: float


@dataclass(frozen=True, slots=True, eq=False)
class HazardRefit:
    """Coefficients, their covariance, baselines (lp0, variance, centre); `null` is the chi2 against no term at all.

    `squares` are b'V^-1 b, b'V^-1 b0 and b0'V^-1 b0 with the coefficients b0 as they stood, for tests after Wald.
    """

    coefficients: Array
    covariance: Array
    baselines: tuple[tuple[float, float, tuple[float, ...]], ...]
    loglik: float | None
    squares: tuple[float, float, float]
    null: float


def follow(part: EquationPeople, outcome: SurvivalOutcome, *, subdistribution: bool) -> Followed:
    """What was seen of the people of one equation."""
    entry = None if outcome.entry is None else part.part(outcome.entry)
    return Followed(part.part(outcome.times), part.part(outcome.status), entry, subdistribution)


def fit_slope(followed: Followed, lp: Array, strata: NDArray[np.int64] | None = None) -> SlopeFit:
    """The slope beside an offset of x'b, so that the fit without it is that of the coefficients as they stand.

    Raises FitRefused.
    """
    offset = lp - lp.mean()
    column = offset[:, None]
    if followed.subdistribution:
        cohort = followed.competing(column, offset)
        there = fit_fine_gray(cohort, ties=followed.ties)
        variance = float(robust_subdistribution_covariance(cohort, there, ties=followed.ties)[0, 0])
        moved = float(there.coefficients[0])
        return SlopeFit(1.0 + moved, variance, None, None, moved * moved / variance)
    fit = fit_cox(followed.cohort(column, offset), ties=followed.ties, strata=strata)
    worse = 2 * (fit.loglik - fit.loglik_null)
    return SlopeFit(1.0 + float(fit.coefficients[0]), float(fit.covariance[0, 0]), fit.loglik_null, fit.loglik, worse)


def find_levels(followed: Followed, lp: Array, slope: float, times: Sequence[float]) -> tuple[Level, ...]:
    """The baselines at these times, with x'b times the slope; sums run about its mean, where they keep their digits."""
    middle = float(lp.mean())
    sums = _sums(followed, (lp - middle)[:, None], np.array([slope]), times)
    return tuple(
        Level(
            float(np.log(one.hazard)) - slope * middle,
            one.squares / (one.hazard * one.hazard),
            middle + float(one.moments[0]) / one.hazard,
        )
        for one in sums
    )


def refit_hazard(part: EquationPeople, followed: Followed, times: Sequence[float]) -> HazardRefit:
    """The terms of one equation estimated anew, those marked fixed as they are. Raises FitRefused."""
    estimated, terms = list(part.estimated), part.equation.content.terms
    fixed = [place for place in range(len(terms)) if place not in estimated]
    away = sum_terms(part.x[:, fixed], [terms[place].coefficient for place in fixed])
    offset = away - away.mean() if fixed else None
    x = np.asfortranarray(part.x[:, estimated])
    old = np.array([terms[place].coefficient for place in estimated])
    if followed.subdistribution:
        people = followed.competing(x, offset)
        there = fit_fine_gray(people, ties=followed.ties)
        b, v = there.coefficients, robust_subdistribution_covariance(people, there, ties=followed.ties)
        loglik, null = None, _wald(b, b, v)
    else:
        fit = fit_cox(followed.cohort(x, offset), ties=followed.ties)
        b, v, loglik = fit.coefficients, fit.covariance, fit.loglik
        null = 2 * (fit.loglik - fit.loglik_null)
    squares = (_wald(b, b, v), _wald(b, old, v), _wald(old, old, v))
    baselines = _lay(x, b, away, followed, times)
    return HazardRefit(b, v, baselines, loglik, squares, null)


def _lay(
    x: Array, b: Array, away: Array, followed: Followed, times: Sequence[float]
) -> tuple[tuple[float, float, tuple[float, ...]], ...]:
    """lp0 = ln H - x_ref'b, variance A / H^2, centre x_ref + q / H, with the sums about the means."""
    reference, middle = x.mean(axis=0), float(away.mean())
    near = np.empty((len(x), len(b) + 1), order="F")
    for place in range(len(b)):
        near[:, place] = x[:, place] - reference[place]
    near[:, -1] = away - middle
    moved = float((reference * b).sum()) + middle
    return tuple(
        (
            float(np.log(one.hazard)) - moved,
            one.squares / (one.hazard * one.hazard),
            tuple((reference + one.moments[:-1] / one.hazard).tolist()),
        )
        for one in _sums(followed, near, np.append(b, 1.0), times)
    )


def _sums(followed: Followed, x: Array, b: Array, times: Sequence[float]) -> tuple[RunningSums, ...]:
    if followed.subdistribution:
        return sum_subdistribution(followed.competing(x), b, times, ties=followed.ties)
    return sum_hazards(followed.cohort(x), b, times, followed.ties)


def _wald(left: Array, right: Array, covariance: Array) -> float:
    """left'V^-1 right, on the correlation scale."""
    sd = np.sqrt(np.diag(covariance))
    return float((left / sd * np.linalg.solve(covariance / np.outer(sd, sd), right / sd)).sum())
