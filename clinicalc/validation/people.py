"""Who is used: everybody counted once, from the file to those whose predicted risk is compared with what was seen."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import OPEN, NumberField
from clinicalc.assessment.limits import clamp_column, giving_limits, within_column
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.rows import NO_EQUATION, complete_columns, find_equations
from clinicalc.coefficients.schema import Limits
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, Column, Outcome, SurvivalOutcome
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.errors import Problem, ValidationRefused
from clinicalc.validation.people_words import say_nobody
from clinicalc.validation.plan import ValidationPlan
from clinicalc.validation.validated import PeopleCount

Places = NDArray[np.int64]
Rows = NDArray[np.bool_]

_OF_A_FIT = frozenset({ProblemCode.CONSTANT, ProblemCode.UNUSED_LEVEL})
"""What forbids or spoils a fit, and nothing where a model is only looked at."""


@dataclass(frozen=True, slots=True, eq=False)
class UsedPeople:
    """The people used, n of them, in the order of the file: `rows` are their places in it.

    `columns` by predictor id and `outcome`, both (n,), as `update_model` takes them.
    """

    count: PeopleCount
    rows: Places
    columns: Mapping[str, Column]
    outcome: Outcome


def find_stated_problems(cohort: CheckedCohort) -> tuple[DataProblem, ...]:
    """The problems of the data that matter where a model is looked at: without those that only a fit has."""
    return tuple(problem for problem in cohort.problems if problem.code not in _OF_A_FIT)


def find_stops(cohort: CheckedCohort) -> tuple[DataProblem, ...]:
    """Those of them that forbid a validation."""
    return tuple(problem for problem in cohort.stops if problem.code not in _OF_A_FIT)


def find_people(model: Model, cohort: CheckedCohort, plan: ValidationPlan, course: Course = UNWATCHED) -> UsedPeople:
    """Who can be used, and where everybody else went; values of the others are never looked at.

    Raises ValidationRefused with every stop of the data, and where nobody is left (with the reason).
    """
    course.say("Counting people")
    stops = find_stops(cohort)
    if stops:
        problems = tuple(Problem(_place_of(stop), stop.sentence) for stop in stops)
        raise ValidationRefused(plan.cohort or "the people", problems)
    sorting = _Sorting(model, cohort)
    for exclusion in plan.exclusions:
        sorting.excluded[exclusion.id] = sorting.leave(exclusion.yes)
    sorting.leave_uncovered()
    sorting.no_outcome = sorting.leave(~known_outcome(cohort.outcome))
    sorting.leave_incomplete()
    sorting.leave_refused()
    count = sorting.tell()
    if not count.used:
        raise ValidationRefused(plan.cohort or "the people", (Problem("", say_nobody(model, cohort.columns, count)),))
    rows = np.flatnonzero(sorting.left)
    columns = {id: np.ascontiguousarray(column[rows]) for id, column in sorting.columns.items()}
    return UsedPeople(count, rows, columns, part_of(cohort.outcome, rows))


def known_outcome(outcome: Outcome) -> Rows:
    """Of whom it is known what happened, (n,)."""
    if isinstance(outcome, BinaryOutcome):
        return np.asarray(np.isfinite(outcome.y), dtype=np.bool_)
    known = np.isfinite(outcome.times) & np.isfinite(outcome.status)
    return np.asarray(known if outcome.entry is None else known & np.isfinite(outcome.entry), dtype=np.bool_)


def part_of(outcome: Outcome, rows: Places | Rows) -> Outcome:
    """The outcome of some of the people."""
    if isinstance(outcome, BinaryOutcome):
        return BinaryOutcome(outcome.y[rows])
    entry = None if outcome.entry is None else outcome.entry[rows]
    return SurvivalOutcome(outcome.times[rows], outcome.status[rows], entry, outcome.unit)


class _Sorting:
    """Everybody in the file, taken out step by step; each leaves once."""

    def __init__(self, model: Model, cohort: CheckedCohort) -> None:
        self.model, self.rows = model, cohort.rows
        self.columns = {id: _hold(model, id, column) for id, column in cohort.columns.items()}
        self.left: Rows = np.ones(cohort.rows, dtype=np.bool_)
        self.place = find_equations(model, self.columns, cohort.rows)
        self.excluded: dict[str, int] = {}
        self.not_covered = self.no_outcome = self.missing = self.refused = 0
        self.missing_by: dict[str, int] = {}
        self.refused_by: dict[str, int] = {}
        self.beyond: dict[str, int] = {}

    def leave(self, who: Rows) -> int:
        """Take people out who are still there; how many left."""
        gone = self.left & who
        self.left &= ~who
        return int(gone.sum())

    def leave_uncovered(self) -> None:
        """Those to whom no equation applies; where the answer that decides is missing, that is what is counted."""
        without = self.place == NO_EQUATION
        deciding = {id for equation in self.model.equations for id in equation.content.applies_when}
        unknown = np.zeros(self.rows, dtype=np.bool_)
        for id in deciding:
            unknown |= np.isnan(self.columns[id])
        self.not_covered = self.leave(without & ~unknown)

    def leave_incomplete(self) -> None:
        """Those who lack a value that their equation uses, or of whom none can be worked out."""
        lacking = {id: np.zeros(self.rows, dtype=np.bool_) for id in (*self.columns, *self._derived())}
        for equation in self.model.equations:
            for id in equation.content.applies_when:
                lacking[id] |= (self.place == NO_EQUATION) & np.isnan(self.columns[id])
            rows = np.flatnonzero(self.place == equation.place)
            for id, column in self._complete(equation, rows).items():
                without = rows[~np.isfinite(column)]
                field = self.model.by_id[id]
                sources = field.sources if isinstance(field, NumberField) and id not in self.columns else ()
                lacks = [one for one in sources if np.isnan(self.columns[one][without]).any()]
                for one in lacks or [id]:
                    lacking[one][without] |= np.isnan(self.columns[one][without]) if lacks else True
        for id, who in lacking.items():
            if found := int((who & self.left).sum()):
                self.missing_by[id] = found
        self.missing = self.leave(np.logical_or.reduce([*lacking.values(), np.zeros(self.rows, dtype=np.bool_)]))

    def leave_refused(self) -> None:
        """Those outside limits within which the model gives a number; of the others, who lies beyond the derivation."""
        outside: dict[str, Rows] = {}
        beyond: dict[str, Rows] = {}
        for equation in self.model.equations:
            rows = np.flatnonzero((self.place == equation.place) & self.left)
            for id, column in self._judged(equation, rows).items():
                field = self.model.by_id[id]
                assert isinstance(field, NumberField)
                for found, limits in ((outside, giving_limits(field)), (beyond, _warned(field))):
                    who = found.setdefault(id, np.zeros(self.rows, dtype=np.bool_))
                    who[rows] = ~within_column(column, limits) | np.isnan(column)
        self.refused_by = {id: int(who.sum()) for id, who in outside.items() if who.any()}
        for who in outside.values():
            self.refused += self.leave(who)
        counts = {id: int((who & self.left).sum()) for id, who in beyond.items()}
        self.beyond = {id: count for id, count in counts.items() if count}

    def tell(self) -> PeopleCount:
        """The count."""
        return PeopleCount(
            in_file=self.rows,
            excluded=self.excluded,
            not_covered=self.not_covered,
            no_outcome=self.no_outcome,
            missing=self.missing,
            missing_by=self.missing_by,
            refused=self.refused,
            refused_by=self.refused_by,
            used=int(self.left.sum()),
            beyond=self.beyond,
        )

    def _derived(self) -> list[str]:
        return [field.id for field in self.model.derived if field.id not in self.columns]

    def _complete(self, equation: ModelEquation, rows: Places) -> dict[str, Column]:
        return complete_columns(self.model, equation, self.columns, rows)

    def _judged(self, equation: ModelEquation, rows: Places) -> dict[str, Column]:
        """The numbers that are judged for an equation: those it uses, and what these are worked out from."""
        own = self._complete(equation, rows)
        for field in self.model.derived:
            if field.id in equation.uses and field.id not in self.columns:
                own |= {id: self.columns[id][rows] for id in field.sources}
        return {id: column for id, column in own.items() if isinstance(self.model.by_id[id], NumberField)}


def _hold(model: Model, id: str, column: Column) -> Column:
    """The column, values that miss a giving limit by their last bits moved onto it."""
    field = model.by_id[id]
    if not isinstance(field, NumberField):
        return column
    limits = giving_limits(field)
    return np.where(within_column(column, limits), clamp_column(column, limits), column)


def _warned(field: NumberField) -> Limits:
    """The derivation range where a value outside it has a caution."""
    return OPEN if field.derivation_stops else field.derivation


def _place_of(stop: DataProblem) -> str:
    return f"column {stop.column}" if stop.column else ""
