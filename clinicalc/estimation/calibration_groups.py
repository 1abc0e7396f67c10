"""Groups of people by their predicted risk, and the risk observed in each, with 95 % limits.

A binary outcome: share with Wilson limits. Times: one minus Kaplan-Meier at the horizon with log-log limits
(Greenwood's variance), or the incidence of Aalen & Johansen with limits on the same scale where other events come
first. Someone who leaves at the horizon itself has been watched to it. Groups may be any: tenths, or a site each.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.calibrated import CalibrationGroup, Observed
from clinicalc.estimation.incidence import aalen_johansen
from clinicalc.estimation.wilson import wilson_limits

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
Rows = NDArray[np.bool_]

TENTHS = 10


@dataclass(frozen=True, slots=True, eq=False)
class Watched:
    """People watched in (entry, time]: status 0 censored, 1 the event, 2 another event that keeps it from happening.

    Shapes (n,); `entry` is None where all were there from time nought.
    """

    times: Array
    status: Array
    entry: Array | None = None

    @property
    def competing(self) -> bool:
        """Whether another event happened to anybody."""
        return bool((self.status == 2).any())

    def seen(self, horizon: float) -> Rows:
        """Who was seen to have the event by the horizon, (n,)."""
        return np.asarray((self.status == 1) & (self.times <= horizon), dtype=np.bool_)

    def part(self, rows: Rows | Codes) -> "Watched":
        """Some of them."""
        entry = None if self.entry is None else self.entry[rows]
        return Watched(self.times[rows], self.status[rows], entry)


def part_predictions(predictions: Array, parts: int = TENTHS) -> Codes:
    """The group of each person, from 0: cut at the quantiles (type 7), the upper end of a group belonging to it.

    People with the same prediction are always in one group, so that there are fewer groups where predictions tie.
    """
    cuts = np.quantile(predictions, np.arange(1, parts) / parts)
    # a quantile that falls on a prediction may miss it by its last bits
    at = np.searchsorted(cuts * (1.0 + 1e-12), predictions, side="left")
    _, codes = np.unique(at, return_inverse=True)
    return codes.astype(np.int64, copy=False)


def group_risks(predictions: Array, y: Array, codes: Codes) -> tuple[CalibrationGroup, ...]:
    """Each group (code 0, 1, ...) with a binary outcome."""
    return tuple(_group_risks(predictions[rows], y[rows]) for rows in _rows_of(codes))


def group_times(predictions: Array, watched: Watched, horizon: float, codes: Codes) -> tuple[CalibrationGroup, ...]:
    """Each group with times, in the order of the codes."""
    return tuple(_group_times(predictions[rows], watched.part(rows), horizon) for rows in _rows_of(codes))


def is_known(watched: Watched, horizon: float) -> bool:
    """Whether anything is known of the risk at the horizon: somebody was watched so long, or nobody was lost last."""
    last = watched.times.max()
    return bool(last >= horizon or not (watched.status[watched.times == last] == 0).any())


def observed_by(watched: Watched) -> Observed:
    """How observed risks of these people are made."""
    return Observed.AALEN_JOHANSEN if watched.competing else Observed.KAPLAN_MEIER


def _rows_of(codes: Codes) -> Iterator[Codes]:
    order = np.argsort(codes, kind="stable")
    yield from np.split(order, np.flatnonzero(np.diff(codes[order])) + 1)


def _group_risks(predictions: Array, y: Array) -> CalibrationGroup:
    people, events = len(y), int(y.sum())
    lower, upper = wilson_limits(events, people)
    return CalibrationGroup(people, events, float(predictions.mean()), events / people, lower, upper)


def _group_times(predictions: Array, watched: Watched, horizon: float) -> CalibrationGroup:
    people, events = len(predictions), int(watched.seen(horizon).sum())
    risk, lower, upper = _observe(watched, horizon)
    return CalibrationGroup(people, events, float(predictions.mean()), risk, lower, upper)


def _observe(watched: Watched, horizon: float) -> tuple[float | None, float | None, float | None]:
    """Observed risk at the horizon with its limits; no risk where the last of them was lost before it."""
    if not is_known(watched, horizon):
        return None, None, None
    (found,) = aalen_johansen(watched.times, watched.status, (horizon,), entry=watched.entry)
    lower, upper = found.limits() or (None, None)
    return found.share, lower, upper
