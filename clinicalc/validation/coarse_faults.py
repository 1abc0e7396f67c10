"""Faults where times are coarse, as whole years are: only what is found at both ends of what the times leave open.

Rounding moves events across the horizon, and people out of sight before or after the events of their time. A right
model is then easily called too high or too low; one that is far off is so at both ends.
"""

from collections.abc import Callable, Sequence
from dataclasses import replace
from math import inf, log, log1p

from clinicalc.assessment.numerals import EN_DASH, percent_of
from clinicalc.coefficients.spans import Span
from clinicalc.validation.coarse_times import bound_coarse_times, name_coarse_times, share_by
from clinicalc.validation.predicted import Outcome, YesNo
from clinicalc.validation.search import CoarseRange, Finding, GroupSight, Search
from clinicalc.validation.validated import FaultKind, HorizonValidation

_SHIFTS = frozenset({FaultKind.TOO_LOW, FaultKind.TOO_HIGH})


def search_within_bounds(look: Callable[[Outcome], Search], outcome: Outcome, span: Span) -> Search:
    """What `look` finds; where times are coarse, what it finds in them as they are and at both ends.

    How closely could be seen is then how closely at the end at which least is seen.
    """
    found = look(outcome)
    bounds = None if isinstance(outcome, YesNo) else bound_coarse_times(outcome, span)
    if bounds is None or isinstance(outcome, YesNo) or found.why:
        return found
    searches = (found, look(bounds.fewest), look(bounds.most))
    held = set.intersection(*({_key(one) for one in search.findings} for search in searches))
    unsure = any(_key(one) not in held for search in searches for one in search.findings)
    # what is said of one finding rests on the others beside it: the search with the fewest that do not hold
    plainest = min(searches, key=lambda search: sum(_key(one) not in held for one in search.findings))
    findings = tuple(one for one in plainest.findings if _key(one) in held)
    if not any(one.kind in _SHIFTS for one in findings):
        findings = tuple(replace(one, rest=0.0) for one in findings)
    low, high = share_by(bounds.fewest, span), share_by(bounds.most, span)
    return replace(
        found,
        findings=findings,
        shift=max(search.shift for search in searches) + _apart(low, high),
        slope=max(search.slope for search in searches),
        groups=tuple(_see_least(searches)),
        coarse=CoarseRange(name_coarse_times(outcome, span), low, high, unsure),
    )


def say_range(coarse: CoarseRange, horizon: HorizonValidation, *, named: bool) -> str:
    """The sentence about both ends; `named` where faults are."""
    assert horizon.span is not None
    by, expected = horizon.span.words, horizon.expected
    ends = (
        f"with events recorded about {by} counted after it or before it, and people lost after or before the events of"
        f" their time, the observed risk by {by} is anything from {percent_of(coarse.low)} to"
        f" {percent_of(coarse.high)}; {percent_of(expected)} were predicted (observed over expected"
        f" {coarse.low / expected:.2f}{EN_DASH}{coarse.high / expected:.2f})"
    )
    if named:
        return f"{coarse.times} leave more open: {ends}. What is named here is found at both ends."
    if coarse.unsure:
        return f"{coarse.times} cannot tell whether the predictions are right: {ends}. Give dates, or times in days."
    return f"{coarse.times} leave this open: {ends}."


def _key(finding: Finding) -> tuple[FaultKind, str, str]:
    return finding.kind, finding.at, finding.level


def _apart(low: float, high: float) -> float:
    """How far the ends are apart as log cumulative hazards, the scale of a shift."""
    return log(-log1p(-high)) - log(-log1p(-low)) if 0.0 < low <= high < 1.0 else inf


def _see_least(searches: Sequence[Search]) -> list[GroupSight]:
    """Every group that could be looked at in all, by the factor of the one in which it is seen least."""
    factors = [{(one.label, one.level): one.factor for one in search.groups} for search in searches]
    return [
        replace(one, factor=max(each[one.label, one.level] for each in factors))
        for one in searches[0].groups
        if all((one.label, one.level) in each for each in factors)
    ]
