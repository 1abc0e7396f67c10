"""What one fit of a study is made from and what comes of it: its people, their times, their clusters."""

from dataclasses import dataclass

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.cohort.checked import CheckedCohort, Codes, Column, SurvivalOutcome
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_people import FitPeople, equations_of
from clinicalc.development.study_strata import FitPlan
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.hazard_sums import Cohort
from clinicalc.estimation.people_at_risk import round_times

Array = NDArray[np.float64]
ROUND_TIMES = 9
"""Decimals to which times are rounded before ties are looked for, where a study does not say."""


@dataclass(frozen=True, slots=True, eq=False)
class Ground:
    """What one fit of a study is made from."""

    plan: FitPlan
    model: Model
    cohort: CheckedCohort
    people: FitPeople
    course: Course = UNWATCHED

    @property
    def equations(self) -> tuple[ModelEquation, ...]:
        """The equations it fills."""
        return equations_of(self.model, self.plan)

    @property
    def estimated(self) -> tuple[str, ...]:
        """Ids of the terms whose coefficients are estimated, in order; they are those of every equation."""
        return tuple(term.id for term in self.equations[0].terms if not term.fixed)


@dataclass(frozen=True, slots=True, eq=False)
class Estimated:
    """One fit made: a Fit for each of its equations, its figures, and eta but for a constant of each person, (n,)."""

    fits: tuple[Fit, ...]
    figures: FitFigures
    linear_predictor: Column
    remarks: tuple[str, ...]


def times_of(ground: Ground, outcome: SurvivalOutcome, x: Array) -> Cohort:
    """The people of a Cox fit: times rounded, events 1 where the status is 1; competing events are censored."""
    rows, decimals = ground.people.used, ground.plan.table.round_times
    entry = None if outcome.entry is None else outcome.entry[rows]
    if entry is not None and not (entry > 0).any():
        entry = None  # all were there from time nought on, which is no late entry
    cohort = Cohort(outcome.times[rows], (outcome.status[rows] == 1).astype(np.float64), x, entry)
    return round_times(cohort, ROUND_TIMES if isinstance(decimals, UnsetType) else decimals)


def clusters_of(ground: Ground) -> Codes | None:
    """The code of each person's cluster, where the fit is to be robust against them.

    Raises DescriptionRefused where there are too few: over G clusters such a covariance has rank G - 1 at most.
    """
    table = ground.plan.table
    if table.covariance_kind != "cluster" or ground.cohort.cluster is None:
        return None
    codes = ground.cohort.cluster[ground.people.used]
    found, needed = len(np.unique(codes)), len(ground.estimated) + FitKind(table.kind).has_intercept
    if found <= needed:
        others = '"robust"' if table.kind == "fine-gray" else '"robust" or "model"'
        what = (
            f'column "{table.cluster}" has {found} clusters among the people used, and the covariance of {needed} '
            f"coefficients needs more than {needed}, and some tens before it can be trusted. Take another column, or "
            f"say covariance = {others}."
        )
        raise DescriptionRefused(ground.plan.id, (Problem(f"estimate.{ground.plan.id}.cluster", what),))
    return codes
