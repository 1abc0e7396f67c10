"""What is wrong with a table of people: one sentence a problem, graded."""

from dataclasses import dataclass
from enum import StrEnum

from clinicalc.assessment.findings import Grade


class ProblemCode(StrEnum):
    """What kind of problem it is; a window may sort by it."""

    NO_SUCH_COLUMN = "no_such_column"
    UNIT = "unit"
    TEXT_IN_NUMBERS = "text_in_numbers"
    IMPOSSIBLE = "impossible"
    UNUSUAL = "unusual"
    UNIT_MIXTURE = "unit_mixture"
    UNKNOWN_LEVEL = "unknown_level"
    UNUSED_LEVEL = "unused_level"
    CONSTANT = "constant"
    EMPTY = "empty"
    MISSING = "missing"
    MISSING_CODE = "missing_code"
    CONTRADICTION = "contradiction"
    DUPLICATE = "duplicate"
    NAMED_TWICE = "named_twice"
    NOT_A_DATE = "not_a_date"
    DATES_OUT_OF_ORDER = "dates_out_of_order"
    TIME_NOT_POSITIVE = "time_not_positive"
    EXIT_BEFORE_ENTRY = "exit_before_entry"
    EVENT_BEFORE_ENTRY = "event_before_entry"
    STATUS = "status"
    CODED_ONE_TWO = "coded_one_two"
    NO_EVENTS = "no_events"
    OUTCOME_MISSING = "outcome_missing"


@dataclass(frozen=True, slots=True)
class DataProblem:
    """One problem: the column, how many lines it is about, the first five of them by their number, the sentence."""

    gravity: Grade
    column: str
    code: ProblemCode
    count: int
    rows: tuple[int, ...]
    sentence: str
