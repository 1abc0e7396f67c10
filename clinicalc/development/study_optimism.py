"""How much better a fit looks among its own people than it will among others: bootstrap optimism of a study's fit.

With filled-in values the replicates are spread over the sets, and figures are means over sets and replicates. Where the
covariance is by clusters, whole clusters are drawn. Everything that chose coefficients is repeated in each replicate:
the likelihood with its penalty; knots and cuts stay where they were laid.
"""

from collections.abc import Iterator, Sequence
from dataclasses import replace

import numpy as np
from msgspec import UnsetType

from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, SurvivalOutcome
from clinicalc.cohort.course import Course
from clinicalc.development.estimated_hazards import FixedTerms
from clinicalc.development.fit import FitKind
from clinicalc.development.fit_ground import Array, Estimated, Ground, clusters_of, times_of
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_horizons import require_horizons
from clinicalc.development.study_losses import TOO_MANY, remark_lost
from clinicalc.development.study_method_figures import (
    Corrected,
    LostReplicates,
    OptimismFigures,
    PenaltyFigures,
    Statistic,
)
from clinicalc.development.study_people import term_columns
from clinicalc.development.study_refits import MOST_TO_CHOOSE, find_hazard_refits, find_risk_refits
from clinicalc.development.study_tables import BootstrapTable
from clinicalc.estimation.bootstrap_risks import RiskPeople
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.fine_gray import CompetingCohort, fit_fine_gray
from clinicalc.estimation.logistic import Link, fit_logistic
from clinicalc.estimation.optimism import Bootstrap, Lost, Measures, Repeated, Replicate, average, count_lost
from clinicalc.estimation.optimism_hazards import RepeatedHazards, RepeatedSubdistribution
from clinicalc.estimation.optimism_risks import RepeatedRisks
from clinicalc.estimation.people_at_risk import Ties
from clinicalc.estimation.second_process import work_out

ENOUGH_EVENTS = 10
"""For each coefficient; with fewer the bootstrap takes too little off: Iba, Shinozaki, Maruo & Noma, BMC Med Res
Methodol 2021;21:9."""


def add_optimism(
    grounds: Sequence[Ground], estimated: Estimated, table: BootstrapTable | None, course: Course
) -> Estimated:
    """The fit with its optimism and a sentence on samples that were lost; as it is where no bootstrap is asked for.

    `grounds` is that of the fit, or those of the sets of filled-in values. Raises FitRefused, Stopped.
    """
    if table is None:
        return estimated
    figures = find_optimism(grounds, estimated, table, course)
    id, people = estimated.figures.id, estimated.figures.people
    remarks = (
        *estimated.remarks,
        *remark_lost(id, figures),
        *remark_few_events(replace(estimated.figures, optimism=figures)),
        *remark_strength(id, estimated.figures.penalty, people),
    )
    return replace(estimated, figures=replace(estimated.figures, optimism=figures), remarks=remarks)


def find_optimism(
    grounds: Sequence[Ground], estimated: Estimated, table: BootstrapTable, course: Course
) -> OptimismFigures:
    """The optimism of a fit; without figures where too many samples were lost. Raises FitRefused, Stopped."""
    penalty = estimated.figures.penalty
    with np.errstate(all="ignore"):
        sets = tuple(_repeat(ground, penalty) for ground in grounds)
        apparent = [one.judge_apparent() for one in sets]
    words = f"Drawing samples for {grounds[0].plan.id}"

    def advance(done: int) -> None:
        course.say(words, done, table.replicates)

    found = work_out(Bootstrap(sets, table.replicates, table.seed), advance)
    lost = sum(isinstance(one, Lost) for one in found)
    corrected = () if lost > TOO_MANY * table.replicates else tuple(_correct(apparent, found))
    return OptimismFigures(
        replicates=table.replicates,
        used=table.replicates - lost,
        seed=table.seed,
        figures=corrected,
        lost=tuple(_name_lost(found, grounds[0])),
        span=_last_span(grounds[0]),
    )


def has_few_events(figures: FitFigures) -> bool:
    """Whether the corrected figures are likely still too good; of a binary outcome the rarer answer counts."""
    telling = figures.events
    if FitKind(figures.kind).has_intercept:
        telling = min(figures.events, figures.people - figures.events)
    found = figures.optimism
    return found is not None and bool(found.figures) and telling < ENOUGH_EVENTS * figures.terms


def remark_few_events(figures: FitFigures) -> Iterator[str]:
    """That the bootstrap takes too little off where events are few, in a sentence; none where they are enough."""
    if has_few_events(figures):
        yield (
            f"{figures.id}: with fewer than {ENOUGH_EVENTS} events for each coefficient the figures corrected for "
            "optimism are likely still a little too good (Iba et al., BMC Med Res Methodol 2021;21:9)."
        )


def remark_strength(id: str, penalty: PenaltyFigures | None, people: int) -> Iterator[str]:
    """What became of a strength that was chosen, in a sentence."""
    if penalty is None or not penalty.chosen:
        return
    if people <= MOST_TO_CHOOSE:
        yield f"{id}: the strength of the ridge was chosen anew in each bootstrap sample."
    else:
        yield (
            f"{id}: the strength of the ridge was kept in every bootstrap sample, as choosing it anew among "
            f"{people:,} people takes too long. What choosing it adds to the optimism is not in the figures."
        )


def _repeat(ground: Ground, penalty: PenaltyFigures | None) -> Repeated:
    """The fit of some people as it can be repeated."""
    x, fixed = _columns(ground)
    table, outcome, used = ground.plan.table, ground.cohort.outcome, ground.people.used
    cluster = clusters_of(ground)
    offset = fixed.sum - fixed.sum.mean() if len(fixed.coefficients) else None
    if isinstance(outcome, BinaryOutcome):
        link = Link.LOGIT if table.kind == "logistic" else Link.CLOGLOG
        of = RiskPeople(outcome.y[used], x, link, fixed.sum if len(fixed.coefficients) else None)
        if penalty is None:
            b = fit_logistic(of.y, of.x, link=of.link, offset=of.offset).coefficients
            return RepeatedRisks(of, b, cluster)
        own, again = find_risk_refits(penalty, len(used))
        return RepeatedRisks(of, own(of, np.arange(len(used))), cluster, again)
    assert isinstance(outcome, SurvivalOutcome)
    cohort = replace(times_of(ground, outcome, x), offset=offset)
    horizon = _last_horizon(ground, outcome)
    if table.kind == "fine-gray":
        ties = Ties.BRESLOW if isinstance(table.ties, UnsetType) else Ties(table.ties)
        competing = CompetingCohort(cohort.times, outcome.status[used], x, None, offset)
        b = fit_fine_gray(competing, ties=ties).coefficients
        return RepeatedSubdistribution(competing, b, horizon, ties, cluster=cluster)
    ties = Ties.EFRON if isinstance(table.ties, UnsetType) else Ties(table.ties)
    strata = ground.people.stratum[ground.people.complete] if len(ground.equations) > 1 else None
    if penalty is None:
        b = fit_cox(cohort, ties=ties, strata=strata).coefficients
        return RepeatedHazards(cohort, b, ties, horizon, strata, cluster)
    first, anew = find_hazard_refits(penalty, len(used), ties)
    return RepeatedHazards(cohort, first(cohort, strata, np.arange(len(used))), ties, horizon, strata, cluster, anew)


def _columns(ground: Ground) -> tuple[Array, FixedTerms]:
    """The columns that are estimated, and those whose coefficients are given."""
    terms = ground.equations[0].terms
    columns = term_columns(terms, ground.people)
    people = len(ground.people.used)

    def join(fixed: bool) -> Array:
        own = [column for column, term in zip(columns, terms, strict=True) if term.fixed == fixed]
        return np.asfortranarray(np.column_stack(own)) if own else np.empty((people, 0))

    return join(False), FixedTerms(join(True), np.array([term.coefficient for term in terms if term.fixed]))


def _last_horizon(ground: Ground, outcome: SurvivalOutcome) -> float:
    """The last horizon that every equation has reached, in the unit of the times."""
    cohort = times_of(ground, outcome, np.empty((len(ground.people.used), 0)))
    strata = ground.people.stratum[ground.people.complete]
    return min(max(times) for times in require_horizons(ground.plan, ground.equations, cohort, strata, outcome.unit))


def _last_span(ground: Ground) -> Span | None:
    if isinstance(ground.cohort.outcome, BinaryOutcome):
        return None
    last = (max((line.span for line in equation.lines), key=lambda span: span.days) for equation in ground.equations)
    return min(last, key=lambda span: span.days)


def _correct(apparent: Sequence[Measures], found: Sequence[Replicate]) -> Iterator[Corrected]:
    for name, one in average(apparent, found).items():
        yield Corrected(Statistic(name), one.apparent, one.optimism, one.corrected)


def _name_lost(found: Sequence[Replicate], ground: Ground) -> Iterator[LostReplicates]:
    for code, count, columns in count_lost(found):
        names = ground.estimated
        yield LostReplicates(code, count, tuple(names[place] for place in columns if place < len(names)))
