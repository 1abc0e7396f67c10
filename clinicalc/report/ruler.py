"""The ruler: where this patient's number lies, with its band, the re-measurement spread and the decision points.

Everything measured has its own form, lane and name. Nothing is filled from the left end, and the ticks are visibly
uneven: a place on the ruler is no proportion.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import lru_cache

from clinicalc.report.measured import (
    DecisionPoint,
    Interval,
    Lane,
    LaneRow,
    LaneWords,
    Measured,
    lane_rows,
    lane_words,
    places,
    ruler_sentence,
    ruler_table,
)
from clinicalc.report.scale import Scale, TickSize, choose_scale
from clinicalc.report.shapes import Anchor, Figure, Line, Measure, Poly, Rect, Shape, Text, Tone, pointer
from clinicalc.report.typefaces import Weight

_HEAD = 12.0
_TICK_HEIGHTS = {TickSize.MAJOR: 9.0, TickSize.MIDDLE: 6.0, TickSize.MINOR: 4.0}


@dataclass(frozen=True, slots=True)
class RulerSize:
    """Measures of a ruler: `width` of its axis, pitch of its lanes, size of the figures under the axis, thin line.

    All heights follow the lanes, line widths do not: text twice as large leaves them as they are.
    """

    width: float
    lane: float = 27.0
    text: float = 13.0
    line: float = 1.0

    @property
    def part(self) -> float:
        """The lanes by those of the window at its usual text size."""
        return self.lane / 27.0

    @property
    def overhang(self) -> float:
        """What figures and heads may reach beyond both ends of the axis."""
        return max(self.text, _HEAD * self.part) + 2.0


@dataclass(frozen=True, slots=True)
class Ruler:
    """The drawing, which begins `overhang` left of the axis, and the words beside it."""

    figure: Figure
    scale: Scale
    lanes: tuple[LaneWords, ...]
    overhang: float


def draw_ruler(measured: Measured, size: RulerSize, measure: Measure, lanes: tuple[Lane, ...] = (Lane.BAND,)) -> Ruler:
    """The ruler with these lanes, whether or not there is something to draw in them, so that nothing moves.

    Each of the decision points nearest to the number, up to three, has a lane of its own. The figure's `baseline` is
    that of the figures under the axis.
    """
    rows = lane_rows(lanes, measured)
    known = measured.probability is not None
    scale = choose_scale(measured.link, size.width, *places(measured), left=size.overhang)
    top = _HEAD * size.part
    axis = top + _body_height(size, len(rows))
    baseline = axis + 1.3 * size.text
    middles = {row: top + size.lane * (place + 0.5) + 0.5 * size.part for place, row in enumerate(rows)}
    shapes = [
        *draw_body(scale, top, axis, size, wash=known, faint=not known),
        *_lanes(scale, measured, middles, axis, size, measure),
        *_hairline(scale, measured.probability, top, axis, size),
        *draw_axis_figures(scale, baseline, size, measure),
    ]
    words_beside = tuple(lane_words(row, measured, middle + 5.0 * size.part) for row, middle in middles.items())
    figure = Figure(
        width=size.width + 2 * size.overhang,
        height=baseline + (1.6 if scale.wide else 0.3) * size.text,
        shapes=tuple(shapes),
        sentence=ruler_sentence(measured, scale.words, words_beside),
        table=ruler_table(measured, words_beside),
        baseline=baseline,
    )
    return Ruler(figure, scale, words_beside, size.overhang)


def _lanes(
    scale: Scale, measured: Measured, middles: Mapping[LaneRow, float], axis: float, size: RulerSize, measure: Measure
) -> Iterator[Shape]:
    """What stands in each lane; without a number only the decision points, which are not about the patient."""
    known = measured.probability is not None
    lines = [] if measured.probability is None else [measured.probability]
    for row, middle in middles.items():
        match row.lane:
            case Lane.BAND if known and measured.band is not None:
                yield from draw_band(scale, measured.band, middle, size)
            case Lane.SPREAD if known and measured.spread is not None:
                yield from _spread(scale, measured.spread, middle, size)
            case Lane.DECISION if row.decision is not None:
                plate = Tone.WASH if known else Tone.SHEET
                yield from _decision(scale, row.decision, lines, middle, axis, plate, size, measure)
                lines.append(row.decision.probability)
            case _:
                pass


@lru_cache(maxsize=16)
def draw_axis_figures(scale: Scale, baseline: float, size: RulerSize, measure: Measure) -> tuple[Text, ...]:
    """The figures of the axis, and a line that says so where the scale is the wide one."""
    labels = scale.labels(measure, size.text)
    figures = [Text(at.x, baseline, at.text, size.text, tone=Tone.SOFT, anchor=Anchor.MIDDLE) for at in labels]
    if scale.wide:
        words = f"wide scale, {scale.words}"
        figures.append(Text(scale.left, baseline + 1.3 * size.text, words, size.text, Weight.SEMIBOLD))
    return tuple(figures)


def _body_height(size: RulerSize, lanes: int) -> float:
    """All lanes, and below them what the ticks need."""
    return size.lane * lanes + 8.0 * size.part


@lru_cache(maxsize=16)
def draw_body(
    scale: Scale, top: float, axis: float, size: RulerSize, *, wash: bool = False, faint: bool = False
) -> tuple[Shape, ...]:
    """Wash if asked for, grid, ticks and axis, fainter where there is no number. The same few at every keystroke."""
    start, end = scale.left, scale.left + scale.width
    ticks = scale.ticks()
    shapes: list[Shape] = [Rect(start, top, scale.width, axis - top, fill=Tone.WASH)] if wash else []
    shapes += [Line(at.x, top, at.x, axis, size.line, Tone.RULE) for at in ticks if at.size is TickSize.MAJOR]
    for tick in ticks:
        tone = Tone.EDGE if faint or tick.size is TickSize.MINOR else Tone.INK
        shapes.append(Line(tick.x, axis - _TICK_HEIGHTS[tick.size] * size.part, tick.x, axis, size.line, tone))
    shapes.append(Line(start, axis, end, axis, size.line, Tone.EDGE if faint else Tone.INK))
    return tuple(shapes)


def draw_band(scale: Scale, band: Interval, middle: float, size: RulerSize) -> Iterator[Shape]:
    """A filled bar, closed by strong ends because its tint is faint; a pointer where it goes on beyond the scale."""
    left, right = scale.position(band.lower), scale.position(band.upper)
    top, height = middle - 8.0 * size.part, 16.0 * size.part
    yield Rect(left, top, right - left, height, fill=Tone.TINT)
    for x in (left, right):
        yield Line(x, top, x, top + height, 2 * size.line, Tone.ACCENT)
    yield from draw_beyond(scale, band, middle, Tone.ACCENT, size)


def _spread(scale: Scale, spread: Interval, middle: float, size: RulerSize) -> Iterator[Shape]:
    """An open bracket."""
    left, right = scale.position(spread.lower), scale.position(spread.upper)
    yield Line(left, middle, right, middle, 2 * size.line, Tone.INK)
    for x in (left, right):
        yield Line(x, middle - 6.0 * size.part, x, middle + 6.0 * size.part, 2 * size.line, Tone.INK)
    yield from draw_beyond(scale, spread, middle, Tone.INK, size)


def draw_beyond(scale: Scale, interval: Interval, middle: float, tone: Tone, size: RulerSize) -> Iterator[Shape]:
    """Pointers outside of the body at the ends that an interval goes beyond."""
    if scale.side(interval.lower) < 0:
        yield pointer(scale.left - 9.0 * size.part, middle, -6.0 * size.part, tone)
    if scale.side(interval.upper) > 0:
        yield pointer(scale.left + scale.width + 9.0 * size.part, middle, 6.0 * size.part, tone)


def _decision(
    scale: Scale,
    point: DecisionPoint,
    lines: Sequence[float],
    middle: float,
    axis: float,
    plate: Tone,
    size: RulerSize,
    measure: Measure,
) -> Iterator[Shape]:
    """A dashed line from its lane down to the axis, its name where none of the other `lines` goes through it.

    Beyond the scale, which it never makes wider, a pointer stands at the end instead.
    """
    x = scale.position(point.probability)
    side = scale.side(point.probability)
    if side:
        yield pointer(x + side * 9.0 * size.part, middle, side * 6.0 * size.part, Tone.INK)
    else:
        yield Line(x, middle - 9.0 * size.part, x, axis, 2 * size.line, Tone.INK, dash=3.0 * size.line)
    words = _cut(point.source, scale.width - 12.0 * size.part, size.text, measure)
    wide, gap = measure(words, size.text), 8.0 * size.part
    others = [scale.position(line) for line in lines]
    beyond = [at for other in others for at in (other - gap - wide, other + gap)]
    beyond.sort(key=lambda at: min(abs(at - x), abs(at + wide - x)))
    lefts = [
        left
        for left in (x - gap - wide, x + gap, *beyond)
        if scale.left + 2 <= left <= scale.left + scale.width - wide - 2
        and not any(left - 4 < line < left + wide + 4 for line in (*others, x))
    ]
    left = lefts[0] if lefts else min(x + gap, scale.left + scale.width - wide - 2)
    yield Rect(left - 3, middle - 0.62 * size.text, wide + 6, 1.24 * size.text, fill=plate)
    yield Text(left, middle + 0.34 * size.text, words, size.text, tone=Tone.SOFT)


def _cut(words: str, room: float, size: float, measure: Measure) -> str:
    """The words, or as many letters of them as there is room for; the table has them whole."""
    if measure(words, size) <= room:
        return words
    while words and measure(f"{words}…", size) > room:
        words = words[:-1]
    return f"{words.rstrip()}…"


def _hairline(scale: Scale, probability: float | None, top: float, axis: float, size: RulerSize) -> Iterator[Shape]:
    """This patient: a line through all lanes under its head; beyond the scale only a head, pointing out at the end."""
    if probability is None:
        return
    x, side, head = scale.position(probability), scale.side(probability), _HEAD * size.part
    if side:
        yield pointer(x + side * head, top - head / 2, side * head * 0.8, Tone.ACCENT)
        return
    yield Line(x, top - head / 3, x, axis, 2 * size.line, Tone.ACCENT)
    high, low = top - head * 5 / 6, top - head / 12
    yield Poly(((x - head / 2, high), (x + head / 2, high), (x, low)), fill=Tone.ACCENT)
