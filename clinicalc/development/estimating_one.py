"""One fit of a study: the arrays of its people, the engine's fit, its figures."""

from dataclasses import dataclass, replace

import numpy as np
from msgspec import UnsetType

from clinicalc.cohort.checked import BinaryOutcome, Column, SurvivalOutcome
from clinicalc.development.estimated_hazards import FixedTerms, HazardPlan, fit_hazards
from clinicalc.development.estimated_penalised import (
    ease_separation,
    fit_penalised_hazards,
    fit_penalised_risks,
    remark_penalty,
)
from clinicalc.development.estimated_risks import fit_risks
from clinicalc.development.estimating_subdistribution import SubdistributionPlan, fit_subdistribution, require_competing
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fit_ground import Array, Estimated, Ground, clusters_of, times_of
from clinicalc.development.study_figures import FitFigures, LeftOut
from clinicalc.development.study_horizons import find_follow_up, horizon_figures, remark_few_at_risk, require_horizons
from clinicalc.development.study_incidences import find_incidences, screen_incidences
from clinicalc.development.study_method_figures import CompetingFigures, PenaltyFigures
from clinicalc.development.study_people import term_columns
from clinicalc.development.study_remarks import remark_fit
from clinicalc.development.study_screening import Screening, screen_fit
from clinicalc.estimation.concordance import Concordance, find_concordance
from clinicalc.estimation.fine_gray import CompetingCohort
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.sample_size import r2_from_likelihoods
from clinicalc.estimation.screening import GRAVEST_FIRST


@dataclass(frozen=True, slots=True, eq=False)
class _Made:
    fits: tuple[Fit, ...]
    null: float
    loglik: float
    linear_predictor: Column
    penalty: PenaltyFigures | None = None


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
    if ground.plan.table.kind == "fine-gray":
        return _estimate_subdistribution(ground, outcome, x, fixed)
    return _estimate_hazards(ground, outcome, x, fixed)


def _estimate_risks(ground: Ground, y: Column, x: Array, fixed: FixedTerms) -> Estimated:
    table, cluster, penalty = ground.plan.table, clusters_of(ground), None
    if isinstance(table.penalty, UnsetType):
        robust = table.covariance_kind != "model"
        engine, fit = fit_risks(y, x, ground.estimated, fixed, FitKind(table.kind), robust=robust, cluster=cluster)
    else:
        engine, fit, penalty = fit_penalised_risks(y, x, ground.estimated, fixed, table, cluster)
    ground.course.go_on()
    lp = _predict(x, engine.coefficients[1:], fixed)
    made = _Made((fit,), engine.loglik_null, engine.loglik, lp, penalty)
    c = find_concordance(1.0 - y, y, lp, cluster=cluster)
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
        robust=table.covariance_kind != "model",
        cluster=clusters_of(ground),
        horizons=times,
    )
    penalty = None
    if isinstance(table.penalty, UnsetType):
        engine, fits = fit_hazards(cohort, ground.estimated, fixed, strata, plan)
    else:
        engine, fits, penalty = fit_penalised_hazards(cohort, ground.estimated, fixed, strata, plan, table)
    ground.course.go_on()
    lp = _predict(x, engine.coefficients, fixed)
    c = None
    if cohort.entry is None:
        c = find_concordance(cohort.times, cohort.events, lp, strata=strata, cluster=plan.cluster)
    ground.course.go_on()
    r2 = r2_from_likelihoods(engine.loglik_null, engine.loglik, len(lp))
    screening = screen_fit(ground.model, ground.equations, ground.people, ground.cohort, r2, horizon=max(times[0]))
    made = _Made(fits, engine.loglik_null, engine.loglik, lp, penalty)
    return _finish(ground, made, c, screening, engine.events, cohort, times)


def _estimate_subdistribution(ground: Ground, outcome: SurvivalOutcome, x: Array, fixed: FixedTerms) -> Estimated:
    status, table = outcome.status[ground.people.used], ground.plan.table
    require_competing(ground.plan.id, status)
    cohort = times_of(ground, outcome, x)
    strata = ground.people.stratum[ground.people.complete]
    times = require_horizons(ground.plan, ground.equations, cohort, strata, outcome.unit)
    plan = SubdistributionPlan(
        ties=Ties.BRESLOW if isinstance(table.ties, UnsetType) else Ties(table.ties),
        cluster=clusters_of(ground),
        horizons=times[0],
    )
    asked = CompetingCohort(cohort.times, status, x)
    engine, fit = fit_subdistribution(asked, ground.estimated, fixed, plan)
    ground.course.go_on()
    lp = _predict(x, engine.coefficients, fixed)
    kept = asked.as_waiting
    c = find_concordance(kept.times, kept.events, lp, cluster=plan.cluster)
    ground.course.go_on()
    r2 = r2_from_likelihoods(engine.loglik_null, engine.loglik, len(lp))
    screening = screen_fit(ground.model, ground.equations, ground.people, ground.cohort, r2, horizon=max(times[0]))
    made = _Made((fit,), engine.loglik_null, engine.loglik, lp)
    # whoever had any event might have been watched longer
    watched = replace(cohort, events=(status != 0).astype(np.float64))
    finished = _finish(ground, made, c, screening, engine.events, cohort, times)
    return replace(finished, figures=replace(finished.figures, follow_up=find_follow_up(watched, outcome.unit)))


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
    incidences: tuple[CompetingFigures, ...] = ()
    if cohort is not None and isinstance(outcome, SurvivalOutcome):
        incidences = tuple(find_incidences(ground.equations, cohort, outcome.status[used], strata, times))
    competing = screen_incidences(
        incidences, FitKind(ground.plan.table.kind), late=cohort is not None and cohort.entry is not None
    )
    found = ease_separation(screening.found, ground.plan.table)
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
        screened=tuple(sorted((*found, *competing), key=lambda one: GRAVEST_FIRST[one.gravity])),
        minimum=screening.minimum,
        penalty=made.penalty,
        incidences=incidences,
    )
    remarks = (*remark_fit(figures), *remark_penalty(ground.plan.id, made.penalty))
    if cohort is not None and isinstance(outcome, SurvivalOutcome):
        remarks += tuple(remark_few_at_risk(ground.equations, cohort, strata, times, outcome.unit))
    return Estimated(made.fits, figures, made.linear_predictor, remarks)


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
