"""What flagging everybody at or above a decision point does: who is found, who is missed, what it is worth.

Of a yes or no from counts, with Wilson's limits. Of times from the observed risks F among those flagged (share s) and N
among those not, each by Kaplan-Meier or Aalen & Johansen: sensitivity s F / (s F + (1 - s) N) and specificity alike;
their log odds are sums of log s - log(1 - s) and logs of F, N, 1 - F, 1 - N, which vary independently, and have limits
by the delta method. Predictive values have the limits of F and N (log-log).
"""

from dataclasses import dataclass
from math import sqrt

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.net_benefit import curve_of_risks, curve_of_times, net_benefit
from clinicalc.validation.intervals import lacking, measure_logit, measure_share, turn
from clinicalc.validation.observing import Seen, observe
from clinicalc.validation.predicted import FlagPoint, YesNo
from clinicalc.validation.validated import DecisionFigures, Measure, NetBenefitCurve

Array = NDArray[np.float64]
CURVE_POINTS = 50
_HIGHEST = 0.99


@dataclass(frozen=True, slots=True)
class _Found:
    """Those flagged and the others, as observed; the share of all with the event among each, None where not known."""

    sensitivity: Measure
    specificity: Measure
    positive: Measure
    negative: Measure


def decide(seen: Seen, point: FlagPoint) -> DecisionFigures:
    """The figures at one decision point, of people of whom something is known at the horizon."""
    flagged = seen.predicted.probability >= point.value
    count = int(flagged.sum())
    share = count / seen.people
    found = _count(seen, flagged) if isinstance(seen.outcome, YesNo) else _watch(seen, flagged)
    everybody = observe(seen).value
    worth: float | None = 0.0
    if count:
        worth = None if found.positive.value is None else net_benefit(share, found.positive.value, point.value)
    # where nobody is below the point nobody is missed
    missed: float | None = 0.0
    if count < seen.people:
        missed = None if found.negative.value is None else 100.0 * (1.0 - share) * (1.0 - found.negative.value)
    return DecisionFigures(
        point=point.value,
        label=point.label,
        flagged=count,
        flagged_share=measure_share(count, seen.people),
        sensitivity=found.sensitivity,
        specificity=found.specificity,
        positive_value=found.positive,
        negative_value=found.negative,
        net_benefit=worth,
        treat_all=None if everybody is None else net_benefit(1.0, everybody, point.value),
        missed=missed,
    )


def draw_net_benefit(seen: Seen) -> NetBenefitCurve | None:
    """The curve from a fiftieth of the highest predicted risk up to it; None where people came late or risks are 0.

    Points at which all who are flagged were lost before the horizon are left out.
    """
    top = min(_HIGHEST, float(seen.predicted.probability.max()))
    everybody = observe(seen).value
    if seen.came_late or everybody is None or top <= 0.0:
        return None
    points = top * np.arange(1, CURVE_POINTS + 1) / CURVE_POINTS
    predictions = seen.predicted.probability
    if isinstance(seen.outcome, YesNo):
        curve = curve_of_risks(predictions, seen.outcome.y, points)
    else:
        curve = curve_of_times(predictions, seen.outcome.times, seen.outcome.status, seen.horizon, points)
    known = np.isfinite(curve)
    points, curve = points[known], curve[known]
    return NetBenefitCurve(points, curve, everybody - (1.0 - everybody) * points / (1.0 - points))


def _count(seen: Seen, flagged: NDArray[np.bool_]) -> _Found:
    """Of a yes or no."""
    happened, all_people = seen.had_event, seen.people
    true, found = int((flagged & happened).sum()), int(flagged.sum())
    clear = int((~flagged & ~happened).sum())
    nobody, everybody = "Nobody reaches the decision point.", "Everybody reaches the decision point."
    return _Found(
        _share(true, seen.events, "Nobody had the event."),
        _share(clear, all_people - seen.events, "Everybody had the event."),
        _share(true, found, nobody),
        _share(clear, all_people - found, everybody),
    )


def _share(count: int, of: int, why: str) -> Measure:
    return measure_share(count, of) if of else lacking(why)


def _watch(seen: Seen, flagged: NDArray[np.bool_]) -> _Found:
    """Of times."""
    count = int(flagged.sum())
    method = seen.incidence_method
    if not count or count == seen.people:
        who = "Everybody reaches" if count else "Nobody reaches"
        none = lacking(f"{who} the decision point.", method)
        risk = observe(seen)
        held, lost = (1.0, 0.0) if count else (0.0, 1.0)
        finds = Measure(held, why=f"{none.why[:-1]}: no limits follow.", method=method)
        clears = Measure(lost, why=finds.why, method=method)
        return _Found(
            finds if seen.events else lacking(f"Nobody was seen to have the event{seen.by}.", method),
            clears,
            risk if count else none,
            none if count else turn(risk),
        )
    parts = seen.part(flagged), seen.part(~flagged)
    for part, words in zip(parts, ("at or above", "below"), strict=True):
        if not part.followed:
            why = f"The last of those {words} the decision point was lost before the horizon."
            gone = lacking(why, method)
            known = [observe(each) if each.followed else gone for each in parts]
            return _Found(gone, gone, known[0], turn(known[1]))
    high, low = (part.incidence for part in parts)
    share = count / seen.people
    spread = 1.0 / (seen.people * share * (1.0 - share))
    return _Found(
        _odds(share, (high.share, high.se), (low.share, low.se), spread, "to have the event", seen),
        _odds(1.0 - share, (1.0 - low.share, low.se), (1.0 - high.share, high.se), spread, "to stay without", seen),
        observe(parts[0]),
        turn(observe(parts[1])),
    )


def _odds(
    share: float, own: tuple[float, float], other: tuple[float, float], spread: float, what: str, seen: Seen
) -> Measure:
    """share * own / (share * own + (1 - share) * other), with limits on its log odds."""
    method = seen.incidence_method
    held, rest = share * own[0], (1.0 - share) * other[0]
    if held + rest <= 0.0:
        return lacking(f"Nobody was seen {what}{seen.by}.", method)
    if held <= 0.0 or rest <= 0.0:
        why = f"All who were seen {what}{seen.by} stand on one side of the decision point: no limits follow."
        return Measure(held / (held + rest), why=why, method=method)
    variance = spread + (own[1] / own[0]) ** 2 + (other[1] / other[0]) ** 2
    return measure_logit(held / (held + rest), sqrt(variance), method)
