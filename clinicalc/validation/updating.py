"""A model updated to the people of a place: recalibrated, or its terms estimated anew."""

from collections.abc import Iterator, Mapping, Sequence

import numpy as np

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, Column, Outcome, SurvivalOutcome
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.validation.updated import EquationUpdate, Update, UpdateMethod, UpdateWish
from clinicalc.validation.updating_faults import UpdateFault, refuse_update
from clinicalc.validation.updating_followed import update_followed
from clinicalc.validation.updating_groups import update_by_groups
from clinicalc.validation.updating_people import EquationPeople, split_people
from clinicalc.validation.updating_risks import update_risks
from clinicalc.validation.updating_timed import time_parts

FEW_EVENTS = 100
"""Fewer are said to be few: Vergouwe, Steyerberg, Eijkemans, Habbema, J Clin Epidemiol 2005;58:475."""

LEAST_SHRINKAGE = 0.9
"""A refit with less is said to be too extreme: Riley et al., Stat Med 2019;38:1276, plan for 0.9."""


def update_model(
    model: Model, people: Mapping[str, Column], outcome: Outcome, wish: UpdateWish, course: Course = UNWATCHED
) -> Update:
    """The update that was wished for, as figures.

    `people` are columns by predictor id, each (n,), in the file's units, of those who may be used: exclusions and
    values outside the limits taken out before; `outcome` is of the same people in the same order. Whoever lacks a
    value, the outcome or an equation is left out and counted in a remark. Raises FitRefused with a sentence and a code
    (nobody or everybody has the event, too few events for a refit, predictions all equal, a slope that is not positive,
    a horizon beyond the follow-up), and Stopped.
    """
    if wish.method is UpdateMethod.KEEP:
        raise refuse_update(UpdateFault.NOT_ASKED_FOR, "keeping the model is no update; ask for closed_test")
    spans = _choose_spans(model, wish)
    parts, remarks = split_people(model, people, outcome)
    if isinstance(outcome, BinaryOutcome) and len(spans) > 1:
        raise refuse_update(
            UpdateFault.ONE_HORIZON,
            f"the outcome is yes or no by one horizon, and the model has {len(spans)}: "
            f"{join_words([span.words for span in spans])}. Name the one it is about under horizons, or give times",
        )
    several = wish.together and len(parts) > 1
    if several and wish.method is UpdateMethod.REFIT:
        raise refuse_update(
            UpdateFault.TOGETHER, "equations are refitted each by its own people: ask for a refit of them apart"
        )
    found: list[EquationUpdate] = []
    for place, batch in enumerate([parts] if several else [(part,) for part in parts]):
        course.say(f"Updating {' and '.join(part.id for part in batch)}", place, len(parts))
        found += _update(batch, outcome, spans, wish)
    dropped = [span.words for span in model.spans if span not in spans]
    if dropped:
        remarks = (*remarks, f"Not in the new version: the horizon of {join_words(dropped)}.")
    return Update(
        wish=wish,
        spans=spans,
        equations=tuple(found),
        people=sum(one.people for one in found),
        events=sum(one.events for one in found),
        remarks=(*remarks, *_remark(model, found)),
    )


def _choose_spans(model: Model, wish: UpdateWish) -> tuple[Span, ...]:
    if wish.spans is None:
        return model.spans
    for span in wish.spans:
        if span not in model.spans:
            known = join_words([one.words for one in model.spans])
            raise refuse_update(UpdateFault.NOT_A_HORIZON, f"the model has no horizon of {span.words}; it has {known}")
    if not wish.spans:
        raise refuse_update(UpdateFault.NOT_A_HORIZON, "no horizon is named that the new version should have")
    return tuple(span for span in model.spans if span in wish.spans)


def _update(
    parts: Sequence[EquationPeople], outcome: Outcome, spans: tuple[Span, ...], wish: UpdateWish
) -> tuple[EquationUpdate, ...]:
    id, links = parts[0].lead, {part.equation.content.link for part in parts}
    if len(links) > 1:
        raise refuse_update(UpdateFault.TOGETHER, "equations with different links are updated apart only")
    by_groups = wish.method is UpdateMethod.TWO_SCALE
    if isinstance(outcome, BinaryOutcome) and not by_groups:
        return update_risks(parts, outcome.y, spans[0], wish)
    if isinstance(outcome, BinaryOutcome):
        # everybody is followed to the horizon: one minus Kaplan-Meier is then the share, Greenwood's the binomial error
        outcome = SurvivalOutcome(np.full(len(outcome.y), spans[0].time), outcome.y, None, spans[0].unit)
    if "logit" in links and not by_groups:
        raise refuse_update(
            UpdateFault.LOGIT_AND_TIMES,
            f'{id}this is a logistic model, and the outcome is given as times. Ask for "two_scale", which goes by '
            "the observed risk of groups; or give the outcome as yes or no by the horizon, of people followed so long",
        )
    timed = time_parts(parts, outcome, spans)
    return update_by_groups(timed, spans, wish) if by_groups else update_followed(timed, spans, wish)


def _remark(model: Model, found: Sequence[EquationUpdate]) -> Iterator[str]:
    for equation, one in zip(model.equations, found, strict=True):
        lead = f"Equation {one.id}: " if len(found) > 1 else ""
        if one.events < FEW_EVENTS:
            events = "1 event is" if one.events == 1 else f"{one.events} events are"
            yield (
                f"{lead}{events} few for an update: with fewer than {FEW_EVENTS} a miscalibrated model is often not "
                "recognised, and what is estimated is imprecise."
            )
        factor = None if one.refit is None or one.refit.shrinkage is None else one.refit.shrinkage.factor
        if factor is not None and factor < LEAST_SHRINKAGE:
            what = f"{lead}the uniform shrinkage of the refit is {factor:.2f}, below {LEAST_SHRINKAGE}"
            yield (
                f"{what[0].upper()}{what[1:]}: its predictions are likely too extreme in other people (Van Houwelingen "
                "& le Cessie, Stat Med 1990;9:1303)."
            )
        if one.competing:
            had = "1 person" if one.competing == 1 else f"{one.competing:,} people"
            counts = equation.content.competing_events.handled == "subdistribution"
            done = "which the model counts as such" if counts else "which the model takes for the end of watching"
            yield f"{lead}{had} had a competing event, {done}."
