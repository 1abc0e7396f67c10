"""People with times, as often as each was drawn: the slope of a linear predictor among them, and their baselines.

For Cox fits without late entry from one sorting (`drawn_times`); for late entry and for subdistributions from the rows
drawn, at the price of a sorting for each sample.
"""

from dataclasses import dataclass, replace
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.bootstrap_hazards import draw_strata, fit_slope, pick_people
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawing import repeat_rows
from clinicalc.estimation.drawn_times import Codes, DrawnStratum, SortedStratum
from clinicalc.estimation.fine_gray import CompetingCohort, fit_fine_gray
from clinicalc.estimation.people_at_risk import Cohort, Ties, find_risk_sets
from clinicalc.estimation.subdistribution import CensoringTies, find_subdistribution_sets

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """The hazard gathered by each event time of a stratum, of somebody with a linear predictor of 0."""

    code: int
    when: Array
    gathered: Array

    def at(self, times: Array) -> Array:
        """What is gathered up to and including each of the times."""
        return np.append(0.0, self.gathered)[np.searchsorted(self.when, times, side="right")]


class HazardView(Protocol):
    """Some people; lp (n,) is that of everybody they were drawn from."""

    def slope(self, lp: Array) -> float:
        """The coefficient of lp among them. Raises FitRefused."""

    def curves(self, lp: Array) -> tuple[Curve, ...]:
        """The baseline of each stratum in which any of them has an event."""


@dataclass(frozen=True, slots=True, eq=False)
class DrawnView:
    """Those drawn from people sorted once; `codes` are the strata of the sorted ones."""

    cohort: Cohort
    ties: Ties
    strata: Codes | None
    counts: Array
    parts: list[DrawnStratum]

    def slope(self, lp: Array) -> float:
        """The coefficient of lp among them. Raises FitRefused."""
        found = fit_slope(self.parts, self.cohort, lp)
        return RowsView(self.cohort, self.ties, self.strata, self.counts).slope(lp) if found is None else found

    def curves(self, lp: Array) -> tuple[Curve, ...]:
        """The baseline of each stratum in which any of them has an event."""
        found = []
        for part in self.parts:
            left = part.sum_left(part.counts * np.exp(lp[part.rows]))
            steps = part.sum_steps(part.mass / left)[::-1]
            code = 0 if self.strata is None else int(self.strata[part.rows[0]])
            found.append(Curve(code, part.when[::-1], np.cumsum(steps)))
        return tuple(found)


@dataclass(frozen=True, slots=True, eq=False)
class RowsView:
    """The rows drawn, each as often as it was."""

    cohort: Cohort
    ties: Ties
    strata: Codes | None
    counts: Array

    def slope(self, lp: Array) -> float:
        """The coefficient of lp among them. Raises FitRefused."""
        rows = repeat_rows(self.counts)
        people = replace(pick_people(self.cohort, rows), x=lp[rows, None], offset=None)
        strata = None if self.strata is None else self.strata[rows]
        return float(fit_cox(people, ties=self.ties, strata=strata).coefficients[0])

    def curves(self, lp: Array) -> tuple[Curve, ...]:
        """The baseline of each stratum in which any of them has an event."""
        rows, found = repeat_rows(self.counts), []
        codes = np.zeros(len(rows), dtype=np.int64) if self.strata is None else self.strata[rows]
        for code in np.unique(codes):
            own = rows[codes == code]
            sets = find_risk_sets(pick_people(self.cohort, own), self.ties)
            if len(sets.when):
                steps = sets.sum_steps(sets.mass / sets.sum_left(np.exp(lp[own])))
                found.append(Curve(int(code), sets.when, np.cumsum(steps)))
        return tuple(found)


@dataclass(frozen=True, slots=True, eq=False)
class CompetingView:
    """The rows drawn, each as often as it was, where other events come first."""

    cohort: CompetingCohort
    ties: Ties
    censoring: CensoringTies
    counts: Array

    def slope(self, lp: Array) -> float:
        """The coefficient of lp among them. Raises FitRefused."""
        rows = repeat_rows(self.counts)
        people = replace(pick_competing(self.cohort, rows), x=lp[rows, None], offset=None)
        return float(fit_fine_gray(people, ties=self.ties, censoring=self.censoring).coefficients[0])

    def curves(self, lp: Array) -> tuple[Curve, ...]:
        """The baseline of the subdistribution."""
        rows = repeat_rows(self.counts)
        sets = find_subdistribution_sets(pick_competing(self.cohort, rows), self.ties, self.censoring)
        steps = sets.sum_steps(sets.mass / sets.sum_left(np.exp(lp[rows])))
        return (Curve(0, sets.when, np.cumsum(steps)),)


def view_drawn(
    sorted_strata: tuple[SortedStratum, ...], cohort: Cohort, ties: Ties, strata: Codes | None, counts: Array
) -> HazardView:
    """Those drawn, by the quicker way where there is one."""
    if cohort.entry is not None:
        return RowsView(cohort, ties, strata, counts)
    return DrawnView(cohort, ties, strata, counts, draw_strata(sorted_strata, cohort, counts, ties))


def pick_competing(cohort: CompetingCohort, rows: NDArray[np.intp]) -> CompetingCohort:
    """The people at some places, in that order, as often as they are named."""
    return CompetingCohort(
        cohort.times[rows],
        cohort.status[rows],
        cohort.x[rows],
        None if cohort.weights is None else cohort.weights[rows],
        None if cohort.offset is None else cohort.offset[rows],
    )
