"""Quantiles of g(eta2) - g(eta1) where the two linear predictors are jointly normal.

P(D <= d) is the integral over eta1 of Phi((g^-1(g(eta1) + d) - E[eta2 | eta1]) / sd(eta2 | eta1)), since given eta1 the
difference rises with eta2. The integral is taken by Gauss-Kronrod panels (7 and 15 points; Kronrod 1965, abscissae of
QUADPACK, Piessens et al. 1983), halved where the two rules disagree; its inverse by Newton steps inside a bracket.
Everything is deterministic.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import erfc, pi, sqrt
from statistics import NormalDist

import numpy as np

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.joint import JointNormal
from clinicalc.prediction.links import Link, complement, difference_between, link_of, probability, slope_at
from clinicalc.prediction.tied_difference import FARTHEST, TiedDifference

_FIRST_PANELS = 10
_AGREED = 1e-10
"""Where the 7-point rule is so near, the 15-point rule is at rounding."""
_NARROWEST = 1e-13
_NO_REMAINDER = 1e-9
"""A remainder so much smaller than the step moves the quantiles by less than the quadrature could tell."""
_STEPS = 200
_TRUSTED = 8
"""So many steps Newton may take; then every other one halves the bracket."""
_REACHED = 1e-6
"""Standard deviations from the wanted one, from where one step of Newton ends at rounding."""
_NEAR_ENOUGH = 1e-14
_MOST_PANELS = 60

_HALF_NODES = (
    0.991455371120812639206854697526329,
    0.949107912342758524526189684047851,
    0.864864423359769072789712788640926,
    0.741531185599394439863864773280788,
    0.586087235467691130294144691693764,
    0.405845151377397166906606412076961,
    0.207784955007898467600689403773245,
)
_HALF_WEIGHTS = (
    0.022935322010529224963732008058970,
    0.063092092629978553290700663189204,
    0.104790010322250183839876322541518,
    0.140653259715525918745189590510238,
    0.169004726639267902826583426598550,
    0.190350578064785409913256402421014,
    0.204432940075298892414161999234649,
)
_MIDDLE_WEIGHT = 0.209482141084727828012999174891714
_HALF_GAUSS = (
    0.129484966168869693270611432679082,
    0.279705391489276667901467771423780,
    0.381830050505118944950369775488975,
)
_MIDDLE_GAUSS = 0.417959183673469387755102040816327

_NODES = np.array([*(-node for node in _HALF_NODES), 0.0, *reversed(_HALF_NODES)])
_WEIGHTS = np.array([*_HALF_WEIGHTS, _MIDDLE_WEIGHT, *reversed(_HALF_WEIGHTS)])
_GAUSS = np.zeros(15)
_GAUSS[1::2] = [*_HALF_GAUSS, _MIDDLE_GAUSS, *reversed(_HALF_GAUSS)]

_NORMAL = NormalDist()
_ROOT_TWO, _ROOT_TWO_PI, _TINY = sqrt(2.0), sqrt(2.0 * pi), 1e-300


def difference_quantiles(link: Link, joint: JointNormal, shares: Sequence[float]) -> tuple[float, ...]:
    """The quantiles of g(eta2) - g(eta1) at each of `shares`, 0 < share < 1; exactly nought where the two are equal."""
    middle = float(difference_between(link, np.array([joint.first]), np.array([joint.second]))[0])
    if joint.step_variance == 0.0 and joint.first == joint.second:
        return (0.0,) * len(shares)
    if joint.variance == 0.0 and joint.step_variance == 0.0:
        return (middle,) * len(shares)
    if _is_tied(joint):
        tied = _tie(link, joint)
        return tuple(_tied_quantile(tied, share, middle) for share in shares)
    if _is_tied(joint.turned):
        # rounding may leave a remainder on one side and none on the other, and nothing may be divided by none
        tied = _tie(link, joint.turned)
        return tuple(-_tied_quantile(tied, 1.0 - share, -middle) for share in shares)
    return _untied_quantiles(link, joint, shares, middle)


def _is_tied(joint: JointNormal) -> bool:
    moved = abs(joint.second - joint.first) + abs(joint.slope - float(np.sqrt(joint.variance)))
    return joint.remainder <= _NO_REMAINDER * moved


def _tie(link: Link, joint: JointNormal) -> TiedDifference:
    return TiedDifference(link, joint.first, joint.second, float(np.sqrt(joint.variance)), joint.slope)


def _tied_quantile(tied: TiedDifference, share: float, middle: float) -> float:
    once = tied.quantile_if_monotone(share)
    return _invert(tied.distribution, share, tied.guess(share), middle) if once is None else once


def _untied_quantiles(link: Link, joint: JointNormal, shares: Sequence[float], middle: float) -> tuple[float, ...]:
    """The quantiles by quadrature over that linear predictor which moves the difference less.

    The other one then decides, and the integrand has no cliff where the first alone would settle the difference.
    """
    turned = joint.turned
    slopes = slope_at(link, np.array([joint.first, joint.second]))
    if slopes[0] * np.sqrt(joint.variance) <= slopes[1] * np.sqrt(turned.variance):
        untied = _Untied(link, joint)
        return tuple(_invert(untied.distribution, share, _first_guess(link, joint, share), middle) for share in shares)
    untied = _Untied(link, turned)
    return tuple(
        -_invert(untied.distribution, 1.0 - share, _first_guess(link, turned, 1.0 - share), -middle) for share in shares
    )


def _first_guess(link: Link, joint: JointNormal, share: float) -> float:
    """The difference at the point that lies as far along its gradient as the share asks for."""
    at = slope_at(link, np.array([joint.first, joint.second]))
    by_first, by_step = float(at[1] - at[0]), float(at[1])
    toward_first = by_first * joint.variance + by_step * joint.with_step
    toward_step = by_first * joint.with_step + by_step * joint.step_variance
    variance = by_first * toward_first + by_step * toward_step
    far = _NORMAL.inv_cdf(share) / sqrt(variance) if variance > 0.0 else 0.0
    first = joint.first + far * toward_first
    second = joint.second + far * (toward_first + toward_step)
    return float(difference_between(link, np.array([first]), np.array([second]))[0])


@dataclass(frozen=True, slots=True, eq=False)
class _Panels:
    """Panels of the standardised eta1 with what does not depend on the difference: arrays of one row a panel."""

    lows: Column
    highs: Column
    half: Column
    weight: Column
    """Density of eta1 at the nodes."""
    share: Column
    rest: Column
    """g(eta1) and 1 - g(eta1)."""
    expected: Column
    """eta2 on average, given eta1."""


def _lay_panels(link: Link, joint: JointNormal, lows: Column, highs: Column) -> _Panels:
    half = 0.5 * (highs - lows)
    nodes = half[:, np.newaxis] * _NODES + 0.5 * (highs + lows)[:, np.newaxis]
    first = joint.first + float(np.sqrt(joint.variance)) * nodes
    return _Panels(
        lows=lows,
        highs=highs,
        half=half,
        weight=np.exp(-0.5 * nodes * nodes) / _ROOT_TWO_PI,
        share=probability(link, first),
        rest=complement(link, first),
        expected=joint.second + joint.slope * nodes,
    )


@dataclass(slots=True)
class _Untied:
    """The distribution of the difference where eta1 does not settle eta2; remembers its panels between calls."""

    link: Link
    joint: JointNormal
    remainder: float
    panels: _Panels

    def __init__(self, link: Link, joint: JointNormal) -> None:
        self.link, self.joint, self.remainder = link, joint, joint.remainder
        ends = np.linspace(-FARTHEST, FARTHEST, _FIRST_PANELS + 1)
        self.panels = _lay_panels(link, joint, ends[:-1], ends[1:])

    @np.errstate(over="ignore")  # where both numbers are nought or one, no density is too large
    def distribution(self, difference: float) -> tuple[float, float]:
        """P(D <= difference) and its derivative."""
        below = density = 0.0
        panels, done = self.panels, list[tuple[Column, Column]]()
        while True:
            share, rate = self._integrands(panels, difference)
            fine = panels.half * (share @ _WEIGHTS)
            kept = (np.abs(fine - panels.half * (share @ _GAUSS)) <= _AGREED) | (panels.half < _NARROWEST)
            below += float(fine[kept].sum())
            density += float((panels.half * (rate @ _WEIGHTS))[kept].sum())
            done.append((panels.lows[kept], panels.highs[kept]))
            if kept.all():
                break
            lows, highs = panels.lows[~kept], panels.highs[~kept]
            between = 0.5 * (lows + highs)
            panels = _lay_panels(
                self.link, self.joint, np.concatenate([lows, between]), np.concatenate([between, highs])
            )
        # the next height needs nearly the same panels; where a cliff moves on, its many small ones would pile up
        if len(done) > 1 and sum(lows.size for lows, _ in done) <= _MOST_PANELS:
            lows, highs = (np.concatenate(ends) for ends in zip(*done, strict=True))
            self.panels = _lay_panels(self.link, self.joint, lows, highs)
        return below, density

    def _integrands(self, panels: _Panels, difference: float) -> tuple[Column, Column]:
        """Density of eta1 times the probability, given it, of a difference so small; and the derivative of that."""
        share = np.maximum(panels.share + difference, 0.0)
        rest = np.maximum(panels.rest - difference, 0.0)
        far = (link_of(self.link, share, rest) - panels.expected) / self.remainder
        within = 0.5 * np.array(list(map(erfc, (far / -_ROOT_TWO).ravel().tolist()))).reshape(far.shape)
        steep = share * rest if self.link == "logit" else -np.log(np.maximum(rest, _TINY)) * rest
        near = np.minimum(np.abs(far), 40.0)  # beyond, the density is nought in double precision
        here = np.exp(-0.5 * near * near) / np.maximum(steep, _TINY)
        return panels.weight * within, panels.weight * here / (self.remainder * _ROOT_TWO_PI)


def _invert(distribution: Callable[[float], tuple[float, float]], share: float, guess: float, middle: float) -> float:
    """Where the distribution reaches the share: Newton on the normal scale, halving where a step leaves the bracket."""
    low, high, wanted = -1.0, 1.0, _NORMAL.inv_cdf(share)
    at = min(max(guess, low), high)
    for turn in range(_STEPS):
        below, density = distribution(at)
        low, high = (at, high) if below < share else (low, at)
        if high - low <= _NEAR_ENOUGH + 1e-12 * abs(at):
            return 0.5 * (low + high)
        if not 0.0 < below < 1.0:
            # beyond what the difference can be: back towards where it is likely to be
            at = 0.5 * (at + middle) if turn < _TRUSTED and low < 0.5 * (at + middle) < high else 0.5 * (low + high)
            continue
        lacking = wanted - _NORMAL.inv_cdf(below)
        # the slope of Phi^-1(P) is density / phi: nearly constant, so that a step or two suffice
        step = lacking * _NORMAL.pdf(wanted - lacking) / max(density, _TINY)
        if abs(lacking) <= _REACHED and abs(step) <= 1e-9 * abs(at - middle) + 1e-12 * abs(at) + _NEAR_ENOUGH:
            return min(max(at + step, -1.0), 1.0)
        trusted = turn < _TRUSTED or turn % 2 == 0
        at = at + step if trusted and low < at + step < high else 0.5 * (low + high)
    return at
