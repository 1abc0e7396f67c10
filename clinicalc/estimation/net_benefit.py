"""What flagging people at or above a risk is worth: true positives less false ones at the exchange rate of that risk.

Vickers & Elkin, Med Decis Making 2006;26:565: TP / n - FP / n * t / (1 - t). Where some were lost from sight, with s
the share flagged and F the observed risk among them (one minus Kaplan-Meier, or the incidence of Aalen & Johansen where
other events come first), s (F - (1 - F) t / (1 - t)): Vickers, Cronin, Elkin & Gonen, BMC Med Inform Decis Mak
2008;8:53.
"""

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.ranks import part_values

Array = NDArray[np.float64]
Rows = NDArray[np.intp]


def net_benefit(share: float, risk: float, point: float) -> float:
    """For each person, where a share is flagged at the decision point and so many of those have the event."""
    return share * (risk - (1.0 - risk) * point / (1.0 - point))


def curve_of_risks(predictions: Array, y: Array, points: Array) -> Array:
    """Net benefit at each of the points, ascending, (k,); y is 1 or 0."""
    order = np.argsort(predictions, kind="stable")
    places = np.searchsorted(predictions[order], points, side="left")
    true = y.sum() - np.append(0.0, np.cumsum(y[order]))[places]
    false = len(y) - places - true
    return np.asarray((true - false * points / (1.0 - points)) / len(y), dtype=np.float64)


def curve_of_times(predictions: Array, times: Array, status: Array, horizon: float, points: Array) -> Array:
    """Net benefit at each of the points, ascending, (k,), of people watched from time nought.

    NaN where all who are flagged were lost before the horizon.
    """
    flagged = _Flagged(times, status, horizon)
    # from the highest point down, each adding those between it and the next
    band = np.searchsorted(points, predictions, side="right")
    ordered = np.argsort(band, kind="stable")
    edges = np.searchsorted(band[ordered], np.arange(len(points) + 2))
    benefits = np.zeros(len(points))
    for level in range(len(points), 0, -1):
        flagged.add(ordered[edges[level] : edges[level + 1]])
        benefits[level - 1] = net_benefit(flagged.people / len(times), flagged.risk(), float(points[level - 1]))
    return benefits


class _Flagged:
    """A growing part of some people: its observed risk at the horizon, from counts at each time of any event."""

    __slots__ = (
        "_any",
        "_at_risk",
        "_competing",
        "_horizon",
        "_last",
        "_own",
        "_place",
        "_status",
        "_times",
        "_until",
        "people",
    )

    def __init__(self, times: Array, status: Array, horizon: float) -> None:
        happened = (status != 0) & (times <= horizon)
        when, place = part_values(times[happened])
        self._times, self._status, self._horizon = times, status, horizon
        self._place = np.full(len(times), -1, dtype=np.intp)
        self._place[happened] = place
        self._until = np.searchsorted(when, times, side="right")
        self._at_risk, self._own, self._any = np.zeros((3, len(when)))
        self.people, self._last, self._competing = 0, -np.inf, bool((status[happened] == 2).any())

    def add(self, rows: Rows) -> None:
        """Flag some more of them."""
        if not len(rows):
            return
        steps = len(self._any)
        self.people += len(rows)
        self._last = max(self._last, float(self._times[rows].max()))
        self._at_risk += np.bincount(self._until[rows], minlength=steps + 1)[::-1].cumsum()[::-1][1:]
        seen = rows[self._place[rows] >= 0]
        self._any += np.bincount(self._place[seen], minlength=steps)
        if self._competing:
            self._own += np.bincount(self._place[seen[self._status[seen] == 1]], minlength=steps)

    def risk(self) -> float:
        """By the horizon; 0 of nobody, NaN where the last was lost before."""
        at_risk = np.maximum(self._at_risk, 1.0)  # nobody has an event where nobody is at risk
        left = np.cumprod(1.0 - self._any / at_risk)
        last = float(left[-1]) if len(left) else 1.0
        if self.people and self._last < self._horizon and last > 0:
            return float("nan")
        if not self._competing:
            return 1.0 - last
        each = self._own / at_risk
        return float(each[0] + (left[:-1] * each[1:]).sum())
