"""A checked table of people: arrays in the predictors' own units, and what was found wrong."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.problems import DataProblem

Column = NDArray[np.float64]
Codes = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class SurvivalOutcome:
    """Times in `unit`; status 0 censored, 1 the event, 2 a competing event; NaN where not known.

    Somebody is watched in (entry, time]; `entry` is None where everybody is from time nought.
    """

    times: Column
    status: Column
    entry: Column | None
    unit: str


@dataclass(frozen=True, slots=True, eq=False)
class BinaryOutcome:
    """1 where it happened, 0 where it did not, NaN where not known."""

    y: Column


Outcome = SurvivalOutcome | BinaryOutcome


@dataclass(frozen=True, slots=True, eq=False)
class CheckedCohort:
    """People as arrays of length `rows`, in the order of the file; nobody is left out, what is missing is NaN.

    `columns` has, by predictor id, values in the predictor's unit; 1 and 0 for yes and no; for a choice the place of
    the answer among its choices, from 0. `cluster` numbers the clusters from 0, −1 where none is stated. `row_numbers`
    are lines of the file, from 1. A stop among the `problems` means that nothing may be fitted to this.
    """

    rows: int
    columns: Mapping[str, Column]
    outcome: Outcome
    cluster: Codes | None
    row_numbers: Codes
    problems: tuple[DataProblem, ...]

    @property
    def stops(self) -> tuple[DataProblem, ...]:
        """The problems that forbid a fit."""
        return tuple(problem for problem in self.problems if problem.gravity is Grade.STOP)
