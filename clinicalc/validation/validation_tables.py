"""The fields and tables of a validation file, as they stand in it."""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, UnsetType, field

from clinicalc.coefficients.file_types import FileStruct, Id, Label, ModelId, Positive, Text, Version
from clinicalc.coefficients.schema import Documentation
from clinicalc.cohort.cohort_tables import Cells, CohortTable

Share = Annotated[float, Meta(gt=0, lt=1)]


class HorizonTable(FileStruct, frozen=True):
    """A time span: `years`, or `time` with `unit`."""

    years: Positive | UnsetType = UNSET
    time: Positive | UnsetType = UNSET
    unit: Label | UnsetType = UNSET


class ExclusionTable(FileStruct, frozen=True):
    """Where the answer to an exclusion of the model stands; cells that are none of `yes` are a no."""

    column: Text
    yes: Cells | UnsetType = UNSET


class ValidationCohortTable(CohortTable, frozen=True):
    """The file of people as in a study, with who they are in `words`, from when to when, and who is outside the model.

    `group_columns` gives columns another name, under which `groups` may name them.
    """

    words: Text | UnsetType = UNSET
    from_: Text | UnsetType = field(default=UNSET, name="from")
    to: Text | UnsetType = UNSET
    exclusions: dict[Id, ExclusionTable] = field(default_factory=dict)
    group_columns: dict[Text, Text] = field(default_factory=dict)


class UpdateUse(FileStruct, frozen=True):
    """For whom the new version is meant."""

    population: Text


class UpdateTable(FileStruct, frozen=True):
    """What the new version should be; "baseline" and "baseline_slope" are other words for the two intercepts."""

    method: Literal["closed_test", "intercept", "intercept_slope", "baseline", "baseline_slope", "refit", "two_scale"]
    version: Version | UnsetType = UNSET
    id: ModelId | UnsetType = UNSET
    together: bool = False
    groups: Annotated[int, Meta(ge=3, le=100)] | UnsetType = UNSET
    weights: Literal["equal", "inverse_variance"] = "equal"
    alpha: Share = 0.05
    use: UpdateUse | UnsetType = UNSET
    documentation: tuple[Documentation, ...] = ()


class ResamplingTable(FileStruct, frozen=True):
    """How many samples the band of a curve is drawn from, and their seed."""

    replicates: Annotated[int, Meta(ge=20, le=5000)] = 500
    seed: Annotated[int, Meta(ge=0)] = 1


class ValidationTables(FileStruct, frozen=True):
    """All of a validation file."""

    cohort: ValidationCohortTable
    title: Text | UnsetType = UNSET
    model: Text | UnsetType = UNSET
    recalibration: Id | UnsetType = UNSET
    horizons: Annotated[tuple[HorizonTable, ...], Meta(min_length=1)] | UnsetType = UNSET
    groups: tuple[Text, ...] | UnsetType = UNSET
    decision_points: tuple[Share, ...] | UnsetType = UNSET
    update: UpdateTable | UnsetType = UNSET
    bootstrap: ResamplingTable | UnsetType = UNSET
