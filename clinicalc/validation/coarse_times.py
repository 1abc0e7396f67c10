"""A sign of times that are too coarse, as whole years are: people lost at the very times at which others had the event.

Whether they were there when it happened cannot be seen. An event is taken to come first; had it come last, the observed
risk would be higher, and how much higher is how far coarse times may move it. Nor can be seen on which side of the
horizon an event lies that is recorded at it: rounding may have moved it there from before or after.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from clinicalc.assessment.numerals import percent_of
from clinicalc.coefficients.spans import Span
from clinicalc.estimation.calibration_groups import Watched, is_known
from clinicalc.estimation.incidence import aalen_johansen

LARGEST = 0.03
"""The part of the observed risk by which the order may move it unsaid."""
_WHOLE = 1e-6
"""Times that differ from whole years, or by less than one step, by so little are not told apart."""


@dataclass(frozen=True, slots=True, eq=False)
class CoarseBounds:
    """The same people with as few, and as many, events by the horizon as their coarse times leave open."""

    fewest: Watched
    most: Watched


def bound_coarse_times(watched: Watched, span: Span) -> CoarseBounds | None:
    """Both ends of what coarse times may stand for, in the unit of `span`; None where times are not coarse.

    Fewest: events recorded less than a step before the horizon, or at it, came after it, and people were lost after
    the events of their time. Most: events less than a step after the horizon came by it, and the lost went before.
    """
    earlier = _lose_earlier(watched, span)
    if earlier is None or not _moves(watched, earlier, span):
        return None
    step, had, horizon = _step(watched), watched.status == 1, span.time
    near = had & (np.abs(watched.times - horizon) < step * (1.0 - _WHOLE))
    fewest = np.where(near & (watched.times <= horizon), horizon + 0.5 * step, watched.times)
    most = np.where(near & (watched.times > horizon), horizon, earlier.times)
    return CoarseBounds(replace(watched, times=fewest), replace(earlier, times=most))


def name_coarse_times(watched: Watched, span: Span) -> str:
    """How coarse times are, at the head of a sentence."""
    years = watched.times * Span(1.0, span.unit).days / Span(1.0).days
    return "Times in whole years" if bool((np.abs(years - np.round(years)) < _WHOLE).all()) else "Times so coarse"


def share_by(watched: Watched, span: Span) -> float:
    """The observed risk by the horizon."""
    return float(aalen_johansen(watched.times, watched.status, (span.time,))[0].share)


def suspect_coarse_times(watched: Watched, span: Span) -> Iterator[str]:
    """A sentence where the observed risk at the horizon `span` depends on that order; times are in its unit.

    None where people came late.
    """
    earlier = _lose_earlier(watched, span)
    if earlier is None or not _moves(watched, earlier, span):
        return
    yield (
        "Many were lost at the very times at which others had the event, as where times are whole years. Counted as"
        f" there until after it, as here, {percent_of(share_by(watched, span))} had the event by {span.words}; counted"
        f" as gone before it, {percent_of(share_by(earlier, span))}. Give dates, or times in days, before anything is"
        " concluded from a difference so large."
    )


def _step(watched: Watched) -> float:
    return float(np.diff(np.unique(watched.times)).min())


def _lose_earlier(watched: Watched, span: Span) -> Watched | None:
    """The same where the lost went before the events of their time; None where that cannot be looked at."""
    if watched.entry is not None or len(np.unique(watched.times)) < 2:
        return None
    lost = (watched.status == 0) & (watched.times < span.time)
    times = np.where(lost, np.maximum(watched.times - 0.5 * _step(watched), 0.0), watched.times)
    earlier = replace(watched, times=times)
    return earlier if is_known(watched, span.time) and is_known(earlier, span.time) else None


def _moves(watched: Watched, earlier: Watched, span: Span) -> bool:
    """Whether the order matters."""
    first = share_by(watched, span)
    return share_by(earlier, span) - first > LARGEST * first
