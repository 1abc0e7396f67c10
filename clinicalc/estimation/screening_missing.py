"""What is missing: in each column, in which combinations, and whether it goes with the outcome."""

from collections.abc import Iterator, Sequence
from dataclasses import replace
from math import sqrt

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.screened import (
    Array,
    Figure,
    Screen,
    Screened,
    ScreenedColumn,
    ScreenedOutcome,
)
from clinicalc.estimation.wilson import wilson_limits

MUCH = 0.05
"""Share missing in a column from which it is a caution."""
MANY_LEFT_OUT = 0.1
COMBINATIONS = 3
LEVEL = 0.95


def find_complete(columns: Sequence[ScreenedColumn], outcome: ScreenedOutcome) -> NDArray[np.bool_]:
    """Who has every value and the outcome, shape (n,)."""
    complete = np.isfinite(outcome.events)
    for each in (outcome.times, outcome.entry, *(column.values for column in columns)):
        if each is not None:
            complete = complete & np.isfinite(each)
    return complete


def screen_missing(
    columns: Sequence[ScreenedColumn], complete: NDArray[np.bool_], outcome: ScreenedOutcome
) -> Iterator[Screened]:
    """Columns with missing values, who of all is `complete`, the commonest combinations, and how events differ."""
    people = len(outcome.events)
    for column in columns:
        count = int(np.isnan(column.values).sum())
        if count:
            yield _column_missing(column.name, count, people)
    yield from _complete_cases(complete, outcome.events)
    yield from _combinations(columns, people)
    known = np.isfinite(outcome.events)
    for column in columns:
        found = _beside_outcome(column.name, np.isnan(column.values[known]), outcome.events[known] == 1)
        yield from (found if outcome.times is None else (replace(each, detail="timed") for each in found))


def difference_with_limits(first: tuple[int, int], second: tuple[int, int], level: float = LEVEL) -> Array:
    """Difference of two shares (events, people) and its limits: [first - second, lower, upper].

    By Wilson limits of each, joined as distances: Newcombe, Stat Med 1998;17:873-890, method 10.
    """
    one, low1, high1 = _wilson(*first, level)
    two, low2, high2 = _wilson(*second, level)
    below = sqrt((one - low1) * (one - low1) + (high2 - two) * (high2 - two))
    above = sqrt((high1 - one) * (high1 - one) + (two - low2) * (two - low2))
    return np.array([one - two, one - two - below, one - two + above])


def _wilson(events: int, people: int, level: float) -> tuple[float, float, float]:
    return events / people, *wilson_limits(events, people, level)


def _column_missing(name: str, count: int, people: int) -> Screened:
    share = count / people
    figures = ((Figure.PEOPLE, float(count)), (Figure.OF_PEOPLE, float(people)), (Figure.SHARE, share))
    if count == people:
        return Screened(Grade.STOP, (name,), Screen.ALL_MISSING, figures)
    return Screened(Grade.CAUTION if share >= MUCH else Grade.NOTE, (name,), Screen.MISSING, figures)


def _complete_cases(complete: NDArray[np.bool_], events: Array) -> Iterator[Screened]:
    people, used = len(complete), int(complete.sum())
    if used == people:
        return
    figures = (
        (Figure.PEOPLE, float(used)),
        (Figure.OF_PEOPLE, float(people)),
        (Figure.SHARE, used / people),
        (Figure.EVENTS, float((events[complete] == 1).sum())),
    )
    if used == 0:
        yield Screened(Grade.STOP, (), Screen.NO_COMPLETE_CASES, figures)
    else:
        gravity = Grade.CAUTION if people - used >= MANY_LEFT_OUT * people else Grade.NOTE
        yield Screened(gravity, (), Screen.COMPLETE_CASES, figures)


def _combinations(columns: Sequence[ScreenedColumn], people: int) -> Iterator[Screened]:
    """The commonest sets of two or more columns that are missing together, the most frequent first."""
    holes = [column for column in columns if np.isnan(column.values).any()]
    if len(holes) < 2:
        return
    table = np.column_stack([np.isnan(column.values) for column in holes])
    packed = np.packbits(table[table.any(axis=1)], axis=1)
    patterns, counts = np.unique(packed, axis=0, return_counts=True)
    order = np.argsort(-counts, kind="stable")
    said = 0
    for at in order.tolist():
        missing = np.unpackbits(patterns[at], count=len(holes)).astype(bool)
        if missing.sum() < 2 or said == COMBINATIONS:
            continue
        said += 1
        names = tuple(column.name for column, is_missing in zip(holes, missing, strict=True) if is_missing)
        figures = (
            (Figure.PEOPLE, float(counts[at])),
            (Figure.OF_PEOPLE, float(people)),
            (Figure.SHARE, float(counts[at]) / people),
        )
        yield Screened(Grade.NOTE, names, Screen.MISSING_TOGETHER, figures)


def _beside_outcome(name: str, missing: NDArray[np.bool_], events: NDArray[np.bool_]) -> Iterator[Screened]:
    """Said where the interval of the difference in the share of events leaves nought out."""
    without = int(missing.sum())
    if without in (0, len(missing)):
        return
    one = (int(events[missing].sum()), without)
    two = (int(events[~missing].sum()), len(missing) - without)
    difference, low, high = difference_with_limits(one, two).tolist()
    if low > 0.0 or high < 0.0:
        figures = (
            (Figure.PEOPLE, float(without)),
            (Figure.SHARE, one[0] / one[1]),
            (Figure.OTHER_SHARE, two[0] / two[1]),
            (Figure.DIFFERENCE, difference),
            (Figure.LOW, low),
            (Figure.HIGH, high),
        )
        yield Screened(Grade.CAUTION, (name,), Screen.MISSING_WITH_OUTCOME, figures)
