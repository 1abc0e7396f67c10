"""The equations of a hazard model updated to people who were followed, one by itself or several together.

Together: one slope (Cox: strata; Fine & Gray: the slopes by the inverse of their variance), and one shift of the log
hazard at each horizon, the mean of the equations' own by the inverse of their variance.
"""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.errors import FitRefused
from clinicalc.validation.updated import (
    EquationUpdate,
    Pair,
    Refit,
    RefittedLine,
    Shrinkage,
    Testing,
    UpdatedLine,
    UpdateMethod,
    UpdateWish,
)
from clinicalc.validation.updating_faults import (
    LEAST_EVENTS,
    UpdateFault,
    bare_reason,
    refuse_refit,
    refuse_slope,
    refuse_too_few,
    refuse_update,
    require_spread,
    say_no_refit,
    say_too_few,
)
from clinicalc.validation.updating_hazards import (
    Followed,
    HazardRefit,
    SlopeFit,
    find_levels,
    fit_slope,
    refit_hazard,
)
from clinicalc.validation.updating_people import join_leads
from clinicalc.validation.updating_tests import Rung, choose_closed, why_not_nested
from clinicalc.validation.updating_timed import TimedPart, count_by

Array = NDArray[np.float64]
_UNIT_SLOPE = SlopeFit(1.0, 0.0, None, None, 0.0)


def update_followed(parts: Sequence[TimedPart], spans: Sequence[Span], wish: UpdateWish) -> tuple[EquationUpdate, ...]:
    """The equations of `parts` updated: by one line at each horizon, or each refitted."""
    name, method = join_leads([part.people for part in parts]), wish.method
    testing: Testing | None = None
    refits: tuple[HazardRefit, ...] = ()
    slope = _UNIT_SLOPE
    if method in (UpdateMethod.CLOSED_TEST, UpdateMethod.INTERCEPT_SLOPE):
        slope = _fit_slopes(name, parts)
    if method is UpdateMethod.CLOSED_TEST:
        testing, refits = _test(parts, spans, slope, wish.alpha)
        method = testing.chosen
    elif method is UpdateMethod.REFIT:
        refits = tuple(_refit(part) for part in parts)
    if method is UpdateMethod.INTERCEPT_SLOPE and not slope.slope > 0:
        raise refuse_slope(name, slope.slope)
    used = slope if method is UpdateMethod.INTERCEPT_SLOPE else _UNIT_SLOPE
    lines = shift_lines(parts, spans, used)
    if method is UpdateMethod.KEEP:
        lines = tuple((0.0, (0.0, 0.0, 0.0)) for _ in spans)
    placed = refits if method is UpdateMethod.REFIT else (None,) * len(parts)
    return tuple(
        _say(part, spans, method, used, lines, refit, testing) for part, refit in zip(parts, placed, strict=True)
    )


def shift_lines(parts: Sequence[TimedPart], spans: Sequence[Span], slope: SlopeFit) -> tuple[tuple[float, Pair], ...]:
    """At each horizon the intercept of eta' = intercept + slope eta, and the covariance of the two."""
    levels = [find_levels(part.followed, part.people.lp, slope.slope, part.times) for part in parts]
    found = []
    for place, span in enumerate(spans):
        own = np.array([each[place].own for each in levels])
        lp0 = np.array([part.people.lp0(span) for part in parts])
        shifts = np.array([each[place].g for each in levels]) - slope.slope * lp0
        away = np.array([each[place].centre for each in levels]) + lp0
        weights = (1 / own) / (1 / own).sum()
        centre = float((weights * away).sum())
        v = slope.variance
        variance = float((weights * weights * own).sum()) + centre * centre * v
        found.append((float((weights * shifts).sum()), (variance, -centre * v, v)))
    return tuple(found)


def _fit_slopes(name: str, parts: Sequence[TimedPart]) -> SlopeFit:
    for part in parts:
        require_spread(part.people.lead, part.people.lp)
    try:
        if len(parts) == 1:
            return fit_slope(parts[0].followed, parts[0].people.lp)
        if parts[0].followed.subdistribution:
            return _weigh([fit_slope(part.followed, part.people.lp) for part in parts])
        followed = [part.followed for part in parts]
        entries = [each.entry for each in followed if each.entry is not None]
        whole = Followed(
            np.concatenate([each.times for each in followed]),
            np.concatenate([each.status for each in followed]),
            np.concatenate(entries) if entries else None,
            subdistribution=False,
        )
        strata = np.repeat(np.arange(len(parts)), [len(part.people.lp) for part in parts])
        return fit_slope(whole, np.concatenate([part.people.lp for part in parts]), strata)
    except FitRefused as refused:
        raise refuse_update(
            UpdateFault.NO_ESTIMATE, f"{name}there is no estimate of the slope: {bare_reason(refused)}"
        ) from None


def _weigh(slopes: Sequence[SlopeFit]) -> SlopeFit:
    """One slope from several by the inverse of their variance."""
    weights = np.array([1 / slope.variance for slope in slopes])
    slope = float((weights * [one.slope for one in slopes]).sum() / weights.sum())
    variance = float(1 / weights.sum())
    return SlopeFit(slope, variance, None, None, (slope - 1) * (slope - 1) / variance)


def _test(
    parts: Sequence[TimedPart], spans: Sequence[Span], slope: SlopeFit, alpha: float
) -> tuple[Testing, tuple[HazardRefit, ...]]:
    """The tests: of the slopes by partial likelihood (Fine & Gray: Wald), of the baseline by its z at the last horizon.

    The two are independent where the coefficients hold, so that their chi2 add up.
    """
    last = max(range(len(spans)), key=lambda place: spans[place].days)
    shift, (variance, _, _) = shift_lines(parts, spans, _UNIT_SLOPE)[last]
    moved = shift * shift / variance
    refits, without = _try_refits(parts)
    one, best, free, loglik = slope.worse_by, 0.0, 2, None
    if refits:
        free = sum(len(part.people.estimated) for part in parts) + 1
        one, best, loglik = _compare(refits, slope)
    rungs = [
        Rung(UpdateMethod.KEEP, 0, one + moved),
        Rung(UpdateMethod.INTERCEPT, 1, one, slope.loglik_one),
        Rung(UpdateMethod.INTERCEPT_SLOPE, 2, best, slope.loglik),
    ]
    if refits:
        rungs.append(Rung(UpdateMethod.REFIT, free, 0.0, loglik))
    return choose_closed(rungs, alpha, without), refits


def _compare(refits: Sequence[HazardRefit], slope: SlopeFit) -> tuple[float, float, float | None]:
    """How much a slope of 1, and the best slope, are worse than the refits; the log partial likelihood of these."""
    if slope.loglik is not None and slope.loglik_one is not None:
        loglik = sum(refit.loglik or 0.0 for refit in refits)
        return 2 * (loglik - slope.loglik_one), 2 * (loglik - slope.loglik), loglik
    whole, cross, old = (sum(refit.squares[place] for refit in refits) for place in range(3))
    return whole - 2 * cross + old, whole - cross * cross / old, None


def _try_refits(parts: Sequence[TimedPart]) -> tuple[tuple[HazardRefit, ...], str]:
    found = []
    for part in parts:
        why = why_not_nested(part.people) or _why_no_refit(part)
        if why:
            return (), f"{part.people.lead}{why}"
        try:
            found.append(refit_hazard(part.people, part.followed, part.times))
        except FitRefused as refused:
            return (), f"{part.people.lead}{say_no_refit(part.people.term_ids, refused)}"
    return tuple(found), ""


def _why_no_refit(part: TimedPart) -> str:
    events, needed = int(part.followed.events.sum()), LEAST_EVENTS * len(part.people.estimated)
    return say_too_few(events, needed, "events") if events < needed else ""


def _refit(part: TimedPart) -> HazardRefit:
    lacking = _why_no_refit(part)
    if lacking:
        raise refuse_too_few(part.people.lead, lacking)
    if part.followed.subdistribution and not (part.followed.status == 2).any():
        raise refuse_update(
            UpdateFault.NO_COMPETING,
            f"{part.people.lead}nobody has a competing event, and the model counts them: a refit would claim what was "
            "not seen. Check the column of competing events",
        )
    try:
        return refit_hazard(part.people, part.followed, part.times)
    except FitRefused as refused:
        raise refuse_refit(part.people.lead, part.people.term_ids, refused) from None


def _say(
    part: TimedPart,
    spans: Sequence[Span],
    method: UpdateMethod,
    slope: SlopeFit,
    lines: Sequence[tuple[float, Pair]],
    refit: HazardRefit | None,
    testing: Testing | None,
) -> EquationUpdate:
    seen, people = part.followed, len(part.people.lp)
    by = [count_by(seen, time) for time in part.times]
    moved = tuple(
        UpdatedLine(span, intercept, slope.slope, covariance, people, events)
        for span, (intercept, covariance), events in zip(spans, lines, by, strict=True)
    )
    return EquationUpdate(
        id=part.people.id,
        method=method,
        people=people,
        events=int(seen.events.sum()),
        competing=int((seen.status == 2).sum()),
        slope=slope.slope,
        slope_se=float(np.sqrt(slope.variance)) if method is UpdateMethod.INTERCEPT_SLOPE else None,
        lines=() if refit is not None else moved,
        refit=None if refit is None else _say_refit(part, spans, refit, by),
        testing=testing,
    )


def _say_refit(part: TimedPart, spans: Sequence[Span], refit: HazardRefit, by: Sequence[int]) -> Refit:
    people = len(part.people.lp)
    return Refit(
        terms=part.people.term_ids,
        coefficients=refit.coefficients,
        covariance=refit.covariance,
        joint=None,
        robust=part.followed.subdistribution,
        lines=tuple(
            RefittedLine(span, lp0, variance, centre, people, events)
            for span, (lp0, variance, centre), events in zip(spans, refit.baselines, by, strict=True)
        ),
        shrinkage=Shrinkage(refit.null, len(refit.coefficients)),
    )
