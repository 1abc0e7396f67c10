"""Predicted risks against what happened: tenths of the predictions, a smooth curve, its distances from the diagonal.

The people may be those a model was made from (apparent calibration) or others (validation): the figures are the same.
"""

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.calibrated import (
    Calibration,
    CalibrationIndices,
    IndexLimits,
    NoCurve,
    Observed,
    PredictionSpread,
    SmoothCurve,
)
from clinicalc.estimation.calibration_groups import (
    Watched,
    group_risks,
    group_times,
    observed_by,
    part_predictions,
)
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.smooth_curves import Smoothed, smooth_risks, smooth_times
from clinicalc.estimation.subdistribution import SubdistributionSets

__all__ = ["Watched", "calibrate_risks", "calibrate_times", "find_indices"]

Array = NDArray[np.float64]
Rows = NDArray[np.bool_]

_PLACES = 100
"""Points of a smooth curve, at most twice as many."""


def calibrate_risks(predictions: Array, y: Array, *, resamples: int = 0, seed: int = 1, draws: int = 0) -> Calibration:
    """The calibration of predicted risks p against a binary outcome, 0 or 1, both (n,).

    With `resamples` the smooth curve has a band from so many samples of the people, the predictions taken as known.
    With `draws` it has one without `resamples` too, and the indices have limits, from either.
    Raises FitRefused where there is nobody, a value is not finite or y is neither 0 nor 1.
    """
    _check(predictions, y)
    if not np.isin(y, (0.0, 1.0)).all():
        raise refuse_fit(FitFault.OUTCOME_NOT_BINARY)
    everybody = np.zeros(len(y), dtype=np.int64)
    smoothed = smooth_risks(predictions, y, resamples, seed, draws)
    curve, indices, reason = _draw_through(predictions, smoothed)
    return Calibration(
        horizon=None,
        observed=Observed.WILSON,
        overall=group_risks(predictions, y, everybody)[0],
        groups=group_risks(predictions, y, part_predictions(predictions)),
        spread=_spread(predictions, y == 1),
        curve=curve,
        indices=indices,
        no_curve=reason,
        limits=_find_limits(smoothed, indices),
    )


def calibrate_times(
    predictions: Array,
    watched: Watched,
    horizon: float,
    *,
    draws: int = 0,
    seed: int = 1,
    sets: SubdistributionSets | None = None,
) -> Calibration:
    """The calibration of risks by `horizon` against times.

    Whoever calls says against which world: with status 2 as it is the risk observed is that of having the event while
    others may come first, as a Fine–Gray model predicts it; with 2 made 0 it is that of a world without them, as a
    Cox model with those events censored predicts it. With `draws` the indices have limits; `sets` as in `smooth_times`.
    Raises FitRefused as `calibrate_risks` does.
    """
    _check(predictions, watched.times, watched.status, *(() if watched.entry is None else (watched.entry,)))
    everybody = np.zeros(len(predictions), dtype=np.int64)
    smoothed = smooth_times(predictions, watched, horizon, draws=draws, seed=seed, sets=sets)
    curve, indices, reason = _draw_through(predictions, smoothed)
    return Calibration(
        horizon=horizon,
        observed=observed_by(watched),
        overall=group_times(predictions, watched, horizon, everybody)[0],
        groups=group_times(predictions, watched, horizon, part_predictions(predictions)),
        spread=_spread(predictions, watched.seen(horizon)),
        curve=curve,
        indices=indices,
        no_curve=reason,
        limits=_find_limits(smoothed, indices),
    )


def find_indices(predictions: Array, smoothed: Array) -> CalibrationIndices:
    """ICI, E50, E90 and Emax of smooth observed risks beside predictions, both (n,); quantiles of type 7."""
    away = np.abs(smoothed - predictions)
    e50, e90 = np.quantile(away, (0.5, 0.9)).tolist()
    return CalibrationIndices(float(away.mean()), e50, e90, float(away.max()))


def _check(predictions: Array, *others: Array) -> None:
    if not len(predictions):
        raise refuse_fit(FitFault.NO_PEOPLE)
    if not all(np.isfinite(values).all() for values in (predictions, *others)):
        raise refuse_fit(FitFault.NOT_FINITE)


def _find_limits(smoothed: Smoothed | NoCurve, indices: CalibrationIndices | None) -> IndexLimits | None:
    """The limits of the indices, widened to hold them: where predictions are right, most draws lie farther away."""
    if isinstance(smoothed, NoCurve) or smoothed.drawn is None or indices is None:
        return None
    found = smoothed.drawn.find_limits()
    return replace(
        found,
        ici=found.ici.holding(indices.ici),
        e50=found.e50.holding(indices.e50),
        e90=found.e90.holding(indices.e90),
        emax=found.emax.holding(indices.emax),
    )


def _spread(predictions: Array, had_event: Rows) -> PredictionSpread:
    order = np.argsort(predictions, kind="stable")
    return PredictionSpread(predictions[order], had_event[order])


def _draw_through(
    predictions: Array, smoothed: Smoothed | NoCurve
) -> tuple[SmoothCurve | None, CalibrationIndices | None, NoCurve | None]:
    """The curve, the indices over all people, or why there are none."""
    if isinstance(smoothed, NoCurve):
        return None, None, smoothed
    at, places = np.unique(predictions, return_index=True)
    # people near even places and at even ranks, so that the curve is fine where many stand and whole where few do
    wanted = np.concatenate([np.linspace(at[0], at[-1], _PLACES), np.quantile(predictions, np.linspace(0, 1, _PLACES))])
    kept = np.unique(np.clip(np.searchsorted(at, wanted, side="left"), 0, len(at) - 1))
    rows = places[kept]
    curve = SmoothCurve(
        smoother=smoothed.smoother,
        predicted=at[kept],
        observed=smoothed.values[rows],
        lower=None if smoothed.lower is None else smoothed.lower[rows],
        upper=None if smoothed.upper is None else smoothed.upper[rows],
        knots=smoothed.knots,
        resamples=smoothed.resamples,
    )
    return curve, find_indices(predictions, smoothed.values), None
