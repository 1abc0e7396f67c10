"""A table held against its dictionary: every problem at once, and the arrays that a fit takes."""

from collections.abc import Iterator
from dataclasses import dataclass, field
from types import MappingProxyType

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import listed, quoted, suggest
from clinicalc.coefficients.schema import NumberPredictor, Predictor
from clinicalc.cohort.answer_column import take_answer_column
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, Codes, Outcome, SurvivalOutcome
from clinicalc.cohort.column_checks import check_values
from clinicalc.cohort.contradictions import MeasuredColumn, find_contradictions
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, OutcomeKind, OutcomePlan, Role
from clinicalc.cohort.measure import measure_of
from clinicalc.cohort.number_column import take_number_column
from clinicalc.cohort.people import find_cluster_problems, find_duplicates, find_identical, number_groups
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn, RawTable
from clinicalc.cohort.sightings import name_column, see
from clinicalc.cohort.states import take_states, tell_missing_outcome
from clinicalc.cohort.times import take_times
from clinicalc.errors import UnitError

_PERSON, _CLUSTER, _VALUES = "the person", "the cluster", "the values of"
_ORDER = {Grade.STOP: 0, Grade.CAUTION: 1, Grade.NOTE: 2}


def check_cohort(
    table: RawTable, dictionary: DataDictionary, predictors: tuple[Predictor, ...], course: Course = UNWATCHED
) -> CheckedCohort:
    """Everybody's values as the dictionary explains them, with every problem: stops first, else in the file's order.

    A predictor whose entry is not in the dictionary is looked for in a column of its own id. Nobody is left out: what
    is missing, impossible or not understood is NaN. Raises Stopped by `course`, and nothing else.
    """
    check = _Check(table, dictionary, course)
    columns = {predictor.id: check.take_predictor(predictor) for predictor in predictors}
    course.say("Checking people and outcome")
    check.problems += find_contradictions(check.measured, table.lines)
    outcome = check.take_outcome(dictionary.outcome)
    cluster = check.take_people()
    check.problems += check.find_doubled_names()
    problems = tuple(sorted(check.problems, key=lambda problem: _ORDER[problem.gravity]))
    return CheckedCohort(table.rows, MappingProxyType(columns), outcome, cluster, table.lines, problems)


@dataclass(slots=True, eq=False)
class _Check:
    """One table being checked, with what was found so far."""

    table: RawTable
    dictionary: DataDictionary
    course: Course
    problems: list[DataProblem] = field(default_factory=list)
    measured: list[MeasuredColumn] = field(default_factory=list)
    sought: list[tuple[str, str]] = field(default_factory=list)

    def find(self, name: str, what: str) -> RawColumn | None:
        """The column of a name; where there is none, that is told and None comes back."""
        raw = self.table.find(name) if name else None
        self.sought.append((name, what))
        if raw is None:
            self.problems.append(_tell_absent(self.table, name, what))
        return raw

    def take_predictor(self, predictor: Predictor) -> Numbers:
        """The values of a predictor in its own unit; all NaN where its column is not there or in no known unit."""
        self.course.say(f"Checking {predictor.label}")
        entry = self._entry_of(predictor)
        raw = self.find(entry.column, f"{_VALUES} {predictor.label}")
        lines = self.table.lines
        if raw is None:
            return np.full(self.table.rows, np.nan)
        if isinstance(predictor, NumberPredictor):
            try:
                measure = measure_of(predictor, entry)
            except UnitError as error:
                said = f"{name_column(raw.name, predictor.label)}: {error}"
                self.problems.append(DataProblem(Grade.STOP, raw.name, ProblemCode.UNIT, 0, (), said))
                return np.full(self.table.rows, np.nan)
            values, missing, problems = take_number_column(raw, entry.missing, measure, lines)
            self.measured.append(MeasuredColumn(raw.name, measure, values))
        else:
            values, missing, problems = take_answer_column(raw, entry, predictor, lines)
        self.problems += problems
        self.problems += check_values(raw, predictor.label, values, missing, lines)
        return values

    def take_outcome(self, plan: OutcomePlan) -> Outcome:
        """The outcome of everybody, NaN where it is not known."""
        binary = plan.kind is OutcomeKind.BINARY
        raw = self.find(plan.column if binary else plan.status, "the outcome" if binary else "the status")
        states, lines = np.full(self.table.rows, np.nan), self.table.lines
        if raw is not None:
            states, problems = take_states(raw, plan, lines)
            self.problems += problems
        if binary:
            return BinaryOutcome(states)
        taken = take_times(plan, self.find, states, lines)
        self.problems += taken.problems
        without = np.isnan(taken.times) & np.isfinite(states)
        if without.any() and not any(problem.gravity is Grade.STOP for problem in taken.problems):
            name = plan.time or plan.end
            self.problems.append(tell_missing_outcome(name, int(without.sum()), len(lines), see(without, lines).lines))
        return SurvivalOutcome(taken.times, states, taken.entry, taken.unit)

    def take_people(self) -> Codes | None:
        """The clusters, None where none are stated; people who stand twice are told."""
        if not self.dictionary.person:
            self.problems += find_identical(self.table)
        elif (raw := self.find(self.dictionary.person, _PERSON)) is not None:
            self.problems += find_duplicates(raw, self.table.lines)
        if not self.dictionary.cluster or (raw := self.find(self.dictionary.cluster, _CLUSTER)) is None:
            return None
        clusters = number_groups(raw)
        self.problems += find_cluster_problems(raw, clusters, self.table.lines)
        return clusters

    def find_doubled_names(self) -> Iterator[DataProblem]:
        """Columns that stand for two things: never right where one is the outcome, seldom meant with two values."""
        uses: dict[str, list[str]] = {}
        for name, what in self.sought:
            if what not in (_PERSON, _CLUSTER):
                uses.setdefault(name, []).append(what)
        for name, whats in uses.items():
            if len(whats) > 1 and name:
                values_only = all(what.startswith(_VALUES) for what in whats)
                said = f"{name_column(name)} is named for {listed(whats)}. Name another column for one of them."
                gravity = Grade.CAUTION if values_only else Grade.STOP
                yield DataProblem(gravity, name, ProblemCode.NAMED_TWICE, 0, (), said)

    def _entry_of(self, predictor: Predictor) -> ColumnEntry:
        entries = (one for one in self.dictionary.columns if one.role is Role.VALUE and one.predictor == predictor.id)
        return next(entries, ColumnEntry(predictor.id, Role.VALUE, predictor.id))


def _tell_absent(table: RawTable, name: str, what: str) -> DataProblem:
    if not name:
        said = f"The dictionary names no column for {what}. Name one of those in {table.file}."
        return DataProblem(Grade.STOP, name, ProblemCode.NO_SUCH_COLUMN, 0, (), said)
    close = suggest(name, table.names) or _some_names(table)
    said = f"{name_column(name)}, named for {what}, is not in {table.file}.{close}"
    return DataProblem(Grade.STOP, name, ProblemCode.NO_SUCH_COLUMN, 0, (), said)


def _some_names(table: RawTable) -> str:
    more = f" and {len(table.names) - 8} more" if len(table.names) > 8 else ""
    return f" Its columns are {', '.join(map(quoted, table.names[:8]))}{more}."
