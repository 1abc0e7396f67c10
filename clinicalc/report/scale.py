"""The ruler's scale: from a probability to a place, even on the model's own link and the same for every patient."""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import Enum, auto
from functools import lru_cache
from itertools import pairwise
from math import log, log1p

from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.prediction.links import Link
from clinicalc.report.shapes import Measure

_UNIT = 10_000.0
"""Ticks are counted in hundredths of a percent, so that no sum of steps drifts."""
_NORMAL = (50, 8_000)
_WIDE = (5, 9_900)
_MAJORS = (50, 100, 200, 500, 1_000, 2_000, 4_000, 6_000, 8_000)
_WIDE_MAJORS = (5, 10, 20, *_MAJORS, 9_900)
# from, to, step of the middle ticks (0 for none), step of the small ones
_STEPS = (
    (5, 10, 0, 1),
    (10, 20, 0, 2),
    (20, 50, 10, 2),
    (50, 100, 0, 10),
    (100, 200, 50, 10),
    (200, 500, 100, 20),
    (500, 1_000, 100, 50),
    (1_000, 2_000, 500, 100),
    (2_000, 8_000, 1_000, 200),
    (8_000, 9_900, 1_000, 200),
)
_LATE_LABELS = (3_000, 5_000)
_LEAST_STEP = 2.6
_LEAST_GAP = 7.0


class TickSize(Enum):
    """How much of a tick: the great ones have a grid line and, where there is room, a label."""

    MAJOR = auto()
    MIDDLE = auto()
    MINOR = auto()


@dataclass(frozen=True, slots=True)
class Tick:
    """A tick at a probability and its place."""

    probability: float
    x: float
    size: TickSize


@dataclass(frozen=True, slots=True)
class Label:
    """The figure under a tick, in percent without the sign; `x` is its middle."""

    text: str
    x: float


@dataclass(frozen=True, slots=True)
class Scale:
    """A scale from `left` on, `width` long: 0.5 to 80 %, or 0.05 to 99 % where it is `wide`."""

    link: Link
    width: float
    wide: bool = False
    left: float = 0.0

    @property
    def ends(self) -> tuple[float, float]:
        """The probabilities at both ends."""
        low, high = _WIDE if self.wide else _NORMAL
        return low / _UNIT, high / _UNIT

    @property
    def words(self) -> str:
        """The scale's reach for people: "0.5 to 80 %"."""
        low, high = self.ends
        return f"{100 * low:g} to {100 * high:g}{NARROW_SPACE}%"

    def side(self, probability: float) -> int:
        """-1 for a probability below the scale, 1 for one above it, else 0."""
        low, high = self.ends
        return (probability > high) - (probability < low)

    def position(self, probability: float) -> float:
        """The x of a probability; one beyond an end stands at that end."""
        low, high = self.ends
        start, stop = on_link(self.link, low), on_link(self.link, high)
        eta = on_link(self.link, min(max(probability, low), high))
        return self.left + self.width * (eta - start) / (stop - start)

    @lru_cache(maxsize=16)  # noqa: B019 (the same few scales for every keystroke)
    def ticks(self) -> tuple[Tick, ...]:
        """All ticks from left to right; between two greater ticks the smaller ones stand all or, too close, none."""
        low, high = _WIDE if self.wide else _NORMAL
        majors = list(_WIDE_MAJORS if self.wide else _MAJORS)
        steps = [step for step in _STEPS if low <= step[0] and step[1] <= high]
        middles = self._fitting(majors, [at for start, end, step, _ in steps for at in _between(start, end, step)])
        greater = sorted(majors + middles)
        minors = self._fitting(greater, [at for start, end, _, step in steps for at in _between(start, end, step)])
        sizes = dict.fromkeys(minors, TickSize.MINOR) | dict.fromkeys(middles, TickSize.MIDDLE)
        sizes |= dict.fromkeys(majors, TickSize.MAJOR)
        return tuple(Tick(at / _UNIT, self._at(at), sizes[at]) for at in sorted(sizes))

    def labels(self, measure: Measure, size: float) -> tuple[Label, ...]:
        """Figures of both ends, of the other majors, of 30 and of 50; one too close to an earlier one is left out."""
        first, *inner, last = _WIDE_MAJORS if self.wide else _MAJORS
        kept: list[tuple[float, float, Label]] = []
        for at in (first, last, *inner, *_LATE_LABELS):
            label = Label(f"{at / 100:g}", self._at(at))
            half = measure(label.text, size) / 2
            left, right = label.x - half, label.x + half
            if all(right + _LEAST_GAP <= other or end + _LEAST_GAP <= left for other, end, _ in kept):
                kept.append((left, right, label))
        return tuple(label for _, _, label in sorted(kept, key=lambda entry: entry[0]))

    def _at(self, hundredths: int) -> float:
        return self.position(hundredths / _UNIT)

    def _fitting(self, greater: list[int], smaller: list[int]) -> list[int]:
        """The smaller ticks of every gap between greater ones in which none is too close to its neighbour."""
        kept = []
        for start, end in pairwise(greater):
            inside = [at for at in smaller if start < at < end]
            places = [self._at(at) for at in (start, *inside, end)]
            if all(right - left >= _LEAST_STEP for left, right in pairwise(places)):
                kept += inside
        return kept


def choose_scale(link: Link, width: float, *probabilities: float, left: float = 0.0) -> Scale:
    """The scale that every patient has, or the wide one where one of these lies outside of it. There is no third."""
    normal = Scale(link, width, left=left)
    return Scale(link, width, wide=True, left=left) if any(map(normal.side, probabilities)) else normal


def on_link(link: Link, probability: float) -> float:
    """A probability strictly between 0 and 1 on its link scale: the log odds, or log(-log(1 - p))."""
    return log(probability / (1.0 - probability)) if link == "logit" else log(-log1p(-probability))


def _between(start: int, end: int, step: int) -> Iterator[int]:
    """The multiples of a step inside; none for a step of nought."""
    if step:
        yield from (at for at in range(start - start % step, end, step) if start < at)
