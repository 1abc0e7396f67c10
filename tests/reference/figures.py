"""Figures that other software gave for fitted models: coefficients, covariances, baselines and what was predicted.

Each file in `data` holds one fit and says in `source` what made it: versions and the exact call.
"""

from pathlib import Path
from typing import Literal, TypeVar

import msgspec

FOLDER = Path(__file__).parent / "data"

Row = tuple[float, ...]
Matrix = tuple[Row, ...]
Pair = tuple[float, float]


class Figures(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """What every file of figures states first."""

    source: str


class LinkPrediction(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One person's linear predictor, its standard error, the probability and the limits transformed from the link."""

    profile: int
    link: float
    se: float
    probability: float
    limits95: Pair
    limits90: Pair


class BinaryFit(Figures, frozen=True, forbid_unknown_fields=True):
    """A binomial fit; the intercept comes first in `coefficients` and `covariance`."""

    link: Literal["logit", "cloglog"]
    people: int
    events: int
    predictors: tuple[str, ...]
    coefficients: Row
    covariance: Matrix
    profiles: Matrix
    predictions: tuple[LinkPrediction, ...]
    robust: dict[str, Matrix] = {}


class Ingredients(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """The running sums H, A and q of one stratum up to one time, at the fit's `x_ref`."""

    stratum: str
    time: float
    H: float
    A: float
    q: Row


class StratumProfile(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One person's predictors and stratum ("all" where there is one)."""

    values: Row
    stratum: str


class SurvivalPrediction(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One person's survival at one time; `loglog` are its 95 % log-log limits."""

    profile: int
    time: float
    survival: float
    cumulative_hazard: float
    se_cumulative_hazard: float
    loglog: Pair


class HazardFit(Figures, frozen=True, forbid_unknown_fields=True):
    """A proportional hazards fit with what its bands are made of."""

    unit: str
    people: int
    events: int
    predictors: tuple[str, ...]
    robust: bool
    coefficients: Row
    covariance: Matrix
    x_ref: Row
    baselines: tuple[Ingredients, ...]
    profiles: tuple[StratumProfile, ...]
    predictions: tuple[SurvivalPrediction, ...]

    @property
    def strata(self) -> tuple[str, ...]:
        """The strata in file order."""
        return tuple(dict.fromkeys(baseline.stratum for baseline in self.baselines))


class IncidencePrediction(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One person's cumulative incidence at one time."""

    profile: int
    time: float
    probability: float


class SubdistributionFit(Figures, frozen=True, forbid_unknown_fields=True):
    """A subdistribution hazards fit; baselines are cumulative hazards with every predictor at 0."""

    unit: str
    people: int
    events: int
    predictors: tuple[str, ...]
    coefficients: Row
    times: Row
    cumulative_hazards: Row
    profiles: Matrix
    predictions: tuple[IncidencePrediction, ...]


class IncidenceError(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One person's cumulative incidence at one time, with the standard error of its cumulative hazard."""

    profile: int
    time: float
    probability: float
    se_cumulative_hazard: float


class SubdistributionLimits(Figures, frozen=True, forbid_unknown_fields=True):
    """A subdistribution hazards fit by weighted Cox regression, with robust standard errors of what was predicted."""

    unit: str
    people: int
    events: int
    predictors: tuple[str, ...]
    coefficients: Row
    robust_covariance: Matrix
    profiles: Matrix
    predictions: tuple[IncidenceError, ...]


class SplineFit(Figures, frozen=True, forbid_unknown_fields=True):
    """A logistic fit on splines; coefficients: intercept, glu and its two spline terms, age and its one, bmi."""

    coefficients: Row
    covariance: Matrix
    knots: dict[str, Row]
    profiles: Matrix
    link: Row
    se: Row


Fit = TypeVar("Fit", bound=Figures)


def load(name: str, kind: type[Fit]) -> Fit:
    """The figures of one fit."""
    return msgspec.json.decode((FOLDER / f"{name}.json").read_bytes(), type=kind)
