"""One column at a time: constant, not finite, separating those with and without the event, sparse, with outliers."""

from collections.abc import Iterator

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

SPARSE = 5
"""A level with fewer events, or for a binary outcome fewer people without, is called sparse."""
FAR = 5.0
"""Robust standard deviations from the median beyond which a value is counted."""

_CONSTANT = 1e-12
_MAD_OF_NORMAL = 0.6744897501960817  # the upper quartile of a standard normal: MAD / this estimates the SD
_LEAST_DIFFERENT = 10  # a scale of a few steps has no outliers in this sense
_LEAST_FOR_NEAR = 2 * SPARSE


def is_constant(values: Array) -> bool:
    """Whether all known values are one value, rounding apart (1e-12 of the largest)."""
    known = values[np.isfinite(values)]
    return bool(len(known)) and float(np.ptp(known)) <= _CONSTANT * float(np.abs(known).max())


def screen_column(column: ScreenedColumn, outcome: ScreenedOutcome) -> Iterator[Screened]:
    """What is to be said about one column among people whose outcome and value are known.

    For a time to an event a level with only events is no separation, since it matters when they happened; numbers are
    compared with everybody still followed at each event, late entry left aside.
    """
    if np.isinf(column.values).any():
        count = float(np.isinf(column.values).sum())
        yield Screened(Grade.STOP, (column.name,), Screen.NOT_FINITE, ((Figure.PEOPLE, count),))
        return
    known = np.isfinite(column.values) & np.isfinite(outcome.events)
    values, events = column.values[known], outcome.events[known] == 1
    if not len(values):
        return
    if is_constant(values):
        figures = ((Figure.PEOPLE, float(len(values))), (Figure.VALUE, float(values[0])))
        yield Screened(Grade.STOP, (column.name,), Screen.CONSTANT, figures, *_level(column, float(values[0])))
        return
    if not events.any() or (outcome.times is None and events.all()):
        return  # said once, of the outcome
    if column.levels or _has_two_values(values):
        found = tuple(_screen_levels(column, values, events, outcome.times is not None))
        yield from found
        if outcome.times is not None and not column.levels and not any(f.gravity is Grade.STOP for f in found):
            order = _screen_order(column, values, events, outcome.times[known])
            yield from (each for each in order if each.code is Screen.SEPARATED)  # nearly so: a sparse level
        return
    if outcome.times is None:
        yield from _screen_ranges(column, values, events)
    else:
        yield from _screen_order(column, values, events, outcome.times[known])


def _has_two_values(values: Array) -> bool:
    return bool(((values == values.min()) | (values == values.max())).all())


def _screen_levels(column: ScreenedColumn, values: Array, events: NDArray[np.bool_], timed: bool) -> Iterator[Screened]:
    for value in np.unique(values).tolist():
        here = values == value
        count = int(events[here].sum())
        without = int(here.sum()) - count
        figures = (
            (Figure.PEOPLE, float(count + without)),
            (Figure.EVENTS, float(count)),
            (Figure.WITHOUT, float(without)),
        )
        if count == 0:
            gravity, code = Grade.STOP, Screen.LEVEL_WITHOUT_EVENTS
        elif without == 0:
            gravity, code = (Grade.CAUTION if timed else Grade.STOP), Screen.LEVEL_ONLY_EVENTS
        elif count < SPARSE or (without < SPARSE and not timed):
            gravity, code = Grade.CAUTION, Screen.SPARSE_LEVEL
        else:
            continue
        yield Screened(gravity, (column.name,), code, figures, *_level(column, value))


def _level(column: ScreenedColumn, value: float) -> tuple[str, str]:
    """What the value is called, and "value" where that is only its digits."""
    place = int(value)
    return (column.levels[place], "") if 0 <= place < len(column.levels) else (f"{value:.6g}", "value")


def _screen_ranges(column: ScreenedColumn, values: Array, events: NDArray[np.bool_]) -> Iterator[Screened]:
    """Binary: whether the ranges of those with and without the event overlap, and how few people stand in the way."""
    low = max(float(values[events].min()), float(values[~events].min()))
    high = min(float(values[events].max()), float(values[~events].max()))
    if low >= high:  # where they only touch at one value the coefficient has no end either
        figures = ((Figure.PEOPLE, 0.0), (Figure.LOW, high), (Figure.HIGH, low))
        yield Screened(Grade.STOP, (column.name,), Screen.SEPARATED, figures)
        return
    misplaced, cut = _best_cut(values, events)
    rarer = min(int(events.sum()), int((~events).sum()))
    if misplaced < SPARSE and 2 * misplaced < rarer:
        figures = ((Figure.PEOPLE, float(misplaced)), (Figure.LOW, cut), (Figure.HIGH, cut))
        yield Screened(Grade.CAUTION, (column.name,), Screen.NEARLY_SEPARATED, figures)


def _best_cut(values: Array, events: NDArray[np.bool_]) -> tuple[int, float]:
    """Over all cuts the fewest people on the wrong side of one, and the value just above it."""
    order = np.argsort(values, kind="stable")
    x, happened = values[order], events[order]
    ends = np.flatnonzero(np.diff(x) > 0.0)
    events_below = np.cumsum(happened)[ends]
    others_above = int((~happened).sum()) - np.cumsum(~happened)[ends]
    wrong = np.minimum(events_below + others_above, len(x) - events_below - others_above)
    best = int(np.argmin(wrong))
    return int(wrong[best]), float(x[ends[best] + 1])


def _screen_order(column: ScreenedColumn, values: Array, events: NDArray[np.bool_], times: Array) -> Iterator[Screened]:
    """Time to an event: whether whoever has it always has the highest (or lowest) value of those still followed."""
    order = np.argsort(times, kind="stable")
    x, dead, at = values[order], events[order], times[order]
    first = np.searchsorted(at, at[dead], side="left")
    highest = np.maximum.accumulate(x[::-1])[::-1][first]
    lowest = np.minimum.accumulate(x[::-1])[::-1][first]
    against = int(min((x[dead] < highest).sum(), (x[dead] > lowest).sum()))
    count = int(dead.sum())
    figures = ((Figure.EVENTS, float(count)), (Figure.PEOPLE, float(against)))
    if against == 0 and bool((highest > lowest).any()):
        yield Screened(Grade.STOP, (column.name,), Screen.SEPARATED, figures, detail="order")
    elif 0 < against < SPARSE and count >= _LEAST_FOR_NEAR:
        yield Screened(Grade.CAUTION, (column.name,), Screen.NEARLY_SEPARATED, figures, detail="order")


def count_outliers(column: ScreenedColumn) -> Iterator[Screened]:
    """Known values further than 5 robust SDs from the median, by the MAD or, where that is nought, the quartiles."""
    values = column.values[np.isfinite(column.values)]
    if column.levels or len(np.unique(values)) <= _LEAST_DIFFERENT:
        return
    middle = float(np.median(values))
    sd = float(np.median(np.abs(values - middle))) / _MAD_OF_NORMAL
    if sd == 0.0:
        lower, upper = np.quantile(values, (0.25, 0.75)).tolist()
        sd = (upper - lower) / (2.0 * _MAD_OF_NORMAL)
    if sd == 0.0:
        return
    far = np.abs(values - middle) > FAR * sd
    if far.any():
        beyond = values[far]
        furthest = float(beyond[np.argmax(np.abs(beyond - middle))])
        figures = (
            (Figure.PEOPLE, float(far.sum())),
            (Figure.LOW, middle - FAR * sd),
            (Figure.HIGH, middle + FAR * sd),
            (Figure.VALUE, furthest),
        )
        yield Screened(Grade.CAUTION, (column.name,), Screen.OUTLIERS, figures)
