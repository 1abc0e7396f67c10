"""Calibrations to draw: usual ones, and ones that leave little room or have little to show."""

import numpy as np

from clinicalc.estimation.calibrated import Calibration
from clinicalc.estimation.calibration import Watched, calibrate_risks, calibrate_times
from clinicalc.report.plot_frame import PlotSize

EVERY_SIZE = (
    PlotSize(440.0),
    PlotSize(620.0),
    PlotSize(720.0),
    PlotSize(260.0),
    PlotSize(250.0, 9.0, 0.75),
    PlotSize(800.0, 26.0),
)
"""The window at its usual width and at others, print, and text twice as large."""


def binary(people: int = 800, mean: float = -2.0, resamples: int = 40) -> Calibration:
    """Predictions somewhat too high."""
    rng = np.random.default_rng(7)
    p = 1 / (1 + np.exp(-rng.normal(mean, 1.1, people)))
    return calibrate_risks(p, (rng.random(people) < 0.8 * p).astype(np.float64), resamples=resamples)


def timed(longest: float = 12.0, people: int = 700) -> Calibration:
    """Risks by 5 years; none of the people is followed longer than the longest time."""
    rng = np.random.default_rng(8)
    rate = 0.05 * np.exp(rng.normal(0.0, 0.8, people))
    happens, lost = rng.exponential(1 / rate), rng.uniform(1.0, longest, people)
    watched = Watched(np.minimum(happens, lost), (happens <= lost).astype(np.float64))
    return calibrate_times(-np.expm1(-5 * rate), watched, 5.0)


def rare() -> Calibration:
    """Few events at small risks: wide limits, no curve."""
    rng = np.random.default_rng(9)
    p = np.clip(rng.normal(0.02, 0.008, 400), 0.002, 1.0)
    return calibrate_risks(p, (rng.random(400) < p).astype(np.float64))


def tied() -> Calibration:
    """Three different predictions."""
    p = np.repeat([0.1, 0.3, 0.6], 20)
    return calibrate_risks(p, (np.arange(60) % 10 < 10 * p - 0.5).astype(np.float64))


def every_kind() -> dict[str, Calibration]:
    """All of them by name."""
    return {
        "binary": binary(),
        "timed": timed(),
        "lost": timed(longest=4.0),
        "rare": rare(),
        "tied": tied(),
        "high": binary(mean=2.0),
    }
