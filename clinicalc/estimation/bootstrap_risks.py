"""A binomial fit repeated on samples of its people: weighted Newton steps for many samples at once.

Who was drawn so often counts so often, which is the fit to the rows drawn. All samples begin at the fit to everybody,
so that their first step needs no exponential; sums over people are matrix products over blocks of people that stay in
cache. What does not come to rest at once, or comes near the limits of `columns`, is given to `fit_logistic`, whose
verdict counts. Products need one thread of BLAS (`one_thread`), or two threads would be slower and change last bits.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.binomial import HIGHEST, Link, find_bends, find_slopes
from clinicalc.estimation.columns import FLATTEST, STEEPEST, WIDEST, ScaledColumns, scale_columns
from clinicalc.estimation.drawing import repeat_rows
from clinicalc.estimation.logistic import fit_logistic

Array = NDArray[np.float64]

ROWS = 1024
"""People in a block: with some tens of samples the block's figures stay in cache."""
MOST_STEPS = 10
TOLERANCE = 1e-16
"""Squared distance to the maximum, in standard errors, that may be left, were the next step no better than the last."""
VAGUE = 1e-8
"""Information on a column, for each person drawn, below which the fit itself says whether there is any."""
MOST_PAIRS = 4_000_000
"""Products of two columns that are kept; beyond, they are made anew in every block."""


@dataclass(frozen=True, slots=True, eq=False)
class RiskPeople:
    """The people of a fit: y (n,) 0 or 1, x (n, p) as given, the link, an offset (n,) or None."""

    y: Array
    x: Array
    link: Link
    offset: Array | None = None


@dataclass(frozen=True, slots=True, eq=False)
class RiskRefits:
    """What every refit of `people` begins with; `begin` (k,) is the fit to all, on scaled columns, intercept first."""

    people: RiskPeople
    columns: ScaledColumns
    design: Array
    begin: Array
    bend_null: Array
    pairs: Array | None

    def pairs_of(self, rows: slice) -> Array:
        """The products of two columns of the design, each pair once, of some people."""
        if self.pairs is not None:
            return self.pairs[rows]
        design, upper = self.design[rows], np.triu_indices(self.design.shape[1])
        return design[:, upper[0]] * design[:, upper[1]]

    def refit(self, counts: Array) -> tuple[Array | FitRefused, ...]:
        """For each sample, a row of `counts` (B, n), its coefficients (k,) on the columns given, or why it has none."""
        with np.errstate(all="ignore"):
            first, null = _sum_first(self, counts)
            b, information = _climb(self, counts, first)
            plain = self._find_plain(b, information, null, counts)
            return tuple(
                self._own(b[place]) if plain[place] else self._ask(counts[place]) for place in range(len(counts))
            )

    def _own(self, scaled: Array) -> Array:
        """On the scale of the columns given."""
        slopes = scaled[1:] / self.columns.spread
        return np.append(scaled[0] - (slopes * self.columns.centre).sum(), slopes)

    def _find_plain(self, b: Array, information: Array, null: Array, counts: Array) -> NDArray[np.bool_]:
        """Which samples' fits came to rest within the limits of `columns`, (B,)."""
        events = counts @ self.people.y
        enough = b.shape[1] - 1 <= np.minimum(events, counts.sum(axis=1) - events)
        plain = np.isfinite(b).all(axis=1) & enough
        at_null = _without_intercept(null[plain])
        spread = np.sqrt(np.diagonal(at_null, axis1=1, axis2=2) / null[plain, :1, 0])
        people = counts[plain].sum(axis=1)
        plain[plain] = are_plain(b[plain, 1:] * spread, _without_intercept(information[plain]), at_null, people)
        return np.asarray(plain, dtype=np.bool_)

    def _ask(self, counts: Array) -> Array | FitRefused:
        """The verdict of the fit itself."""
        rows, people = repeat_rows(counts), self.people
        offset = None if people.offset is None else people.offset[rows]
        try:
            fit = fit_logistic(people.y[rows], people.x[rows], link=people.link, offset=offset)
        except FitRefused as refused:
            return refused
        return fit.coefficients


def ready_risks(people: RiskPeople, coefficients: Array) -> RiskRefits:
    """Ready to be fitted again; `coefficients` (p + 1,) are the fit to all of them. Raises FitRefused."""
    columns = scale_columns(people.x)
    begin = np.append(coefficients[0] + (coefficients[1:] * columns.centre).sum(), coefficients[1:] * columns.spread)
    design = np.ascontiguousarray(np.column_stack([np.ones(len(people.y)), columns.z]))
    share, away = float(people.y.mean()), 0.0 if people.offset is None else people.offset - people.offset.mean()
    flat = np.log(share / (1 - share)) if people.link is Link.LOGIT else np.log(-np.log1p(-share))
    bend = find_slopes(design[:, :1], np.array([flat]), people.y, people.link, away)[1]
    upper = np.triu_indices(design.shape[1])
    few = len(design) * len(upper[0]) <= MOST_PAIRS
    pairs = design[:, upper[0]] * design[:, upper[1]] if few else None
    return RiskRefits(people, columns, design, begin, bend, pairs)


def find_means(eta: Array, link: Link) -> Array:
    """The probability at each eta, same shape."""
    if link is Link.LOGIT:
        return np.asarray(1 / (1 + np.exp(-eta)), dtype=np.float64)
    return np.asarray(-np.expm1(-np.exp(np.minimum(eta, HIGHEST))), dtype=np.float64)


def find_turns(eta: Array, y: Array, link: Link) -> tuple[Array, Array]:
    """The slope of the log likelihood by eta, and its curvature, for each; y (n,), eta (B, n)."""
    if link is Link.LOGIT:
        p = find_means(eta, link)
        return y - p, p * (1 - p)
    hazard = np.exp(np.minimum(eta, HIGHEST))
    odds = 1 / np.expm1(np.minimum(hazard, HIGHEST))
    dead = y == 1
    bend = np.where(dead, np.maximum(hazard * odds * (hazard * (1 + odds) - 1), 0.0), hazard)
    return hazard * np.where(dead, odds, -1.0), bend


def _sum_first(ready: RiskRefits, counts: Array) -> tuple[tuple[Array, Array], Array]:
    """Slope and information of each sample at the fit to all, and its information without slopes."""
    people, k = ready.people, ready.design.shape[1]
    away = 0.0 if people.offset is None else people.offset
    slope = find_slopes(ready.design, ready.begin, people.y, people.link, away)[0]
    bend = find_bends(ready.design, ready.begin, people.y, people.link, away)
    upper = np.triu_indices(k)
    total = np.zeros((len(counts), k + 2 * len(upper[0])))
    for rows in _blocks(len(people.y)):
        design, pairs = ready.design[rows], ready.pairs_of(rows)
        held = np.hstack([design * slope[rows, None], pairs * bend[rows, None], pairs * ready.bend_null[rows, None]])
        total += counts[:, rows] @ held
    middle = k + len(upper[0])
    return (total[:, :k], _fill(total[:, k:middle], upper)), _fill(total[:, middle:], upper)


def _climb(ready: RiskRefits, counts: Array, first: tuple[Array, Array]) -> tuple[Array, Array]:
    """b (B, k) of each sample, NaN where it does not rest, and its information (B, k, k) before the last step."""
    b = np.repeat(ready.begin[None], len(counts), axis=0)
    left, before = np.arange(len(counts)), np.full(len(counts), 1e-300)
    kept = np.array(first[1])
    slope, information = first
    for _ in range(MOST_STEPS):
        step = _solve(information, slope)
        distance = (step * slope).sum(axis=1)
        b[left] += step
        kept[left] = information
        # quadratic convergence leaves far less than this ratio says
        ahead = np.abs(distance) * np.minimum(1.0, np.abs(distance) / before)
        lost = ~np.isfinite(distance)
        b[left[lost]] = np.nan
        going = (ahead > TOLERANCE) & ~lost
        left, before = left[going], np.abs(distance[going])
        if not len(left):
            return b, kept
        slope, information = _sum_at(ready, counts if len(left) == len(counts) else counts[left], b[left])
    b[left] = np.nan
    return b, kept


def _solve(information: Array, slope: Array) -> Array:
    """The Newton step of each sample; NaN where its information has no inverse."""
    try:
        return np.asarray(np.linalg.solve(information, slope[:, :, None])[:, :, 0], dtype=np.float64)
    except np.linalg.LinAlgError:
        step = np.full_like(slope, np.nan)
        for place in range(len(slope)):
            if np.linalg.matrix_rank(information[place]) == slope.shape[1]:
                step[place] = np.linalg.solve(information[place], slope[place])
        return step


def _sum_at(ready: RiskRefits, counts: Array, b: Array) -> tuple[Array, Array]:
    """Slope (B, k) and information (B, k, k) of each sample at its own b."""
    people, k = ready.people, b.shape[1]
    upper = np.triu_indices(k)
    slopes, bends = np.zeros((len(b), k)), np.zeros((len(b), len(upper[0])))
    for rows in _blocks(len(people.y)):
        design, drawn = ready.design[rows], counts[:, rows]
        eta = b @ design.T
        if people.offset is not None:
            eta += people.offset[rows]
        slope, bend = find_turns(eta, people.y[rows], people.link)
        slope *= drawn
        bend *= drawn
        slopes += slope @ design
        bends += bend @ ready.pairs_of(rows)
    return slopes, _fill(bends, upper)


def _fill(halves: Array, upper: tuple[NDArray[np.intp], ...]) -> Array:
    """Symmetric matrices (B, k, k) from their upper halves."""
    k = int(upper[0].max()) + 1
    whole = np.empty((len(halves), k, k))
    whole[:, upper[0], upper[1]] = halves
    whole[:, upper[1], upper[0]] = halves
    return whole


def are_plain(scaled: Array, information: Array, null: Array, people: Array) -> NDArray[np.bool_]:
    """Which of B fits are clear of every limit of `columns`: not flat at 0, neither steep nor wide at b (B, p).

    `scaled` are of columns with a spread of 1 in the sample, the informations (B, p, p) of columns with a spread of 1
    among all; `people` (B,) are drawn. Who is not clear of a limit is not beyond it: that is for the fit itself to say.
    """
    size = np.sqrt(np.diagonal(null, axis1=1, axis2=2))
    alike = null / (size[:, :, None] * size[:, None, :])
    plain = np.isfinite(alike).all(axis=(1, 2)) & np.isfinite(information).all(axis=(1, 2))
    # what is left of a column without anybody who differs is rounding
    plain &= (size * size > VAGUE * people[:, None]).all(axis=1)
    good = np.flatnonzero(plain)
    if not len(good):
        return np.asarray(plain, dtype=np.bool_)
    plain[good] = np.linalg.eigvalsh(alike[good])[:, 0] > 10 * FLATTEST
    good = np.flatnonzero(plain)
    inverse = np.diagonal(np.linalg.inv(alike[good]), axis1=1, axis2=2)
    try:
        own = np.linalg.inv(information[good] / (size[good, :, None] * size[good, None, :]))
    except np.linalg.LinAlgError:
        return np.zeros(len(plain), dtype=np.bool_)
    wide = np.sqrt(np.abs(np.diagonal(own, axis1=1, axis2=2))) > WIDEST * np.sqrt(inverse)
    steep = np.abs(scaled[good]) > STEEPEST * np.sqrt(inverse)
    plain[good] = ~(wide | steep).any(axis=1)
    return np.asarray(plain, dtype=np.bool_)


def _without_intercept(information: Array) -> Array:
    """The informations on the slopes once the intercept is estimated too, (B, p, p)."""
    cross = information[:, 0, 1:]
    lost = cross[:, :, None] * cross[:, None, :] / information[:, :1, :1]
    return np.asarray(information[:, 1:, 1:] - lost, dtype=np.float64)


def _blocks(people: int) -> list[slice]:
    return [slice(begin, min(begin + ROWS, people)) for begin in range(0, people, ROWS)]
