"""What screening finds of a fit to several sets of filled-in values.

What is missing is looked at among the people as they are, the sample that is needed with the R2 of all sets, and
everything else in each set.
"""

from collections.abc import Iterator, Sequence
from dataclasses import replace

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.development.fit_ground import Estimated, Ground, times_of
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_horizons import require_horizons
from clinicalc.development.study_imputation import Filling
from clinicalc.development.study_screening import Screening, screen_fit
from clinicalc.estimation.screened import Figure, Screen, Screened
from clinicalc.estimation.screening import GRAVEST_FIRST
from clinicalc.estimation.screening_missing import MANY_LEFT_OUT, MUCH

_OF_THE_PEOPLE = (
    Screen.MISSING,
    Screen.MISSING_TOGETHER,
    Screen.MISSING_WITH_OUTCOME,
    Screen.ALL_MISSING,
    Screen.OUTLIERS,
)
_OF_THE_SIZE = (Screen.TOO_MANY_TERMS, Screen.NO_MINIMUM, Screen.BELOW_MINIMUM, Screen.EVENTS_PER_PARAMETER)


def screen_size(ground: Ground, figures: FitFigures, r2: float) -> Screening:
    """What is said of the number of people with the R2 of all sets; each set has an R2, and so a number, of its own."""
    horizon = None
    if isinstance(ground.cohort.outcome, SurvivalOutcome):
        cohort = times_of(ground, ground.cohort.outcome, np.empty((figures.people, 0)))
        strata, unit = ground.people.stratum, ground.cohort.outcome.unit
        horizon = max(require_horizons(ground.plan, ground.equations, cohort, strata, unit)[0])
    screening = screen_fit(ground.model, ground.equations, ground.people, ground.cohort, r2, horizon=horizon)
    return replace(screening, found=tuple(one for one in screening.found if one.code in _OF_THE_SIZE))


def screen_sets(ground: Ground, filling: Filling, found: Sequence[Estimated], size: Screening) -> tuple[Screened, ...]:
    """What is missing among the people as they are; the rest as the first set has it that has it at its gravest."""
    told: dict[tuple[object, ...], Screened] = {}
    for one in found:
        for each in one.figures.screened:
            key = (each.code, each.columns, each.level)
            if each.code in (*_OF_THE_PEOPLE, *_OF_THE_SIZE):
                continue
            if key not in told or GRAVEST_FIRST[each.gravity] < GRAVEST_FIRST[told[key].gravity]:
                told[key] = each
    screened = screen_fit(ground.model, ground.equations, ground.people, ground.cohort).found
    missing = [_eased(each, filling) for each in screened if each.code in _OF_THE_PEOPLE]
    missing = [each for each in missing if each.code is not Screen.MISSING or each.columns[0] not in filling.filled]
    every = (*told.values(), *size.found, *missing, *_screen_filling(ground, filling))
    return tuple(sorted(every, key=lambda one: GRAVEST_FIRST[one.gravity]))


def _eased(found: Screened, filling: Filling) -> Screened:
    """That a value is missing more with the outcome is a note where it is filled in: nobody is left out for it."""
    if found.code is Screen.MISSING_WITH_OUTCOME and found.columns[0] in filling.filled:
        return replace(found, gravity=Grade.NOTE)
    return found


def _screen_filling(ground: Ground, filling: Filling) -> Iterator[Screened]:
    """What was filled in, who was left out all the same, and whether the chains have mixed."""
    people, used = len(ground.people.rows), len(ground.people.used)
    for id, count in filling.filled.items():
        gravity = Grade.CAUTION if count >= MUCH * used else Grade.NOTE
        figures = (*_share(count, used), (Figure.SETS, float(filling.table.sets)))
        yield Screened(gravity, (id,), Screen.FILLED_IN, figures)
    if used < people:
        gravity = Grade.CAUTION if people - used >= MANY_LEFT_OUT * people else Grade.NOTE
        yield Screened(gravity, (), Screen.NOT_FILLED_IN, _share(people - used, people))
    if not filling.settled:
        worst = max(filling.mixing, key=lambda id: filling.mixing[id])
        told = ((Figure.VALUE, filling.mixing[worst]), (Figure.ROUNDS, float(filling.rounds)))
        yield Screened(Grade.CAUTION, (worst,), Screen.NOT_MIXED, told)


def _share(count: int, of: int) -> tuple[tuple[Figure, float], ...]:
    return (Figure.PEOPLE, float(count)), (Figure.OF_PEOPLE, float(of)), (Figure.SHARE, count / of)
