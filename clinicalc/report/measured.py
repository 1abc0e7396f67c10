"""What stands on a ruler, and the same in words: for the lanes' left side, for a screen reader, for a table."""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum

from clinicalc.assessment.numerals import percent, percent_range
from clinicalc.prediction.links import Link
from clinicalc.report.phrases import level_words

_NONE = "–"


class Lane(StrEnum):
    """The lanes from the top, by the name that stands at their left."""

    BAND = "band"
    SPREAD = "Re-measurement spread"
    DECISION = "Decision point"


@dataclass(frozen=True, slots=True)
class Interval:
    """Two probabilities, the lower one first."""

    lower: float
    upper: float


@dataclass(frozen=True, slots=True)
class DecisionPoint:
    """A probability at which the practice acts, and who says so."""

    probability: float
    source: str


@dataclass(frozen=True, slots=True)
class Measured:
    """What is drawn. Without a probability there is no number, and then neither band nor spread."""

    link: Link
    probability: float | None = None
    complement: float | None = None
    band: Interval | None = None
    level: float = 0.95
    spread: Interval | None = None
    decision: DecisionPoint | None = None


@dataclass(frozen=True, slots=True)
class LaneWords:
    """What stands at the left of a lane, on the baseline `y` of a text as large as 15 in lanes of 27."""

    name: str
    figures: str
    y: float


def places(measured: Measured) -> Iterator[float]:
    """The probabilities that the scale has to hold; none without a number."""
    if measured.probability is None:
        return
    yield measured.probability
    for interval in (measured.band, measured.spread):
        if interval is not None:
            yield from (interval.lower, interval.upper)


def lane_words(lane: Lane, measured: Measured, y: float) -> LaneWords:
    """The lane's name and figures: a dash without a number, "no band" for a number without one."""
    known = measured.probability is not None
    match lane:
        case Lane.BAND:
            absent = "no band" if known else _NONE
            figures = absent if measured.band is None or not known else _range(measured.band)
            return LaneWords(f"{level_words(measured.level)} {lane.value}", figures, y)
        case Lane.SPREAD:
            figures = _NONE if measured.spread is None or not known else _range(measured.spread)
        case Lane.DECISION:
            figures = _NONE if measured.decision is None else percent(measured.decision.probability)
    return LaneWords(lane.value, figures, y)


def _range(interval: Interval) -> str:
    return percent_range(interval.lower, interval.upper)


def _number(measured: Measured) -> str:
    return "no number" if measured.probability is None else percent(measured.probability, measured.complement)


def ruler_sentence(measured: Measured, reach: str, lanes: tuple[LaneWords, ...]) -> str:
    """One sentence with the number, the scale's `reach` in words, and every lane that holds something."""
    said = "; ".join(f"{lane.name}: {lane.figures}" for lane in lanes if lane.figures != _NONE)
    number = _number(measured)
    return f"{number[0].upper()}{number[1:]} on a ruler from {reach}{f'. {said}' if said else ''}"


def ruler_table(measured: Measured, lanes: tuple[LaneWords, ...]) -> tuple[tuple[str, ...], ...]:
    """The number and the lanes as rows of name and figures."""
    return (("Probability", _number(measured)), *((lane.name, lane.figures) for lane in lanes))
