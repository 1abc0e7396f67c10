"""What an update of a model comes to, as plain values: lines, slopes, refits, tests; nothing of files here."""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span

Array = NDArray[np.float64]
Pair = tuple[float, float, float]
"""Variance of the intercept, their covariance, variance of the slope."""


class UpdateMethod(StrEnum):
    """How a model is updated. KEEP comes out of tests and is never asked for; CLOSED_TEST is only asked for."""

    CLOSED_TEST = "closed_test"
    KEEP = "keep"
    INTERCEPT = "intercept"
    INTERCEPT_SLOPE = "intercept_slope"
    REFIT = "refit"
    TWO_SCALE = "two_scale"


class GroupWeights(StrEnum):
    """How the groups of a two-scale update count: all the same, or by the inverse of the variance."""

    EQUAL = "equal"
    INVERSE_VARIANCE = "inverse_variance"


@dataclass(frozen=True, slots=True)
class UpdateWish:
    """What is asked for.

    `together`: one intercept at each horizon and one slope for all equations, else each equation by its own people.
    `spans` are the horizons that the new version keeps, None for all. `groups` (None: as many as there
    are tens of events, from 3 to 10) and `weights` are for TWO_SCALE only; `alpha` is the level of every test.
    """

    method: UpdateMethod
    together: bool = False
    spans: tuple[Span, ...] | None = None
    groups: int | None = None
    weights: GroupWeights = GroupWeights.EQUAL
    alpha: float = 0.05


@dataclass(frozen=True, slots=True)
class UpdatedLine:
    """At one horizon eta' = intercept + slope eta, with the covariance of the two (0 for what was not estimated).

    For a hazard model e^eta' is the cumulative hazard by the horizon among the new people. `people` are those updated
    from, `events` those who had the event by the horizon.
    """

    span: Span
    intercept: float
    slope: float
    covariance: Pair
    people: int
    events: int


@dataclass(frozen=True, slots=True, eq=False)
class RefittedLine:
    """At one horizon eta = lp0 + x'b over the terms estimated; `people` refitted to, `events` by the horizon.

    var = variance + (x - centre)'V(x - centre); both are None where the refit has an intercept, see `Refit.joint`.
    """

    span: Span
    lp0: float
    variance: float | None
    centre: tuple[float, ...] | None
    people: int
    events: int


@dataclass(frozen=True, slots=True)
class Shrinkage:
    """Uniform shrinkage (chi2 - df) / chi2 of a refit: Van Houwelingen & le Cessie, Stat Med 1990;9:1303. Stated only.

    `chi2` is the likelihood ratio of the refit against no term at all.
    """

    chi2: float
    df: int

    @property
    def factor(self) -> float:
        """The factor; 0 or below where the terms explain no more than chance would."""
        return (self.chi2 - self.df) / self.chi2 if self.chi2 > 0 else 0.0


@dataclass(frozen=True, slots=True, eq=False)
class Refit:
    """The terms as they are, estimated anew, in the order of the terms not marked fixed; covariance (p, p).

    `joint` is the covariance with the intercept, which comes first, (p + 1, p + 1); None for a hazard.
    """

    terms: tuple[str, ...]
    coefficients: Array
    covariance: Array
    joint: Array | None
    robust: bool
    lines: tuple[RefittedLine, ...]
    shrinkage: Shrinkage | None


@dataclass(frozen=True, slots=True)
class UpdateTest:
    """`fuller` against `simpler` (what would be kept were it not significant): chi2 on df, p."""

    fuller: UpdateMethod
    simpler: UpdateMethod
    chi2: float
    df: int
    p: float


@dataclass(frozen=True, slots=True)
class Testing:
    """The tests in their order, the log-likelihood of each model (None where it has none), and what they chose.

    `without_refit` says in words why no refit was among them, "" where one was.
    """

    logliks: tuple[tuple[UpdateMethod, float | None], ...]
    tests: tuple[UpdateTest, ...]
    alpha: float
    chosen: UpdateMethod
    without_refit: str = ""


@dataclass(frozen=True, slots=True)
class CalibrationGroup:
    """One group of a two-scale update at one horizon: mean predicted and observed risk, its standard error."""

    span: Span
    people: int
    predicted: float
    observed: float
    se: float


@dataclass(frozen=True, slots=True, eq=False)
class EquationUpdate:
    """What becomes of one equation: KEEP leaves it, REFIT has a `refit`, every other method `lines`.

    `slope` is 1 and `slope_se` None where no slope was estimated.
    """

    id: str
    method: UpdateMethod
    people: int
    events: int
    competing: int
    slope: float
    slope_se: float | None
    lines: tuple[UpdatedLine, ...]
    refit: Refit | None
    testing: Testing | None
    groups: tuple[CalibrationGroup, ...] = ()


@dataclass(frozen=True, slots=True, eq=False)
class Update:
    """An update as figures: what was asked for, and what became of each equation, in the order of the file.

    `spans` are the horizons of the new version. With `wish.together` all equations have the same testing and slope.
    """

    wish: UpdateWish
    spans: tuple[Span, ...]
    equations: tuple[EquationUpdate, ...]
    people: int
    events: int
    remarks: tuple[str, ...] = ()

    @property
    def keeps(self) -> bool:
        """Whether every equation stays as it is: there is then no new version to be made."""
        return all(equation.method is UpdateMethod.KEEP for equation in self.equations)
