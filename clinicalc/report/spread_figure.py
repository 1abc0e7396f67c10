"""How predictions lie: bars of those with the event above an axis, of the others hanging below it, and both medians.

Each side is drawn in parts of its own people, so that the two shapes compare however rare the event is.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.numerals import NARROW_SPACE, percent
from clinicalc.estimation.calibrated import PredictionSpread
from clinicalc.report.linear_axis import LinearAxis, choose_end
from clinicalc.report.phrases import count_words
from clinicalc.report.plot_frame import LEADING, MOST_SIDE, PlotSize, draw_across_figures, set_notes
from clinicalc.report.shapes import Anchor, Figure, Line, Measure, Rect, Shape, Text, Tone

Array = NDArray[np.float64]

PREDICTED = "predicted, %"
_HIGH, _BARS, _LEAST_BAR = 64.0, 40, 5.0
_BEYOND = 7.0
"""How far the line of a median goes beyond the tallest bar."""
_QUARTILES = (0.25, 0.5, 0.75)


@dataclass(frozen=True, slots=True, eq=False)
class ShownSpread:
    """What is drawn: a spread, what those above and below the axis are called, a note under it."""

    spread: PredictionSpread
    with_event: str = "with the event"
    others: str = "without it"
    note: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class _Side:
    """One side: what it is called, its predictions, whether it stands above the axis."""

    name: str
    predictions: Array
    above: bool


def draw_spread(shown: ShownSpread, size: PlotSize, measure: Measure) -> Figure:
    """Both sides with their axis figures below; its `baseline` is that of these figures."""
    axis, sides = _axis(shown.spread, size, measure), _sides(shown)
    names = [set_notes((_label(side),), size.text, size, measure) for side in sides]
    high, beyond = _HIGH * size.part, _BEYOND * size.part
    zero = names[0][-1].y + 0.6 * size.text + beyond + high
    lowest = zero + high + beyond
    below = [text.moved(0.0, lowest + 0.25 * size.text) for text in names[1]]
    baseline = below[-1].y + 1.7 * size.text
    title = baseline + LEADING * size.text
    texts = set_notes(_notes(shown, axis), title + 1.9 * size.text, size, measure)
    shapes: list[Shape] = [*names[0], *_grid(axis, zero, lowest, size), *_bars(sides, axis, zero, size)]
    shapes += [line for side in sides for line in _median(side, axis, zero, size)]
    shapes.append(Line(axis.start, zero, axis.start + axis.length, zero, size.line, Tone.INK))
    shapes += [*below, *draw_across_figures(axis, baseline, size)]
    shapes.append(Text(axis.start + axis.length, title, PREDICTED, size.text, tone=Tone.SOFT, anchor=Anchor.END))
    return Figure(
        width=size.width,
        height=max([title, *(text.y for text in texts)]) + 0.35 * size.text,
        shapes=(*shapes, *texts),
        sentence=_sentence(sides),
        table=_table(sides),
        baseline=baseline,
    )


def _axis(spread: PredictionSpread, size: PlotSize, measure: Measure) -> LinearAxis:
    """As long as there is room between the halves of its first and last figure."""
    end, step = choose_end([spread.quantile(0.99)])
    figures = LinearAxis(0.0, 1.0, end, step).figures
    left, right = (measure(figure, size.text) / 2 + size.line for figure in (figures[0], figures[-1]))
    return LinearAxis(left, max(1.0, min(size.width - left - right, 1.5 * MOST_SIDE * size.part)), end, step)


def _sides(shown: ShownSpread) -> tuple[_Side, _Side]:
    had, all_of_them = shown.spread.had_event, shown.spread.predictions
    return _Side(shown.with_event, all_of_them[had], True), _Side(shown.others, all_of_them[~had], False)


def _grid(axis: LinearAxis, zero: float, lowest: float, size: PlotSize) -> Iterator[Line]:
    top = 2 * zero - lowest
    return (Line(axis.place(tick), top, axis.place(tick), lowest, size.line, Tone.RULE) for tick in axis.ticks)


def _bars(sides: Sequence[_Side], axis: LinearAxis, zero: float, size: PlotSize) -> Iterator[Rect]:
    """The people at each prediction as parts of their side; the longest bar of both is as high as there is room."""
    number = _BARS if axis.length / _BARS >= _LEAST_BAR * size.line else _BARS // 2
    counts = [np.histogram(side.predictions, bins=number, range=(0.0, axis.end))[0] for side in sides]
    parts = [count / max(1, len(side.predictions)) for count, side in zip(counts, sides, strict=True)]
    most = max(float(part.max()) for part in parts)
    wide = axis.length / number
    for side, part in zip(sides, parts, strict=True):
        for place, share in enumerate(part.tolist()):
            if share:
                high = max(size.line, _HIGH * size.part * share / most)
                top = zero - high if side.above else zero
                left = axis.start + place * wide + size.line / 2
                yield Rect(left, top, wide - size.line, high, fill=Tone.ACCENT if side.above else Tone.HATCH)


def _median(side: _Side, axis: LinearAxis, zero: float, size: PlotSize) -> Iterator[Line]:
    """A dashed line through the side at its median."""
    if len(side.predictions):
        x = axis.place(float(np.median(side.predictions)))
        far = (_HIGH + _BEYOND) * size.part
        yield Line(x, zero, x, zero - far if side.above else zero + far, 1.5 * size.line, Tone.INK, 3.0 * size.part)


def _label(side: _Side) -> str:
    count = f"{side.name[:1].upper()}{side.name[1:]}, {_people(side)}"
    return f"{count}, median {percent(float(np.median(side.predictions)))}" if len(side.predictions) else count


def _people(side: _Side) -> str:
    count = len(side.predictions)
    return count_words(count, "person", "people") if count < 1000 else f"{count:,} people"


def _notes(shown: ShownSpread, axis: LinearAxis) -> Iterator[str]:
    beyond = int((shown.spread.predictions > axis.end).sum())
    rest = f"; {beyond:,} above {100.0 * axis.end:g}{NARROW_SPACE}% not drawn" if beyond else ""
    yield f"Bars: parts of the people of each side at each prediction; dashed: their medians{rest}."
    yield shown.note


def _quartile_words(side: _Side) -> str:
    if not len(side.predictions):
        return "nobody"
    low, middle, high = (percent(at) for at in np.quantile(side.predictions, _QUARTILES).tolist())
    return f"median {middle}, half of them from {low} to {high}"


def _sentence(sides: Sequence[_Side]) -> str:
    return "Predictions: " + "; ".join(f"{side.name}, {_people(side)}, {_quartile_words(side)}" for side in sides)


def _table(sides: Sequence[_Side]) -> tuple[tuple[str, ...], ...]:
    rows = [(f"{side.name}, {_people(side)}", _quartile_words(side)) for side in sides]
    return (("People", "predicted"), *rows)
