"""What the columns of a table of people are: the dictionary that a study file gives, or that is proposed."""

from dataclasses import dataclass
from enum import StrEnum


class Role(StrEnum):
    """What a column is for."""

    VALUE = "value"
    TIME = "time"
    STATUS = "status"
    ENTRY = "entry"
    START = "start"
    END = "end"
    OUTCOME = "outcome"
    PERSON = "person"
    CLUSTER = "cluster"
    BORN = "born"
    IGNORED = "ignored"


@dataclass(frozen=True, slots=True)
class ColumnEntry:
    """One column: `predictor` is the id it is the value of ("" for none), `unit` the UCUM code of its cells.

    An empty `unit` is the predictor's own. `levels` are pairs of an answer's id and the text of the cells, more than
    one pair where several texts mean one answer; an answer that no pair names is written as its id. `missing` are
    texts that mean "not measured", besides empty cells, NA, NaN and a lone point. `reason` says why it was proposed.
    """

    column: str
    role: Role = Role.VALUE
    predictor: str = ""
    unit: str = ""
    levels: tuple[tuple[str, str], ...] = ()
    missing: tuple[str, ...] = ()
    reason: str = ""


class OutcomeKind(StrEnum):
    """Whether what happened is known as a yes or no, or by when."""

    BINARY = "binary"
    TIME_TO_EVENT = "time_to_event"


@dataclass(frozen=True, slots=True)
class OutcomePlan:
    """Which columns hold the outcome ("" for one that is not used), and what the texts of the status mean.

    Binary: `column`, with `event` and `no_event`. Time to event: `time` (and `entry`, where people came under
    observation later than time nought) in `unit`, or the dates `start` and `end`, counted in days; `born` is a date
    of birth from which time then counts, with entry at `start`. `status` with `event`, `censored`, `competing`.
    """

    kind: OutcomeKind
    column: str = ""
    time: str = ""
    status: str = ""
    entry: str = ""
    start: str = ""
    end: str = ""
    born: str = ""
    unit: str = "d"
    event: tuple[str, ...] = ()
    no_event: tuple[str, ...] = ()
    censored: tuple[str, ...] = ()
    competing: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class DataDictionary:
    """Everything that is said about a table: `person` and `cluster` are column names, "" where there are none."""

    file: str
    outcome: OutcomePlan
    columns: tuple[ColumnEntry, ...]
    person: str = ""
    cluster: str = ""
