"""What a search for faults found, and how closely it could have seen."""

from dataclasses import dataclass
from math import exp

from clinicalc.validation.suspected_units import Suspicion
from clinicalc.validation.validated import FaultKind


@dataclass(frozen=True, slots=True, eq=False)
class Finding:
    """One fault before it has words.

    `size` is on the scale of log odds or log hazards: by how much everybody's lies above what was predicted, or that
    of the group above that of the others; for a slope, the slope itself; for a unit 0. `se` is its standard error,
    `people` those of a group, `rest` the shift of everybody that is found beside a group, 0 for none.
    """

    kind: FaultKind
    size: float
    se: float
    p: float | None
    at: str = ""
    label: str = ""
    level: str = ""
    people: int = 0
    rest: float = 0.0
    suspicion: Suspicion | None = None


@dataclass(frozen=True, slots=True)
class GroupSight:
    """A group that was looked at, and the factor by which its risks could be off and be found nine times of ten."""

    label: str
    level: str
    people: int
    factor: float


@dataclass(frozen=True, slots=True)
class CoarseRange:
    """The observed risk at both ends of what coarse times leave open; `times` names these.

    `unsure` says that something was found that does not hold at both ends and as recorded, and is not among findings.
    """

    times: str
    low: float
    high: float
    unsure: bool


@dataclass(frozen=True, slots=True, eq=False)
class Search:
    """`shift` and `slope` are what would be found nine times of ten: log factor for everybody, distance from 1.

    `units` are labels of the numbers that could be held against the model's own people, `blind` of those that could
    not. `why` says why nothing was looked for, "" where it was. `coarse` stands where times are coarse.
    """

    findings: tuple[Finding, ...] = ()
    events: int = 0
    shift: float = float("inf")
    slope: float = float("inf")
    groups: tuple[GroupSight, ...] = ()
    units: tuple[str, ...] = ()
    blind: tuple[str, ...] = ()
    why: str = ""
    coarse: CoarseRange | None = None

    @property
    def shift_factor(self) -> float:
        """How many times too high or too low predictions must be throughout to be found nine times of ten."""
        return exp(min(self.shift, 50.0))
