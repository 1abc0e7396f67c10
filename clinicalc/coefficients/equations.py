"""The equations of a coefficient file: terms, baselines, and how precisely they are known."""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, UnsetType, field

from clinicalc.coefficients.file_types import Count, FileStruct, Id, Label, Level, Matrix, Positive, Probability, Text
from clinicalc.coefficients.population import Population


class Spline(FileStruct, frozen=True):
    """One basis function of a restricted cubic spline; basis 1..K-2, the linear term is a term of its own."""

    knots: Annotated[tuple[float, ...], Meta(min_length=3, max_length=10)]
    basis: Annotated[int, Meta(ge=1)]


class Step(FileStruct, frozen=True):
    """One step of a transform: exactly one of these fields stands in the file."""

    subtract: float | UnsetType = UNSET
    divide: float | UnsetType = UNSET
    multiply: float | UnsetType = UNSET
    log: Literal["natural"] | UnsetType = UNSET
    power: float | UnsetType = UNSET
    clip_low: float | UnsetType = UNSET
    clip_high: float | UnsetType = UNSET
    spline: Spline | UnsetType = UNSET
    above: float | UnsetType = UNSET
    from_: float | UnsetType = field(default=UNSET, name="from")
    below: float | UnsetType = UNSET
    up_to: float | UnsetType = UNSET
    is_: Annotated[tuple[Id, ...], Meta(min_length=1)] | UnsetType = field(default=UNSET, name="is")


class Factor(FileStruct, frozen=True):
    """A predictor or derived value, put through steps from left to right."""

    of: Id
    steps: tuple[Step, ...] | UnsetType = UNSET


class Interval(FileStruct, frozen=True):
    """A printed confidence interval of a coefficient: of itself (`link`) or of its exponential (`ratio`)."""

    scale: Literal["ratio", "link"]
    level: Level
    lower: float
    upper: float


Product = Annotated[tuple[Factor, ...], Meta(min_length=1)]


class Term(FileStruct, frozen=True):
    """A coefficient times a product of factors, or times a sum of such products."""

    id: Id
    coefficient: float
    product: Product | UnsetType = UNSET
    sum: Annotated[tuple[Product, ...], Meta(min_length=1)] | UnsetType = UNSET
    interval: Interval | UnsetType = UNSET
    fixed: bool | UnsetType = UNSET


class CompetingEvents(FileStruct, frozen=True):
    """What the fit did with events that make the outcome impossible."""

    handled: Literal["censored", "subdistribution", "not_applicable"]
    which: Text | UnsetType = UNSET


class PrintedInterval(FileStruct, frozen=True):
    """A printed interval of a survival probability."""

    level: Level
    lower: Probability
    upper: Probability


class Horizon(FileStruct, frozen=True):
    """A time span (`years`, or `time` with `unit`) and the baseline that holds with every term at zero."""

    years: Positive | UnsetType = UNSET
    time: Positive | UnsetType = UNSET
    unit: Label | UnsetType = UNSET
    intercept: float | UnsetType = UNSET
    baseline_survival: float | UnsetType = UNSET
    mean_linear_predictor: float | UnsetType = UNSET
    log_cumulative_hazard: float | UnsetType = UNSET
    survival_interval: PrintedInterval | UnsetType = UNSET
    events: Count | UnsetType = UNSET
    people: Count | UnsetType = UNSET
    still_at_risk: Count | UnsetType = UNSET


class AtCentre(FileStruct, frozen=True):
    """For one horizon, the two figures of var = variance + (x - centre)'V(x - centre), in the terms' own units."""

    variance: Annotated[float, Meta(ge=0)]
    centre: tuple[float, ...]
    years: Positive | UnsetType = UNSET
    time: Positive | UnsetType = UNSET
    unit: Label | UnsetType = UNSET


class CovarianceBand(FileStruct, frozen=True, tag_field="basis", tag="covariance"):
    """The model-based covariance of the coefficients that were estimated, in term order."""

    covariance: Matrix
    at_centre: tuple[AtCentre, ...]


class RobustBand(FileStruct, frozen=True, tag_field="basis", tag="robust"):
    """A robust (sandwich or cluster) covariance, used in the same way."""

    covariance: Matrix
    at_centre: tuple[AtCentre, ...]


class ReconstructedBand(FileStruct, frozen=True, tag_field="basis", tag="reconstructed"):
    """A covariance rebuilt from printed intervals and a described reference population; approximate."""

    covariance: Matrix
    at_centre: tuple[AtCentre, ...]
    assumptions: tuple[Text, ...] | UnsetType = UNSET


class DrawsBand(FileStruct, frozen=True, tag_field="basis", tag="draws"):
    """Bootstrap draws: K rows of the estimated coefficients, and K rows of one baseline for each horizon."""

    coefficients: Matrix
    baselines: Matrix


class NoBand(FileStruct, frozen=True, tag_field="basis", tag="none"):
    """No honest basis for a band; `because` is the sentence shown in its place."""

    because: Text


Uncertainty = CovarianceBand | RobustBand | ReconstructedBand | DrawsBand | NoBand


class Equation(FileStruct, frozen=True):
    """One linear predictor for the people described by `applies_when` (predictor id -> the answers it covers).

    `population` describes those people; where it is left out, the model's own description holds.
    """

    id: Id
    applies_when: dict[Id, Annotated[tuple[Id, ...], Meta(min_length=1)]]
    link: Literal["logit", "cloglog"]
    competing_events: CompetingEvents
    terms: Annotated[tuple[Term, ...], Meta(min_length=1)]
    horizons: Annotated[tuple[Horizon, ...], Meta(min_length=1, max_length=100)]
    uncertainty: Uncertainty
    reference_person: dict[Id, float | str] | UnsetType = UNSET
    population: Population | UnsetType = UNSET
