"""What someone who rebuilds a band adds to the coefficient file: what is printed elsewhere, and what was chosen."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from enum import StrEnum

from clinicalc.covariates.transforms import Column

FEWEST_PEOPLE = 20_000


class SurvivalLimits(StrEnum):
    """The scale on which a printed Kaplan-Meier interval was made symmetric."""

    LOG_LOG = "log-log"
    LOG = "log"
    PLAIN = "plain"


@dataclass(frozen=True, slots=True)
class EquationPlan:
    """What is added for one equation: how many people it was fitted to, and figures by term id on the link scale.

    The standard errors count instead of printed intervals; the means are published ones of the terms as computed.
    """

    equation: str
    people: int | None = None
    standard_errors: Mapping[str, float] = field(default_factory=dict)
    means: Mapping[str, float] = field(default_factory=dict)


@dataclass(frozen=True, slots=True, eq=False)
class ReferenceRows:
    """Reference people one by one: columns by predictor id in the file's units (see `reference_people.take_rows`)."""

    columns: Mapping[str, Column]
    source: str


@dataclass(frozen=True, slots=True)
class StatedPatient:
    """A patient for whom other assumptions are tried: values in the file's units, answers by their ids."""

    words: str
    values: Mapping[str, float | str]


@dataclass(frozen=True, slots=True, eq=False)
class ReconstructionPlan:
    """How a band is to be rebuilt.

    With `rows` these are the reference people; else `people` are drawn with `seed` from the described population; and
    where nothing is described, the published means of `equations` give the rougher form. `remarks` are sentences to be
    kept with the band, such as where a population was taken from; `patients` are the cases of its sensitivity.
    """

    seed: int
    people: int = 100_000
    rows: ReferenceRows | None = None
    equations: tuple[EquationPlan, ...] = ()
    survival_limits: SurvivalLimits = SurvivalLimits.LOG_LOG
    remarks: tuple[str, ...] = ()
    patients: tuple[StatedPatient, ...] = ()

    def of(self, equation: str) -> EquationPlan:
        """What is planned for an equation; an empty plan where nothing is."""
        return next((plan for plan in self.equations if plan.equation == equation), EquationPlan(equation))
