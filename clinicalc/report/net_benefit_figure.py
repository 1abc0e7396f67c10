"""What acting by a model is worth over decision points, beside acting on everyone and on nobody.

Net benefit is in true positives of 100 people (Vickers & Elkin, Med Decis Making 2006;26:565). Axes are linear; the
lines are named in the plot, and the decision points asked about stand as dashed lines with a dot on the model's.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise
from math import hypot, isfinite

import numpy as np

from clinicalc.assessment.numerals import NARROW_SPACE, percent_in_full, plain
from clinicalc.report.free_places import Box, Point
from clinicalc.report.linear_axis import LinearAxis, choose_end
from clinicalc.report.net_benefit_words import (
    BY_MODEL,
    ON_EVERYONE,
    ON_NOBODY,
    DecisionMark,
    ShownNetBenefit,
    figure_notes,
    figure_sentence,
    figure_table,
)
from clinicalc.report.places_beside import fill_in, find_place_beside
from clinicalc.report.plot_frame import LEADING, MOST_SIDE, PlotSize, draw_across_figures, set_notes
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Measure, Poly, Rect, Shape, Text, Tone
from clinicalc.report.typefaces import Weight

POINT, BENEFIT = "decision point, %", "net benefit, of 100 people"
_HIGH = 180.0
_CURVE, _OTHER, _DASH = 2.0, 1.2, 4.0
_DOT = 3.6
_FEWEST_STEPS, _LANES = 3, 2
_STEPS = tuple(part * 10.0**power for power in range(-6, 2) for part in (1.0, 2.0, 5.0))
_WORTH, _FAR = 0.05, 1.5
"""Beyond the last point at which the model is worth so much of the most, nothing is to be seen: the axis may end there;
a mark that lies so many times further out is not drawn."""


@dataclass(frozen=True, slots=True)
class _Plot:
    """Both axes; net benefit runs up from `bottom` (a step below nought) to `top`, in people of 100."""

    across: LinearAxis
    top: float
    bottom: float
    most: float
    step: float

    def up(self, worth: float) -> float:
        """The y of a net benefit in people of 100."""
        return self.bottom - (self.bottom - self.top) * (worth + self.step) / (self.most + self.step)

    @property
    def right(self) -> float:
        """The x of the right end."""
        return self.across.start + self.across.length

    @property
    def ticks(self) -> tuple[float, ...]:
        """From one step below nought to the top."""
        return tuple(self.step * place for place in range(-1, round(self.most / self.step) + 1))


def draw_net_benefit(shown: ShownNetBenefit, size: PlotSize, measure: Measure) -> Figure:
    """The plot with its notes under it; its `baseline` is that of the figures below."""
    plot = _lay(shown, size, measure)
    baseline = plot.bottom + 1.5 * size.text
    title = baseline + LEADING * size.text
    texts = set_notes(figure_notes(shown, plot.across.end), title + 1.9 * size.text, size, measure)
    everyone, model = _everyone(shown, plot), _model(shown, plot)
    shapes: list[Shape] = [
        Text(0.0, size.text, BENEFIT, size.text, tone=Tone.SOFT),
        *_grid(plot, size),
        *_marks(shown, plot, size, measure),
        *_names(shown, everyone, model, plot, size, measure),
        *_dashed(everyone, size),
        *(Poly(tuple(run), outline=Tone.ACCENT, line=_CURVE * size.line) for run in model if len(run) > 1),
        *_dots(shown, plot, size),
        *draw_across_figures(plot.across, baseline, size),
        Text(plot.right, title, POINT, size.text, tone=Tone.SOFT, anchor=Anchor.END),
        *texts,
    ]
    return Figure(
        width=size.width,
        height=max([title, *(text.y for text in texts)]) + 0.35 * size.text,
        shapes=tuple(shapes),
        sentence=figure_sentence(shown),
        table=figure_table(shown),
        baseline=baseline,
    )


def _lay(shown: ShownNetBenefit, size: PlotSize, measure: Measure) -> _Plot:
    end, step = choose_end([_reach(shown)])
    worths = [*shown.by_model.tolist(), *(mark.by_model for mark in shown.marks if mark.by_model is not None)]
    observed = _observed(shown)
    worths += [] if observed is None else [observed]
    most, rise = _choose_rise(max([100.0 * worth for worth in worths if isfinite(worth)], default=0.0))
    count = round(most / rise)
    left = max(measure(_figure(rise * place), size.text) for place in range(-1, count + 1)) + 8.0 * size.part
    right = measure(ON_NOBODY, size.text) + 8.0 * size.part
    length = max(1.0, min(size.width - left - right, 1.5 * MOST_SIDE * size.part))
    top = (2.9 + LEADING * (_LANES - 1 if len(shown.marks) > 1 else 0)) * size.text
    return _Plot(LinearAxis(left, length, end, step), top, top + _HIGH * size.part, most, rise)


def _reach(shown: ShownNetBenefit) -> float:
    """The last point to be shown: the reach, or the model as long as it is worth anything; marks not far beyond."""
    last = shown.reach
    if last is None:
        worths = np.abs(np.where(np.isfinite(shown.by_model), shown.by_model, 0.0))
        seen = shown.points[worths > _WORTH * worths.max()] if len(worths) else shown.points
        last = float((seen if len(seen) else shown.points).max()) if len(shown.points) else 0.0
    return max([last, *(mark.point for mark in shown.marks if mark.point <= _FAR * last)])


def _choose_rise(most: float) -> tuple[float, float]:
    """The least round top of the upright axis that holds the most, with the step of its ticks."""
    if most <= 0.0:
        return 1.0, 1.0
    step = max(each for each in _STEPS if _FEWEST_STEPS * each <= most * (1.0 + 1e-9)) if most > 3e-6 else 1e-6
    return step * float(np.ceil(most / step - 1e-9)), step


def _figure(worth: float) -> str:
    return plain(round(worth, 9)) if worth else "0"


def _grid(plot: _Plot, size: PlotSize) -> Iterator[Shape]:
    for tick in plot.across.ticks[1:]:
        x = plot.across.place(tick)
        yield Line(x, plot.top, x, plot.bottom, size.line, Tone.RULE)
    for worth in plot.ticks:
        y = plot.up(worth)
        if worth > -0.5 * plot.step:
            tone = Tone.EDGE if abs(worth) < 0.5 * plot.step else Tone.RULE
            yield Line(plot.across.start, y, plot.right, y, size.line, tone)
        at = plot.across.start - 8.0 * size.part
        yield Text(at, y + 0.34 * size.text, _figure(worth), size.text, tone=Tone.SOFT, anchor=Anchor.END)
    yield Line(plot.across.start, plot.top, plot.across.start, plot.bottom, size.line, Tone.INK)
    yield Line(plot.across.start, plot.bottom, plot.right, plot.bottom, size.line, Tone.INK)
    nought = plot.up(0.0) + 0.34 * size.text
    yield Text(plot.right + 8.0 * size.part, nought, ON_NOBODY, size.text)


def _model(shown: ShownNetBenefit, plot: _Plot) -> list[list[Point]]:
    """The model's line in runs: it ends where the value is not known, or where it would leave the plot."""
    runs: list[list[Point]] = [[]]
    for point, worth in zip(shown.points.tolist(), (100.0 * shown.by_model).tolist(), strict=True):
        if point > plot.across.end * (1.0 + 1e-9):
            break
        if not isfinite(worth) or worth < -plot.step:
            runs.append([])
            continue
        runs[-1].append((plot.across.place(point), plot.up(min(worth, plot.most))))
    return runs


def _everyone(shown: ShownNetBenefit, plot: _Plot) -> list[Point]:
    """The line of acting on everyone in close points, from a decision point of nought down to the bottom."""
    observed = _observed(shown)
    line: list[Point] = []
    if observed is None:
        return line
    for at in np.linspace(0.0, min(plot.across.end, 0.999), 801).tolist():
        worth = 100.0 * (observed - (1.0 - observed) * at / (1.0 - at))
        if worth < -plot.step:
            break
        line.append((plot.across.place(at), plot.up(worth)))
    return line


def _observed(shown: ShownNetBenefit) -> float | None:
    """The observed risk F of everybody, from F - (1 - F) t / (1 - t), which acting on everyone is worth at t."""
    for point, worth in zip(shown.points.tolist(), shown.treat_all.tolist(), strict=True):
        if isfinite(worth):
            return float(worth * (1.0 - point) + point)
    return None


def _dashed(line: list[Point], size: PlotSize) -> Iterator[Line]:
    """Strokes and gaps of even length along a line of close points."""
    places, gone = line[:1], 0.0
    for (x, y), (to_x, to_y) in pairwise(line):
        gone += hypot(to_x - x, to_y - y)
        if gone >= _DASH * size.part:
            places.append((to_x, to_y))
            gone = 0.0
    for place, ((x, y), (to_x, to_y)) in enumerate(pairwise(places)):
        if place % 2 == 0:
            yield Line(x, y, to_x, to_y, _OTHER * size.line, Tone.INK)


def _marks(shown: ShownNetBenefit, plot: _Plot, size: PlotSize, measure: Measure) -> Iterator[Shape]:
    """A dashed line at each decision point, its figure over it in the lowest lane that has room."""
    ends = [-1e9] * _LANES
    for mark in sorted(_drawn(shown, plot), key=lambda one: one.point):
        x = plot.across.place(mark.point)
        words = percent_in_full(mark.point).replace(f".0{NARROW_SPACE}", NARROW_SPACE)
        half = measure(words, size.text) / 2
        lane = next((lane for lane, end in enumerate(ends) if x - half > end + 4.0 * size.part), None)
        top = plot.top if not lane else plot.top - LEADING * size.text * lane
        yield Line(x, top, x, plot.bottom, size.line, Tone.INK, 2.5 * size.part)
        if lane is not None:
            ends[lane] = x + half
            yield Text(x, top - 0.45 * size.text, words, size.text, anchor=Anchor.MIDDLE)


def _drawn(shown: ShownNetBenefit, plot: _Plot) -> list[DecisionMark]:
    return [mark for mark in shown.marks if mark.point <= plot.across.end * (1.0 + 1e-9)]


def _dots(shown: ShownNetBenefit, plot: _Plot, size: PlotSize) -> Iterator[Dot]:
    for mark in _drawn(shown, plot):
        if mark.by_model is not None and -plot.step <= 100.0 * mark.by_model <= plot.most:
            x, y = plot.across.place(mark.point), plot.up(100.0 * mark.by_model)
            yield Dot(x, y, _DOT * size.part, fill=Tone.ACCENT, outline=Tone.SHEET, line=size.line)


def _names(
    shown: ShownNetBenefit,
    everyone: list[Point],
    model: list[list[Point]],
    plot: _Plot,
    size: PlotSize,
    measure: Measure,
) -> Iterator[Shape]:
    """The names of both lines beside them, off the lines and where it can be off the marks; else left to the notes.

    The line of acting on everyone is named beside its lower end, where the other is not near.
    """
    own = fill_in(max(model, key=len))
    marks = [
        (x - 2, plot.top, x + 2, plot.bottom) for x in (plot.across.place(mark.point) for mark in _drawn(shown, plot))
    ]
    within = (plot.across.start + 4, plot.top, plot.right, plot.bottom - 2)
    named: list[Box] = []
    gap = 6.0 * size.part
    for words, line, other, weight, tone in (
        (BY_MODEL, own[len(own) // 5 :], everyone, Weight.SEMIBOLD, Tone.ACCENT),
        (ON_EVERYONE, everyone[len(everyone) // 2 :][::-1], own, Weight.REGULAR, Tone.INK),
    ):
        asked = (measure(words, size.text, weight), 1.1 * size.text)
        rise = 1.0 if words is BY_MODEL else 0.5
        box = find_place_beside(asked, line, rise, within, [*marks, *named], other, gap)
        box = box or find_place_beside(asked, line, rise, within, named, other, gap)
        if box is not None:
            named.append(box)
            yield Rect(box[0] - 2, box[1], box[2] - box[0] + 4, box[3] - box[1], fill=Tone.SHEET)
            yield Text(box[0], box[3] - 0.25 * size.text, words, size.text, weight, tone)
