"""The nouns of a coefficient file, format 1: one struct for every object in it, in the order in which they are written.

A field that a file may leave out is UNSET when it is left out and keeps its value when it is written, so that reading
and writing again gives the same content and the same fingerprint. Only the shape lives here; what must hold between
fields is in `rules`.
"""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, Struct, UnsetType, field

FORMAT = "clinicalc.coefficients/1"

Text = Annotated[str, Meta(min_length=1, max_length=4000)]
Label = Annotated[str, Meta(min_length=1, max_length=120)]
Id = Annotated[str, Meta(pattern=r"^[a-z][a-z0-9_-]{0,63}$")]
ModelId = Annotated[str, Meta(pattern=r"^[a-z][a-z0-9-]{0,63}$")]
Version = Annotated[str, Meta(pattern=r"^[0-9]{1,6}\.[0-9]{1,6}\.[0-9]{1,6}$")]
Day = Annotated[str, Meta(pattern=r"^[0-9]{4}-[0-9]{2}-[0-9]{2}$")]
Probability = Annotated[float, Meta(ge=0, le=1)]
Level = Annotated[float, Meta(gt=0, lt=1)]
Positive = Annotated[float, Meta(gt=0)]
Count = Annotated[int, Meta(ge=0)]
Matrix = tuple[tuple[float, ...], ...]
Limits = tuple[float | None, float | None]
"""Lower and upper end, both included; null leaves a side open."""


class FileStruct(Struct, frozen=True, forbid_unknown_fields=True):
    """Base of everything a coefficient file is made of: immutable, and strict about names."""


# ---------------------------------------------------------------- where the figures come from, and for whom


class Derivation(FileStruct, frozen=True):
    """The people the model was made from."""

    people: Count
    events: Count | UnsetType = UNSET
    from_: Text | UnsetType = field(default=UNSET, name="from")
    to: Text | UnsetType = UNSET


class Source(FileStruct, frozen=True):
    """Who published or fitted the model."""

    kind: Literal["published", "local"]
    citation: Text
    doi: Label | UnsetType = UNSET
    derivation: Derivation | UnsetType = UNSET
    notes: tuple[Text, ...] | UnsetType = UNSET


class Unconfirmed(FileStruct, frozen=True):
    """Figures not checked against the source: `at` is a JSON Pointer into the model and covers all below it."""

    at: str
    why: Text
    check_against: Text


class Plain(FileStruct, frozen=True):
    """Words for the patient's page."""

    outcome: Text
    cautions: tuple[Text, ...]


class Use(FileStruct, frozen=True):
    """For whom the model is meant, and for whom it is not."""

    population: Text
    setting: Text
    not_for: tuple[Text, ...]
    not_used: tuple[Text, ...]
    cautions: tuple[Text, ...]
    plain: Plain


# ---------------------------------------------------------------- what is asked


class ValidFor(FileStruct, frozen=True):
    """How long a measured value may be used."""

    days: Annotated[int, Meta(ge=1, le=36525)]


class WithinPerson(FileStruct, frozen=True):
    """How much repeated values of one person vary: `sd` in the predictor's unit, or `cv` as a fraction."""

    source: Text
    cv: Annotated[float, Meta(gt=0, lt=1)] | UnsetType = UNSET
    sd: Positive | UnsetType = UNSET


class Choice(FileStruct, frozen=True):
    """One answer of a choice; `caution` is shown with any result for people who give this answer."""

    id: Id
    label: Label
    caution: Text | UnsetType = UNSET


class NumberPredictor(FileStruct, frozen=True, tag_field="kind", tag="number"):
    """A measured value. Ranges are in `unit`; `possible` and `usual` may only narrow the quantity's own."""

    id: Id
    label: Label
    quantity: Id
    unit: Label
    group: Label
    factor: Positive | UnsetType = UNSET
    derivation: Limits | UnsetType = UNSET
    outside_derivation: Literal["stop", "caution"] | UnsetType = UNSET
    possible: Limits | UnsetType = UNSET
    usual: Limits | UnsetType = UNSET
    modifiable: bool | UnsetType = UNSET
    treatment: bool | UnsetType = UNSET
    may_be_missing: bool | UnsetType = UNSET
    valid_for: ValidFor | UnsetType = UNSET
    within_person: WithinPerson | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


class ChoicePredictor(FileStruct, frozen=True, tag_field="kind", tag="choice"):
    """One of several named answers; unanswered until chosen."""

    id: Id
    label: Label
    group: Label
    choices: Annotated[tuple[Choice, ...], Meta(min_length=2, max_length=200)]
    modifiable: bool | UnsetType = UNSET
    treatment: bool | UnsetType = UNSET
    may_be_missing: bool | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


class YesNoPredictor(FileStruct, frozen=True, tag_field="kind", tag="yes_no"):
    """A question; unanswered until answered. In a term it counts 1 for yes and 0 for no."""

    id: Id
    label: Label
    group: Label
    modifiable: bool | UnsetType = UNSET
    treatment: bool | UnsetType = UNSET
    may_be_missing: bool | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


Predictor = NumberPredictor | ChoicePredictor | YesNoPredictor

DerivedEquation = Literal[
    "body_mass_index", "non_hdl_cholesterol", "ckd_epi_2021", "friedewald_ldl", "difference", "ratio"
]


class Derived(FileStruct, frozen=True):
    """A value worked out from predictors by a named equation; `inputs` maps the equation's roles to predictor ids."""

    id: Id
    label: Label
    quantity: Id
    unit: Label
    equation: DerivedEquation
    inputs: dict[str, Id]
    may_be_typed: bool | UnsetType = UNSET
    group: Label | UnsetType = UNSET
    factor: Positive | UnsetType = UNSET
    derivation: Limits | UnsetType = UNSET
    outside_derivation: Literal["stop", "caution"] | UnsetType = UNSET
    possible: Limits | UnsetType = UNSET
    usual: Limits | UnsetType = UNSET
    loinc: tuple[Label, ...] | UnsetType = UNSET
    meaning: Text | UnsetType = UNSET


class Exclusion(FileStruct, frozen=True):
    """A question that stops the model when it is answered yes."""

    id: Id
    ask: Text
    because: Text


# ---------------------------------------------------------------- the equations


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
    """One linear predictor for the people described by `applies_when` (predictor id -> the answers it covers)."""

    id: Id
    applies_when: dict[Id, Annotated[tuple[Id, ...], Meta(min_length=1)]]
    link: Literal["logit", "cloglog"]
    competing_events: CompetingEvents
    terms: Annotated[tuple[Term, ...], Meta(min_length=1)]
    horizons: Annotated[tuple[Horizon, ...], Meta(min_length=1, max_length=100)]
    uncertainty: Uncertainty
    reference_person: dict[Id, float | str] | UnsetType = UNSET


# ---------------------------------------------------------------- how a practice uses it, and how it proves itself


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


class PopulationNumber(FileStruct, frozen=True):
    """Mean and standard deviation of a number predictor in its unit, or of its natural logarithm."""

    id: Id
    mean: float
    sd: Positive
    log: Literal["natural"] | UnsetType = UNSET


class PopulationAnswer(FileStruct, frozen=True):
    """The log odds of yes given the numbers (on the scale stated for them) and the yes/no answers before it."""

    id: Id
    intercept: float
    coefficients: dict[Id, float]


class PopulationChoice(FileStruct, frozen=True):
    """The shares of the answers of a choice; they add up to one."""

    id: Id
    shares: dict[Id, Probability]


class Population(FileStruct, frozen=True):
    """The people the model was made from, described well enough to draw from: `correlations` follow `numbers`."""

    source: Text
    numbers: tuple[PopulationNumber, ...]
    correlations: Matrix
    yes_no: tuple[PopulationAnswer, ...]
    choices: tuple[PopulationChoice, ...] | UnsetType = UNSET


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


class Signature(FileStruct, frozen=True):
    """One JWS signature over the canonical bytes, in the general JSON shape."""

    protected: Annotated[str, Meta(min_length=1, max_length=4000)]
    signature: Annotated[str, Meta(min_length=1, max_length=4000)]


class CoefficientFile(FileStruct, frozen=True):
    """A whole coefficient file."""

    format: Literal["clinicalc.coefficients/1"]
    model: ModelContent
    signatures: tuple[Signature, ...]


def given(value: object) -> bool:
    """Whether an optional field stands in the file."""
    return value is not UNSET
