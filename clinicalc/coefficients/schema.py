"""The nouns of a coefficient file, format 1: one struct for every object in it, in the order in which they are written.

A field that a file may leave out is UNSET when it is left out and keeps its value when it is written, so that reading
and writing again gives the same content and the same fingerprint. Only the shape lives here and in the modules
this one gathers; what must hold between fields is in `rules`.
"""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, UnsetType

from clinicalc.coefficients.equations import (
    AtCentre,
    CompetingEvents,
    CovarianceBand,
    DrawsBand,
    Equation,
    Factor,
    Horizon,
    Interval,
    NoBand,
    PrintedInterval,
    Product,
    ReconstructedBand,
    RobustBand,
    Spline,
    Step,
    Term,
    Uncertainty,
)
from clinicalc.coefficients.file_types import (
    Count,
    Day,
    FileStruct,
    Id,
    Label,
    Level,
    Limits,
    Matrix,
    ModelId,
    Positive,
    Probability,
    Text,
    Version,
)
from clinicalc.coefficients.population import Population, PopulationAnswer, PopulationChoice, PopulationNumber
from clinicalc.coefficients.provenance import (
    Ancestry,
    AncestryCohort,
    Derivation,
    Plain,
    Source,
    Unconfirmed,
    Use,
)
from clinicalc.coefficients.questions import (
    Choice,
    ChoicePredictor,
    Derived,
    DerivedEquation,
    Exclusion,
    NumberPredictor,
    Predictor,
    ValidFor,
    WithinPerson,
    YesNoPredictor,
)

__all__ = [
    "FORMAT",
    "Ancestry",
    "AncestryCohort",
    "AtCentre",
    "Choice",
    "ChoicePredictor",
    "CoefficientFile",
    "CompetingEvents",
    "Count",
    "CovarianceBand",
    "Day",
    "DecisionPoint",
    "Derivation",
    "Derived",
    "DerivedEquation",
    "Documentation",
    "DrawsBand",
    "Equation",
    "Exclusion",
    "Factor",
    "FileStruct",
    "Horizon",
    "Id",
    "Interval",
    "Label",
    "Level",
    "Limits",
    "Matrix",
    "ModelContent",
    "ModelId",
    "NoBand",
    "NumberPredictor",
    "Plain",
    "Population",
    "PopulationAnswer",
    "PopulationChoice",
    "PopulationNumber",
    "Positive",
    "Predictor",
    "PrintedInterval",
    "Probability",
    "Product",
    "Recalibration",
    "RecalibrationLine",
    "ReconstructedBand",
    "RobustBand",
    "Signature",
    "Source",
    "Spline",
    "Step",
    "Term",
    "Text",
    "Uncertainty",
    "Unconfirmed",
    "Use",
    "ValidFor",
    "Version",
    "WithinPerson",
    "WorkedExample",
    "YesNoPredictor",
]

FORMAT = "clinicalc.coefficients/1"


class RecalibrationLine(FileStruct, frozen=True):
    """eta' = intercept + slope * eta; `covariance` is that of (intercept, slope), null where it is not known."""

    intercept: float
    slope: Positive
    covariance: Matrix | UnsetType | None = UNSET


class Recalibration(FileStruct, frozen=True):
    """A named adjustment to a setting, one line for each equation."""

    id: Id
    label: Label
    source: Text
    equations: dict[Id, RecalibrationLine]
    years: Positive | UnsetType = UNSET
    time: Positive | UnsetType = UNSET
    unit: Label | UnsetType = UNSET


class DecisionPoint(FileStruct, frozen=True):
    """A probability at which the source says that practice changes."""

    probability: Annotated[float, Meta(gt=0, lt=1)]
    label: Label
    source: Text


class WorkedExample(FileStruct, frozen=True):
    """Values as they would be typed, and the probability that must come out within `tolerance`."""

    values: dict[Id, Annotated[str, Meta(max_length=80)]]
    probability: float
    tolerance: Positive
    source: Text
    years: Positive | UnsetType = UNSET
    time: Positive | UnsetType = UNSET
    unit: Label | UnsetType = UNSET
    lower: Probability | UnsetType | None = UNSET
    upper: Probability | UnsetType | None = UNSET
    recalibration: Id | UnsetType | None = UNSET
    from_memory: bool | UnsetType = UNSET
    computed: bool | UnsetType = UNSET


class Documentation(FileStruct, frozen=True):
    """One item of a reporting guideline and the answer to it."""

    item: Label
    text: Text


class ModelContent(FileStruct, frozen=True):
    """Everything that is fingerprinted and signed about one model."""

    id: ModelId
    version: Version
    title: Label
    outcome: Text
    source: Source
    unconfirmed: tuple[Unconfirmed, ...]
    use: Use
    predictors: Annotated[tuple[Predictor, ...], Meta(min_length=1, max_length=200)]
    derived: tuple[Derived, ...]
    exclusions: tuple[Exclusion, ...]
    equations: Annotated[tuple[Equation, ...], Meta(min_length=1, max_length=20)]
    recalibration_required: bool
    recalibrations: tuple[Recalibration, ...]
    decision_points: tuple[DecisionPoint, ...]
    worked_examples: Annotated[tuple[WorkedExample, ...], Meta(min_length=1, max_length=1000)]
    population: Population | None
    documentation: tuple[Documentation, ...]
    ancestry: Ancestry | UnsetType = UNSET


class Signature(FileStruct, frozen=True):
    """One JWS signature over the canonical bytes, in the general JSON shape."""

    protected: Annotated[str, Meta(min_length=1, max_length=4000)]
    signature: Annotated[str, Meta(min_length=1, max_length=4000)]


class CoefficientFile(FileStruct, frozen=True):
    """A whole coefficient file."""

    format: Literal["clinicalc.coefficients/1"]
    model: ModelContent
    signatures: tuple[Signature, ...]
