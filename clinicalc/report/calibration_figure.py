"""Calibration: observed over predicted risk in a square, with the people hanging as bars below its axis.

The dashed diagonal is where the two agree; open circles with limits are groups of the people, the strong line is the
smooth curve, tinted its band. Axes are linear and the same both ways, so that a distance is a distance.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np

from clinicalc.estimation.calibrated import Calibration, SmoothCurve
from clinicalc.report.calibration_words import CURVE_NAMES, figure_notes, figure_sentence, figure_table
from clinicalc.report.free_places import Box, Point, find_free_place
from clinicalc.report.linear_axis import choose_end
from clinicalc.report.plot_frame import (
    LEADING,
    Frame,
    PlotSize,
    draw_across_figures,
    draw_frame,
    draw_up_figures,
    frame_square,
    set_notes,
)
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Measure, Poly, Rect, Shape, Text, Tone
from clinicalc.report.typefaces import Weight

PREDICTED, OBSERVED, IDEAL = "predicted, %", "observed, %", "ideal"
_DOT, _DOT_LINE, _CURVE = 4.5, 1.6, 2.0
_HANG, _BARS, _LEAST_BAR = 36.0, 40, 5.0
"""Height of the longest bar; how many bars there are, fewer where they would be thinner than the last."""
_DASH = 4.0
_HALF, _BESIDE, _LEAST_BESIDE = 0.5, 28.0, 190.0
"""The part of the width that the square takes beside notes; from it to them; the least room these need, else they stand
under a square that takes the whole width."""


@dataclass(frozen=True, slots=True, eq=False)
class ShownCalibration:
    """What is drawn: a calibration, its horizon in words ("10 years", "" for none), a note on the people under it."""

    calibration: Calibration
    span: str = ""
    note: str = ""


def draw_calibration(shown: ShownCalibration, size: PlotSize, measure: Measure) -> Figure:
    """The square, with what is said of it at its right or under it; its `baseline` is that of the lower figures."""
    calibration = shown.calibration
    frame = frame_square(*_end(calibration), size, measure, _HALF)
    notes = list(figure_notes(calibration, frame.across.end, shown.note))
    texts = _set_beside(notes, frame, size, measure)
    if not texts:
        frame = frame_square(*_end(calibration), size, measure)
    baseline = frame.bottom + _HANG * size.part + 1.4 * size.text
    title = baseline + LEADING * size.text
    texts = texts or set_notes(notes, title + 1.9 * size.text, size, measure)
    shapes: list[Shape] = [
        Text(0.0, size.text, OBSERVED, size.text, tone=Tone.SOFT),
        *_band(calibration.curve, frame),
        *draw_frame(frame, size),
        *_bars(calibration, frame, size),
        Line(frame.left, frame.bottom, frame.right, frame.top, size.line, Tone.INK, _DASH * size.part),
        *_curve(calibration.curve, frame, size),
        *_circles(calibration, frame, size),
        *_names(calibration, frame, size, measure),
        *draw_up_figures(frame, size),
        *draw_across_figures(frame.across, baseline, size),
        Text(frame.right, title, PREDICTED, size.text, tone=Tone.SOFT, anchor=Anchor.END),
        *texts,
    ]
    return Figure(
        width=size.width,
        height=max([title, *(text.y for text in texts)]) + 0.35 * size.text,
        shapes=tuple(shapes),
        sentence=figure_sentence(calibration, shown.span),
        table=figure_table(calibration, shown.span),
        baseline=baseline,
    )


def _set_beside(notes: Sequence[str], frame: Frame, size: PlotSize, measure: Measure) -> list[Text]:
    """The notes at the right of the square; none where there is no room for lines that are read with ease."""
    left = frame.right + _BESIDE * size.part
    room = size.width - left
    if room < _LEAST_BESIDE * size.part:
        return []
    first = frame.top + size.text
    texts: list[Text] = []
    for note in notes:
        if note:
            lines = set_notes([note], first, PlotSize(room, size.text, size.line), measure)
            texts += [replace(line, x=left) for line in lines]
            first = texts[-1].y + 1.6 * LEADING * size.text
    return texts if first < frame.bottom else []


def _end(calibration: Calibration) -> tuple[float, float]:
    """The end of both axes and their step: every circle, all predictions but the uppermost hundredth, limits."""
    risks = [at for group in calibration.groups for at in (group.predicted, group.observed) if at is not None]
    limits = [group.upper for group in calibration.groups if group.upper is not None]
    return choose_end([calibration.spread.quantile(0.99), *risks], limits)


def _band(curve: SmoothCurve | None, frame: Frame) -> Iterator[Shape]:
    if curve is None or curve.lower is None or curve.upper is None:
        return
    upper = [point for run in _runs(curve.predicted, curve.upper, frame, cut=False) for point in run]
    lower = [point for run in _runs(curve.predicted, curve.lower, frame, cut=False) for point in run]
    if len(upper) > 1:
        yield Poly((*upper, *reversed(lower)), fill=Tone.TINT)


def _curve(curve: SmoothCurve | None, frame: Frame, size: PlotSize) -> Iterator[Shape]:
    if curve is None:
        return
    for run in _runs(curve.predicted, curve.observed, frame, cut=True):
        if len(run) > 1:
            yield Poly(tuple(run), outline=Tone.ACCENT, line=_CURVE * size.line)


def _runs(
    predicted: Sequence[float] | np.ndarray, observed: Sequence[float] | np.ndarray, frame: Frame, *, cut: bool
) -> list[list[Point]]:
    """The points within the square; with `cut` a run ends where it leaves it above or below, else it goes along it."""
    end = frame.across.end
    runs: list[list[Point]] = [[]]
    for x, y in zip(predicted, observed, strict=True):
        if x > end:
            break
        if cut and not 0.0 <= y <= end:
            runs.append([])
            continue
        runs[-1].append((frame.across.place(x), frame.up.place(y)))
    return runs


def _bars(calibration: Calibration, frame: Frame, size: PlotSize) -> Iterator[Shape]:
    """People at each prediction; a bar of few is one thin line at least."""
    axis = frame.across
    number = _BARS if axis.length / _BARS >= _LEAST_BAR * size.line else _BARS // 2
    counts, _ = np.histogram(calibration.spread.predictions, bins=number, range=(0.0, axis.end))
    most, wide = int(counts.max()), axis.length / number
    for place, count in enumerate(counts.tolist()):
        if count:
            high = max(size.line, _HANG * size.part * count / most)
            left = axis.start + place * wide + size.line / 2
            yield Rect(left, frame.bottom + size.line, wide - size.line, high, fill=Tone.HATCH)


def _circles(calibration: Calibration, frame: Frame, size: PlotSize) -> Iterator[Shape]:
    """All limits, then all circles over them."""
    known = [(group, group.observed) for group in calibration.groups if group.observed is not None]
    for group, _ in known:
        if group.lower is not None and group.upper is not None:
            x = frame.across.place(group.predicted)
            yield Line(x, frame.up.place(group.upper), x, frame.up.place(group.lower), size.line, Tone.INK)
    for group, observed in known:
        x, y = frame.across.place(group.predicted), frame.up.place(observed)
        yield Dot(x, y, _DOT * size.part, fill=Tone.SHEET, outline=Tone.INK, line=_DOT_LINE * size.line)


def _names(calibration: Calibration, frame: Frame, size: PlotSize, measure: Measure) -> Iterator[Text]:
    """The name of the diagonal over its end, outside of the square, and that of the curve beside it.

    The name of the curve stands off the tint where there is room, else on it; it lies on no line, and is left out where
    there is no such place.
    """
    yield Text(frame.right, size.text, IDEAL, size.text, anchor=Anchor.END)
    curve, gap = calibration.curve, 5.0 * size.part
    if curve is None:
        return
    runs = _runs(curve.predicted, curve.observed, frame, cut=True)
    own, words = max(runs, key=len), CURVE_NAMES[curve.smoother]
    parts, diagonal = [run for run in runs if run is not own], _diagonal(frame)
    others = [diagonal, *parts]
    asked = (measure(words, size.text, Weight.SEMIBOLD), 1.15 * size.text)
    within = (frame.left + gap, frame.top, frame.right - gap, frame.bottom)
    taken = _boxes(calibration, frame, size)
    edges = [*taken, *_edges(curve, frame, size)]
    hugging = [*edges, *_around(diagonal, size)]  # a curve along the diagonal has it between itself and its name
    ways = [(1, edges, others), (2, edges, others), (4, edges, others), (4, hugging, parts), (6, hugging, parts)]
    for times, boxes, lines in (*ways, (1, taken, others), (2, taken, others)):
        place = find_free_place(asked, own, times * gap, within, boxes, lines)
        if place is not None:
            yield Text(place[0], place[3] - 0.25 * size.text, words, size.text, Weight.SEMIBOLD, Tone.ACCENT)
            return


def _edges(curve: SmoothCurve, frame: Frame, size: PlotSize) -> list[Box]:
    """Small boxes along both edges of the tint, so that a name stands on it or beside it and not over its edge."""
    if curve.lower is None or curve.upper is None:
        return []
    runs = [run for edge in (curve.lower, curve.upper) for run in _runs(curve.predicted, edge, frame, cut=True)]
    return [box for run in runs for box in _around(run, size)]


def _around(line: Sequence[Point], size: PlotSize) -> Iterator[Box]:
    room = 2.0 * size.part
    return ((x - room, y - room, x + room, y + room) for x, y in line)


def _boxes(calibration: Calibration, frame: Frame, size: PlotSize) -> list[Box]:
    """What circles and their limits take, with a little room."""
    around = (_DOT + 3.0) * size.part
    found = []
    for shape in _circles(calibration, frame, size):
        if isinstance(shape, Dot):
            found.append((shape.x - around, shape.y - around, shape.x + around, shape.y + around))
        elif isinstance(shape, Line):
            room = 3.0 * size.part
            found.append((shape.x - room, shape.y - room, shape.x + room, shape.to_y + room))
    return found


def _diagonal(frame: Frame) -> list[Point]:
    return [(frame.across.place(at), frame.up.place(at)) for at in np.linspace(0.0, frame.across.end, 81).tolist()]
