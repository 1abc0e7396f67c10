"""What the methods beside the plain fit came to: penalty, imputation, optimism, competing events, as plain values."""

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum

from clinicalc.coefficients.spans import Span


class Penalty(StrEnum):
    """What is taken off the likelihood so that coefficients stay finite or small."""

    FIRTH = "firth"
    RIDGE = "ridge"


@dataclass(frozen=True, slots=True)
class PenaltyFigures:
    """How a fit was penalised.

    `strength` is the lambda of a ridge, `chosen` says that it was found by cross-validation and not stated; `degrees`
    are effective degrees of freedom of the slopes, of Firth's penalty just their number. `mean_predicted` and
    `observed` are shares of the people of the fit, None where there is no such thing (times to an event). Where it was
    chosen in each of several sets of filled-in values, `strength` is the mean over them and `over_sets` the weakest and
    the strongest.
    """

    kind: Penalty
    strength: float | None
    chosen: bool
    degrees: float
    mean_predicted: float | None = None
    observed: float | None = None
    over_sets: tuple[float, float] | None = None

    @property
    def chosen_anew(self) -> str:
        """What follows "chosen by 10-fold cross-validation" where that was done in each set; else nothing."""
        if self.over_sets is None:
            return ""
        low, high = self.over_sets
        return f" in each set (the mean; {low:.3g} to {high:.3g})"


@dataclass(frozen=True, slots=True)
class PooledTerm:
    """One coefficient over the imputed sets: degrees of freedom (Barnard & Rubin), share of missing information."""

    term: str
    degrees: float
    missing_information: float


@dataclass(frozen=True, slots=True)
class ImputationFigures:
    """What was filled in, and how well the chains mixed.

    `filled` counts by predictor id. `rounds` are those run before a set was taken, at most `most_rounds`. `mixing` is
    the largest ratio of Gelman & Rubin over the columns filled in, of `worst` (predictor id); `settled` says that it is
    below the limit. `not_filled` are people left out all the same, by the id of what they lack.
    """

    sets: int
    rounds: int
    seed: int
    filled: Mapping[str, int]
    not_filled: Mapping[str, int]
    terms: tuple[PooledTerm, ...]
    mixing: float
    worst: str
    settled: bool


class Statistic(StrEnum):
    """What the bootstrap corrects for optimism."""

    C = "c"
    SLOPE = "slope"
    INTERCEPT = "intercept"
    BRIER = "brier"


@dataclass(frozen=True, slots=True)
class Corrected:
    """A statistic in the people of the fit, its mean optimism over the replicates, and the difference of the two."""

    statistic: Statistic
    apparent: float
    optimism: float
    corrected: float


@dataclass(frozen=True, slots=True)
class LostReplicates:
    """Replicates that could not be fitted: code of the reason, how many, and the terms at fault, most often first."""

    code: str
    count: int
    terms: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class OptimismFigures:
    """Internal validation by bootstrap; `span` is the horizon of Brier score and intercept, None without a time."""

    replicates: int
    used: int
    seed: int
    figures: tuple[Corrected, ...]
    lost: tuple[LostReplicates, ...]
    span: Span | None = None


@dataclass(frozen=True, slots=True)
class CompetingFigures:
    """At one horizon of one equation: the share who have had the event by then where other events come first.

    `incidence` is that of Aalen and Johansen with its standard error, `naive` one minus Kaplan-Meier with competing
    events taken as censored, which is above it; `other` the share with a competing event.
    """

    equation: str
    span: Span
    incidence: float
    se: float
    naive: float
    other: float

    @property
    def excess(self) -> float:
        """How far one minus Kaplan-Meier lies above, as a share of the incidence; 0 where nothing has happened."""
        return self.naive / self.incidence - 1 if self.incidence > 0 else 0.0
