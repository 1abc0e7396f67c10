"""A validation file that fits its model: what is to be read, looked for and looked at."""

from dataclasses import dataclass
from pathlib import Path

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import Documentation, Predictor
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.dictionary import DataDictionary
from clinicalc.validation.predicted import FlagPoint
from clinicalc.validation.updated import UpdateWish


@dataclass(frozen=True, slots=True)
class UpdateRequest:
    """What the [update] table asks for, beside how: "" or nothing for what it does not say."""

    wish: UpdateWish
    version: str
    id: str
    population: str
    documentation: tuple[Documentation, ...] = ()


@dataclass(frozen=True, slots=True)
class ExclusionColumn:
    """Where the answer to an exclusion of the model stands: anything else than the texts `yes` is a no."""

    id: str
    column: str
    yes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class GroupName:
    """By what people are looked at apart: a predictor of the model, else a column of the table."""

    name: str
    column: str
    is_predictor: bool


@dataclass(frozen=True, slots=True, eq=False)
class SettledValidation:
    """What a validation file says about its model and its people; `cohort_file` is still to be read.

    Next: `table = read_table(settled.cohort_file, course)`,
    `cohort = check_cohort(table, settled.dictionary, settled.predictors, course)`,
    `plan = make_plan(settled, table, cohort)`. `predictors` are those of the model that are looked for in the table,
    derived values with a column of their own among them. `cohort` says who the people are, `from_` and `to` from when
    to when ("" where nobody said).
    """

    name: str
    model: Model
    title: str
    cohort: str
    from_: str
    to: str
    cohort_file: Path
    dictionary: DataDictionary
    predictors: tuple[Predictor, ...]
    exclusions: tuple[ExclusionColumn, ...]
    groups: tuple[GroupName, ...]
    spans: tuple[Span, ...] | None
    recalibration: str
    points: tuple[FlagPoint, ...] | None
    resamples: int
    seed: int
    update: UpdateRequest | None
