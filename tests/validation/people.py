"""Invented people with predictions whose truth is known, with times, with other events first, with a yes or no."""

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.validation.predicted import PredictedPeople, YesNo

Array = NDArray[np.float64]

YEAR = Span(1.0)


def _lines(people: int, rng: np.random.Generator) -> tuple[Array, Array]:
    """What is predicted and what holds: too extreme and too low, on the link."""
    true = rng.normal(-0.6, 0.8, people)
    return true * 1.25 - 0.2, true


def answered(people: int, seed: int) -> tuple[PredictedPeople, YesNo]:
    """A yes or no with a logistic truth."""
    rng = np.random.default_rng(seed)
    predicted, true = _lines(people, rng)
    y = (rng.random(people) < 1 / (1 + np.exp(-true))).astype(np.float64)
    return PredictedPeople(1 / (1 + np.exp(-predicted))), YesNo(y)


def watched(people: int, seed: int, lost: float = 0.4) -> tuple[PredictedPeople, Watched]:
    """Times with hazard exp(true), lost from sight at the rate `lost`."""
    rng = np.random.default_rng(seed)
    predicted, true = _lines(people, rng)
    times = rng.exponential(size=people) / np.exp(true)
    hazards = np.exp(predicted)
    return PredictedPeople(-np.expm1(-hazards), np.exp(-hazards)), lose(times, np.ones(people), lost, rng)


def competed(people: int, seed: int, lost: float = 0.4) -> tuple[PredictedPeople, Watched]:
    """Another event may come first: the incidence is 1 - (1 - q (1 - exp(-t)))^r, Fine & Gray 1999, q = 0.7."""
    rng = np.random.default_rng(seed)
    predicted, true = _lines(people, rng)
    r, q = np.exp(true), 0.7
    ever = 1 - (1 - q) ** r
    own = rng.random(people) < ever
    u = rng.random(people) * ever
    times = np.where(own, -np.log(1 - (1 - (1 - u) ** (1 / r)) / q), rng.exponential(1.0, people))
    base = -np.log(1 - q * (1 - np.exp(-1.0)))
    hazards = base * np.exp(predicted)
    return PredictedPeople(-np.expm1(-hazards), np.exp(-hazards)), lose(times, np.where(own, 1.0, 2.0), lost, rng)


def lose(times: Array, status: Array, rate: float, rng: np.random.Generator) -> Watched:
    """The end of watching at a constant rate, and for all at two years."""
    ends = np.full(len(times), 2.0) if not rate else np.minimum(rng.exponential(1 / rate, len(times)), 2.0)
    return Watched(np.minimum(times, ends), np.where(times <= ends, status, 0.0))
