"""A comparison: the number as entered and with changes on the ruler, and their difference on an axis of its own.

As entered: filled band and solid line. With changes: open band and dashed line. The difference stands on a linear axis
in percentage points, because on the ruler's scale a length is no difference of probabilities.
"""

from collections.abc import Iterator
from dataclasses import dataclass

from clinicalc.assessment.comparison import Comparison, Side
from clinicalc.prediction.links import Link
from clinicalc.report.columns import Columns, RowWords, place_row, set_row
from clinicalc.report.comparison_words import compare_sentence, compare_table
from clinicalc.report.measured import Interval
from clinicalc.report.phrases_comparison import difference_band_words, difference_words, side_words
from clinicalc.report.ruler import RulerSize, draw_axis_figures, draw_band, draw_beyond, draw_body
from clinicalc.report.scale import Scale, choose_scale
from clinicalc.report.shapes import Anchor, Figure, Line, Measure, Rect, Shape, Text, Tone, pointer

_LIMITS = ((5.0, 2.5, 0.5), (10.0, 5.0, 1.0), (20.0, 10.0, 2.0), (40.0, 20.0, 5.0), (100.0, 50.0, 10.0))
"""End of the axis of differences, its great ticks and its small ones, in percentage points."""
_LANE = 26.0
_HALF_BAND = 8.0
_OPEN_LINE = 1.6


@dataclass(frozen=True, slots=True)
class Compared:
    """What is drawn: a comparison with numbers, on the link scale of its equation.

    `also` are the probabilities that the sheet's ruler holds, so that both have the same scale; `caption` is the unit
    of the axis: "% within 10 years". `beside` are the decision points, on whose right side both numbers are written.
    """

    link: Link
    comparison: Comparison
    caption: str = ""
    also: tuple[float, ...] = ()
    beside: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class _Axis:
    """The axis of differences from `left` on, even in percentage points."""

    left: float
    width: float
    end: float
    great: float
    small: float

    def place(self, percentage_points: float) -> float:
        """The x of a difference."""
        return self.left + self.width * (percentage_points + self.end) / (2 * self.end)


def draw_comparison(compared: Compared, columns: Columns, measure: Measure) -> Figure | None:
    """Both numbers and their difference with labels and figures; None where the comparison has no numbers.

    Its `baseline` is that of the figures under the ruler's axis.
    """
    comparison, size = compared.comparison, columns.ruler
    own, changed, difference = comparison.own, comparison.changed, comparison.difference
    if own is None or changed is None or difference is None:
        return None
    held = [at for side in (own, changed) for at in (side.probability, side.lower, side.upper) if at is not None]
    scale = choose_scale(compared.link, size.width, *held, *compared.also, left=columns.ruler_at)
    lane, part = _LANE * size.part, size.part
    axis = 2 * lane + 8.0 * part
    baseline = axis + 1.3 * size.text
    lower_axis = baseline + (1.6 if scale.wide else 0.3) * size.text + 8.0 * part + lane
    shapes: list[Shape] = [*draw_body(scale, 0.0, axis, size)]
    shapes += _own(scale, own, lane / 2, axis, size)
    shapes += _changed(scale, changed, 1.5 * lane, axis, size)
    shapes += draw_axis_figures(scale, baseline, size, measure)
    shapes += _difference(comparison, difference, lower_axis, columns, measure)
    rows = (
        ("As entered", side_words(own, compared.beside), lane / 2),
        ("With changes", side_words(changed, compared.beside), 1.5 * lane),
        ("Difference", f"{difference_words(comparison)} points", lower_axis - 0.58 * lane),
    )
    for label, figure, middle in rows:
        shapes += place_row(set_row(RowWords(label, figure), columns, measure), middle + 0.34 * columns.base)
    last = lower_axis + 1.3 * size.text
    for text, y in ((compared.caption, baseline), ("percentage points", last)):
        shapes.append(Text(columns.figures_end, y, text, size.text, tone=Tone.SOFT, anchor=Anchor.END))
    return Figure(
        width=columns.width,
        height=last + 1.6 * size.text,
        shapes=tuple(shapes),
        sentence=compare_sentence(comparison, own, changed, compared.beside),
        table=compare_table(comparison, own, changed, compared.beside),
        baseline=baseline,
    )


def _own(scale: Scale, side: Side, middle: float, axis: float, size: RulerSize) -> Iterator[Shape]:
    band = _band_of(side)
    if band is not None:
        yield from draw_band(scale, band, middle, size)
    yield from _line(scale, side.probability, 0.0, middle, axis, size, dash=0.0)


def _changed(scale: Scale, side: Side, middle: float, axis: float, size: RulerSize) -> Iterator[Shape]:
    band, half = _band_of(side), _HALF_BAND * size.part
    if band is not None:
        left, right = scale.position(band.lower), scale.position(band.upper)
        yield from _open_box(left, right, middle, half, size)
        yield from draw_beyond(scale, band, middle, Tone.ACCENT, size)
    yield from _line(scale, side.probability, middle - half - 3.0 * size.part, middle, axis, size, dash=3.0 * size.line)


def _line(
    scale: Scale, probability: float, top: float, middle: float, axis: float, size: RulerSize, *, dash: float
) -> Iterator[Shape]:
    """A number's line down to the axis; beyond the scale a pointer out at its end instead."""
    x, side = scale.position(probability), scale.side(probability)
    if side:
        yield pointer(x + side * 12.0 * size.part, middle, side * 9.6 * size.part, Tone.ACCENT)
    else:
        yield Line(x, top, x, axis, 2 * size.line, Tone.ACCENT, dash)


def _band_of(side: Side) -> Interval | None:
    return None if side.lower is None or side.upper is None else Interval(side.lower, side.upper)


def _open_box(left: float, right: float, middle: float, half: float, size: RulerSize) -> Iterator[Shape]:
    line = _OPEN_LINE * size.line
    yield Rect(left, middle - half, right - left, 2 * half, outline=Tone.ACCENT, line=line)


def _difference(
    comparison: Comparison, difference: float, axis: float, columns: Columns, measure: Measure
) -> Iterator[Shape]:
    """The axis of differences with its nought line, an open band, a dashed line, and the band in figures."""
    size = columns.ruler
    lower, upper = comparison.difference_lower, comparison.difference_upper
    ends = [100.0 * end for end in (difference, lower, upper) if end is not None]
    line = _axis_for(ends, columns)
    lane, half = _LANE * size.part, _HALF_BAND * size.part
    top, middle = axis - 1.08 * lane, axis - 0.58 * lane
    yield from _ticks(line, axis, top, size)
    yield from _figures(line, axis + 1.3 * size.text, size)
    drawn = [line.place(end) for end in ends]
    if lower is not None and upper is not None:
        yield from _open_box(line.place(100.0 * lower), line.place(100.0 * upper), middle, half, size)
        yield _words(difference_band_words(comparison), line, drawn, axis, middle, size, measure)
    x = line.place(100.0 * difference)
    yield Line(x, top, x, axis, 2 * size.line, Tone.ACCENT, 3.0 * size.line)


def _axis_for(ends: list[float], columns: Columns) -> _Axis:
    furthest = max(map(abs, ends))
    end, great, small = next((limits for limits in _LIMITS if furthest <= limits[0]), _LIMITS[-1])
    return _Axis(columns.ruler_at, columns.ruler.width, end, great, small)


def _ticks(line: _Axis, axis: float, top: float, size: RulerSize) -> Iterator[Shape]:
    count = round(2 * line.end / line.small)
    every = round(line.great / line.small)
    for at in range(count + 1):
        x = line.place(-line.end + at * line.small)
        great = at % every == 0
        high = (9.0 if great else 4.0) * size.part
        yield Line(x, axis - high, x, axis, size.line, Tone.INK if great else Tone.EDGE)
    yield Line(line.left, axis, line.left + line.width, axis, size.line, Tone.INK)
    nought = line.place(0.0)
    yield Line(nought, top, nought, axis, size.line, Tone.INK)


def _figures(line: _Axis, baseline: float, size: RulerSize) -> Iterator[Shape]:
    for at in (-line.end, -line.great, 0.0, line.great, line.end):
        yield Text(line.place(at), baseline, _tick_words(at), size.text, tone=Tone.SOFT, anchor=Anchor.MIDDLE)


def _tick_words(at: float) -> str:
    return "0" if at == 0 else f"{'+' if at > 0 else '−'}{abs(at):g}"


def _words(
    words: str, line: _Axis, drawn: list[float], axis: float, middle: float, size: RulerSize, measure: Measure
) -> Text:
    """The band in figures beside what is drawn, clear of it and of the nought line, or under the axis."""
    wide, gap = measure(words, size.text), 10.0 * size.part
    first, last, nought = min(drawn), max(drawn), line.place(0.0)
    y = middle + 0.34 * size.text
    for left in (max(last, nought) + gap, min(first, nought) - gap - wide):
        if line.left <= left <= line.left + line.width - wide:
            return Text(left, y, words, size.text, tone=Tone.SOFT)
    under = min(line.left, line.left + line.width - wide)  # a narrow axis does not hold the longest words
    return Text(under, axis + 2.6 * size.text, words, size.text, tone=Tone.SOFT)
