"""Groups of people side by side: observed over expected of each as an interval on a logarithmic axis, with counts.

The dashed line is where as many have the event as the model expects; a distance to its left is the same factor as one
of that length to its right.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import log

from clinicalc.assessment.numerals import NARROW_SPACE, plain
from clinicalc.report.columns import wrap_words
from clinicalc.report.plot_frame import LEADING, PlotSize, set_notes
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Measure, Rect, Shape, Text, Tone, pointer
from clinicalc.report.typefaces import Weight

RATIO = "observed / expected"
_TICKS = (0.02, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 50.0)
_CLOSE_TICKS = (0.25, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1, 1.25, 1.5, 1.75, 2.0, 2.5, 3.0, 4.0)
_CLOSE, _LESS_CLOSE = (0.5, 2.0), (0.25, 4.0)
_DOT, _DOT_LINE, _INTERVAL = 4.0, 1.6, 1.4
_PART, _PITCH, _HEADING = 0.46, 1.7, 2.1
"""The part of the width that the axis takes; in type sizes the pitch of rows and that of headings."""
_GAP = 12.0
_CAP = 3.5


@dataclass(frozen=True, slots=True)
class ShownGroup:
    """One row: what it is of ("" for everybody), which group, its counts, and its ratio with limits.

    `ratio` is None where there is none and `why` then says why; limits may be lacking.
    """

    by: str
    level: str
    people: int
    events: int
    ratio: float | None
    lower: float | None = None
    upper: float | None = None
    why: str = ""


@dataclass(frozen=True, slots=True)
class ShownGroups:
    """All rows, the groups of one question below each other; `span` in words ("" for none), a note under the figure."""

    groups: tuple[ShownGroup, ...]
    span: str = ""
    note: str = ""


@dataclass(frozen=True, slots=True)
class _LogAxis:
    start: float
    length: float
    low: float
    high: float
    ticks: tuple[float, ...]

    def place(self, ratio: float) -> float:
        """Where a ratio stands; one beyond an end stands at that end."""
        held = min(max(ratio, self.low), self.high)
        return self.start + self.length * log(held / self.low) / log(self.high / self.low)


@dataclass(frozen=True, slots=True)
class _Places:
    """Where the columns end: names begin at 0, people and events end here, the ratio ends at the width."""

    names: float
    people: float
    events: float
    axis: _LogAxis


def draw_groups(shown: ShownGroups, size: PlotSize, measure: Measure) -> Figure:
    """Rows under headings with the axis at the foot; its `baseline` is that of the axis figures."""
    places = _lay(shown, size, measure)
    shapes: list[Shape] = list(_headings(places, size))
    rows: list[Shape] = []
    y, by = 1.5 * size.text, ""
    for group in shown.groups:
        if group.by != by and group.by:
            for line in wrap_words(group.by, places.names, size.text, measure):
                y += _HEADING * size.text
                rows.append(Text(0.0, y, line, size.text, Weight.SEMIBOLD))
        by = group.by
        row, y = _row(group, y, places, size, measure)
        rows += row
    bottom = y + 0.8 * size.text
    baseline = bottom + 1.35 * size.text
    shapes += [*_grid(places.axis, bottom, size), *rows, *_figures(places.axis, baseline, size, measure)]
    texts = set_notes(_notes(shown, places.axis), baseline + 1.9 * size.text, size, measure)
    return Figure(
        width=size.width,
        height=max([baseline, *(text.y for text in texts)]) + 0.35 * size.text,
        shapes=(*shapes, *texts),
        sentence=_sentence(shown),
        table=_table(shown),
        baseline=baseline,
    )


def ratio_words(ratio: float | None, lower: float | None, upper: float | None) -> str:
    """A ratio with its limits: "0.85 (0.77 to 0.94)"."""
    if ratio is None:
        return "not known"
    if lower is None or upper is None:
        return f"{ratio:.2f} (no limits)"
    return f"{ratio:.2f} ({lower:.2f} to {upper:.2f})"


def _lay(shown: ShownGroups, size: PlotSize, measure: Measure) -> _Places:
    gap = _GAP * size.part
    figures = [ratio_words(one.ratio, one.lower, one.upper) for one in shown.groups if one.ratio is not None]
    right = max(measure(each, size.text) for each in [RATIO, *figures]) + gap
    people = max(measure(each, size.text) for each in ["people", *(f"{one.people:,}" for one in shown.groups)])
    events = max(measure(each, size.text) for each in ["events", *(f"{one.events:,}" for one in shown.groups)])
    length = max(1.0, min(_PART * size.width, size.width - right - people - events - 7 * gap - 8.0 * size.text))
    start = size.width - right - length
    names = max(1.0, start - 2.5 * gap - people - events - gap)
    return _Places(names, names + gap + people, start - 1.5 * gap, _choose_axis(shown.groups, start, length))


def _choose_axis(groups: Sequence[ShownGroup], start: float, length: float) -> _LogAxis:
    """From 0.5 to 2 where that holds everything, or 0.25 to 4; else ticks hold ratios, and limits to 5 times them."""
    ratios = [one.ratio for one in groups if one.ratio is not None and one.ratio > 0]
    limits = [at for one in groups for at in (one.lower, one.upper) if at is not None and at > 0]
    low, high = min([*ratios, *limits, 1.0]), max([*ratios, *limits, 1.0])
    if _LESS_CLOSE[0] <= low and high <= _LESS_CLOSE[1]:
        first = (_CLOSE if _CLOSE[0] <= low else _LESS_CLOSE)[0]
        last = (_CLOSE if high <= _CLOSE[1] else _LESS_CLOSE)[1]
        return _LogAxis(start, length, first, last, tuple(tick for tick in _CLOSE_TICKS if first <= tick <= last))
    least, most = min([*ratios, 1.0]), max([*ratios, 1.0])
    low, high = max(low, least / 5.0), min(high, most * 5.0)
    first = max([tick for tick in _TICKS if tick <= low * (1 + 1e-9)], default=_TICKS[0])
    last = min([tick for tick in _TICKS if tick >= high * (1 - 1e-9)], default=_TICKS[-1])
    first, last = min(first, _CLOSE[0]), max(last, _CLOSE[1])
    return _LogAxis(start, length, first, last, tuple(tick for tick in _TICKS if first <= tick <= last))


def _headings(places: _Places, size: PlotSize) -> Iterator[Text]:
    for at, words in ((places.people, "people"), (places.events, "events"), (size.width, RATIO)):
        yield Text(at, size.text, words, size.text, tone=Tone.SOFT, anchor=Anchor.END)


def _row(group: ShownGroup, y: float, places: _Places, size: PlotSize, measure: Measure) -> tuple[list[Shape], float]:
    """One group from the line above at `y`, and the baseline it ends at."""
    inset = 0.0 if not group.by else 0.9 * size.text
    baseline = y + _PITCH * size.text
    everybody = not group.by
    weight = Weight.SEMIBOLD if everybody else Weight.REGULAR
    shapes: list[Shape] = []
    lines = list(wrap_words(group.level, places.names - inset, size.text, measure))
    for place, line in enumerate(lines):
        shapes.append(Text(inset, baseline + LEADING * size.text * place, line, size.text, weight))
    for at, count in ((places.people, group.people), (places.events, group.events)):
        shapes.append(Text(at, baseline, f"{count:,}", size.text, weight, anchor=Anchor.END))
    end = baseline + LEADING * size.text * (len(lines) - 1)
    if group.ratio is None:
        pad = 0.5 * size.text
        room = places.axis.length - 2 * pad
        why = list(wrap_words(group.why or "not known", room, size.text, measure))
        for place, line in enumerate(why):
            at = baseline + LEADING * size.text * place
            left, wide = places.axis.start + pad, measure(line, size.text)
            shapes.append(Rect(left - 2, at - size.text, wide + 4, LEADING * size.text, fill=Tone.WASH))
            shapes.append(Text(left, at, line, size.text, tone=Tone.SOFT))
        return shapes, max(end, baseline + LEADING * size.text * (len(why) - 1))
    words = ratio_words(group.ratio, group.lower, group.upper)
    shapes.append(Text(size.width, baseline, words, size.text, weight, anchor=Anchor.END))
    return [*shapes, *_interval(group, group.ratio, baseline - 0.34 * size.text, places.axis, size)], end


def _interval(group: ShownGroup, ratio: float, y: float, axis: _LogAxis, size: PlotSize) -> Iterator[Shape]:
    """The interval closed at both ends, a pointer where it goes on, and its dot: filled for everybody, else open."""
    wide = _INTERVAL * size.line
    if group.lower is not None and group.upper is not None:
        yield Line(axis.place(group.lower), y, axis.place(group.upper), y, wide, Tone.INK)
        for limit, beyond, way in (
            (group.lower, group.lower < axis.low, -1.0),
            (group.upper, group.upper > axis.high, 1.0),
        ):
            x, cap = axis.place(limit), _CAP * size.part
            if beyond:
                yield pointer(x, y, way * 1.6 * cap, Tone.INK)
            else:
                yield Line(x, y - cap, x, y + cap, wide, Tone.INK)
    if axis.low <= ratio <= axis.high:
        fill = Tone.SHEET if group.by else Tone.ACCENT
        outline = Tone.INK if group.by else Tone.ACCENT
        yield Dot(axis.place(ratio), y, _DOT * size.part, fill=fill, outline=outline, line=_DOT_LINE * size.line)
    else:
        way = -1.0 if ratio < axis.low else 1.0
        yield pointer(axis.place(ratio), y, way * 1.6 * _CAP * size.part, Tone.INK)


def _grid(axis: _LogAxis, bottom: float, size: PlotSize) -> Iterator[Shape]:
    top = 1.6 * size.text
    yield Rect(axis.start, top, axis.length, bottom - top, fill=Tone.WASH)
    for tick in axis.ticks:
        x = axis.place(tick)
        if tick == 1.0:
            yield Line(x, top, x, bottom, size.line, Tone.INK, 4.0 * size.part)
        else:
            yield Line(x, top, x, bottom, size.line, Tone.RULE)
    yield Line(axis.start, bottom, axis.start + axis.length, bottom, size.line, Tone.INK)


def _figures(axis: _LogAxis, baseline: float, size: PlotSize, measure: Measure) -> Iterator[Text]:
    """The figures of the ticks; 1 and the ends first, others where there is room beside those."""
    order = sorted(axis.ticks, key=lambda tick: (tick != 1.0, tick not in (axis.low, axis.high), tick))
    taken: list[tuple[float, float]] = []
    room = 8.0 * size.part
    for tick in order:
        words = plain(tick)
        half, x = measure(words, size.text) / 2, axis.place(tick)
        if all(x + half + room <= left or right + room <= x - half for left, right in taken):
            taken.append((x - half, x + half))
            yield Text(x, baseline, words, size.text, tone=Tone.SOFT, anchor=Anchor.MIDDLE)


def _notes(shown: ShownGroups, axis: _LogAxis) -> Iterator[str]:
    when = f" by {shown.span}" if shown.span else ""
    yield (
        f"People who had the event{when} over those the model expects, 95{NARROW_SPACE}% limits, on a logarithmic axis."
        " Dashed line: as many as expected; right of it the model is too low for the group, left of it too high."
    )
    limits = [one for one in shown.groups if one.lower is not None and one.upper is not None]
    if any((one.lower or 0.0) < axis.low or (one.upper or 0.0) > axis.high for one in limits):
        yield "A pointed end goes on beyond the axis."
    yield shown.note


def _words(group: ShownGroup) -> str:
    if group.ratio is None:
        return group.why or "not known"
    return ratio_words(group.ratio, group.lower, group.upper)


def _name(group: ShownGroup) -> str:
    return f"{group.by}: {group.level}" if group.by else group.level


def _sentence(shown: ShownGroups) -> str:
    when = f" at {shown.span}" if shown.span else ""
    parts = "; ".join(f"{_name(one)}, {one.people:,} people, {_words(one)}" for one in shown.groups)
    return f"Observed over expected{when}: {parts}"


def _table(shown: ShownGroups) -> tuple[tuple[str, ...], ...]:
    heading = (f"Group{f' at {shown.span}' if shown.span else ''}", f"observed / expected, 95{NARROW_SPACE}% limits")
    rows = [(f"{_name(one)}, {one.people:,} people, {one.events:,} events", _words(one)) for one in shown.groups]
    return (heading, *rows)
