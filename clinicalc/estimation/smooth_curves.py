"""Observed risk as a smooth function of predicted risk p, for people with a binary outcome or with times.

Binary: lowess (Cleveland, J Am Stat Assoc 1979;74:829), span 2/3, no robustness rounds, as val.prob of R's rms has it.
Times: a proportional hazards model on a restricted cubic spline of log(-log(1 - p)) (Austin, Harrell, van Klaveren,
Stat Med 2020;39:2714-2742); with other events a subdistribution hazard model on the same (Austin, Putter, Giardiello,
van Klaveren, Diagn Progn Res 2022;6:2). Three knots at the 10th, 50th and 90th percentile (Harrell, Regression Modeling
Strategies), unless others are given.
"""

from dataclasses import dataclass
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.covariates.transforms import restricted_cubic
from clinicalc.errors import FitRefused
from clinicalc.estimation.calibrated import NoCurve, Smoother
from clinicalc.estimation.calibration_groups import Watched, is_known
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawing import draw_counts, repeat_rows
from clinicalc.estimation.fine_gray import (
    CompetingCohort,
    fit_fine_gray,
    robust_subdistribution_covariance,
    sum_subdistribution,
)
from clinicalc.estimation.hazard_sums import Cohort, RunningSums, Ties, sum_hazards

Array = NDArray[np.float64]

SPAN = 2 / 3
FEWEST_PEOPLE, FEWEST_PREDICTIONS, FEWEST_EVENTS = 20, 5, 10
"""Fewer people, different predictions or events (or, with a binary outcome, others) than these have no smooth curve."""
FEWEST_RESAMPLES = 20
"""With fewer the first and the last prediction might be in none of the samples."""
KNOTS_AT = (0.1, 0.5, 0.9)
_Z = NormalDist().inv_cdf(0.975)
_BAND_PLACES = 400
_NEAREST = 1e-12
"""Predictions are taken as this far from 0 and 1 at least, where log(-log(1 - p)) is without limit."""


@dataclass(frozen=True, slots=True, eq=False)
class Smoothed:
    """The smooth observed risk of each person, (n,), in the order given, its 95 % limits if known, how it was made."""

    smoother: Smoother
    values: Array
    lower: Array | None = None
    upper: Array | None = None
    knots: tuple[float, ...] = ()
    resamples: int = 0


def smooth_risks(predictions: Array, y: Array, resamples: int = 0, seed: int = 1) -> Smoothed | NoCurve:
    """Lowess of y (0 or 1) on the predictions, or why there is none. As a straight local fit it may leave 0 to 1.

    With 20 `resamples` or more its limits are the 2.5th and 97.5th percentile, at each prediction, of the curves of so
    many samples of the people drawn with replacement, each over the predictions that it holds.
    """
    reason = _find_reason(predictions, int(min(y.sum(), (1.0 - y).sum())))
    if reason is not None:
        return reason
    values = _run_lowess(predictions, y, predictions)
    if values is None:
        return NoCurve.TOO_FEW_PREDICTIONS
    lower, upper = _resample(predictions, y, resamples, seed)
    return Smoothed(Smoother.LOWESS, values, lower, upper, resamples=resamples if lower is not None else 0)


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


def _resample(predictions: Array, y: Array, resamples: int, seed: int) -> tuple[Array | None, Array | None]:
    """The limits of the curve at each person's prediction, from what samples of the people make of it."""
    if resamples < FEWEST_RESAMPLES:
        return None, None
    at, codes = np.unique(predictions, return_inverse=True)
    few = at if len(at) <= _BAND_PLACES else np.quantile(at, np.linspace(0.0, 1.0, _BAND_PLACES))
    curves = []
    for replicate in range(resamples):
        rows = repeat_rows(draw_counts(len(y), seed, replicate))
        curve = _run_lowess(predictions[rows], y[rows], few)
        if curve is not None:
            curves.append(curve)
    if len(curves) < resamples // 2:
        return None, None
    # the first and the last prediction are missing in a third of the samples
    low, high = np.nanquantile(np.array(curves), (0.025, 0.975), axis=0)
    return np.interp(at, few, low)[codes], np.interp(at, few, high)[codes]


def smooth_times(
    predictions: Array, watched: Watched, horizon: float, knots: tuple[float, ...] | None = None
) -> Smoothed | NoCurve:
    """The observed risk by the horizon as a model of the predictions has it; `knots` on log(-log(1 - p))."""
    reason = _find_reason(predictions, int(watched.seen(horizon).sum()))
    if reason is not None:
        return reason
    if not is_known(watched, horizon):
        return NoCurve.NOT_FOLLOWED
    if watched.competing and watched.entry is not None:
        return NoCurve.CAME_LATE
    z = _cloglog(predictions)
    at = tuple(np.quantile(z, KNOTS_AT).tolist()) if knots is None else knots
    columns = [z, *(restricted_cubic(z, at, basis) for basis in range(1, len(at) - 1))]
    if len(set(at)) < len(at):
        columns, at = [z], ()
    x = np.column_stack(columns)
    try:
        if watched.competing:
            return _smooth_by_fine_gray(x - x.mean(axis=0), watched, horizon, at)
        return _smooth_by_cox(x - x.mean(axis=0), watched, horizon, at)
    except FitRefused:
        return NoCurve.NOT_FITTED


def _smooth_by_cox(x: Array, watched: Watched, horizon: float, knots: tuple[float, ...]) -> Smoothed:
    cohort = Cohort(watched.times, (watched.status == 1).astype(np.float64), x, watched.entry)
    fit = fit_cox(cohort)
    (sums,) = sum_hazards(cohort, fit.coefficients, (horizon,), Ties.EFRON)
    return _predict(Smoother.COX_SPLINE, x, fit.coefficients, fit.covariance, sums, knots)


def _smooth_by_fine_gray(x: Array, watched: Watched, horizon: float, knots: tuple[float, ...]) -> Smoothed:
    cohort = CompetingCohort(watched.times, watched.status, x)
    fit = fit_fine_gray(cohort)
    covariance = robust_subdistribution_covariance(cohort, fit)
    (sums,) = sum_subdistribution(cohort, fit.coefficients, (horizon,))
    return _predict(Smoother.FINE_GRAY_SPLINE, x, fit.coefficients, covariance, sums, knots)


def _predict(
    smoother: Smoother, x: Array, b: Array, covariance: Array, sums: RunningSums, knots: tuple[float, ...]
) -> Smoothed:
    """Each person's risk with limits even on log(-log(1 - risk)), the predictions smoothed over taken as known.

    The variance is A / H^2 + (x - q / H)'V(x - q / H): Tsiatis, Ann Stat 1981;9:93; Link, Biometrics 1984;40:601.
    """
    eta = np.full(len(x), np.log(sums.hazard))
    variance = np.full(len(x), sums.squares / (sums.hazard * sums.hazard))
    away = x - sums.moments / sums.hazard
    for place, slope in enumerate(b):
        eta += x[:, place] * slope
        for other in range(len(b)):
            variance += away[:, place] * away[:, other] * covariance[place, other]
    half = _Z * np.sqrt(variance)
    with np.errstate(over="ignore", under="ignore"):
        values, lower, upper = (-np.expm1(-np.exp(at)) for at in (eta, eta - half, eta + half))
    return Smoothed(smoother, values, lower, upper, knots)


def _find_reason(predictions: Array, events: int) -> NoCurve | None:
    if len(predictions) < FEWEST_PEOPLE:
        return NoCurve.TOO_FEW_PEOPLE
    if events < FEWEST_EVENTS:
        return NoCurve.TOO_FEW_EVENTS
    return NoCurve.TOO_FEW_PREDICTIONS if len(np.unique(predictions)) < FEWEST_PREDICTIONS else None


def _cloglog(predictions: Array) -> Array:
    return np.asarray(np.log(-np.log1p(-np.clip(predictions, _NEAREST, 1.0 - _NEAREST))), dtype=np.float64)
