"""A linear axis of probabilities from nought to a round end, with few and round ticks.

Unlike the ruler's, its ends follow what is to be shown: it compares predictions with what happened in some people, and
is never one patient's.
"""

from collections.abc import Iterable
from dataclasses import dataclass

_ENDS = (
    (0.01, 0.002),
    (0.02, 0.005),
    (0.05, 0.01),
    (0.1, 0.02),
    (0.15, 0.05),
    (0.2, 0.05),
    (0.3, 0.1),
    (0.4, 0.1),
    (0.5, 0.1),
    (0.6, 0.1),
    (0.8, 0.2),
    (1.0, 0.2),
)
"""Ends of an axis, each with the step of its ticks."""


@dataclass(frozen=True, slots=True)
class LinearAxis:
    """From nought at `start` to `end` at `start + length`; a negative length runs up the page."""

    start: float
    length: float
    end: float
    step: float

    def place(self, probability: float) -> float:
        """Where a probability stands; one beyond an end stands at that end."""
        return self.start + self.length * min(max(probability, 0.0), self.end) / self.end

    @property
    def ticks(self) -> tuple[float, ...]:
        """The probabilities at the ticks, both ends among them."""
        return tuple(place * self.step for place in range(round(self.end / self.step) + 1))

    @property
    def figures(self) -> tuple[str, ...]:
        """What stands at the ticks: percent without the sign."""
        return tuple(f"{round(100.0 * tick, 6):g}" for tick in self.ticks)


def choose_end(values: Iterable[float], limits: Iterable[float] = ()) -> tuple[float, float]:
    """The least end that holds all the values, with the step of its ticks.

    It goes further for `limits`, but not beyond twice that end: else one wide limit would crowd all the rest together.
    """
    least = _hold(max(values, default=0.0))
    wanted = _hold(max([least[0], *limits]))
    return max(pair for pair in _ENDS if pair[0] <= min(wanted[0], 2.0 * least[0]) * (1.0 + 1e-9))


def _hold(most: float) -> tuple[float, float]:
    return next((pair for pair in _ENDS if most <= pair[0] * (1.0 + 1e-9)), _ENDS[-1])
