"""The people of each equation with what was seen of them by the horizons, where an update can be made from them."""

from collections.abc import Sequence
from dataclasses import dataclass

from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.validation.updating_faults import UpdateFault, refuse_nobody, refuse_one_outcome, refuse_update
from clinicalc.validation.updating_hazards import Followed, follow
from clinicalc.validation.updating_people import EquationPeople, in_unit


@dataclass(frozen=True, slots=True, eq=False)
class TimedPart:
    """One equation's people, what was seen of them, and the horizons in the unit of the times."""

    people: EquationPeople
    followed: Followed
    times: tuple[float, ...]


def time_parts(
    parts: Sequence[EquationPeople], outcome: SurvivalOutcome, spans: Sequence[Span]
) -> tuple[TimedPart, ...]:
    """The parts with what was seen of them. Raises FitRefused for what no update can be made from."""
    found = []
    for part in parts:
        subdistribution = part.equation.content.competing_events.handled == "subdistribution"
        followed = follow(part, outcome, subdistribution=subdistribution)
        timed = TimedPart(part, followed, tuple(in_unit(span, outcome.unit) for span in spans))
        _require_events(timed, spans, outcome.unit)
        found.append(timed)
    if len({timed.followed.subdistribution for timed in found}) > 1:
        raise refuse_update(
            UpdateFault.TOGETHER,
            "some equations count competing events as such and others take them as censored: update them apart",
        )
    return tuple(found)


def count_by(followed: Followed, time: float) -> int:
    """How many had the event by a time."""
    return int(((followed.status == 1) & (followed.times <= time)).sum())


def _require_events(part: TimedPart, spans: Sequence[Span], unit: str) -> None:
    id, seen = part.people.lead, part.followed
    if not len(seen.times):
        raise refuse_nobody(id)
    if not seen.events.any():
        raise refuse_one_outcome(UpdateFault.NO_EVENTS, id, f"none of the {len(seen.times):,} people has")
    if seen.subdistribution and seen.entry is not None:
        raise refuse_update(
            UpdateFault.ENTERED_LATE,
            f"{id}the model counts competing events (Fine–Gray), and people came under observation after time "
            "nought, for which there is no such update here. Leave out the column of entry only if all were watched "
            "from time nought",
        )
    longest = float(seen.times.max())
    for span, time in zip(spans, part.times, strict=True):
        if time > longest:
            reached = Span(float(f"{longest:.6g}"), unit).words
            raise refuse_update(
                UpdateFault.BEYOND_FOLLOW_UP,
                f"{id}{span.words} lies beyond the follow-up: the longest is {reached}, and nobody knows what comes "
                "after it. Name the horizons within it under horizons; the others are then left out of the new version",
            )
        if not count_by(seen, time):
            raise refuse_update(
                UpdateFault.NO_EVENTS_BY_HORIZON,
                f"{id}nobody had the event by {span.words}, so that there is no baseline. Leave this horizon out, or "
                "check the unit of the times",
            )
