"""How far predictions lie from what happened, person by person: the Brier score and the scaled one."""

from dataclasses import dataclass, replace
from math import inf

from clinicalc.estimation.squared_errors import find_squared_errors
from clinicalc.validation.discriminating import LATE
from clinicalc.validation.intervals import lacking, measure_even
from clinicalc.validation.observing import Seen
from clinicalc.validation.predicted import YesNo
from clinicalc.validation.validated import Interval, Measure, Method


@dataclass(frozen=True, slots=True)
class ErrorMeasures:
    """The Brier score, that of giving everybody the observed risk, and one minus their ratio."""

    brier: Measure
    null: float | None
    scaled: Measure


def measure_errors(seen: Seen) -> ErrorMeasures:
    """Both scores; limits by each person's influence, the scaled one's with the observed risk as estimated."""
    method = Method.SQUARES if isinstance(seen.outcome, YesNo) else Method.WEIGHTED_SQUARES
    why = seen.not_followed if not seen.followed else LATE if seen.came_late else ""
    if why:
        return ErrorMeasures(lacking(why, method), None, lacking(why, method))
    found = find_squared_errors(seen.known, seen.predicted.probability)
    brier = _with_limits(found.brier, found.se, method, least=0.0)
    if found.scaled is None or found.scaled_se is None:
        who = "Nobody" if not seen.events else "Everybody"
        none = f"{who} was seen to have the event{seen.by}, so that the observed risk itself errs in nothing."
        return ErrorMeasures(brier, found.null, lacking(none, method))
    return ErrorMeasures(brier, found.null, _with_limits(found.scaled, found.scaled_se, method, least=-inf))


def _with_limits(score: float, se: float, method: Method, *, least: float) -> Measure:
    """The score with limits no lower than `least` and no higher than 1, beyond which no score lies."""
    if not se:
        return Measure(score, why="The errors of these people do not differ: no limits follow.", method=method)
    measure = measure_even(score, se, method, Interval.INFLUENCE)
    assert measure.lower is not None
    assert measure.upper is not None
    return replace(measure, lower=max(measure.lower, least), upper=min(measure.upper, 1.0))
