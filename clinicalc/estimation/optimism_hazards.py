"""A fit to times that can be repeated, and how its coefficients are judged: C, slope, intercept, Brier at a horizon.

The slope is that of the same kind of fit on the linear predictor alone; the intercept ln(O/E), O the events by the
horizon and E the hazard gathered by everybody until then (Poisson: Crowson, Atkinson & Therneau, Stat Methods Med Res
2016;25:1692). Baselines are those of the people the coefficients come from. Where people came under observation late
there are no C and no Brier score; a subdistribution has no intercept.
"""

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.bootstrap_hazards import HazardRefits, pick_people, ready_hazards
from clinicalc.estimation.drawing import repeat_rows
from clinicalc.estimation.drawn_concordance import ComparedStratum, find_drawn_c, order_people
from clinicalc.estimation.drawn_times import Codes, SortedStratum, sort_strata
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.fine_gray import fit_fine_gray
from clinicalc.estimation.hazard_views import CompetingView, Curve, HazardView, pick_competing, view_drawn
from clinicalc.estimation.optimism import Compared, Measures, Replicate, lose
from clinicalc.estimation.people_at_risk import Cohort, Ties
from clinicalc.estimation.squared_errors import find_brier
from clinicalc.estimation.subdistribution import CensoringTies, CompetingCohort
from clinicalc.estimation.watching_weights import know_times

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Scene:
    """The people once and for all: as they are compared and watched, and how any sample of them is seen."""

    times: Array
    status: Array
    entry: Array | None
    strata: Codes
    horizon: float
    compared: tuple[ComparedStratum, ...]
    competing: bool
    view: Callable[[Array], HazardView]

    def measure(self, lp: Array, curves: tuple[Curve, ...], counts: Array, slope: float) -> Measures:
        """How lp and baselines do among those drawn. Raises FitRefused."""
        gathered = np.zeros((2, len(lp)))
        for curve in curves:
            own = np.flatnonzero(self.strata == curve.code)
            gathered[0, own] = curve.at(np.array([self.horizon]))[0]
            gathered[1, own] = curve.at(np.minimum(self.times[own], self.horizon))
            if self.entry is not None:
                gathered[1, own] -= curve.at(np.minimum(self.entry[own], self.horizon))
        intercept = None
        if not self.competing:
            expected = float((counts * gathered[1] * np.exp(lp)).sum())
            seen = float(counts[(self.status == 1) & (self.times <= self.horizon)].sum())
            if not (seen > 0 and 0 < expected < np.inf):
                raise refuse_fit(FitFault.NO_EVENTS)
            intercept = float(np.log(seen / expected))
        if self.entry is not None:
            return Measures(None, slope, intercept, None)
        rows = repeat_rows(counts)
        known = know_times(self.times[rows], self.status[rows], self.horizon)
        brier = find_brier(known, -np.expm1(-gathered[0] * np.exp(lp))[rows])
        return Measures(find_drawn_c(self.compared, lp, counts), slope, intercept, brier)


@dataclass(frozen=True, slots=True, eq=False)
class RepeatedHazards:
    """A Cox fit to `of` with `coefficients` (p,), judged up to `horizon`.

    `refit`, where it is not by maximum likelihood, takes the rows drawn with their strata, and for each row
    whose copy it is (person or cluster), and gives coefficients or raises FitRefused. Another process can be sent a
    function of a module, or a `partial` of one.
    """

    of: Cohort
    coefficients: Array
    ties: Ties
    horizon: float
    strata: Codes | None = None
    cluster: Codes | None = None
    refit: Callable[[Cohort, Codes | None, Codes], Array] | None = None

    @property
    def people(self) -> int:
        """How many there are to draw from."""
        return len(self.of.times)

    @property
    def at_once(self) -> int:
        """Replicates in a block."""
        return 5

    def judge_apparent(self) -> Measures:
        """The fit among its own people. Raises FitRefused."""
        return _judge_apparent(self._scene(), self._predict(self.coefficients), self._is_exact)

    def judge(self, counts: Array) -> tuple[Replicate, ...]:
        """One replicate for each row of counts (B, n)."""
        ready = ready_hazards(self.of, self.coefficients, self.ties, self.strata) if self.refit is None else None
        found = (self._coefficients(ready, row) for row in counts)
        return tuple(_judge(self._scene(), self._predict, found, counts, self._is_exact))

    @property
    def _is_exact(self) -> bool:
        """Whether the slope is 1 by the equations that the coefficients solve."""
        return self.refit is None and self.of.offset is None

    def _coefficients(self, ready: HazardRefits | None, counts: Array) -> Array | FitRefused:
        try:
            if ready is not None:
                return ready.refit(counts)
            assert self.refit is not None
            rows = repeat_rows(counts)
            strata = None if self.strata is None else self.strata[rows]
            return self.refit(pick_people(self.of, rows), strata, rows if self.cluster is None else self.cluster[rows])
        except FitRefused as refused:
            return refused

    def _scene(self) -> Scene:
        of, strata = self.of, self.strata
        rows: tuple[SortedStratum, ...] = () if of.entry is not None else sort_strata(of, strata)
        return Scene(
            times=of.times,
            status=of.events,
            entry=of.entry,
            strata=np.zeros(len(of.times), dtype=np.int64) if strata is None else strata,
            horizon=self.horizon,
            compared=order_people(of.times, of.events, strata),
            competing=False,
            view=lambda counts: view_drawn(rows, of, self.ties, strata, counts),
        )

    def _predict(self, b: Array) -> Array:
        return predict_centred(self.of.x, b, self.of.offset)


@dataclass(frozen=True, slots=True, eq=False)
class RepeatedSubdistribution:
    """A Fine–Gray fit to `of` with `coefficients` (p,), judged up to `horizon`; who had another event is last in C."""

    of: CompetingCohort
    coefficients: Array
    horizon: float
    ties: Ties = Ties.BRESLOW
    censoring: CensoringTies = CensoringTies.EVENT_FIRST
    cluster: Codes | None = None

    @property
    def people(self) -> int:
        """How many there are to draw from."""
        return len(self.of.times)

    @property
    def at_once(self) -> int:
        """Replicates in a block."""
        return 5

    def judge_apparent(self) -> Measures:
        """The fit among its own people. Raises FitRefused."""
        return _judge_apparent(self._scene(), self._predict(self.coefficients), self.of.offset is None)

    def judge(self, counts: Array) -> tuple[Replicate, ...]:
        """One replicate for each row of counts (B, n)."""
        found = (self._coefficients(row) for row in counts)
        return tuple(_judge(self._scene(), self._predict, found, counts, self.of.offset is None))

    def _coefficients(self, counts: Array) -> Array | FitRefused:
        drawn = pick_competing(self.of, repeat_rows(counts))
        try:
            return fit_fine_gray(drawn, ties=self.ties, censoring=self.censoring, start=self.coefficients).coefficients
        except FitRefused as refused:
            return refused

    def _scene(self) -> Scene:
        of = self.of
        waiting = of.as_waiting
        return Scene(
            times=of.times,
            status=of.status,
            entry=None,
            strata=np.zeros(len(of.times), dtype=np.int64),
            horizon=self.horizon,
            compared=order_people(waiting.times, waiting.events),
            competing=True,
            view=lambda counts: CompetingView(of, self.ties, self.censoring, counts),
        )

    def _predict(self, b: Array) -> Array:
        return predict_centred(self.of.x, b, self.of.offset)


def predict_centred(x: Array, b: Array, offset: Array | None) -> Array:
    """The linear predictor (n,) about its mean, column by column, so that the same values have the same bits."""
    lp = np.zeros(len(x)) if offset is None else offset.copy()
    for place, slope in enumerate(b):
        lp += x[:, place] * slope
    return np.asarray(lp - lp.mean(), dtype=np.float64)


def _judge_apparent(scene: Scene, lp: Array, exact: bool) -> Measures:
    counts = np.ones(len(lp))
    own = scene.view(counts)
    return scene.measure(lp, own.curves(lp), counts, 1.0 if exact else own.slope(lp))


def _judge(
    scene: Scene,
    predict: Callable[[Array], Array],
    coefficients: Iterator[Array | FitRefused],
    counts: Array,
    exact: bool,
) -> Iterator[Replicate]:
    """One replicate for each row of counts (B, n) and its coefficients."""
    everybody = np.ones(counts.shape[1])
    all_of_them = scene.view(everybody)
    for row, found in zip(counts, coefficients, strict=True):
        if isinstance(found, FitRefused):
            yield lose(found)
            continue
        try:
            # figures out of the range of numbers are refused by what comes of them
            with np.errstate(all="ignore"):
                lp = predict(found)
                drawn = scene.view(row)
                curves = drawn.curves(lp)
                sample = scene.measure(lp, curves, row, 1.0 if exact else drawn.slope(lp))
                original = scene.measure(lp, curves, everybody, all_of_them.slope(lp))
        except FitRefused as refused:
            yield lose(refused)
            continue
        yield Compared(sample, original)
