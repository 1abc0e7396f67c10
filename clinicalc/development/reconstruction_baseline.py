"""How precisely a printed baseline is known: the variance a at the centre of the band."""

from dataclasses import dataclass
from math import isfinite, log
from statistics import NormalDist

from msgspec import UnsetType

from clinicalc.coefficients.schema import Equation, Horizon, PrintedInterval
from clinicalc.coefficients.spans import span_of
from clinicalc.development.reconstruction_plan import EquationPlan, SurvivalLimits
from clinicalc.errors import Problem, ReconstructionRefused

FEW_LEFT = 0.1
"""With a smaller share of the people still at risk, 1 over the events is known to be 1.9 to 3.9 times too small."""


@dataclass(frozen=True, slots=True)
class BaselineVariance:
    """The variance of the linear predictor at the centre, and in words where it comes from."""

    value: float
    because: str


def find_baseline_variance(
    equation: Equation,
    place: int,
    horizon: Horizon,
    plan: EquationPlan,
    mean_weight: float,
    limits: SurvivalLimits,
) -> BaselineVariance:
    """a for one horizon; `mean_weight` is the reference people's mean risk (cloglog) or mean p(1 - p) (logit).

    cloglog: from a printed Kaplan-Meier interval where there is one, the variance of log(-log S); else 1 over the
    events by the horizon, as stated or as people times mean risk. logit: 1 over the sum of p(1 - p), which is the
    variance at the weighted mean of a maximum-likelihood fit. Raises ReconstructionRefused without a count of people.
    """
    span = span_of(horizon)
    words = "" if span is None else f" at {span.words}"
    people = plan.people if isinstance(horizon.people, UnsetType) else horizon.people
    if equation.link == "logit":
        total = _count_people(people, place) * mean_weight
        return BaselineVariance(
            1.0 / total,
            f"The variance of the baseline{words} is 1 over {total:.4g}, the {people:,} people times the mean of"
            " p(1 − p) among the reference people.",
        )
    if isinstance(horizon.survival_interval, PrintedInterval):
        value = _from_survival(horizon.survival_interval, limits, f"/model/equations/{place}/horizons")
        return BaselineVariance(
            value,
            f"The variance of the baseline{words} is from the printed Kaplan-Meier interval, taken as {limits.value}"
            " limits.",
        )
    if not isinstance(horizon.events, UnsetType) and horizon.events > 0:
        return BaselineVariance(
            1.0 / horizon.events,
            f"The variance of the baseline{words} is 1 over the {horizon.events:,} events by then.{_left(horizon)}",
        )
    events = _count_people(people, place) * mean_weight
    return BaselineVariance(
        1.0 / events,
        f"The number of events{words} is not printed; {people:,} people times the mean risk predicted for the"
        f" reference people make {events:.0f}, and 1 over that is the variance of the baseline.{_left(horizon)}",
    )


def _count_people(people: int | None, place: int) -> int:
    if people is None or people < 1:
        text = (
            "neither the events by the horizon nor the number of people is given, so the baseline’s precision is not"
            ' known. State "people" or "events" at the horizon, or the people in the plan.'
        )
        raise ReconstructionRefused((Problem(f"/model/equations/{place}/horizons", text),))
    return people


def _from_survival(interval: PrintedInterval, limits: SurvivalLimits, path: str) -> float:
    lower, upper = interval.lower, interval.upper
    if not (isfinite(lower) and 0 < lower < upper < 1):
        text = "the printed Kaplan-Meier interval must rise and lie between 0 and 1, both left out."
        raise ReconstructionRefused((Problem(path, text),))
    wide = 2.0 * NormalDist().inv_cdf(0.5 + interval.level / 2.0)
    if limits is SurvivalLimits.LOG_LOG:
        deviation = (log(-log(lower)) - log(-log(upper))) / wide
    elif limits is SurvivalLimits.LOG:
        # se(ln S) / |ln S|, S in the middle of the logarithms
        deviation = (log(upper) - log(lower)) / wide / (-(log(upper) + log(lower)) / 2.0)
    else:
        middle = (lower + upper) / 2.0
        deviation = (upper - lower) / wide / (-middle * log(middle))
    return deviation * deviation


def _left(horizon: Horizon) -> str:
    left, people = horizon.still_at_risk, horizon.people
    if isinstance(left, UnsetType):
        return " How many people were still under observation then is not known; with few, it is too small."
    if not isinstance(people, UnsetType) and left < FEW_LEFT * people:
        return f" Only {left:,} of {people:,} people were still under observation then, so it is too small."
    return ""
