"""What is to be known about each fit of a study: people, events, what was left out, how well it tells people apart."""

from collections.abc import Mapping
from dataclasses import dataclass

from clinicalc.coefficients.spans import Span
from clinicalc.development.study_method_figures import (
    CompetingFigures,
    ImputationFigures,
    OptimismFigures,
    PenaltyFigures,
)
from clinicalc.estimation.concordance import Concordance
from clinicalc.estimation.sample_size import SampleSize
from clinicalc.estimation.screened import Screened


@dataclass(frozen=True, slots=True)
class HorizonFigures:
    """One horizon of one equation: people it was made from, events by then, people still followed then."""

    equation: str
    span: Span
    people: int
    events: int
    still_at_risk: int


@dataclass(frozen=True, slots=True)
class LeftOut:
    """Who could not be used: how many of all to whom the fit applies, and how many lack each value.

    `missing` has predictor ids, "" for the outcome.
    """

    applicable: int
    left_out: int
    missing: Mapping[str, int]


@dataclass(frozen=True, slots=True)
class FollowUp:
    """Median time to the end of follow-up (reverse Kaplan-Meier; None where it is not reached), and the longest."""

    median: float | None
    longest: float
    unit: str


@dataclass(frozen=True, slots=True)
class FitFigures:
    """One fit of a study, by its id there; `terms` counts the estimated ones, without an intercept.

    `competing` counts competing events, which a Cox fit takes as censored and a Fine–Gray fit counts as such.
    `follow_up` and `horizons` are those of a fit to times; `concordance` is apparent, in the people of the fit, None
    where people came under observation late. `minimum` is the sample needed with the fit's own R2, adjusted for
    optimism; None where it cannot be worked out. `incidences` are one a horizon and equation where there are competing
    events. With `imputed` the log likelihoods are means over the
    sets, coefficients and C are pooled.
    """

    id: str
    equations: tuple[str, ...]
    kind: str
    people: int
    events: int
    competing: int
    terms: int
    left_out: LeftOut
    loglik_null: float
    loglik: float
    concordance: Concordance | None
    follow_up: FollowUp | None
    horizons: tuple[HorizonFigures, ...]
    screened: tuple[Screened, ...]
    minimum: SampleSize | None = None
    penalty: PenaltyFigures | None = None
    imputed: ImputationFigures | None = None
    optimism: OptimismFigures | None = None
    incidences: tuple[CompetingFigures, ...] = ()

    @property
    def events_per_term(self) -> float:
        """Events, or for a binary outcome the rarer of its two answers, for each estimated term."""
        telling = self.events if self.follow_up is not None else min(self.events, self.people - self.events)
        return telling / self.terms
