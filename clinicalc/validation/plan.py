"""What a validation is to look at: horizons, groups, exclusions, decision points; already in rows of the people."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import QuestionField
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import Column
from clinicalc.validation.predicted import FlagPoint

Rows = NDArray[np.bool_]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class NamedGroup:
    """A question by whose answers people are looked at apart.

    `by` is the id of a predictor or the name of a column, `label` what to call it. `codes`, one for each person, are
    places among the `levels`, the words of its answers; −1 where the answer is not known.
    """

    by: str
    label: str
    codes: Codes
    levels: tuple[str, ...]


def group_of_question(field: QuestionField, values: Column) -> NamedGroup:
    """People by their answers to a question of the model; `values` are places among its options, NaN for none."""
    known = np.isfinite(values)
    codes = np.where(known, np.where(known, values, 0.0), -1.0).astype(np.int64)
    return NamedGroup(field.id, field.label, codes, tuple(option.label for option in field.options))


@dataclass(frozen=True, slots=True, eq=False)
class ExcludedPeople:
    """An exclusion of the model, and who in the file answers it with yes, (rows,).

    `means_yes` are the texts of a yes in the `column`, `texts` those that stand there; `empty` cells count as
    a no.
    """

    id: str
    label: str
    yes: Rows
    column: str = ""
    means_yes: tuple[str, ...] = ("yes",)
    texts: tuple[str, ...] = ()
    empty: int = 0


@dataclass(frozen=True, slots=True, eq=False)
class ValidationPlan:
    """How a model is looked at in people.

    `cohort` says in words who they are ("" where nobody said). `spans` are horizons of the model, None for all that lie
    within the follow-up. `recalibration` is an id of the file, "" for none. `points` are the decision points, None for
    the file's own. With `resamples` the band of the curve of a yes or no is from so many, of a fixed `seed`.
    """

    cohort: str = ""
    spans: tuple[Span, ...] | None = None
    recalibration: str = ""
    groups: tuple[NamedGroup, ...] = ()
    exclusions: tuple[ExcludedPeople, ...] = ()
    points: tuple[FlagPoint, ...] | None = None
    resamples: int = 0
    seed: int = 1
