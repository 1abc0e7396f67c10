"""Observed risk as a smooth function of predicted risk p, for people with a binary outcome or with times.

Binary: lowess (Cleveland, J Am Stat Assoc 1979;74:829), span 2/3, no robustness rounds, as val.prob of R's rms has it.
Times: a proportional hazards model on a restricted cubic spline of log(-log(1 - p)) (Austin, Harrell, van Klaveren,
Stat Med 2020;39:2714-2742); with other events a subdistribution hazard model on the same (Austin, Putter, Giardiello,
van Klaveren, Diagn Progn Res 2022;6:2). Three knots at the 10th, 50th and 90th percentile (Harrell, Regression Modeling
Strategies), unless others are given.
"""

from dataclasses import dataclass, replace
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.covariates.transforms import restricted_cubic
from clinicalc.errors import FitRefused
from clinicalc.estimation.calibrated import NoCurve, Smoother
from clinicalc.estimation.calibration_groups import Watched, is_known
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawing import draw_counts, repeat_rows
from clinicalc.estimation.drawn_curves import DrawnCurves, Places, draw_normal, find_places
from clinicalc.estimation.drawn_lowess import draw_chance, draw_lowess
from clinicalc.estimation.fine_gray import fit_fine_gray, robust_subdistribution_covariance, sum_subdistribution
from clinicalc.estimation.hazard_sums import Cohort, RunningSums, Ties, sum_hazards
from clinicalc.estimation.subdistribution import (
    CensoringTies,
    CompetingCohort,
    SubdistributionSets,
    find_subdistribution_sets,
)

Array = NDArray[np.float64]

SPAN = 2 / 3
FEWEST_PEOPLE, FEWEST_PREDICTIONS, FEWEST_EVENTS = 20, 5, 10
"""Fewer people, different predictions or events (or, with a binary outcome, others) than these have no smooth curve."""
FEWEST_RESAMPLES = 20
"""With fewer the first and the last prediction might be in none of the samples."""
KNOTS_AT = (0.1, 0.5, 0.9)
_PARTS = (0.025, 0.975)
_Z = NormalDist().inv_cdf(0.975)
_BAND_PLACES = 400
_NEAREST = 1e-12
"""Predictions are taken as this far from 0 and 1 at least, where log(-log(1 - p)) is without limit."""


@dataclass(frozen=True, slots=True, eq=False)
class Smoothed:
    """The smooth observed risk of each person, (n,), in the order given, its 95 % limits if known, how it was made.

    `drawn` are curves that it might have been, where they were asked for.
    """

    smoother: Smoother
    values: Array
    lower: Array | None = None
    upper: Array | None = None
    knots: tuple[float, ...] = ()
    resamples: int = 0
    drawn: DrawnCurves | None = None


def smooth_risks(predictions: Array, y: Array, resamples: int = 0, seed: int = 1, draws: int = 0) -> Smoothed | NoCurve:
    """Lowess of y (0 or 1) on the predictions, or why there is none. As a straight local fit it may leave 0 to 1.

    With 20 `resamples` or more its limits are the 2.5th and 97.5th percentile, at each prediction, of the curves of so
    many samples of the people drawn with replacement, each over the predictions that it holds. With fewer, but `draws`,
    they are those of so many samples of people known by their group of like predictions (`drawn_lowess`).
    """
    reason = _find_reason(predictions, int(min(y.sum(), (1.0 - y).sum())))
    if reason is not None:
        return reason
    values = _run_lowess(predictions, y, predictions)
    if values is None:
        return NoCurve.TOO_FEW_PREDICTIONS
    if resamples >= FEWEST_RESAMPLES:
        return _resample(Smoothed(Smoother.LOWESS, values), predictions, y, resamples, seed, draws)
    if not draws:
        return Smoothed(Smoother.LOWESS, values)
    places = find_places(predictions)
    drawn = draw_lowess(places, places.count(predictions, y), SPAN, draws, seed)
    low, high = np.quantile(drawn.curves, _PARTS, axis=0)
    lower, upper = (np.interp(predictions, places.predicted, each) for each in (low, high))
    return Smoothed(Smoother.LOWESS, values, lower, upper, resamples=draws, drawn=drawn)


def _run_lowess(predictions: Array, y: Array, at: Array) -> Array | None:
    """The curve of some people at the predictions `at`, NaN beyond them; None where too many have one prediction."""
    found, counts = np.unique(predictions, return_counts=True)
    if counts.max() >= int(SPAN * len(y)):  # the people nearest to these are all at no distance, and no line is fitted
        return None
    from statsmodels.nonparametric.smoothers_lowess import lowess

    reach = 0.01 * float(found[-1] - found[0])
    places, values = lowess(y, predictions, frac=SPAN, it=0, delta=reach).T
    if not np.isfinite(values).all():
        return None
    means = np.add.reduceat(values, np.searchsorted(places, found)) / counts
    return np.asarray(np.interp(at, found, means, left=np.nan, right=np.nan), dtype=np.float64)


def _resample(plain: Smoothed, predictions: Array, y: Array, resamples: int, seed: int, draws: int) -> Smoothed:
    """The curve with its limits at each person's prediction, from what samples of the people make of it."""
    at, codes = np.unique(predictions, return_inverse=True)
    few = at if len(at) <= _BAND_PLACES else np.quantile(at, np.linspace(0.0, 1.0, _BAND_PLACES))
    places = find_places(predictions, _BAND_PLACES)
    groups = places.find_codes(predictions)
    curves, people = [], []
    for replicate in range(resamples):
        rows = repeat_rows(draw_counts(len(y), seed, replicate))
        curve = _run_lowess(predictions[rows], y[rows], np.append(few, places.predicted))
        if curve is not None:
            curves.append(curve)
            people.append(np.bincount(groups[rows], minlength=len(places.people)))
    if len(curves) < resamples // 2:
        return plain
    found, stood = np.array(curves), np.array(people, dtype=np.float64)
    # the first and the last prediction are missing in a third of the samples
    low, high = np.nanquantile(found[:, : len(few)], _PARTS, axis=0)
    drawn = None
    if draws:
        drawn = DrawnCurves(places, stood, found[:, len(few) :], draw_chance(places, SPAN, draws, seed))
    lower, upper = (np.interp(at, few, each)[codes] for each in (low, high))
    return replace(plain, lower=lower, upper=upper, resamples=resamples, drawn=drawn)


def smooth_times(
    predictions: Array,
    watched: Watched,
    horizon: float,
    knots: tuple[float, ...] | None = None,
    *,
    draws: int = 0,
    seed: int = 1,
    sets: SubdistributionSets | None = None,
) -> Smoothed | NoCurve:
    """The observed risk by the horizon as a model of the predictions has it; `knots` on log(-log(1 - p)).

    With `draws` also so many curves whose coefficients, and log hazard at the horizon, are drawn from their joint
    normal. `sets` are those of a subdistribution of these people (Breslow's ties, events first), who must then stand in
    the order of time.
    """
    reason = _find_reason(predictions, int(watched.seen(horizon).sum()))
    if reason is not None:
        return reason
    if not is_known(watched, horizon):
        return NoCurve.NOT_FOLLOWED
    if watched.competing and watched.entry is not None:
        return NoCurve.CAME_LATE
    z = _cloglog(predictions)
    at = tuple(np.quantile(z, KNOTS_AT).tolist()) if knots is None else knots
    at = at if len(set(at)) == len(at) else ()
    x = _span_columns(z, at)
    means = x.mean(axis=0)
    try:
        fit = _fit_by_fine_gray if watched.competing else _fit_by_cox
        line = fit(x - means, watched, horizon, sets)
    except FitRefused:
        return NoCurve.NOT_FITTED
    smoothed = line.predict(x - means, at)
    if not draws:
        return smoothed
    places = find_places(predictions)
    middle = _cloglog(places.predicted)
    return replace(smoothed, drawn=line.draw(places, _span_columns(middle, at) - means, middle, draws, seed))


def _span_columns(z: Array, knots: tuple[float, ...]) -> Array:
    """z and, where there are knots, its spline terms, (n, p)."""
    return np.column_stack([z, *(restricted_cubic(z, knots, basis) for basis in range(1, len(knots) - 1))])


@dataclass(frozen=True, slots=True, eq=False)
class _Line:
    """The model of a smooth curve: coefficients, their covariance, the sums of its hazard until the horizon."""

    smoother: Smoother
    b: Array
    covariance: Array
    sums: RunningSums

    def predict(self, x: Array, knots: tuple[float, ...]) -> Smoothed:
        """Each person's risk with limits even on log(-log(1 - risk)), the predictions smoothed over taken as known.

        The variance is A / H^2 + (x - q / H)'V(x - q / H): Tsiatis, Ann Stat 1981;9:93; Link, Biometrics 1984;40:601.
        """
        eta = np.full(len(x), np.log(self.sums.hazard))
        variance = np.full(len(x), self.sums.squares / (self.sums.hazard * self.sums.hazard))
        away = x - self.sums.moments / self.sums.hazard
        for place, slope in enumerate(self.b):
            eta += x[:, place] * slope
            for other in range(len(self.b)):
                variance += away[:, place] * away[:, other] * self.covariance[place, other]
        half = _Z * np.sqrt(variance)
        values, lower, upper = (_to_risk(at) for at in (eta, eta - half, eta + half))
        return Smoothed(self.smoother, values, lower, upper, knots)

    def draw(self, places: Places, x: Array, right: Array, draws: int, seed: int) -> DrawnCurves:
        """Curves at the places with columns x, as far from the fitted one as its variance says, and from `right`.

        At x = q / H the log hazard does not depend on the coefficients, and has the variance A / H^2.
        """
        drawn = draw_normal(self.covariance, draws, seed)
        moved = np.repeat(drawn[:, :1] * np.sqrt(self.sums.squares) / self.sums.hazard, len(x), axis=1)
        eta = np.full(len(x), np.log(self.sums.hazard))
        away = x - self.sums.moments / self.sums.hazard
        for place, slope in enumerate(self.b):
            eta += x[:, place] * slope
            moved += drawn[:, 1 + place, None] * away[:, place]
        return DrawnCurves(places, places.people[None], _to_risk(eta + moved), _to_risk(right + moved))


def _fit_by_cox(x: Array, watched: Watched, horizon: float, _: SubdistributionSets | None) -> _Line:
    cohort = Cohort(watched.times, (watched.status == 1).astype(np.float64), x, watched.entry)
    fit = fit_cox(cohort)
    (sums,) = sum_hazards(cohort, fit.coefficients, (horizon,), Ties.EFRON)
    return _Line(Smoother.COX_SPLINE, fit.coefficients, fit.covariance, sums)


def _fit_by_fine_gray(x: Array, watched: Watched, horizon: float, sets: SubdistributionSets | None) -> _Line:
    rows = slice(None) if sets is not None else np.argsort(watched.times, kind="stable")
    cohort = CompetingCohort(watched.times[rows], watched.status[rows], x[rows])
    if sets is None:
        sets = find_subdistribution_sets(cohort, Ties.BRESLOW, CensoringTies.EVENT_FIRST)
    # risks that hold are a straight line of slope 1
    fit = fit_fine_gray(cohort, start=np.eye(x.shape[1])[0], sets=sets)
    covariance = robust_subdistribution_covariance(cohort, fit, sets=sets)
    (sums,) = sum_subdistribution(cohort, fit.coefficients, (horizon,), sets=sets)
    return _Line(Smoother.FINE_GRAY_SPLINE, fit.coefficients, covariance, sums)


def _to_risk(log_hazard: Array) -> Array:
    with np.errstate(over="ignore", under="ignore"):
        return np.asarray(-np.expm1(-np.exp(log_hazard)), dtype=np.float64)


def _find_reason(predictions: Array, events: int) -> NoCurve | None:
    if len(predictions) < FEWEST_PEOPLE:
        return NoCurve.TOO_FEW_PEOPLE
    if events < FEWEST_EVENTS:
        return NoCurve.TOO_FEW_EVENTS
    return NoCurve.TOO_FEW_PREDICTIONS if len(np.unique(predictions)) < FEWEST_PREDICTIONS else None


def _cloglog(predictions: Array) -> Array:
    return np.asarray(np.log(-np.log1p(-np.clip(predictions, _NEAREST, 1.0 - _NEAREST))), dtype=np.float64)
