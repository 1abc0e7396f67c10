"""What is to be known before a model is fitted to these columns and this outcome, and after it.

Everything is found in one go, stops first. Columns are those of one equation's terms; a category may be given as well,
as one column with its levels, so that its reference level is looked at like the others.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.sample_size import (
    R2Origin,
    SampleSize,
    adjust_r2,
    assume_r2,
    max_r2_binary,
    max_r2_survival,
    size_for_binary,
    size_for_survival,
)
from clinicalc.estimation.screened import Figure, Screen, Screened, ScreenedColumn, ScreenedOutcome
from clinicalc.estimation.screening_collinearity import screen_collinearity
from clinicalc.estimation.screening_columns import count_outliers, screen_column
from clinicalc.estimation.screening_missing import find_complete, screen_missing

_OF_LEVELS = frozenset({Screen.LEVEL_WITHOUT_EVENTS, Screen.LEVEL_ONLY_EVENTS, Screen.SPARSE_LEVEL})
GRAVEST_FIRST = {Grade.STOP: 0, Grade.CAUTION: 1, Grade.NOTE: 2}
"""The order in which findings are said."""


@dataclass(frozen=True, slots=True)
class StatedR2:
    """A Cox-Snell R2 and where it comes from; an apparent one as it came out of the fit, before any adjustment."""

    value: float
    origin: R2Origin


def screen(
    terms: Sequence[ScreenedColumn],
    outcome: ScreenedOutcome,
    *,
    categories: Sequence[ScreenedColumn] = (),
    measured: Sequence[ScreenedColumn] = (),
    r2: StatedR2 | None = None,
) -> tuple[Screened, ...]:
    """All that is found, stops, cautions and notes in this order; within each by subject, then by column.

    `categories` are those of which every level but the reference has a term of its own; the levels are then said of
    them and not of those terms. `measured` are the predictors as they were read, of which it is said what is missing
    and what lies far out; the terms themselves where there are none. Separation, sparse levels, collinearity and events
    are judged among the people with every value and the outcome, which are those a fit would use. Without an `r2` one
    of 15 % of the largest possible is assumed, and said.
    """
    complete = find_complete([*terms, *categories, *measured], outcome)
    found = [*_screen_outcome(outcome), *screen_missing(measured or terms, complete, outcome)]
    infinite = [column for column in terms if np.isinf(column.values).any()]
    if infinite or not complete.any():
        for column in infinite:
            found += screen_column(column, outcome)
        return _in_order(found)
    used = _outcome_at(outcome, complete)
    whole = {column.name for column in categories}
    for column in terms:
        of_category = len(column.made_of) == 1 and column.made_of[0] in whole
        for each in screen_column(_column_at(column, complete), used):
            if not (of_category and each.code in _OF_LEVELS):
                found.append(each)
    for column in categories:
        found += [each for each in screen_column(_column_at(column, complete), used) if each.code in _OF_LEVELS]
    for column in measured or terms:
        found += count_outliers(column)
    found += screen_collinearity(terms, complete)
    found += _screen_size(len(terms), used, r2)
    return _in_order(found)


def minimum_size(parameters: int, outcome: ScreenedOutcome, r2: StatedR2 | None = None) -> SampleSize | None:
    """The smallest sample for so many parameters at the events, follow-up and horizon of these people.

    Everybody in `outcome` counts and must have it. An apparent R2 is adjusted for its optimism first; the horizon is
    the mean follow-up where none is stated. None where there are no events, only events, no
    follow-up, or nothing is explained.
    """
    people, events = len(outcome.events), float((outcome.events == 1).sum())
    if not 0 < events < people or parameters < 1:
        return None
    follow_up = _mean_follow_up(outcome)
    if follow_up is not None and not 0.0 < follow_up < float("inf"):
        return None
    each = events / people
    largest = max_r2_binary(each) if follow_up is None else max_r2_survival(each)
    value = _usable_r2(r2, largest, people, parameters)
    if not 0.0 < value < largest:
        return None
    if follow_up is None:
        return size_for_binary(parameters, each, value)
    horizon = follow_up if outcome.horizon is None else outcome.horizon
    return size_for_survival(parameters, each / follow_up, follow_up, horizon, value)


def _usable_r2(r2: StatedR2 | None, largest: float, people: int, parameters: int) -> float:
    if r2 is None or r2.origin is R2Origin.ASSUMED:
        return assume_r2(largest)
    return adjust_r2(r2.value, people, parameters) if r2.origin is R2Origin.APPARENT else r2.value


def _mean_follow_up(outcome: ScreenedOutcome) -> float | None:
    if outcome.times is None:
        return None
    # what was watched before time nought is no part of the time in which the events were counted
    spent = outcome.times if outcome.entry is None else outcome.times - np.maximum(outcome.entry, 0.0)
    return float(spent.mean())


def _screen_outcome(outcome: ScreenedOutcome) -> Iterator[Screened]:
    known = outcome.events[np.isfinite(outcome.events)]
    people, events = len(known), int((known == 1).sum())
    figures = ((Figure.PEOPLE, float(people)), (Figure.EVENTS, float(events)))
    if people == 0:
        yield Screened(Grade.STOP, (), Screen.NO_PEOPLE, figures)
    elif events == 0:
        yield Screened(Grade.STOP, (), Screen.NO_EVENTS, figures)
    elif events == people:
        gravity = Grade.STOP if outcome.times is None else Grade.CAUTION
        yield Screened(gravity, (), Screen.ALL_EVENTS, figures)


def _screen_size(parameters: int, outcome: ScreenedOutcome, r2: StatedR2 | None) -> Iterator[Screened]:
    people, events = len(outcome.events), int((outcome.events == 1).sum())
    # what a coefficient can be learned from: of two answers the rarer one
    telling = events if outcome.times is not None else min(events, people - events)
    if parameters == 0 or telling == 0:
        return
    figures = (
        (Figure.PARAMETERS, float(parameters)),
        (Figure.PEOPLE, float(people)),
        (Figure.EVENTS, float(events)),
        (Figure.PER_PARAMETER, events / parameters),
    )
    if parameters >= telling:
        yield Screened(Grade.STOP, (), Screen.TOO_MANY_TERMS, (*figures, (Figure.WITHOUT, float(people - events))))
        return
    size = minimum_size(parameters, outcome, r2)
    if size is None:
        detail = R2Origin.APPARENT.value if r2 is not None and r2.origin is R2Origin.APPARENT else ""
        yield Screened(Grade.NOTE, (), Screen.NO_MINIMUM, figures, detail=detail)
        return
    origin = R2Origin.ASSUMED if r2 is None else r2.origin
    needed = (
        (Figure.R2, size.r2),
        (Figure.MINIMUM, float(size.people)),
        (Figure.MINIMUM_EVENTS, size.events),
        (Figure.MINIMUM_PER_PARAMETER, size.per_parameter),
    )
    is_short = people < size.people
    gravity, code = (Grade.CAUTION, Screen.BELOW_MINIMUM) if is_short else (Grade.NOTE, Screen.EVENTS_PER_PARAMETER)
    yield Screened(gravity, (), code, figures + needed, detail=origin.value)


def _column_at(column: ScreenedColumn, rows: NDArray[np.bool_]) -> ScreenedColumn:
    return replace(column, values=column.values[rows])


def _outcome_at(outcome: ScreenedOutcome, rows: NDArray[np.bool_]) -> ScreenedOutcome:
    return ScreenedOutcome(
        outcome.events[rows],
        None if outcome.times is None else outcome.times[rows],
        None if outcome.entry is None else outcome.entry[rows],
        outcome.horizon,
    )


def _in_order(found: Sequence[Screened]) -> tuple[Screened, ...]:
    return tuple(sorted(found, key=lambda each: GRAVEST_FIRST[each.gravity]))
