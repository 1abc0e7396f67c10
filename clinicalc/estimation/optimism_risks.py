"""A binomial fit that can be repeated, and how its coefficients are judged: C, calibration slope and intercept, Brier.

Slope and intercept are those of the outcome on the linear predictor, with the link of the fit (Cox, Biometrika
1958;45:562): 1 and 0 among those a fit by maximum likelihood was made from. Brier, Mon Weather Rev 1950;78:1.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.bootstrap_risks import RiskPeople, find_means, find_turns, ready_risks
from clinicalc.estimation.drawing import repeat_rows
from clinicalc.estimation.drawn_concordance import find_drawn_area
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.optimism import Compared, Lost, Measures, Replicate, lose

Array = NDArray[np.float64]
Codes = NDArray[np.int64]

MOST_STEPS = 25


@dataclass(frozen=True, slots=True, eq=False)
class RepeatedRisks:
    """A fit to `of` with `coefficients` (k,), intercept first.

    `refit`, where it is not by maximum likelihood, takes the rows drawn as people, and for each row
    whose copy it is (person or cluster), and gives coefficients or raises FitRefused. Another process can be sent a
    function of a module, or a `partial` of one.
    """

    of: RiskPeople
    coefficients: Array
    cluster: Codes | None = None
    refit: Callable[[RiskPeople, Codes], Array] | None = None

    @property
    def people(self) -> int:
        """How many there are to draw from."""
        return len(self.of.y)

    @property
    def at_once(self) -> int:
        """Replicates in a block."""
        return 50 if self.refit is None else 5

    def judge_apparent(self) -> Measures:
        """The fit among its own people. Raises FitRefused."""
        (found,) = self._measure(self._predict([self.coefficients]), np.ones((1, self.people)), [self._is_exact])
        if isinstance(found, Lost):
            raise FitRefused(found.code, "the fit's own predictions tell nothing", found.columns)
        return found

    def judge(self, counts: Array) -> tuple[Replicate, ...]:
        """One replicate for each row of counts (B, n)."""
        with np.errstate(all="ignore"):
            found = self._refit_all(counts)
            fitted = [place for place, one in enumerate(found) if not isinstance(one, FitRefused)]
            made = [one for one in found if not isinstance(one, FitRefused)]
            lp = self._predict(made)
            samples = self._measure(lp, counts[fitted], [self._is_exact] * len(made))
            originals = self._measure(lp, np.ones((len(made), self.people)), [False] * len(made))
        judged = dict(zip(fitted, map(_compare, samples, originals), strict=True))
        return tuple(lose(one) if isinstance(one, FitRefused) else judged[place] for place, one in enumerate(found))

    @property
    def _is_exact(self) -> bool:
        """Whether slope and intercept are 1 and 0 by the equations that the coefficients solve."""
        return self.refit is None and self.of.offset is None

    def _refit_all(self, counts: Array) -> list[Array | FitRefused]:
        if self.refit is None:
            return list(ready_risks(self.of, self.coefficients).refit(counts))
        found: list[Array | FitRefused] = []
        for row in counts:
            rows, of = repeat_rows(row), self.of
            drawn = RiskPeople(of.y[rows], of.x[rows], of.link, None if of.offset is None else of.offset[rows])
            try:
                found.append(self.refit(drawn, rows if self.cluster is None else self.cluster[rows]))
            except FitRefused as refused:
                found.append(refused)
        return found

    def _predict(self, coefficients: list[Array]) -> Array:
        """Linear predictors (B, n), column by column, so that people with the same values have the same bits."""
        b = np.array(coefficients).reshape(-1, self.of.x.shape[1] + 1)
        lp = np.repeat(b[:, :1], self.people, axis=1)
        for place in range(self.of.x.shape[1]):
            lp += b[:, place + 1, None] * self.of.x[:, place]
        return lp if self.of.offset is None else lp + self.of.offset

    def _measure(self, lp: Array, counts: Array, exact: list[bool]) -> list[Measures | Lost]:
        y = self.of.y
        slopes = np.array([[0.0, 1.0]] * len(lp))
        left = [place for place, known in enumerate(exact) if not known]
        if left:
            slopes[left] = self._calibrate(lp[left], counts[left])
        errors = find_means(lp, self.of.link) - y
        briers = (counts * errors * errors).sum(axis=1) / counts.sum(axis=1)
        found: list[Measures | Lost] = []
        for place, (intercept, slope) in enumerate(slopes.tolist()):
            if not np.isfinite(slope):
                found.append(Lost(FitFault.NOT_CONVERGED, ()))
                continue
            c = find_drawn_area(y, lp[place], counts[place])
            found.append(Measures(c, slope, intercept, float(briers[place])))
        return found

    def _calibrate(self, lp: Array, counts: Array) -> Array:
        """Intercept and slope (B, 2) of the outcome on each lp (B, n); NaN where there are none."""
        found = np.array([[0.0, 1.0]] * len(lp))
        left, before = np.arange(len(lp)), np.full(len(lp), 1e-300)
        for _ in range(MOST_STEPS):
            own, drawn = lp[left], counts[left]
            slope, bend = find_turns(found[left, :1] + found[left, 1:] * own, self.of.y, self.of.link)
            slope *= drawn
            bend *= drawn
            weighed = bend * own
            score = np.stack([slope.sum(axis=1), (slope * own).sum(axis=1)], axis=1)
            a, b, d = bend.sum(axis=1), weighed.sum(axis=1), (weighed * own).sum(axis=1)
            step = np.stack([d * score[:, 0] - b * score[:, 1], a * score[:, 1] - b * score[:, 0]], axis=1)
            step /= (a * d - b * b)[:, None]
            found[left] += step
            distance = np.abs((step * score).sum(axis=1))
            going = ~(distance * np.minimum(1.0, distance / before) <= 1e-16)
            left, before = left[going], distance[going]
            if not len(left):
                return found
        for place in left:
            found[place] = self._calibrate_one(lp[place], counts[place])
        return found

    def _calibrate_one(self, lp: Array, counts: Array) -> Array:
        rows = counts > 0
        try:
            fit = fit_logistic(self.of.y[rows], lp[rows, None], link=self.of.link, weights=counts[rows])
        except FitRefused:
            return np.full(2, np.nan)
        return fit.coefficients


def _compare(sample: Measures | Lost, original: Measures | Lost) -> Replicate:
    """Both, or the one that could not be had."""
    if isinstance(sample, Lost):
        return sample
    return original if isinstance(original, Lost) else Compared(sample, original)
