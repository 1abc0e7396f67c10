"""A Cox fit repeated on samples of its people: sorted once, ties counted as among the rows drawn.

Each sample begins at the fit to everybody. What does not come to rest at once, or comes near the limits of `columns`,
is given to `fit_cox` on the rows drawn, whose verdict counts; so is everything where people came under observation
late. Products need one thread of BLAS (`one_thread`).
"""

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.bootstrap_risks import are_plain
from clinicalc.estimation.columns import scale_columns
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawing import repeat_rows
from clinicalc.estimation.drawn_times import Codes, DrawnStratum, SortedStratum, draw_stratum, sort_strata
from clinicalc.estimation.people_at_risk import Cohort, Ties

Array = NDArray[np.float64]

MOST_STEPS = 12
TOLERANCE = 1e-16
"""Squared distance to the maximum, in standard errors, that may be left, were the next step no better than the last."""


@dataclass(frozen=True, slots=True, eq=False)
class HazardRefits:
    """What every refit of a cohort begins with: z (p, n) of scaled columns, and b (p,) of the fit to all on them."""

    cohort: Cohort
    ties: Ties
    strata: Codes | None
    z: Array
    begin: Array
    spread: Array
    sorted: tuple[SortedStratum, ...]

    def refit(self, counts: Array) -> Array:
        """The coefficients (p,) of a sample, counts (n,), on the columns given. Raises FitRefused."""
        if self.cohort.entry is None:
            b = self._climb(counts)
            if b is not None:
                return np.asarray(b / self.spread, dtype=np.float64)
        rows = repeat_rows(counts)
        strata = None if self.strata is None else self.strata[rows]
        return fit_cox(pick_people(self.cohort, rows), ties=self.ties, strata=strata).coefficients

    def _climb(self, counts: Array) -> Array | None:
        """b of a sample; None where the steps do not settle it."""
        drawn = draw_strata(self.sorted, self.cohort, counts, self.ties)
        if sum(part.counted.sum() for part in drawn) < len(self.begin):
            return None
        parts = [(part, np.take(self.z, part.rows, axis=1), pick_offset(self.cohort, part)) for part in drawn]
        with np.errstate(all="ignore"):
            null = sum_parts(parts, np.zeros(len(self.begin)))[1]
            found = climb_parts(parts, self.begin)
            if found is None:
                return None
            b, information = found
            mean = self.z @ counts / counts.sum()
            spread = np.sqrt(np.maximum((self.z * self.z) @ counts / counts.sum() - mean * mean, 0.0))
            people = np.array([counts.sum()])
            return b if are_plain((b * spread)[None], information[None], null[None], people)[0] else None


def ready_hazards(cohort: Cohort, coefficients: Array, ties: Ties, strata: Codes | None) -> HazardRefits:
    """Ready to be fitted again; `coefficients` (p,) are the fit to all. Raises FitRefused."""
    columns = scale_columns(cohort.x)
    found = () if cohort.entry is not None else sort_strata(cohort, strata)
    z = np.ascontiguousarray(columns.z.T)
    return HazardRefits(cohort, ties, strata, z, coefficients * columns.spread, columns.spread, found)


def fit_slope(drawn: list[DrawnStratum], cohort: Cohort, lp: Array) -> float | None:
    """The coefficient of lp (n,) among those drawn, without the cohort's offset; None where it has none."""
    away = lp - lp.mean()
    parts: list[Part] = [(part, away[part.rows][None], None) for part in drawn]
    with np.errstate(all="ignore"):
        found = climb_parts(parts, np.ones(1))
    return None if found is None else float(found[0][0])


def draw_strata(strata: tuple[SortedStratum, ...], cohort: Cohort, counts: Array, ties: Ties) -> list[DrawnStratum]:
    """Those drawn of each stratum in which any of them has an event."""
    found = [draw_stratum(stratum, cohort, counts, ties) for stratum in strata]
    return [part for part in found if part is not None]


def pick_people(cohort: Cohort, rows: NDArray[np.intp]) -> Cohort:
    """The people at some places, in that order, as often as they are named."""
    parts = {
        name: None if values is None else values[rows]
        for name, values in (("entry", cohort.entry), ("weights", cohort.weights), ("offset", cohort.offset))
    }
    return replace(cohort, times=cohort.times[rows], events=cohort.events[rows], x=cohort.x[rows], **parts)


def pick_offset(cohort: Cohort, part: DrawnStratum) -> Array | None:
    """The offsets of those drawn."""
    return None if cohort.offset is None else cohort.offset[part.rows]


Part = tuple[DrawnStratum, Array, Array | None]


def climb_parts(parts: list[Part], begin: Array) -> tuple[Array, Array] | None:
    """b (p,) at the maximum and the information before the last step; None where plain Newton steps do not rest."""
    b, before = begin, 1e-300
    for _ in range(MOST_STEPS):
        score, information = sum_parts(parts, b)
        if not (np.isfinite(information).all() and np.isfinite(score).all()):
            return None
        try:
            step = np.linalg.solve(information, score)
        except np.linalg.LinAlgError:
            return None
        distance = abs(float((step * score).sum()))
        b = b + step
        # quadratic convergence leaves far less than this ratio says
        if distance * min(1.0, distance / before) <= TOLERANCE:
            return (b, information) if np.isfinite(b).all() else None
        before = distance
    return None


def sum_parts(parts: list[Part], b: Array) -> tuple[Array, Array]:
    """Score (p,) and information (p, p) of all strata at b, on the z of the parts."""
    score, information = np.zeros(len(b)), np.zeros((len(b), len(b)))
    for part, z, offset in parts:
        lp = b @ z
        if offset is not None:
            lp += offset
        r = part.counts * np.exp(lp - lp.max())
        weighed = z * r
        left0 = part.sum_left(r)
        jumps = part.mass / left0
        gathered = part.run(part.sum_steps(jumps))
        gathered[part.dead] -= part.sum_steps(part.share * jumps)[part.own]
        means = part.sum_left(weighed) * (np.sqrt(part.mass) / left0)
        score += z @ (part.counted - r * gathered)
        information += (weighed * gathered) @ z.T - means @ means.T
    return score, information
