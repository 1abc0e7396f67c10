"""How many have had the event by each horizon where other events come first, and how far one minus Kaplan-Meier is off.

One minus Kaplan-Meier takes other events as the end of watching, as if whoever died could still have the event: it is
above the share of people who have it (Putter, Fiocco, Geskus, Stat Med 2007;26:2389-2430).
"""

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.model import ModelEquation
from clinicalc.development.fit import FitKind
from clinicalc.development.study_method_figures import CompetingFigures
from clinicalc.estimation.hazard_sums import Cohort
from clinicalc.estimation.incidence import aalen_johansen, kaplan_meier
from clinicalc.estimation.screened import Figure, Screen, Screened

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

FAR_ABOVE = 0.1
"""From this share of the incidence on it is a caution that a Cox fit lies above it."""
_ALL = 1.0 - 1e-9


def find_incidences(
    equations: Sequence[ModelEquation],
    cohort: Cohort,
    status: Array,
    strata: Codes,
    times: Sequence[Sequence[float]],
) -> Iterator[CompetingFigures]:
    """One a horizon and equation, in their order; none without competing events. `status` (n,) has 2 for these.

    Where people came late and one of them was at some time watched alone, an event of his, of either kind, takes all of
    the curve with it; for such an equation there is nothing either.
    """
    if not (status == 2).any():
        return
    for place, equation in enumerate(equations):
        rows = strata == place
        own, entry = status[rows], None if cohort.entry is None else cohort.entry[rows]
        at = times[place]
        found = aalen_johansen(cohort.times[rows], own, at, entry=entry)
        others = aalen_johansen(cohort.times[rows], np.where(own > 0, 3.0 - own, 0.0), at, entry=entry)
        naive = kaplan_meier(cohort.times[rows], (own == 1).astype(np.float64), at, entry=entry)
        if entry is not None and max(one.share + other.share for one, other in zip(found, others, strict=True)) > _ALL:
            continue
        for line, one, other, alone in zip(equation.lines, found, others, naive, strict=True):
            yield CompetingFigures(equation.content.id, line.span, one.share, one.se, alone.share, other.share)


def screen_incidences(figures: Sequence[CompetingFigures], kind: FitKind, *, late: bool) -> tuple[Screened, ...]:
    """How far one minus Kaplan-Meier is above at the horizon where it is so most; a caution beside a Cox fit.

    `late` says that people came under observation late, whom no Fine–Gray fit takes here.
    """
    known = [one for one in figures if one.incidence > 0]
    if not known:
        return ()
    worst = max(known, key=lambda one: one.excess)
    counted = kind is FitKind.FINE_GRAY
    several = len({one.equation for one in known}) > 1
    return (
        Screened(
            Grade.CAUTION if not counted and worst.excess >= FAR_ABOVE else Grade.NOTE,
            (),
            Screen.COMPETING_COUNTED if counted else Screen.COMPETING_CENSORED,
            (
                (Figure.SHARE, worst.incidence),
                (Figure.OTHER_SHARE, worst.other),
                (Figure.VALUE, worst.naive),
                (Figure.DIFFERENCE, worst.excess),
            ),
            detail="late" if late else "",
            level=f"{worst.span.words} ({worst.equation})" if several else worst.span.words,
        ),
    )
