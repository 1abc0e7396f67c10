"""A model held against people: everything at each horizon, in each group, and what is wrong by name."""

from collections.abc import Iterator
from dataclasses import replace

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import percent_of
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.estimation.incidence import aalen_johansen
from clinicalc.validation.coarse_faults import search_within_bounds
from clinicalc.validation.coarse_times import suspect_coarse_times
from clinicalc.validation.doubted_people import suspect_same_people, suspect_survivors
from clinicalc.validation.fault_groups import gather_groups
from clinicalc.validation.fault_words import write_faults, write_verdict
from clinicalc.validation.faults import find_faults
from clinicalc.validation.foretelling import choose_spans, outcome_at, predict_people, takes_competing, watch
from clinicalc.validation.measuring import measure_group, measure_horizon
from clinicalc.validation.people import UsedPeople, find_people
from clinicalc.validation.people_words import say_exclusions
from clinicalc.validation.plan import ValidationPlan
from clinicalc.validation.predicted import FlagPoint, Outcome, PredictedPeople
from clinicalc.validation.search import Finding, Search
from clinicalc.validation.suspected_units import suspect_refused
from clinicalc.validation.validated import FaultKind, GroupFigures, HorizonValidation, Validation


def validate_model(model: Model, cohort: CheckedCohort, plan: ValidationPlan, course: Course = UNWATCHED) -> Validation:
    """The validation of a model in a checked cohort; `verdict` are its first sentences.

    Groups and faults are judged at the longest horizon. Raises ValidationRefused for stops of the data and where nobody
    can be used, UsageError for a horizon beyond the follow-up or a recalibration that the file does not have there, and
    Stopped.
    """
    people = find_people(model, cohort, plan, course)
    spans, remarks = choose_spans(model, people, plan)
    seen = {span: _see(model, people, span, plan) for span in spans}
    horizons = tuple(
        replace(
            measure_horizon(*seen[span], span, _points(model, plan), course, resamples=plan.resamples, seed=plan.seed),
            competing=_count_others(people, span),
        )
        for span in spans
    )
    last = max(spans, key=lambda span: span.days)
    predicted, outcome = seen[last]
    search = _with_refused(_search(model, people, plan, seen[last], last, course), model, cohort, people)
    horizon = horizons[spans.index(last)]
    faults = write_faults(search, horizon, model)
    course.say("Looking at groups")
    return Validation(
        title=model.content.title,
        version=model.content.version,
        fingerprint=model.fingerprint,
        recalibration=plan.recalibration,
        cohort=plan.cohort,
        count=people.count,
        horizons=horizons,
        groups=tuple(_measure_groups(model, people, plan, predicted, outcome, last)),
        faults=faults,
        verdict=(*write_verdict(search, faults, horizon), *_doubt(model, people, plan)),
        remarks=(*remarks, *_remark(model, people, plan, spans, horizons)),
    )


def _see(model: Model, people: UsedPeople, span: Span, plan: ValidationPlan) -> tuple[PredictedPeople, Outcome]:
    return predict_people(model, people, span, plan.recalibration), outcome_at(model, people, span)


def _search(
    model: Model,
    people: UsedPeople,
    plan: ValidationPlan,
    seen: tuple[PredictedPeople, Outcome],
    span: Span,
    course: Course,
) -> Search:
    predicted, as_recorded = seen

    def look(outcome: Outcome) -> Search:
        named, by = plan.groups, plan.recalibration
        return find_faults(model, people, predicted, outcome, span, groups=named, recalibration=by, course=course)

    return search_within_bounds(look, as_recorded, span)


def _with_refused(search: Search, model: Model, cohort: CheckedCohort, people: UsedPeople) -> Search:
    """With the units of columns for which so many were refused that those who were used say little of them."""
    found = [
        Finding(FaultKind.UNIT, 0.0, 0.0, None, at=suspicion.id, suspicion=suspicion)
        for suspicion in suspect_refused(model, cohort.columns, people.count.refused_by)
    ]
    ids = {one.at for one in found}
    return replace(search, findings=(*found, *(one for one in search.findings if one.at not in ids)))


def _points(model: Model, plan: ValidationPlan) -> tuple[FlagPoint, ...]:
    if plan.points is not None:
        return plan.points
    return tuple(FlagPoint(point.probability, point.label) for point in model.content.decision_points)


def _measure_groups(
    model: Model, people: UsedPeople, plan: ValidationPlan, predicted: PredictedPeople, outcome: Outcome, span: Span
) -> Iterator[GroupFigures]:
    """Every answer of the groups that the plan names, and of nothing else."""
    named = {group.by for group in plan.groups}
    for group in gather_groups(model, people, plan.groups):
        if group.by not in named:
            continue
        for place, level in enumerate(group.levels):
            rows = group.codes == place
            if rows.any():
                yield measure_group(predicted.part(rows), outcome.part(rows), span, group.label, level)


def _doubt(model: Model, people: UsedPeople, plan: ValidationPlan) -> Iterator[str]:
    """Why the rest of the verdict may not be about the model as it is used, or no validation."""
    if model.content.recalibration_required and not plan.recalibration:
        ids = listed([quoted(one.id) for one in model.content.recalibrations], "or")
        yield (
            "This is not the model as it is used: it gives no number without one of its recalibrations, and was looked"
            f" at without any. Name one in the validation file: recalibration = {ids}."
        )
    same = suspect_same_people(model, people, plan.cohort)
    if same:
        yield same


def _remark(
    model: Model,
    people: UsedPeople,
    plan: ValidationPlan,
    spans: tuple[Span, ...],
    horizons: tuple[HorizonValidation, ...],
) -> Iterator[str]:
    asked = {one.id for one in plan.exclusions}
    for field in model.exclusions:
        if field.id not in asked:
            yield f'Nobody was left out by the question "{field.label}": the file does not say who answers yes.'
    yield from say_exclusions(plan.exclusions)
    for span, horizon in zip(spans, horizons, strict=True):
        yield from _remark_competing(model, people, span, horizon)
    if not isinstance(people.outcome, BinaryOutcome):
        last = max(spans, key=lambda span: span.days)
        real = watch(people, last)
        assert isinstance(real, Watched)
        yield from suspect_survivors(real, last)
        judged = outcome_at(model, people, last)
        assert isinstance(judged, Watched)
        yield from suspect_coarse_times(judged, last)


def _count_others(people: UsedPeople, span: Span) -> int:
    """In how many another event came first, whatever the model takes it for."""
    real = watch(people, span)
    return int(((real.status == 2) & (real.times <= span.time)).sum()) if isinstance(real, Watched) else 0


def _remark_competing(model: Model, people: UsedPeople, span: Span, horizon: HorizonValidation) -> Iterator[str]:
    """How far from real people the comparison is where a model takes other events for the end of watching."""
    real, others = watch(people, span), _count_others(people, span)
    if not isinstance(real, Watched):
        return
    if takes_competing(model):
        if not others:
            yield f"Nobody had another event first by {span.words}: the risk observed is one minus Kaplan–Meier."
        return
    if not others:
        return
    (found,) = aalen_johansen(real.times, real.status, (span.time,), entry=real.entry)
    world = horizon.observed.value
    beside = (
        "" if world is None else f" beside {percent_of(world)} in a world without such events, as it is compared here"
    )
    times = f", {horizon.expected / found.share:.2f} times as many" if found.share > 0 else ""
    yield (
        f"By {span.words} another event came first in {others:,} people, which the model takes for the end of"
        f" watching. Of real people {percent_of(found.share)} had the event (Aalen–Johansen){beside};"
        f" {percent_of(horizon.expected)} were predicted{times}."
    )
