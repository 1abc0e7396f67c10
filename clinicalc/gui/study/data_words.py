"""What is said of the data of a study: counts, the outcome, the columns, what is wrong with them."""

from collections.abc import Iterator, Mapping, Sequence

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.checked import CheckedCohort, SurvivalOutcome
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, OutcomeKind, OutcomePlan, Role
from clinicalc.cohort.problems import DataProblem
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.problem_list import Stated
from clinicalc.units.unit import unit as unit_of

GRADES = {Grade.STOP: Grade.STOP, Grade.CAUTION: Grade.CAUTION, Grade.NOTE: Grade.NOTE}
COLUMNS = tuple(
    FactColumn(name) for name in ("Column", "Role", "Value of", "Unit", "Answers in the file", "Not measured")
)
ROLES = {
    Role.VALUE: "value",
    Role.TIME: "time followed",
    Role.STATUS: "what ended it",
    Role.ENTRY: "time of entry",
    Role.START: "first day",
    Role.END: "last day",
    Role.OUTCOME: "outcome",
    Role.PERSON: "person",
    Role.CLUSTER: "group of people",
    Role.BORN: "date of birth",
    Role.IGNORED: "not used",
}
KINDS = {
    "cox": "Cox",
    "logistic": "logistic",
    "cloglog": "binomial with the complementary log-log link",
    "fine-gray": "Fine–Gray (subdistribution hazard)",
}
COVARIANCES = {"model": "of the model", "robust": "robust (sandwich)", "cluster": "robust, by groups of people"}
_MOST_LEVELS = 6
_SPANS = {"a": "years", "mo": "months", "wk": "weeks", "d": "days"}


def count(number: int, one: str, many: str = "") -> str:
    """A number of things: "4,812 people", "1 event"."""
    return f"{number:,} {one if number == 1 else many or f'{one}s'}"


def count_events(cohort: CheckedCohort) -> tuple[int, int]:
    """How many people had the event, and how many a competing one."""
    outcome = cohort.outcome
    if isinstance(outcome, SurvivalOutcome):
        return int((outcome.status == 1.0).sum()), int((outcome.status == 2.0).sum())
    return int((outcome.y == 1.0).sum()), 0


def counts_line(cohort: CheckedCohort) -> str:
    """People and events in one line."""
    events, _ = count_events(cohort)
    return f"{count(cohort.rows, 'person', 'people')}, {count(events, 'event')}"


def state_problems(problems: Sequence[DataProblem]) -> tuple[Stated, ...]:
    """The problems as footnotes, with the lines of the file where the sentence has room for them."""
    return tuple(Stated(GRADES[problem.gravity], problem.sentence) for problem in problems)


def outcome_lines(plan: OutcomePlan) -> Iterator[tuple[str, str]]:
    """What is said about the outcome, in names and texts."""
    if plan.kind is OutcomeKind.BINARY:
        yield "Outcome", f"yes or no, in the column {plan.column}"
        yield "Event", _cells(plan.event)
        yield "No event", _cells(plan.no_event) if plan.no_event else "everything else"
        return
    yield "Outcome", "time to event"
    if plan.time:
        yield "Time", f"column {plan.time}, in {span_words(plan.unit)}"
    else:
        yield "Time", f"days from the column {plan.start} to the column {plan.end}"
    if plan.entry:
        yield "Entry", f"column {plan.entry}: observed from then on"
    if plan.born:
        yield "Born", f"column {plan.born}: time counts from birth"
    yield "Status", f"column {plan.status}"
    yield "Event", _cells(plan.event)
    yield "Censored", _cells(plan.censored) if plan.censored else "everything else"
    if plan.competing:
        yield "Competing event", _cells(plan.competing)


def span_words(unit: str) -> str:
    """A unit of time as it is written: "days"."""
    return _SPANS.get(unit, unit)


def column_facts(dictionary: DataDictionary, units: Mapping[str, str], *, with_reasons: bool) -> tuple[Fact, ...]:
    """A row for each column of the file that is spoken of; `units` are those of the predictors, by id."""
    return tuple(_column_fact(entry, units, with_reasons=with_reasons) for entry in dictionary.columns)


def _column_fact(entry: ColumnEntry, units: Mapping[str, str], *, with_reasons: bool) -> Fact:
    unit = entry.unit or units.get(entry.predictor, "")
    levels = [f"{text} = {id}" for id, text in entry.levels[:_MOST_LEVELS]]
    if len(entry.levels) > _MOST_LEVELS:
        levels.append(f"and {len(entry.levels) - _MOST_LEVELS} more")
    cells = (
        entry.column,
        ROLES[entry.role],
        entry.predictor,
        unit_of(unit).spelling if unit else "",
        ", ".join(levels),
        _cells(entry.missing),
    )
    return Fact(cells, entry.reason if with_reasons else "")


def _cells(texts: Sequence[str]) -> str:
    return ", ".join(texts)
