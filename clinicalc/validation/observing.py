"""What was seen of people by a horizon: how many had the event, the observed risk, that over the predicted one."""

from dataclasses import dataclass, replace
from functools import cached_property
from math import sqrt

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.estimation.calibration_groups import Watched, is_known
from clinicalc.estimation.incidence import Incidence, aalen_johansen
from clinicalc.estimation.people_at_risk import Ties
from clinicalc.estimation.ranks import rank
from clinicalc.estimation.subdistribution import (
    CensoringTies,
    CompetingCohort,
    SubdistributionSets,
    find_subdistribution_sets,
)
from clinicalc.estimation.watching_weights import Known, Watching, find_watching, know_risks, know_times
from clinicalc.validation.intervals import lacking, measure_incidence, measure_ratio, measure_share
from clinicalc.validation.predicted import Outcome, PredictedPeople, YesNo
from clinicalc.validation.validated import Measure, Method, Outcomes

Array = NDArray[np.float64]
Rows = NDArray[np.bool_]
Places = NDArray[np.intp]

_LAST_BITS = 1e-12


@dataclass(frozen=True, eq=False)
class Seen:
    """People with an outcome and, where it has times, the horizon in their unit; sums are made once."""

    predicted: PredictedPeople
    outcome: Outcome
    span: Span | None

    @property
    def people(self) -> int:
        """How many."""
        return len(self.predicted.probability)

    @cached_property
    def outcomes(self) -> Outcomes:
        """What kind of outcome."""
        if isinstance(self.outcome, YesNo):
            return Outcomes.BINARY
        return Outcomes.COMPETING if self.outcome.competing else Outcomes.TIMES

    @property
    def watched(self) -> Watched:
        """The times; asked for only where there are times."""
        assert isinstance(self.outcome, Watched)
        return self.outcome

    @property
    def horizon(self) -> float:
        """In the unit of the times; asked for only where there are times."""
        assert self.span is not None
        return self.span.time

    @property
    def by(self) -> str:
        """ "by 10 years" in a sentence, or nothing."""
        return "" if self.span is None else f" by {self.span.words}"

    @property
    def came_late(self) -> bool:
        """Whether some were first watched after time nought."""
        return isinstance(self.outcome, Watched) and self.outcome.entry is not None

    @cached_property
    def had_event(self) -> Rows:
        """Who was seen to have the event by the horizon, (n,)."""
        if isinstance(self.outcome, YesNo):
            return np.asarray(self.outcome.y == 1, dtype=np.bool_)
        return self.outcome.seen(self.horizon)

    @cached_property
    def competing(self) -> int:
        """How many were seen to have another event by the horizon."""
        if isinstance(self.outcome, YesNo):
            return 0
        return int(((self.outcome.status == 2) & (self.outcome.times <= self.horizon)).sum())

    @cached_property
    def events(self) -> int:
        """How many were seen to have the event by the horizon."""
        return int(self.had_event.sum())

    @cached_property
    def followed(self) -> bool:
        """Whether anything is known of the risk at the horizon."""
        return isinstance(self.outcome, YesNo) or is_known(self.outcome, self.horizon)

    @cached_property
    def expected(self) -> float:
        """The mean predicted risk."""
        return float(self.predicted.probability.mean())

    @cached_property
    def alike(self) -> bool:
        """Whether everybody has the same predicted risk."""
        return float(np.ptp(self.predicted.probability)) == 0.0

    @cached_property
    def ranks(self) -> NDArray[np.int64]:
        """Of the predicted risks."""
        return rank(self.predicted.probability)

    @cached_property
    def watching(self) -> Watching:
        """The chance of still being watched; asked for only where there are times from nought."""
        return find_watching(self.watched.times, self.watched.status)

    @cached_property
    def known(self) -> Known:
        """Outcomes by the horizon with weights; asked for only where nobody came late."""
        if isinstance(self.outcome, YesNo):
            return know_risks(self.outcome.y)
        return know_times(self.watched.times, self.watched.status, self.horizon, self.watching)

    @cached_property
    def counted(self) -> SubdistributionSets:
        """Who counts when in a subdistribution; asked for only of people with other events, in the order of time."""
        cohort = CompetingCohort(self.watched.times, self.watched.status, np.empty((self.people, 0)))
        return find_subdistribution_sets(cohort, Ties.BRESLOW, CensoringTies.EVENT_FIRST)

    @cached_property
    def incidence(self) -> Incidence:
        """The observed risk by the horizon; asked for only where there are times."""
        (found,) = aalen_johansen(self.watched.times, self.watched.status, (self.horizon,), entry=self.watched.entry)
        # after the last of them had the event the sum is 1 but for its last bits
        return replace(found, share=1.0, se=0.0) if found.share > 1.0 - _LAST_BITS else found

    @property
    def incidence_method(self) -> Method:
        """How the observed risk is made."""
        if self.outcomes is Outcomes.BINARY:
            return Method.SHARE
        return Method.AALEN_JOHANSEN if self.outcomes is Outcomes.COMPETING else Method.KAPLAN_MEIER

    @property
    def not_followed(self) -> str:
        """Why nothing is known at the horizon."""
        return f"The last of these people was lost from sight before {self.span.words if self.span else 'the end'}."

    def in_order(self) -> "Seen":
        """The same people in the order of their times: places among sorted times are then found much faster."""
        if isinstance(self.outcome, YesNo) or bool((np.diff(self.outcome.times) >= 0.0).all()):
            return self
        return self.part(np.argsort(self.outcome.times, kind="stable"))

    def part(self, rows: Rows | Places) -> "Seen":
        """Some of them, judged in the same way."""
        return Seen(self.predicted.part(rows), self.outcome.part(rows), self.span)


def observe(seen: Seen) -> Measure:
    """The observed risk: share (Wilson), one minus Kaplan-Meier, or the incidence of Aalen & Johansen (log-log)."""
    if isinstance(seen.outcome, YesNo):
        return measure_share(seen.events, seen.people)
    if not seen.followed:
        return lacking(seen.not_followed, seen.incidence_method)
    return measure_incidence(seen.incidence, seen.incidence_method)


def compare_with_expected(seen: Seen) -> Measure:
    """Observed over mean predicted risk, the predictions taken as known; limits on the log scale.

    The standard error of log O/E is sqrt((1 - share) / events) of a yes or no, else that of the observed risk over it.
    """
    method = seen.incidence_method
    if not seen.followed:
        return lacking(seen.not_followed, method)
    if not seen.expected:
        return lacking("Everybody has a predicted risk of 0.", method)
    if isinstance(seen.outcome, YesNo):
        observed = seen.events / seen.people
        se = sqrt((1.0 - observed) / seen.events) if seen.events else 0.0
    else:
        observed = seen.incidence.share
        se = seen.incidence.se / observed if observed else 0.0
    if not seen.events:
        return Measure(0.0, why=f"Nobody was seen to have the event{seen.by}: no limits follow.", method=method)
    if not se:
        who = f"Everybody had the event{seen.by}: no limits follow."
        return Measure(observed / seen.expected, why=who, method=method)
    return measure_ratio(observed / seen.expected, se, method)
