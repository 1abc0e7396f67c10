"""What stands on a ruler, and the same in words: for the lanes' left side, for a screen reader, for a table."""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from clinicalc.assessment.numerals import percent, percent_in_full, percent_range
from clinicalc.prediction.links import Link, link_of
from clinicalc.report.phrases import level_words

_NONE = "–"
APPROXIMATE = ", approximate"
"""After the name of a band that is rebuilt from printed intervals."""
MOST_DECISIONS = 3
"""Lanes for decision points: eight may hold at once, and the ruler would be longer than the page is high."""


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
    """A probability at which the practice acts, and what it is called or who says so, in a few words."""

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
    decisions: tuple[DecisionPoint, ...] = ()
    """In order of probability. Those of `drawn_decisions` are drawn; all stand in the table."""
    approximate: bool = False
    """Whether the band is rebuilt from printed intervals; its name says so wherever it stands."""
    shown: str = ""
    """The number as it is written elsewhere, on its side of every decision point; "" for one decimal."""


@dataclass(frozen=True, slots=True)
class LaneRow:
    """One lane as it is drawn; `decision` is the point that stands in it."""

    lane: Lane
    decision: DecisionPoint | None = None


@dataclass(frozen=True, slots=True)
class LaneWords:
    """What stands at the left of a lane, on the baseline `y` of a text as large as 15 in lanes of 27.

    `detail` is what the lane says inside of itself, for those who only hear or read the words.
    """

    name: str
    figures: str
    y: float
    detail: str = ""


def drawn_decisions(measured: Measured) -> tuple[DecisionPoint, ...]:
    """The points that have a lane: the `MOST_DECISIONS` nearest to the number on the link scale, in their order.

    Without a number the lowest ones.
    """
    points, number = measured.decisions, measured.probability
    if number is None or len(points) <= MOST_DECISIONS:
        return points[:MOST_DECISIONS]
    rest = 1.0 - number if measured.complement is None else measured.complement
    at = link_of(measured.link, np.array([number]), np.array([rest]))
    stated = np.array([point.probability for point in points])
    nearest = np.argsort(np.abs(link_of(measured.link, stated, 1.0 - stated) - at), kind="stable")[:MOST_DECISIONS]
    return tuple(points[place] for place in sorted(nearest))


def lane_rows(lanes: tuple[Lane, ...], measured: Measured) -> tuple[LaneRow, ...]:
    """The lanes to be drawn: one for each decision point, and one that stays empty where there is none."""
    rows: list[LaneRow] = []
    for lane in lanes:
        if lane is Lane.DECISION and measured.decisions:
            rows += [LaneRow(lane, decision) for decision in drawn_decisions(measured)]
        else:
            rows.append(LaneRow(lane))
    return tuple(rows)


def places(measured: Measured) -> Iterator[float]:
    """The probabilities that the scale has to hold; none without a number."""
    if measured.probability is None:
        return
    yield measured.probability
    for interval in (measured.band, measured.spread):
        if interval is not None:
            yield from (interval.lower, interval.upper)


def lane_words(row: LaneRow, measured: Measured, y: float) -> LaneWords:
    """The lane's name and figures: a dash without a number, "no band" for a number without one."""
    known = measured.probability is not None
    match row.lane:
        case Lane.BAND:
            absent = "no band" if known else _NONE
            figures = absent if measured.band is None or not known else _range(measured, measured.band)
            rebuilt = APPROXIMATE if measured.approximate and measured.band is not None else ""
            return LaneWords(f"{level_words(measured.level)} {row.lane.value}{rebuilt}", figures, y)
        case Lane.SPREAD:
            figures = _NONE if measured.spread is None or not known else _range(measured, measured.spread)
            return LaneWords(row.lane.value, figures, y)
        case Lane.DECISION if row.decision is not None:
            return LaneWords(row.lane.value, percent_in_full(row.decision.probability), y, row.decision.source)
        case _:
            return LaneWords(row.lane.value, _NONE, y)


def _range(measured: Measured, interval: Interval) -> str:
    """The ends, each on its side of every decision point."""
    return percent_range(interval.lower, interval.upper, [point.probability for point in measured.decisions])


def _number(measured: Measured) -> str:
    if measured.probability is None:
        return "no number"
    return measured.shown or percent(measured.probability, measured.complement)


def ruler_sentence(measured: Measured, reach: str, lanes: tuple[LaneWords, ...]) -> str:
    """One sentence with the number, the scale's `reach` in words, and every lane that holds something."""
    said = "; ".join(f"{_with_detail(lane)}: {lane.figures}" for lane in lanes if lane.figures != _NONE)
    number = _number(measured)
    return f"{number[0].upper()}{number[1:]} on a ruler from {reach}{f'. {said}' if said else ''}"


def ruler_table(measured: Measured, lanes: tuple[LaneWords, ...]) -> tuple[tuple[str, ...], ...]:
    """The number and the lanes as rows of name and figures; then decision points for which there was no lane."""
    drawn = tuple((_with_detail(lane), lane.figures) for lane in lanes)
    has_lanes = any(lane.name == Lane.DECISION for lane in lanes)
    with_lane = drawn_decisions(measured)
    rest = [point for point in measured.decisions if point not in with_lane] if has_lanes else []
    more = tuple((f"{Lane.DECISION} ({point.source})", percent_in_full(point.probability)) for point in rest)
    return (("Probability", _number(measured)), *drawn, *more)


def _with_detail(lane: LaneWords) -> str:
    return f"{lane.name} ({lane.detail})" if lane.detail else lane.name
