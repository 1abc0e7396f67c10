"""One fit of a study: the arrays of its people, the engine's fit, its figures."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, Codes, Column, SurvivalOutcome
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.development.estimated_hazards import FixedTerms, HazardPlan, fit_hazards
from clinicalc.development.estimated_risks import fit_risks
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.study_figures import FitFigures, LeftOut
from clinicalc.development.study_horizons import find_follow_up, horizon_figures, remark_few_at_risk, require_horizons
from clinicalc.development.study_people import FitPeople, equations_of, term_columns
from clinicalc.development.study_screening import Screening, screen_fit
from clinicalc.development.study_strata import FitPlan
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.concordance import Concordance, find_concordance
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.people_at_risk import round_times
from clinicalc.estimation.sample_size import r2_from_likelihoods

Array = NDArray[np.float64]
ROUND_TIMES = 9
"""Decimals to which times are rounded before ties are looked for, where a study does not say."""


@dataclass(frozen=True, slots=True, eq=False)
class Ground:
    """What one fit of a study is made from."""

    plan: FitPlan
    model: Model
    cohort: CheckedCohort
    people: FitPeople
    course: Course = UNWATCHED

    @property
    def equations(self) -> tuple[ModelEquation, ...]:
        """The equations it fills."""
        return equations_of(self.model, self.plan)

    @property
    def estimated(self) -> tuple[str, ...]:
        """Ids of the terms whose coefficients are estimated, in order; they are those of every equation."""
        return tuple(term.id for term in self.equations[0].terms if not term.fixed)


@dataclass(frozen=True, slots=True, eq=False)
class Estimated:
    """One fit made: a Fit for each of its equations, its figures, and eta but for a constant of each person, (n,)."""

    fits: tuple[Fit, ...]
    figures: FitFigures
    linear_predictor: Column
    remarks: tuple[str, ...]


@dataclass(frozen=True, slots=True, eq=False)
class _Made:
    fits: tuple[Fit, ...]
    null: float
    loglik: float
    linear_predictor: Column


def estimate_one(ground: Ground) -> Estimated:
    """The fit. Raises FitRefused (columns are places among the estimated terms), DescriptionRefused for a horizon."""
    terms = ground.equations[0].terms
    columns = term_columns(terms, ground.people)
    x = _matrix(tuple(c for c, term in zip(columns, terms, strict=True) if not term.fixed), ground)
    fixed = FixedTerms(
        _matrix(tuple(c for c, term in zip(columns, terms, strict=True) if term.fixed), ground),
        np.array([term.coefficient for term in terms if term.fixed]),
    )
    outcome = ground.cohort.outcome
    if isinstance(outcome, BinaryOutcome):
        return _estimate_risks(ground, outcome.y[ground.people.used], x, fixed)
    return _estimate_hazards(ground, outcome, x, fixed)


def times_of(ground: Ground, outcome: SurvivalOutcome, x: Array) -> Cohort:
    """The people of a Cox fit: times rounded, events 1 where the status is 1; competing events are censored."""
    rows, decimals = ground.people.used, ground.plan.table.round_times
    entry = None if outcome.entry is None else outcome.entry[rows]
    if entry is not None and not (entry > 0).any():
        entry = None  # all were there from time nought on, which is no late entry
    cohort = Cohort(outcome.times[rows], (outcome.status[rows] == 1).astype(np.float64), x, entry)
    return round_times(cohort, ROUND_TIMES if isinstance(decimals, UnsetType) else decimals)


def clusters_of(ground: Ground) -> Codes | None:
    """The code of each person's cluster, where the fit is to be robust against them.

    Raises DescriptionRefused where there are too few: over G clusters such a covariance has rank G - 1 at most.
    """
    table = ground.plan.table
    if table.covariance != "cluster" or ground.cohort.cluster is None:
        return None
    codes = ground.cohort.cluster[ground.people.used]
    found, needed = len(np.unique(codes)), len(ground.estimated) + (table.kind != "cox")
    if found <= needed:
        what = (
            f'column "{table.cluster}" has {found} clusters among the people used, and the covariance of {needed} '
            f"coefficients needs more than {needed}, and some tens before it can be trusted. Take another column, or "
            'say covariance = "robust" or "model".'
        )
        raise DescriptionRefused(ground.plan.id, (Problem(f"estimate.{ground.plan.id}.cluster", what),))
    return codes


def _estimate_risks(ground: Ground, y: Column, x: Array, fixed: FixedTerms) -> Estimated:
    table = ground.plan.table
    robust = table.covariance != "model"
    engine, fit = fit_risks(
        y, x, ground.estimated, fixed, FitKind(table.kind), robust=robust, cluster=clusters_of(ground)
    )
    ground.course.go_on()
    lp = _predict(x, engine.coefficients[1:], fixed)
    made = _Made((fit,), engine.loglik_null, engine.loglik, lp)
    c = find_concordance(1.0 - y, y, lp, cluster=clusters_of(ground))
    ground.course.go_on()
    r2 = r2_from_likelihoods(engine.loglik_null, engine.loglik, len(y))
    screening = screen_fit(ground.model, ground.equations, ground.people, ground.cohort, r2)
    return _finish(ground, made, c, screening, int(y.sum()))


def _estimate_hazards(ground: Ground, outcome: SurvivalOutcome, x: Array, fixed: FixedTerms) -> Estimated:
    cohort = times_of(ground, outcome, x)
    strata = ground.people.stratum[ground.people.complete]
    times = require_horizons(ground.plan, ground.equations, cohort, strata, outcome.unit)
    table = ground.plan.table
    plan = HazardPlan(
        ties=Ties.EFRON if isinstance(table.ties, UnsetType) else Ties(table.ties),
        robust=table.covariance != "model",
        cluster=clusters_of(ground),
        horizons=times,
    )
    engine, fits = fit_hazards(cohort, ground.estimated, fixed, strata, plan)
    ground.course.go_on()
    lp = _predict(x, engine.coefficients, fixed)
    c = None
    if cohort.entry is None:
        c = find_concordance(cohort.times, cohort.events, lp, strata=strata, cluster=plan.cluster)
    ground.course.go_on()
    r2 = r2_from_likelihoods(engine.loglik_null, engine.loglik, len(lp))
    screening = screen_fit(ground.model, ground.equations, ground.people, ground.cohort, r2, horizon=max(times[0]))
    made = _Made(fits, engine.loglik_null, engine.loglik, lp)
    return _finish(ground, made, c, screening, engine.events, cohort, times)


def _finish(
    ground: Ground,
    made: _Made,
    c: Concordance | None,
    screening: Screening,
    events: int,
    cohort: Cohort | None = None,
    times: tuple[tuple[float, ...], ...] = (),
) -> Estimated:
    outcome, used = ground.cohort.outcome, ground.people.used
    strata = ground.people.stratum[ground.people.complete]
    figures = FitFigures(
        id=ground.plan.id,
        equations=ground.plan.equations,
        kind=ground.plan.table.kind,
        people=len(used),
        events=events,
        competing=int((outcome.status[used] == 2).sum()) if isinstance(outcome, SurvivalOutcome) else 0,
        terms=len(ground.estimated),
        left_out=LeftOut(len(ground.people.rows), len(ground.people.rows) - len(used), screening.missing),
        loglik_null=made.null,
        loglik=made.loglik,
        concordance=c,
        follow_up=find_follow_up(cohort, outcome.unit) if isinstance(outcome, SurvivalOutcome) and cohort else None,
        horizons=() if cohort is None else tuple(horizon_figures(ground.equations, cohort, strata, times)),
        screened=screening.found,
        minimum=screening.minimum,
    )
    remarks = tuple(_remarks(figures))
    if cohort is not None and isinstance(outcome, SurvivalOutcome):
        remarks += tuple(remark_few_at_risk(ground.equations, cohort, strata, times, outcome.unit))
    return Estimated(made.fits, figures, made.linear_predictor, remarks)


def _remarks(figures: FitFigures) -> Iterator[str]:
    if figures.competing:
        yield (
            f"{figures.id}: {figures.competing:,} competing events were taken as censored. The probability is that of "
            "a world in which they do not happen, above the share of people who will have the event."
        )
    if figures.follow_up is not None and figures.concordance is None:
        yield (
            f"{figures.id}: people came under observation after time nought, so no C was worked out. Horizons count "
            "from time nought: it must be the moment at which the probability is asked for."
        )


def _matrix(columns: tuple[Column, ...], ground: Ground) -> Array:
    x = np.empty((len(ground.people.used), len(columns)), order="F")
    for place, column in enumerate(columns):
        x[:, place] = column
    return x


def _predict(x: Array, b: Array, fixed: FixedTerms) -> Column:
    total = fixed.sum
    for place, slope in enumerate(b):
        total += x[:, place] * slope
    return total
