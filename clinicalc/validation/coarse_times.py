"""A sign of times that are too coarse, as whole years are: people lost at the very times at which others had the event.

Whether they were there when it happened cannot be seen. An event is taken to come first; had it come last, the observed
risk would be higher, and how much higher is how far coarse times may move it.
"""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from clinicalc.assessment.numerals import percent_of
from clinicalc.coefficients.spans import Span
from clinicalc.estimation.calibration_groups import Watched, is_known
from clinicalc.estimation.incidence import aalen_johansen

LARGEST = 0.03
"""The part of the observed risk by which the order may move it unsaid."""


def suspect_coarse_times(watched: Watched, span: Span) -> Iterator[str]:
    """A sentence where the observed risk at the horizon `span` depends on that order; times are in its unit.

    None where people came late.
    """
    steps = np.unique(watched.times)
    if watched.entry is not None or len(steps) < 2:
        return
    gap = 0.5 * float(np.diff(steps).min())
    lost = (watched.status == 0) & (watched.times < span.time)
    earlier = replace(watched, times=np.where(lost, np.maximum(watched.times - gap, 0.0), watched.times))
    if not (is_known(watched, span.time) and is_known(earlier, span.time)):
        return
    first, last = (aalen_johansen(each.times, each.status, (span.time,))[0].share for each in (watched, earlier))
    if last - first <= LARGEST * first:
        return
    yield (
        "Many were lost at the very times at which others had the event, as where times are whole years. Counted as"
        f" there until after it, as here, {percent_of(first)} had the event by {span.words}; counted as gone before it,"
        f" {percent_of(last)}. Give dates, or times in days, before anything is concluded from a difference so large."
    )
