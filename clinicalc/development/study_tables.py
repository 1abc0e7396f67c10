"""The tables of a study that no description has: [cohort], the people, [estimate], how an equation is fitted, and
[imputation] and [bootstrap], what is done about missing values and about optimism.

Beside them the two shorthands of terms, which are written out before anything else sees them.
"""

from typing import Annotated, Literal

from msgspec import UNSET, Meta, UnsetType

from clinicalc.coefficients.equations import Step
from clinicalc.coefficients.file_types import FileStruct, Id, Text
from clinicalc.cohort.cohort_tables import CohortTable


class EstimateTable(FileStruct, frozen=True):
    """How one equation is fitted. `strata` is a choice or yes/no predictor: each answer becomes its own equation."""

    kind: Literal["cox", "logistic", "cloglog", "fine-gray"]
    ties: Literal["efron", "breslow"] | UnsetType = UNSET
    covariance: Literal["model", "robust", "cluster"] | UnsetType = UNSET
    cluster: Text | UnsetType = UNSET
    strata: Id | UnsetType = UNSET
    round_times: Annotated[int, Meta(ge=0, le=12)] | UnsetType = UNSET
    penalty: Literal["firth", "ridge"] | UnsetType = UNSET
    ridge_strength: Annotated[float, Meta(gt=0)] | UnsetType = UNSET

    @property
    def covariance_kind(self) -> Literal["model", "robust", "cluster"]:
        """The covariance that is meant: robust for a Fine–Gray fit, whose model covariance is not valid."""
        if not isinstance(self.covariance, UnsetType):
            return self.covariance
        return "robust" if self.kind == "fine-gray" else "model"


class ImputationTable(FileStruct, frozen=True):
    """How values that are missing are filled in: so many sets of them, each after so many rounds over the columns."""

    sets: Annotated[int, Meta(ge=2, le=200)] = 20
    rounds: Annotated[int, Meta(ge=1, le=200)] = 10
    seed: Annotated[int, Meta(ge=0)] = 1


class BootstrapTable(FileStruct, frozen=True):
    """How the optimism of a fit is found: so many samples drawn from its own people, from a fixed seed."""

    replicates: Annotated[int, Meta(ge=20, le=5000)] = 500
    seed: Annotated[int, Meta(ge=0)] = 1


class StudyTables(FileStruct, frozen=True):
    """All of them, as they stand at the top of the file."""

    cohort: CohortTable
    estimate: Annotated[dict[Id, EstimateTable], Meta(min_length=1)]
    imputation: ImputationTable | UnsetType = UNSET
    bootstrap: BootstrapTable | UnsetType = UNSET


class SplineOf(FileStruct, frozen=True):
    """A restricted cubic spline of a value: so many knots at the default quantiles, or the knots themselves.

    `steps` come before the spline; the terms are called after `id`, or after the value.
    """

    spline_of: Id
    knots: Annotated[int, Meta(ge=3, le=7)] | Annotated[tuple[float, ...], Meta(min_length=3, max_length=10)] = 4
    steps: tuple[Step, ...] = ()
    id: Id | UnsetType = UNSET

    @property
    def name(self) -> str:
        """What the linear term is called."""
        return self.spline_of if isinstance(self.id, UnsetType) else self.id


class CategoriesOf(FileStruct, frozen=True):
    """A term of 0 and 1 for each answer of a choice but the reference; they are called after `id`, or the choice."""

    categories_of: Id
    reference: Id
    id: Id | UnsetType = UNSET

    @property
    def name(self) -> str:
        """What the names of its terms begin with."""
        return self.categories_of if isinstance(self.id, UnsetType) else self.id
