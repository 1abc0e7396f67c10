"""The indices of calibration, distances of the smooth curve from the diagonal, as measures with limits.

ICI: Austin & Steyerberg, Stat Med 2019;38:4051; E50, E90 and Emax: Harrell, Regression Modeling Strategies. Limits are
percentiles over drawn curves; in simulations they held the true ICI of wrong predictions in 95 to 98 of 100 samples.
"""

from dataclasses import dataclass

from clinicalc.estimation.calibrated import Calibration, IndexLimits, Limits, NoCurve, Smoother
from clinicalc.estimation.smooth_curves import FEWEST_EVENTS, FEWEST_PEOPLE, FEWEST_PREDICTIONS, FEWEST_RESAMPLES
from clinicalc.validation.intervals import lacking
from clinicalc.validation.validated import Interval, Measure, Method

_LEAST = 0.0001
_NO_CURVE = {
    NoCurve.TOO_FEW_PEOPLE: f"Fewer than {FEWEST_PEOPLE} people: no smooth curve.",
    NoCurve.TOO_FEW_PREDICTIONS: f"Fewer than {FEWEST_PREDICTIONS} different predicted risks, or most people have one: "
    "no smooth curve.",
    NoCurve.TOO_FEW_EVENTS: f"Fewer than {FEWEST_EVENTS} people with the event, or without it: no smooth curve.",
    NoCurve.NOT_FOLLOWED: "Nobody was followed to the horizon: no smooth curve.",
    NoCurve.CAME_LATE: "Other events come first and some were first watched after time nought: no smooth curve.",
    NoCurve.NOT_FITTED: "The smooth curve could not be fitted.",
}
"""Why there are none."""


@dataclass(frozen=True, slots=True)
class IndexMeasures:
    """Mean, median, 90th percentile and largest distance over the people."""

    ici: Measure
    e50: Measure
    e90: Measure
    emax: Measure


def measure_indices(calibration: Calibration, resamples: int = 0) -> IndexMeasures:
    """All four; `resamples` are those that were asked for. The ICI says how far chance alone would put it from 0."""
    found, limits = calibration.indices, calibration.limits
    if found is None:
        assert calibration.no_curve is not None
        none = lacking(_NO_CURVE[calibration.no_curve], Method.SMOOTH_CURVE)
        return IndexMeasures(none, none, none, none)
    if limits is None:
        without = "Too few samples of these people have a curve: no limits follow."
        plain = (
            Measure(value, why=without, method=Method.SMOOTH_CURVE)
            for value in (found.ici, found.e50, found.e90, found.emax)
        )
        return IndexMeasures(*plain)
    how = _find_interval(calibration, resamples)
    return IndexMeasures(
        _measure(found.ici, limits.ici, how, tell_chance(limits)),
        _measure(found.e50, limits.e50, how),
        _measure(found.e90, limits.e90, how),
        _measure(found.emax, limits.emax, how),
    )


def tell_chance(limits: IndexLimits) -> str:
    """How large the ICI is by chance alone where the predictions are right, and that its limits never reach 0."""
    return (
        "A distance is above 0 by chance alone, and its limits never reach 0: were every prediction right, this one"
        f" would be about {_points(limits.chance)} in as many people, and above {_points(limits.chance_bound)} in 5 of"
        " 100 such samples."
    )


def _points(share: float) -> str:
    """Percentage points in two digits or more."""
    if share < _LEAST:
        return "0.01 points"
    return f"{100.0 * share:.{1 if share >= 0.01 else 2}f} points"


def _find_interval(calibration: Calibration, resamples: int) -> Interval:
    assert calibration.curve is not None
    if calibration.curve.smoother is not Smoother.LOWESS:
        return Interval.DRAWN_COEFFICIENTS
    return Interval.BOOTSTRAP if resamples >= FEWEST_RESAMPLES else Interval.GROUPED_BOOTSTRAP


def _measure(value: float, limits: Limits, how: Interval, remark: str = "") -> Measure:
    return Measure(value, limits.lower, limits.upper, how, method=Method.SMOOTH_CURVE, remark=remark)
