"""Horizons: a time given once, the baseline the link needs, and hazards that rise with time."""

from collections.abc import Iterator
from itertools import pairwise

from msgspec import UNSET, UnsetType

from clinicalc.coefficients.baselines import baseline
from clinicalc.coefficients.pointers import listed, point, quoted
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.schema import Equation, Horizon, ModelContent
from clinicalc.coefficients.spans import TIME_UNITS, HasSpan, Span, span_of
from clinicalc.errors import Problem

_BASELINE = ("intercept", "baseline_survival", "mean_linear_predictor", "log_cumulative_hazard")


def check_horizons(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The horizons of every equation, and that all equations have the same."""
    del names
    for index, equation in enumerate(model.equations):
        base = at("equations", index, "horizons")
        for place, horizon in enumerate(equation.horizons):
            here = point(base, place)
            yield from check_span(horizon, here)
            yield from _check_baseline(horizon, equation.link, here)
            yield from _check_beside(horizon, here)
        yield from _check_order(equation, base)
        if set(spans_of(equation)) != set(spans_of(model.equations[0])):
            first = model.equations[0]
            yield Problem(
                base,
                f"every equation must have the same horizons: {quoted(equation.id)} has {_spell(equation)}, "
                f"{quoted(first.id)} has {_spell(first)}.",
            )


def spans_of(equation: Equation) -> tuple[Span, ...]:
    """The time spans of an equation's horizons, those that are given properly."""
    return tuple(span for span in map(span_of, equation.horizons) if span is not None)


def check_span(part: HasSpan, path: str) -> Iterator[Problem]:
    """A time is given in exactly one way and in a unit of time."""
    span = span_of(part)
    if span is None:
        yield Problem(path, 'the time span must be given in exactly one way: "years", or "time" together with "unit".')
    elif span.unit not in TIME_UNITS:
        units = listed(map(quoted, TIME_UNITS), "or")
        yield Problem(point(path, "unit"), f"{quoted(span.unit)} is no unit of time known here; write {units}.")


def check_span_known(part: HasSpan, path: str, model: ModelContent) -> Iterator[Problem]:
    """A time span is given properly and is one of the model's horizons."""
    yield from check_span(part, path)
    span, known = span_of(part), spans_of(model.equations[0])
    if span is not None and span.unit in TIME_UNITS and span not in known:
        words = listed((each.words for each in known), "or")
        yield Problem(path, f"the model has no horizon of {span.words}; it has {words}.")


def _check_baseline(horizon: Horizon, link: str, path: str) -> Iterator[Problem]:
    found = {name for name in _BASELINE if getattr(horizon, name) is not UNSET}
    if link == "logit":
        if found != {"intercept"}:
            yield Problem(
                path, f'with the link "logit" a horizon has "intercept" and no other baseline; found {_list(found)}.'
            )
        return
    if found not in ({"baseline_survival", "mean_linear_predictor"}, {"log_cumulative_hazard"}):
        yield Problem(
            path,
            'with the link "cloglog" a horizon has "baseline_survival" together with "mean_linear_predictor", or '
            f'"log_cumulative_hazard", and no other baseline; found {_list(found)}.',
        )
    survival = horizon.baseline_survival
    if not isinstance(survival, UnsetType) and not 0 < survival < 1:
        slip = f" Is it a percentage? Then write {quoted(survival / 100)}." if 1 < survival < 100 else ""
        yield Problem(
            point(path, "baseline_survival"), f"{quoted(survival)} is no survival: it must lie between 0 and 1.{slip}"
        )


def _check_beside(horizon: Horizon, path: str) -> Iterator[Problem]:
    interval = horizon.survival_interval
    if not isinstance(interval, UnsetType) and interval.lower >= interval.upper:
        yield Problem(
            point(path, "survival_interval"),
            f"lower ({quoted(interval.lower)}) must be less than upper ({quoted(interval.upper)}).",
        )
    for name in ("events", "still_at_risk"):
        count = getattr(horizon, name)
        if not isinstance(horizon.people, UnsetType) and count is not UNSET and count > horizon.people:
            yield Problem(point(path, name), f"{count} is more than the {horizon.people} people there were.")


def _check_order(equation: Equation, base: str) -> Iterator[Problem]:
    timed = [
        (span.days, place, horizon, span)
        for place, horizon in enumerate(equation.horizons)
        if (span := span_of(horizon)) is not None and span.unit in TIME_UNITS
    ]
    timed.sort(key=lambda entry: entry[:2])
    for (days, _, before, early), (later, place, after, late) in pairwise(timed):
        here = point(base, place)
        if later == days:
            yield Problem(here, f"{late.words} stands twice. Each horizon stands once.")
            continue
        low, high = baseline(before, equation.link), baseline(after, equation.link)
        if low is None or high is None:
            continue
        if equation.link == "cloglog" and high <= low:
            said = (
                f"the cumulative hazard must rise with time, and at {late.words} it is not above that at {early.words}."
                " If nobody had the event in between, leave one of them out."
            )
            yield Problem(here, said)
        if equation.link == "logit" and high < low:
            yield Problem(
                here, f"the intercept must not fall with time, and at {late.words} it is below that of {early.words}."
            )


def _spell(equation: Equation) -> str:
    return listed(span.words for span in spans_of(equation))


def _list(found: set[str]) -> str:
    return listed(map(quoted, sorted(found))) if found else "none"
