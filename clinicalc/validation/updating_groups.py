"""Two-scale updating: observed against predicted risk of groups on the scale of the link, a straight line.

The way of the SCORE2 working group, Eur Heart J 2021;42:2439 (supplement), there ln(-ln(1 - risk)); a logistic model of
a risk by a horizon goes by its own log odds. Groups are quantiles of the prediction. At several horizons there is an
intercept for each and one slope for all. The covariance is that of least squares, or of weighted least squares, under
the standard errors of the observed risks; those of one group at two horizons go together by what is common to both
(Greenwood's variance up to the earlier one).
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.errors import FitRefused
from clinicalc.estimation.binomial import Link
from clinicalc.estimation.incidence import aalen_johansen, kaplan_meier
from clinicalc.validation.updated import (
    CalibrationGroup,
    EquationUpdate,
    GroupWeights,
    UpdatedLine,
    UpdateMethod,
    UpdateWish,
)
from clinicalc.validation.updating_faults import UpdateFault, refuse_slope, refuse_update, require_spread
from clinicalc.validation.updating_people import join_leads
from clinicalc.validation.updating_timed import TimedPart, count_by

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
FEWEST_GROUPS, MOST_GROUPS = 3, 10


@dataclass(frozen=True, slots=True, eq=False)
class TwoScale:
    """Intercepts (H,) and the slope, last, as one vector with its covariance (H + 1, H + 1)."""

    estimates: Array
    covariance: Array


def update_by_groups(parts: Sequence[TimedPart], spans: Sequence[Span], wish: UpdateWish) -> tuple[EquationUpdate, ...]:
    """The equations of `parts` with one line at each horizon, from groups of all their people."""
    name = join_leads([part.people for part in parts])
    groups = _gather(name, parts, spans, wish.groups)
    fit = fit_two_scale(groups, len(spans), wish.weights, Link(parts[0].people.equation.content.link))
    slope = float(fit.estimates[-1])
    if not slope > 0:
        raise refuse_slope(name, slope)
    lines = []
    for place in range(len(spans)):
        v = fit.covariance[np.ix_([place, -1], [place, -1])]
        lines.append((float(fit.estimates[place]), (float(v[0, 0]), float(v[0, 1]), float(v[1, 1]))))
    found = []
    for part in parts:
        seen, people = part.followed, len(part.people.lp)
        moved = tuple(
            UpdatedLine(span, intercept, slope, covariance, people, count_by(seen, time))
            for span, time, (intercept, covariance) in zip(spans, part.times, lines, strict=True)
        )
        found.append(
            EquationUpdate(
                id=part.people.id,
                method=UpdateMethod.TWO_SCALE,
                people=people,
                events=int(seen.events.sum()),
                competing=int((seen.status == 2).sum()),
                slope=slope,
                slope_se=float(np.sqrt(fit.covariance[-1, -1])),
                lines=moved,
                refit=None,
                testing=None,
                groups=groups,
            )
        )
    return tuple(found)


def fit_two_scale(
    groups: Sequence[CalibrationGroup], horizons: int, weights: GroupWeights, link: Link = Link.CLOGLOG
) -> TwoScale:
    """The line through groups, those of one horizon after those of another, as many at each."""
    size = len(groups) // horizons
    predicted, observed, se = (
        np.array([getattr(group, name) for group in groups]) for name in ("predicted", "observed", "se")
    )
    design = np.zeros((len(groups), horizons + 1))
    for place in range(horizons):
        design[place * size : (place + 1) * size, place] = 1.0
    design[:, -1], y = _on_link(predicted, link), _on_link(observed, link)
    # what a change of -ln(1 - risk) moves on the scale of the link, from one to the other
    left = -np.log1p(-observed) if link is Link.CLOGLOG else observed
    gathered = (se / (1 - observed)) ** 2
    spread = np.zeros((len(groups), len(groups)))
    for i in range(len(groups)):
        for j in range(i % size, len(groups), size):
            spread[i, j] = min(gathered[i], gathered[j]) / (left[i] * left[j])
    w = 1 / np.diag(spread) if weights is GroupWeights.INVERSE_VARIANCE else np.ones(len(groups))
    bread = np.linalg.inv(design.T @ (design * w[:, None]))
    hat = bread @ (design * w[:, None]).T
    return TwoScale(hat @ y, hat @ spread @ hat.T)


def _on_link(risk: Array, link: Link) -> Array:
    left = np.log1p(-risk)
    return np.asarray(np.log(risk) - left if link is Link.LOGIT else np.log(-left), dtype=np.float64)


def split_by_risk(values: Array, groups: int) -> Codes:
    """The group of each value, from 0, (n,): between quantiles (type 7), whoever lies at one belongs below it."""
    edges = np.quantile(values, np.arange(1, groups) / groups)
    return np.asarray(np.searchsorted(edges, values, side="left"), dtype=np.int64)


def _gather(
    name: str, parts: Sequence[TimedPart], spans: Sequence[Span], asked: int | None
) -> tuple[CalibrationGroup, ...]:
    """The groups that were asked for; otherwise as many as `UpdateWish` says, fewer where one shows no risk."""
    if asked is not None:
        return _split(name, parts, spans, asked)
    events = sum(int(part.followed.events.sum()) for part in parts)
    for groups in range(max(min(events // 10, MOST_GROUPS), FEWEST_GROUPS), FEWEST_GROUPS, -1):
        try:
            return _split(name, parts, spans, groups)
        except FitRefused as refused:
            if refused.code != UpdateFault.GROUPS:
                raise
    return _split(name, parts, spans, FEWEST_GROUPS)


def _split(name: str, parts: Sequence[TimedPart], spans: Sequence[Span], groups: int) -> tuple[CalibrationGroup, ...]:
    """Groups by the risk at the last horizon, those of one horizon after those of another."""
    times = np.concatenate([part.followed.times for part in parts])
    status = np.concatenate([part.followed.status for part in parts])
    entries = [part.followed.entry for part in parts if part.followed.entry is not None]
    entry = np.concatenate(entries) if entries else None
    last = max(spans, key=lambda span: span.days)
    eta = {span: np.concatenate([part.people.lp0(span) + part.people.lp for part in parts]) for span in spans}
    code = split_by_risk(eta[last], groups)
    if len(np.unique(code)) < max(groups, FEWEST_GROUPS):
        require_spread(name, eta[last])
        raise _refuse_groups(name, groups)
    link, found = Link(parts[0].people.equation.content.link), []
    for span, time in zip(spans, parts[0].times, strict=True):
        risk = 1 / (1 + np.exp(-eta[span])) if link is Link.LOGIT else -np.expm1(-np.exp(eta[span]))
        for group in range(groups):
            rows = code == group
            own = None if entry is None else entry[rows]
            if parts[0].followed.subdistribution:
                seen = aalen_johansen(times[rows], status[rows], [time], entry=own)[0]
            else:
                seen = kaplan_meier(times[rows], (status[rows] == 1).astype(np.float64), [time], entry=own)[0]
            if not (0 < seen.share < 1 and seen.followed):
                raise refuse_update(
                    UpdateFault.GROUPS,
                    f"{name}of {groups} groups by predicted risk, group {group + 1} shows no risk by {span.words} "
                    "that lies between 0 and 1, or nobody in it was followed so long. Ask for fewer groups",
                )
            found.append(CalibrationGroup(span, int(rows.sum()), float(risk[rows].mean()), seen.share, seen.se))
    return tuple(found)


def _refuse_groups(name: str, groups: int) -> FitRefused:
    least = f"{FEWEST_GROUPS} groups are the fewest for a line" if groups < FEWEST_GROUPS else ""
    few = "the predictions of these people do not part into so many"
    return refuse_update(UpdateFault.GROUPS, f"{name}{groups} groups were asked for, and {least or few}")
