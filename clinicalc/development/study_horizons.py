"""The horizons of a Cox fit in its own unit of time, what happened by each of them, and the follow-up."""

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import ModelEquation
from clinicalc.coefficients.spans import Span
from clinicalc.development.study_figures import FollowUp, HorizonFigures
from clinicalc.development.study_strata import FitPlan
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.hazard_sums import Cohort

Codes = NDArray[np.int64]
_DECIMALS = 9
_FEW_AT_RISK = 10


def require_horizons(
    plan: FitPlan, equations: Sequence[ModelEquation], cohort: Cohort, strata: Codes, unit: str
) -> tuple[tuple[float, ...], ...]:
    """The time of each horizon, for each equation, in the unit of the cohort's times.

    Raises DescriptionRefused where nobody of an equation was followed so long, or had the event by then.
    """
    found, problems = [], list[Problem]()
    for place, equation in enumerate(equations):
        rows = strata == place
        times = tuple(_in_unit(line.span, unit) for line in equation.lines)
        found.append(times)
        for line, time in zip(equation.lines, times, strict=True):
            problems += _judge(line.span, time, cohort, rows, unit, f'equations "{equation.content.id}", horizons')
    if problems:
        raise DescriptionRefused(plan.id, tuple(problems))
    return tuple(found)


def horizon_figures(
    equations: Sequence[ModelEquation], cohort: Cohort, strata: Codes, times: Sequence[Sequence[float]]
) -> Iterator[HorizonFigures]:
    """What happened by each horizon of each equation; whoever leaves at the horizon itself is still at risk at it."""
    for place, equation in enumerate(equations):
        rows = strata == place
        for line, time in zip(equation.lines, times[place], strict=True):
            events = rows & (cohort.events == 1) & (cohort.times <= time)
            left = rows & (cohort.times >= time)
            if cohort.entry is not None:
                left &= cohort.entry < time
            yield HorizonFigures(equation.content.id, line.span, int(rows.sum()), int(events.sum()), int(left.sum()))


def find_follow_up(cohort: Cohort, unit: str) -> FollowUp:
    """Median follow-up by the reverse Kaplan-Meier estimate: Schemper & Smith, Control Clin Trials 1996;17:343-346.

    The end of watching is the event, and somebody with the event at that time is still at risk of it.
    """
    longest = float(cohort.times.max())
    if cohort.entry is not None:
        return FollowUp(None, longest, unit)
    order = np.argsort(cohort.times, kind="stable")
    when, first = np.unique(cohort.times[order], return_index=True)
    ended = np.bincount(np.searchsorted(when, cohort.times), weights=1.0 - cohort.events, minlength=len(when))
    left = np.cumprod(1.0 - ended / (len(order) - first))
    reached = np.flatnonzero(left <= 0.5)
    return FollowUp(float(when[reached[0]]) if len(reached) else None, longest, unit)


def remark_few_at_risk(
    equations: Sequence[ModelEquation], cohort: Cohort, strata: Codes, times: Sequence[Sequence[float]], unit: str
) -> Iterator[str]:
    """Equations where people came late and an event by a horizon was counted against fewer than ten people.

    The baseline hazard jumps there by the share of those at risk, and every later horizon keeps the jump.
    """
    if cohort.entry is None:
        return
    for place, equation in enumerate(equations):
        rows = strata == place
        counted = rows & (cohort.events == 1) & (cohort.times <= max(times[place]))
        when = np.unique(cohort.times[counted])
        left, came = np.sort(cohort.times[rows]), np.sort(cohort.entry[rows])
        at_risk = np.searchsorted(came, when, side="left") - np.searchsorted(left, when, side="left")
        if at_risk.min() < _FEW_AT_RISK:
            thin = int(at_risk.argmin())
            who = "1 person was" if at_risk[thin] == 1 else f"{at_risk[thin]} people were"
            yield (
                f"{equation.content.id}: only {who} under observation at {Span(float(when[thin]), unit).words}, when "
                "somebody had the event. The baseline jumps there, and every later probability with it: look whether "
                "so few can be relied on, or begin with those who were watched from time nought."
            )


def _in_unit(span: Span, unit: str) -> float:
    """The span in the unit of the times; rounded like these, so that 10 years in months are exactly 120."""
    return span.time if span.unit == unit else round(span.days / Span(1.0, unit).days, _DECIMALS)


def _judge(span: Span, time: float, cohort: Cohort, rows: NDArray[np.bool_], unit: str, path: str) -> Iterator[Problem]:
    longest = float(cohort.times[rows].max()) if rows.any() else 0.0
    if not rows.any():
        yield Problem(path, "there is nobody in the file to whom it applies with every value.")
    elif time > longest:
        reached = Span(float(f"{longest:.6g}"), unit).words
        yield Problem(
            path,
            f"{span.words} lies beyond the follow-up: the longest is {reached}, and nobody knows what comes after it. "
            "Give a shorter horizon, or check the unit of the times.",
        )
    elif not (rows & (cohort.events == 1) & (cohort.times <= time)).any():
        yield Problem(
            path,
            f"nobody had the event by {span.words}, so there is no baseline. Check horizon and unit of time.",
        )
