"""How many people a model needs before it is fitted, for a binary and for a time-to-event outcome.

Riley RD, Snell KIE, Ensor J, et al. Stat Med 2019;38:1276-1296: (i) an expected shrinkage of 0.9, (ii) apparent and
adjusted share of explained variation (Nagelkerke) at most 0.05 apart, (iii) the overall risk known to within 0.05.
R2 is Cox and Snell's throughout. Nothing is rounded on the way; only a number of people is rounded, up.
"""

from dataclasses import dataclass
from enum import StrEnum
from math import ceil, exp, log, sqrt
from statistics import NormalDist

import numpy as np

SHRINKAGE = 0.9
OPTIMISM = 0.05
MARGIN = 0.05
LEVEL = 0.95
ASSUMED_SHARE = 0.15
"""Of the largest possible R2, where nothing is known: Riley RD, Ensor J, Snell KIE, et al. BMJ 2020;368:m441."""

_NODES = 200


class R2Origin(StrEnum):
    """Where the R2 of a sample size comes from."""

    ANTICIPATED = "anticipated"
    ASSUMED = "assumed"
    APPARENT = "apparent"


@dataclass(frozen=True, slots=True)
class SampleSize:
    """People that each criterion asks for (not rounded), the largest of them rounded up, and what follows from it.

    `shrinkage2` is the shrinkage that criterion (ii) asks for; `risk` the overall risk of (iii), `events` those
    expected among `people`, `per_parameter` those divided by the parameters.
    """

    parameters: int
    r2: float
    max_r2: float
    shrinkage2: float
    risk: float
    for_shrinkage: float
    for_optimism: float
    for_risk: float
    people: int
    events: float
    per_parameter: float


def size_for_binary(parameters: int, prevalence: float, r2: float) -> SampleSize:
    """People needed for a binary outcome; `parameters` without the intercept, 0 < prevalence < 1, 0 < r2 < max R2.

    Raises ValueError outside these limits.
    """
    largest = max_r2_binary(prevalence)
    for_risk = people_for_prevalence(prevalence, MARGIN)
    return _largest(parameters, r2, largest, prevalence, for_risk, prevalence)


def size_for_survival(parameters: int, rate: float, follow_up: float, horizon: float, r2: float) -> SampleSize:
    """People needed for a time-to-event outcome: events for each person and unit of time, mean follow-up, horizon.

    Rate, follow-up and horizon in one unit of time, whichever; r2 as above. Raises ValueError outside the limits.
    """
    _demand_positive(rate=rate, follow_up=follow_up, horizon=horizon)
    largest = max_r2_survival(rate * follow_up)
    for_risk = people_for_rate(rate, follow_up, horizon, MARGIN)
    return _largest(parameters, r2, largest, -float(np.expm1(-rate * horizon)), for_risk, rate * follow_up)


def max_r2_binary(prevalence: float) -> float:
    """The largest R2 with such a share of events: 1 - exp(2 lnL0 / n)."""
    _demand_share(prevalence)
    return -float(np.expm1(2.0 * _null_log_likelihood(prevalence)))


def max_r2_survival(events_per_person: float) -> float:
    """The same from events for each person e by an exponential model: lnL0 / n = e ln e - e.

    e is a number per person over the mean follow-up, so the unit of time does not matter. Raises ValueError above one
    event for each person.
    """
    _demand_positive(events_per_person=events_per_person)
    if events_per_person > 1.0:
        raise ValueError(f"{events_per_person} events for each person; there is at most one.")
    return -float(np.expm1(2.0 * (events_per_person * log(events_per_person) - events_per_person)))


def people_for_shrinkage(parameters: int, r2: float, shrinkage: float) -> float:
    """Criterion (i), and (ii) with its own shrinkage: p / ((S - 1) ln(1 - R2 / S)), 0 < r2 < shrinkage < 1."""
    if parameters < 1:
        raise ValueError("there is no parameter.")
    if not 0.0 < r2 < shrinkage < 1.0:
        raise ValueError(f"R2 {r2} and shrinkage {shrinkage}: needed is 0 < R2 < shrinkage < 1.")
    return parameters / ((shrinkage - 1.0) * float(np.log1p(-r2 / shrinkage)))


def shrinkage_for_optimism(r2: float, max_r2: float, optimism: float = OPTIMISM) -> float:
    """The shrinkage at which R2 / max R2 is overstated by `optimism`: R2 / (R2 + optimism max R2)."""
    return r2 / (r2 + optimism * max_r2)


def people_for_prevalence(prevalence: float, margin: float) -> float:
    """Criterion (iii), binary: (z / margin)^2 p (1 - p), z for 95 %."""
    _demand_share(prevalence)
    ratio = _z() / margin
    return ratio * ratio * prevalence * (1.0 - prevalence)


def people_for_rate(rate: float, follow_up: float, horizon: float, margin: float) -> float:
    """Criterion (iii), time-to-event: both limits of 1 - exp(-rate t) at most `margin` from it.

    The limits come from rate -/+ z sqrt(rate / (n follow-up)), so with d the largest distance of rates allowed
    n = z^2 rate / (follow-up d^2). With S the survival at t the lower limit allows d = ln((S + margin) / S) / t, the
    upper one more; where S + margin >= 1 the lower limit stops at a risk of nought, nearer than the margin, and where
    margin >= S the upper one stops at a risk of one.
    """
    _demand_positive(rate=rate, follow_up=follow_up, horizon=horizon)
    survival = exp(-rate * horizon)
    if survival + margin < 1.0:
        distance = log((survival + margin) / survival) / horizon
    elif survival > margin:
        distance = log(survival / (survival - margin)) / horizon
    else:
        return 0.0  # any interval at all is narrow enough
    z = _z()
    return z * z * rate / (follow_up * distance * distance)


def r2_from_c(c: float, prevalence: float) -> float:
    """R2 of a calibrated logistic model with C statistic `c`, 0.5 < c < 1.

    The linear predictor is taken as normal with variance 1 in those with and without the event, d = sqrt(2) Phi^-1(C)
    apart, so that the log odds are logit(p) + d x - d^2 / 2, and R2 = 1 - exp(-2 (E ln L - ln L0)), E by Gauss-Hermite
    quadrature in place of the sampling of Riley RD, Van Calster B, Collins GS. Stat Med 2021;40:859-864.
    """
    _demand_share(prevalence)
    if not 0.5 < c < 1.0:
        raise ValueError(f"C statistic {c}; needed is 0.5 < C < 1.")
    apart = sqrt(2.0) * NormalDist().inv_cdf(c)
    nodes, weights = np.polynomial.hermite_e.hermegauss(_NODES)
    weights = weights / weights.sum()
    start = log(prevalence) - log(1.0 - prevalence) - apart * apart / 2.0
    with_event = -np.logaddexp(0.0, -(start + apart * (nodes + apart)))
    without = -np.logaddexp(0.0, start + apart * nodes)
    expected = prevalence * float((weights * with_event).sum()) + (1.0 - prevalence) * float((weights * without).sum())
    return -float(np.expm1(-2.0 * (expected - _null_log_likelihood(prevalence))))


def assume_r2(max_r2: float) -> float:
    """What may be assumed where nothing is known: 15 % of the largest possible R2."""
    return ASSUMED_SHARE * max_r2


def r2_from_likelihoods(null: float, fitted: float, people: int) -> float:
    """The apparent R2 of a fit: 1 - exp(-2 (lnL - lnL0) / n)."""
    return -float(np.expm1(-2.0 * (fitted - null) / people))


def adjust_r2(apparent: float, people: int, parameters: int) -> float:
    """An apparent R2 less its optimism: times S = 1 + p / (n ln(1 - R2)) (in the paper); 0 at least."""
    if not 0.0 < apparent < 1.0:
        return 0.0
    return max(0.0, 1.0 + parameters / (people * float(np.log1p(-apparent)))) * apparent


def _largest(parameters: int, r2: float, max_r2: float, risk: float, for_risk: float, events_each: float) -> SampleSize:
    if not 0.0 < r2 < max_r2:
        raise ValueError(f"R2 {r2}; with these events it lies between 0 and {max_r2}.")
    shrinkage2 = shrinkage_for_optimism(r2, max_r2)
    # max R2 is 1 - exp(-2) = 0.865 at most, so that R2 lies below both shrinkages
    first = people_for_shrinkage(parameters, r2, SHRINKAGE)
    second = people_for_shrinkage(parameters, r2, shrinkage2)
    people = ceil(max(first, second, for_risk))
    events = people * events_each
    return SampleSize(
        parameters, r2, max_r2, shrinkage2, risk, first, second, for_risk, people, events, events / parameters
    )


def _null_log_likelihood(share: float) -> float:
    return share * log(share) + (1.0 - share) * log(1.0 - share)


def _z() -> float:
    return NormalDist().inv_cdf(0.5 + LEVEL / 2.0)


def _demand_share(share: float) -> None:
    if not 0.0 < share < 1.0:
        raise ValueError(f"{share} is no share of people with the event between 0 and 1.")


def _demand_positive(**values: float) -> None:
    for name, value in values.items():
        if not 0.0 < value < float("inf"):
            raise ValueError(f"{name} is {value}; it must be above 0.")
