"""How well predictions tell those with the event from the others: Harrell's C, Uno's C and the area at the horizon."""

import numpy as np

from clinicalc.errors import FitRefused
from clinicalc.estimation.concordance import find_concordance
from clinicalc.estimation.horizon_area import find_area
from clinicalc.estimation.subdistribution import CompetingCohort
from clinicalc.estimation.uno import find_uno
from clinicalc.validation.intervals import lacking, measure_area
from clinicalc.validation.observing import Seen
from clinicalc.validation.predicted import YesNo
from clinicalc.validation.validated import Measure, Method, Outcomes

_NOBODY = "No two people can be compared: no event with somebody still there after it."
_ALIKE = "Everybody has the same predicted risk, so that nobody can be told from anybody."
LATE = "Some were first watched after time nought; this measure is made only of people watched from then on."


def measure_c(seen: Seen) -> Measure:
    """Harrell's C over the whole follow-up; of a yes or no it is the area under the ROC curve."""
    method = Method.HARRELL_STAYING if seen.outcomes is Outcomes.COMPETING else Method.HARRELL
    why = _find_reason(seen)
    if why:
        return lacking(why, method)
    predictions = seen.predicted.probability
    if isinstance(seen.outcome, YesNo):
        times, events = 1.0 - seen.outcome.y, seen.outcome.y
    else:
        people = CompetingCohort(seen.outcome.times, seen.outcome.status, np.empty((seen.people, 0))).as_waiting
        times, events = people.times, people.events
    try:
        found = find_concordance(times, events, predictions, ranks=seen.ranks)
    except FitRefused:
        return lacking(_NOBODY, method)
    return measure_area(found.c, found.se, method)


def measure_uno(seen: Seen) -> Measure:
    """Uno's C at the horizon."""
    if isinstance(seen.outcome, YesNo):
        return lacking("Uno's C is one of times; of a yes or no it would be C.", Method.UNO)
    why = _find_reason(seen)
    if why:
        return lacking(why, Method.UNO)
    predictions = seen.predicted.probability
    found = find_uno(seen.outcome.times, seen.outcome.status, predictions, seen.horizon, seen.watching, seen.ranks)
    return lacking(_NOBODY, Method.UNO) if found is None else measure_area(found.c, found.se, Method.UNO)


def measure_auc(seen: Seen) -> Measure:
    """The area under the ROC curve at the horizon; of a yes or no it is C once more."""
    why = _find_reason(seen)
    if why:
        return lacking(why, Method.AREA)
    found = find_area(seen.known, seen.predicted.probability, seen.ranks)
    if found is None:
        who = "Nobody" if not seen.events else "Everybody whose outcome is known"
        return lacking(f"{who} was seen to have the event{seen.by}.", Method.AREA)
    return measure_area(found.area, found.se, Method.AREA)


def _find_reason(seen: Seen) -> str:
    """Why predictions are not compared, or ""."""
    if not seen.followed:
        return seen.not_followed
    if seen.people == 1:
        return "There is one person, and nobody to be compared with."
    if isinstance(seen.outcome, YesNo) and seen.events in (0, seen.people):
        return f"{'Everybody' if seen.events else 'Nobody'} had the event, so that there is nobody to compare with."
    if seen.came_late:
        return LATE
    return _ALIKE if seen.alike else ""
