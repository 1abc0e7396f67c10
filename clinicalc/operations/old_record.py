"""The record of an old print as it was written, by this version or an earlier one."""

import msgspec
from msgspec import UNSET, UnsetType


class RecordedModel(msgspec.Struct, frozen=True):
    """Which model a record says it was made with."""

    id: str
    version: str
    title: str
    fingerprint: str


class RecordedCompared(msgspec.Struct, frozen=True):
    """Who compared an unconfirmed figure of the file with its source."""

    at: str
    by: str


class RecordedVetting(msgspec.Struct, frozen=True):
    """The approval under which a record says its model was used; dates as YYYY-MM-DD."""

    practice: str
    by: str
    role: str
    approved_on: str
    review_until: str
    by_author: bool
    library: str
    compared: tuple[RecordedCompared, ...] = ()
    caution: str | None = None


class RecordedBand(msgspec.Struct, frozen=True):
    """The band of a record, probabilities 0 to 1."""

    level: float
    lower: float
    upper: float
    basis: str
    assumptions: tuple[str, ...] | UnsetType = UNSET


class RecordedValue(msgspec.Struct, frozen=True):
    """One value, typed or worked out (`typed` is None then), and what was used for it in the file's unit."""

    id: str
    value: float | str | None
    unit: str | None
    typed: str | None = None
    dated: str | None = None


class RecordedFinding(msgspec.Struct, frozen=True):
    """One finding."""

    grade: str
    code: str
    field: str | None
    message: str


class RecordedPart(msgspec.Struct, frozen=True):
    """What one value adds to the re-measurement spread."""

    id: str
    sd: float
    unit: str | None
    link_sd: float
    source: str


class RecordedSpread(msgspec.Struct, frozen=True):
    """The re-measurement spread of a record."""

    level: float
    lower: float
    upper: float
    link_sd: float
    parts: tuple[RecordedPart, ...]


class RecordedNotMeasured(msgspec.Struct, frozen=True):
    """What a record says of values that were not measured."""

    fields: tuple[str, ...]
    level: float
    lower: float
    upper: float
    link_sd: float
    known_lower: float | None
    known_upper: float | None
    source: str


class RecordedChange(msgspec.Struct, frozen=True):
    """One changed value of a comparison as it was entered, beside the patient's own."""

    id: str
    typed: str
    own: float | str | None
    value: float | str | None
    unit: str | None


class RecordedComparison(msgspec.Struct, frozen=True):
    """The comparison of a record: what was changed, and the changed number."""

    changes: tuple[RecordedChange, ...]
    probability: float | None
    complement: float | None
    lower: float | None
    upper: float | None
    difference: float | None
    difference_lower: float | None
    difference_upper: float | None
    because: str | None
    findings: tuple[RecordedFinding, ...]


class RecordedStep(msgspec.Struct, frozen=True):
    """The share of one value."""

    id: str
    amount: float


class RecordedShares(msgspec.Struct, frozen=True):
    """The shares of a record, largest first."""

    reference_person: str | None
    reference_probability: float | None
    reference_eta: float | None
    steps: tuple[RecordedStep, ...]
    because: str | None


class RecordedAge(msgspec.Struct, frozen=True):
    """The matching age of a record."""

    place: str | None
    age: float | None
    standard_error: float | None
    lowest: float | None
    highest: float | None
    because: str | None


class RecordedPoint(msgspec.Struct, frozen=True):
    """A decision point of a record, and on which side of it the number lies."""

    probability: float
    label: str
    source: str
    origin: str
    above: bool
    crossed: bool
    confidence: float | None


class Record(msgspec.Struct, frozen=True):
    """An assessment as its record holds it (`assessment.record`).

    The figures beside the number are UNSET in the records of versions that did not have them yet.
    """

    model: RecordedModel
    years: float | None
    level: float
    probability: float | None
    complement: float | None
    eta: float | None
    band: RecordedBand | None
    band_absent_because: str | None
    recalibration: str | None
    values: tuple[RecordedValue, ...]
    derived: tuple[RecordedValue, ...]
    findings: tuple[RecordedFinding, ...]
    vetting: RecordedVetting | None = None
    time: float | None = None
    unit: str | None = None
    spread: RecordedSpread | UnsetType | None = UNSET
    not_measured: RecordedNotMeasured | UnsetType | None = UNSET
    comparison: RecordedComparison | UnsetType | None = UNSET
    shares: RecordedShares | UnsetType | None = UNSET
    matching_age: RecordedAge | UnsetType | None = UNSET
    decision_points: tuple[RecordedPoint, ...] | UnsetType = UNSET
