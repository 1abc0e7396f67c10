"""Predicted risks of the people used, and what was seen of them, at one horizon and in its unit."""

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import Model
from clinicalc.assessment.rows import predict_rows
from clinicalc.coefficients.pointers import listed, quoted, suggest
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome
from clinicalc.errors import Problem, UsageError, ValidationRefused
from clinicalc.estimation.calibration_groups import Watched, is_known
from clinicalc.validation.people import UsedPeople
from clinicalc.validation.plan import ValidationPlan
from clinicalc.validation.predicted import Outcome, PredictedPeople, YesNo

_DECIMALS = 9
_MOST_NAMED = 5


def choose_spans(model: Model, people: UsedPeople, plan: ValidationPlan) -> tuple[tuple[Span, ...], tuple[str, ...]]:
    """The horizons looked at, and remarks on those of the model that lie beyond the follow-up.

    Raises UsageError for a horizon that was asked for and is none of the model's or lies beyond the follow-up, and
    where none is left; the sentence names the longest follow-up.
    """
    spans = model.spans if plan.spans is None else plan.spans
    for span in spans:
        if span not in model.spans:
            known = listed((one.words for one in model.spans), "or")
            raise UsageError(f"{model.content.title} gives no risk by {span.words}.", do=f"Ask for {known}.")
    if isinstance(people.outcome, BinaryOutcome):
        if len(spans) > 1:
            named = listed(span.words for span in spans)
            raise UsageError(
                f"an outcome of yes or no is about one horizon, and there are {len(spans)}: {named}.",
                do="Name the one that it is about.",
            )
        return spans, ()
    followed = tuple(span for span in spans if is_followed(people, span))
    beyond = tuple(span for span in spans if span not in followed)
    if beyond and (plan.spans is not None or not followed):
        raise UsageError(say_beyond(people, beyond), do="Ask for a shorter horizon, or wait until people were watched.")
    return followed, tuple(f"Not looked at: {say_beyond(people, (span,))}" for span in beyond)


def is_followed(people: UsedPeople, span: Span) -> bool:
    """Whether anything is known of the risk at a horizon."""
    seen = watch(people, span)
    return isinstance(seen, YesNo) or is_known(seen, span.time)


def say_beyond(people: UsedPeople, spans: tuple[Span, ...]) -> str:
    """The sentence about horizons beyond the follow-up; it names the longest."""
    named = listed((span.words for span in spans), "and")
    seen = watch(people, spans[0])
    assert isinstance(seen, Watched)
    longest = Span(float(f"{seen.times.max():.3g}"), spans[0].unit).words
    return f"the horizon of {named} lies beyond the follow-up: the longest that anybody was watched is {longest}."


def find_recalibration(model: Model, id: str, span: Span) -> Recalibration | None:
    """The recalibration of an id ("" for none) at a horizon. Raises UsageError where the file has none there."""
    if not id:
        return None
    offered = model.recalibrations_at(span)
    found = next((one for one in offered if one.id == id), None)
    if found is None:
        close = suggest(id, (one.id for one in offered)) if offered else " It has none."
        raise UsageError(f"{model.content.title} has no recalibration {quoted(id)} for {span.words}.{close}")
    return found


def predict_people(model: Model, people: UsedPeople, span: Span, recalibration: str = "") -> PredictedPeople:
    """The predicted risk of the people used at one horizon, (n,).

    Raises ValidationRefused where somebody's values give no finite number, which limits of the model should forbid.
    """
    chosen = find_recalibration(model, recalibration, span)
    rows = predict_rows(model, people.columns, span, recalibration=chosen, band=False)
    without = np.flatnonzero(~np.isfinite(rows.probability))
    if len(without):
        lines = ", ".join(str(people.rows[row] + 1) for row in without[:_MOST_NAMED])
        said = f"the values of {len(without):,} people (person {lines} of the file) give no finite number."
        raise ValidationRefused(model.name, (Problem("", f"{said} Look at their values, or take them out."),))
    return PredictedPeople(rows.probability, rows.complement)


def takes_competing(model: Model) -> bool:
    """Whether the model's number is the risk where other events may come first."""
    return all(one.content.competing_events.handled == "subdistribution" for one in model.equations)


def outcome_at(model: Model, people: UsedPeople, span: Span) -> Outcome:
    """What was seen of the people used, times in the unit of `span`, the competing event as the model takes it."""
    seen = watch(people, span)
    if isinstance(seen, YesNo) or takes_competing(model) or not seen.competing:
        return seen
    return Watched(seen.times, np.where(seen.status == 2.0, 0.0, seen.status), seen.entry)


def watch(people: UsedPeople, span: Span) -> Outcome:
    """The same with competing events as they happened."""
    outcome = people.outcome
    if isinstance(outcome, BinaryOutcome):
        return YesNo(outcome.y)
    entry = None if outcome.entry is None else _in_unit(outcome.entry, outcome.unit, span.unit)
    return Watched(_in_unit(outcome.times, outcome.unit, span.unit), outcome.status, entry)


def _in_unit(times: NDArray[np.float64], unit: str, wanted: str) -> NDArray[np.float64]:
    """Times in another unit, rounded so that 3652.5 days are exactly 10 years."""
    if unit == wanted:
        return times
    return np.asarray(np.round(times * Span(1.0, unit).days / Span(1.0, wanted).days, _DECIMALS), dtype=np.float64)
