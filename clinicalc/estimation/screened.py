"""The nouns of screening: columns and outcome that are looked at, and what was found about them."""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade

Array = NDArray[np.float64]


class Screen(StrEnum):
    """What was found."""

    NO_PEOPLE = "no_people"
    NO_EVENTS = "no_events"
    ALL_EVENTS = "all_events"
    NOT_FINITE = "not_finite"
    CONSTANT = "constant"
    LEVEL_WITHOUT_EVENTS = "level_without_events"
    LEVEL_ONLY_EVENTS = "level_only_events"
    SEPARATED = "separated"
    NEARLY_SEPARATED = "nearly_separated"
    HELD_BY_PENALTY = "held_by_penalty"
    SPARSE_LEVEL = "sparse_level"
    DEPENDENT = "dependent"
    COLLINEAR = "collinear"
    TOO_MANY_TERMS = "too_many_terms"
    EVENTS_PER_PARAMETER = "events_per_parameter"
    NO_MINIMUM = "no_minimum"
    BELOW_MINIMUM = "below_minimum"
    OUTLIERS = "outliers"
    ALL_MISSING = "all_missing"
    MISSING = "missing"
    COMPLETE_CASES = "complete_cases"
    NO_COMPLETE_CASES = "no_complete_cases"
    MISSING_TOGETHER = "missing_together"
    MISSING_WITH_OUTCOME = "missing_with_outcome"
    COMPETING_CENSORED = "competing_censored"
    COMPETING_COUNTED = "competing_counted"
    FILLED_IN = "filled_in"
    NOT_FILLED_IN = "not_filled_in"
    NOT_MIXED = "not_mixed"


class Figure(StrEnum):
    """Names of the figures of a finding; shares lie between 0 and 1."""

    PEOPLE = "people"
    OF_PEOPLE = "of_people"
    EVENTS = "events"
    WITHOUT = "without"
    PARAMETERS = "parameters"
    VALUE = "value"
    LOW = "low"
    HIGH = "high"
    SHARE = "share"
    OTHER_SHARE = "other_share"
    DIFFERENCE = "difference"
    INFLATION = "inflation"
    CONDITION = "condition"
    PER_PARAMETER = "per_parameter"
    R2 = "r2"
    MINIMUM = "minimum"
    MINIMUM_EVENTS = "minimum_events"
    MINIMUM_PER_PARAMETER = "minimum_per_parameter"
    SETS = "sets"
    ROUNDS = "rounds"


@dataclass(frozen=True, slots=True)
class Screened:
    """One finding: the columns it is about, and its figures by name.

    `level` is the level of a category in words, or a value in digits where `detail` is "value". Otherwise `detail` is a
    code that some findings need: the origin of an R2, "order" or "timed" for a time to an event. For competing events
    `level` is the horizon in words, `detail` "late" where people came late.
    """

    gravity: Grade
    columns: tuple[str, ...]
    code: Screen
    figures: tuple[tuple[Figure, float], ...] = ()
    level: str = ""
    detail: str = ""

    def figure(self, name: Figure) -> float:
        """The figure of that name. Raises KeyError where this finding has none."""
        return dict(self.figures)[name]


@dataclass(frozen=True, slots=True, eq=False)
class ScreenedColumn:
    """A column to be looked at: values of shape (n,), NaN where missing.

    With `levels` the values are places in them, from 0, and each level is looked at. Without, a column of two different
    values is taken as two levels. `made_of` names the predictors that it was computed from; two columns that share one,
    such as age and its square, are expected to go together.
    """

    name: str
    values: Array
    levels: tuple[str, ...] = ()
    made_of: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, eq=False)
class ScreenedOutcome:
    """Events, shape (n,): 1, 0 or NaN where not known; a competing event is a 0 here.

    `times` where the outcome is a time to an event, in any unit, with `entry` where people come in late; for a binary
    outcome None. `horizon` is the time for which risks are wanted, in the same unit.
    """

    events: Array
    times: Array | None = None
    entry: Array | None = None
    horizon: float | None = None
