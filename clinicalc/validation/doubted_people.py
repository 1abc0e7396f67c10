"""Signs that people are not those in whom a model is to be looked at: its very own, or only those who are still there.

Either may be chance, or right, and cannot be told from anything else in the file. In its own people a model looks too
good; among survivors its numbers look too high.
"""

from collections.abc import Iterator

import numpy as np
from msgspec import UNSET

from clinicalc.assessment.model import Model
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.validation.people import UsedPeople

FEWEST_PEOPLE = 100
"""Of fewer it may well be so."""
SHORTEST_DAYS = 365.0


def suspect_same_people(model: Model, people: UsedPeople, cohort: str) -> str:
    """A sentence for the verdict where the people used are likely the model's own; `cohort` says who they are."""
    happened = people.outcome.y if isinstance(people.outcome, BinaryOutcome) else people.outcome.status
    used, events = people.count.used, int(np.count_nonzero(happened == 1))
    who = f"{used:,} people with {events:,} events"
    ancestry = model.content.ancestry
    if ancestry is not UNSET:
        alike = (ancestry.cohort.people, ancestry.cohort.events) == (used, events)
        if alike or ancestry.cohort.words == cohort:
            same = f"{who}, as here" if alike else f"“{cohort}”, as these are called"
            return (
                f"Version {model.content.version} was updated to {same}: if they are the same people, its figures look"
                " better than they are, and this is no validation. Hold it against other people."
            )
    derivation = model.content.source.derivation
    if derivation is not UNSET and (derivation.people, derivation.events) == (used, events):
        return (
            f"The model was made from {who}, as here: if they are the same people, its figures look better than"
            " they are, and this is no validation. Hold it against other people."
        )
    return ""


def suspect_survivors(watched: Watched, span: Span) -> Iterator[str]:
    """A sentence where everybody without the event is watched to the horizon `span`; times are in its unit.

    It may be right, and cannot be told from a list of those who are still there.
    """
    before = watched.times < span.time
    if len(before) < FEWEST_PEOPLE or span.days < SHORTEST_DAYS or (before & (watched.status != 1)).any():
        return
    yield (
        f"Nobody of them was lost before {span.words}, and nobody died of anything else. Is this everybody who was"
        " there at the start? A list of those who are still there is a sample of survivors: in it every risk is too"
        " low, and no figure here can tell."
    )
