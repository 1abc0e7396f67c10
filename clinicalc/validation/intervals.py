"""From an estimate and its standard error to a measure with 95 % limits, on the scale on which they hold."""

from math import exp, log
from statistics import NormalDist

from clinicalc.estimation.incidence import Incidence
from clinicalc.estimation.wilson import wilson_limits
from clinicalc.validation.validated import LEVEL, Interval, Measure, Method

Z = NormalDist().inv_cdf(0.5 + LEVEL / 2.0)


def measure_even(value: float, se: float, method: Method, interval: Interval = Interval.NORMAL) -> Measure:
    """Limits even about the value."""
    return Measure(value, value - Z * se, value + Z * se, interval, method=method)


def measure_ratio(value: float, se_log: float, method: Method) -> Measure:
    """A ratio above 0, with limits even on its logarithm."""
    return Measure(value, value * exp(-Z * se_log), value * exp(Z * se_log), Interval.LOG, method=method)


def measure_logit(value: float, se_logit: float, method: Method) -> Measure:
    """A share between 0 and 1, with limits even on its log odds."""
    at = log(value / (1.0 - value))
    lower, upper = (1.0 / (1.0 + exp(-(at + side * Z * se_logit))) for side in (-1.0, 1.0))
    return Measure(value, lower, upper, Interval.LOGIT, method=method)


def measure_area(value: float, se: float, method: Method) -> Measure:
    """A C or area, with limits even on its log odds; without limits where all pairs go one way."""
    if not 0.0 < value < 1.0:
        return Measure(value, why="All people who were compared stand in one order: no limits follow.", method=method)
    return measure_logit(value, se / (value * (1.0 - value)), method)


def measure_share(count: int, of: int) -> Measure:
    """A share of people, of at least one, with limits after Wilson."""
    lower, upper = wilson_limits(count, of, LEVEL)
    return Measure(count / of, lower, upper, Interval.WILSON, method=Method.SHARE)


def measure_incidence(found: Incidence, method: Method) -> Measure:
    """An observed risk, with limits on log(-log(1 - risk)); without limits at 0 and at 1."""
    limits = found.limits(LEVEL)
    if limits is None:
        who = "Nobody" if found.share <= 0.0 else "Everybody still watched"
        return Measure(found.share, why=f"{who} was seen to have the event: no limits follow.", method=method)
    return Measure(found.share, *limits, Interval.LOG_LOG, method=method)


def turn(measure: Measure) -> Measure:
    """One minus a share."""
    if measure.value is None or measure.lower is None or measure.upper is None:
        value = None if measure.value is None else 1.0 - measure.value
        return Measure(value, why=measure.why, method=measure.method)
    lower, upper = 1.0 - measure.upper, 1.0 - measure.lower
    return Measure(1.0 - measure.value, lower, upper, measure.interval, method=measure.method)


def lacking(why: str, method: Method = Method.NONE) -> Measure:
    """No figure, and why."""
    return Measure(None, why=why, method=method)
