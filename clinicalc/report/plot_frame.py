"""The frame of a plot on linear axes: its measures, the square with its grid, the figures and titles of both axes."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from clinicalc.report.columns import wrap_words
from clinicalc.report.linear_axis import LinearAxis
from clinicalc.report.shapes import Anchor, Line, Measure, Shape, Text, Tone

MOST_SIDE = 400.0
"""A plot is no wider and no higher than this at the usual text size, however much room there is."""
LEADING = 1.35


@dataclass(frozen=True, slots=True)
class PlotSize:
    """Measures of a plot: `width` with all that belongs to it, size of its texts, thin line.

    Everything follows the texts but the widths of lines and of the plot.
    """

    width: float
    text: float = 13.0
    line: float = 1.0

    @property
    def part(self) -> float:
        """The texts by those of the window at its usual text size."""
        return self.text / 13.0


@dataclass(frozen=True, slots=True)
class Frame:
    """A plot's two axes; `across` runs to the right, `up` up the page."""

    across: LinearAxis
    up: LinearAxis

    @property
    def left(self) -> float:
        """The x of the upright axis."""
        return self.across.start

    @property
    def right(self) -> float:
        """The x of the other end."""
        return self.across.start + self.across.length

    @property
    def top(self) -> float:
        """The y of the upper end."""
        return self.up.start + self.up.length

    @property
    def bottom(self) -> float:
        """The y of the level axis."""
        return self.up.start


def frame_square(end: float, step: float, size: PlotSize, measure: Measure, part: float = 1.0) -> Frame:
    """A square with the same axis both ways, below a line of text, with room for the figures at its left and right.

    Its side is no more than this `part` of the width.
    """
    figures = LinearAxis(0.0, 1.0, end, step).figures
    left = max(measure(figure, size.text) for figure in figures) + 8.0 * size.part
    over = measure(figures[-1], size.text) / 2 + size.line
    side = max(1.0, min(size.width - left - over, part * size.width, MOST_SIDE * size.part))
    top = 1.9 * size.text
    return Frame(LinearAxis(left, side, end, step), LinearAxis(top + side, -side, end, step))


def draw_frame(frame: Frame, size: PlotSize) -> Iterator[Shape]:
    """The grid, and over it both axes."""
    for tick in frame.across.ticks[1:]:
        x, y = frame.across.place(tick), frame.up.place(tick)
        yield Line(x, frame.top, x, frame.bottom, size.line, Tone.RULE)
        yield Line(frame.left, y, frame.right, y, size.line, Tone.RULE)
    yield Line(frame.left, frame.top, frame.left, frame.bottom, size.line, Tone.INK)
    yield Line(frame.left, frame.bottom, frame.right, frame.bottom, size.line, Tone.INK)


def draw_up_figures(frame: Frame, size: PlotSize) -> Iterator[Text]:
    """The figures left of the upright axis."""
    for tick, figure in zip(frame.up.ticks, frame.up.figures, strict=True):
        x, y = frame.left - 8.0 * size.part, frame.up.place(tick) + 0.34 * size.text
        yield Text(x, y, figure, size.text, tone=Tone.SOFT, anchor=Anchor.END)


def draw_across_figures(axis: LinearAxis, baseline: float, size: PlotSize) -> Iterator[Text]:
    """The figures under a level axis."""
    for tick, figure in zip(axis.ticks, axis.figures, strict=True):
        yield Text(axis.place(tick), baseline, figure, size.text, tone=Tone.SOFT, anchor=Anchor.MIDDLE)


def set_notes(notes: Iterable[str], first: float, size: PlotSize, measure: Measure) -> list[Text]:
    """Notes under a plot, each beginning a line of its own, the first baseline at `first`."""
    lines = [line for note in notes if note for line in wrap_words(note, size.width, size.text, measure)]
    return [
        Text(0.0, first + LEADING * size.text * place, line, size.text, tone=Tone.SOFT)
        for place, line in enumerate(lines)
    ]
