"""The way of the people of a study into a fit: a box for each stage, and beside the way who left it there, and why."""

from collections.abc import Iterator
from dataclasses import dataclass

from clinicalc.report.columns import wrap_words
from clinicalc.report.shapes import Anchor, Figure, Line, Measure, Poly, Rect, Shape, Text, Tone
from clinicalc.report.typefaces import Weight

_PAD, _GAP, _LEAST_WAY = 0.7, 0.9, 2.0
"""In type sizes: room within a box, between a line beside the way and the next, and the shortest way between boxes."""
_LEADING = 1.34
_BOX, _SIDE = 0.46, 0.56
"""Parts of the width: a box on the way, and where the boxes of those who left begin."""
_WAY_AT = 0.2


@dataclass(frozen=True, slots=True)
class Leaving:
    """Some people who went no further, and why."""

    count: int
    reason: str


@dataclass(frozen=True, slots=True)
class Stage:
    """So many people at one stage, what they are, and who of them left the way before the next one.

    `notes` say what the reasons beside them do not, such as that one person may have several.
    """

    count: int
    words: str
    leaving: tuple[Leaving, ...] = ()
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Flow:
    """All stages, the first that of everybody in the file."""

    stages: tuple[Stage, ...]


@dataclass(frozen=True, slots=True)
class FlowSize:
    """Measures: `width` of the whole, size of its texts, thin line."""

    width: float
    text: float
    line: float = 0.75


@dataclass(frozen=True, slots=True)
class _Box:
    """A box that is laid out: its height, and its lines, each with whether it is firm."""

    height: float
    lines: tuple[tuple[str, str], ...]


def draw_flow(flow: Flow, size: FlowSize, measure: Measure) -> Figure:
    """Boxes below each other, joined by the way; who left it stands in a box at the right."""
    shapes: list[Shape] = []
    y, middle = size.line, _WAY_AT * size.width
    for place, stage in enumerate(flow.stages):
        box = _lay(((f"{stage.count:,}", stage.words),), (), _BOX * size.width, size, measure)
        shapes += _draw(box, 0.0, y, _BOX * size.width, size, measure)
        y += box.height
        if place + 1 == len(flow.stages):
            break
        way = _LEAST_WAY * size.text
        if stage.leaving or stage.notes:
            wide = (1 - _SIDE) * size.width
            left = _lay(
                tuple((f"{one.count:,}", one.reason) for one in stage.leaving), stage.notes, wide, size, measure
            )
            top = y + _GAP * size.text
            way = left.height + 2 * _GAP * size.text
            branch = top + left.height / 2
            shapes += _draw(left, _SIDE * size.width, top, wide, size, measure, open_box=True)
            shapes.append(Line(middle, branch, _SIDE * size.width, branch, size.line, Tone.EDGE))
        shapes += _arrow(middle, y, y + way, size)
        y += way
    return Figure(size.width, y + size.line, tuple(shapes), _sentence(flow), _table(flow))


def _lay(
    lines: tuple[tuple[str, str], ...], notes: tuple[str, ...], wide: float, size: FlowSize, measure: Measure
) -> _Box:
    """The figure of each line, and its words in as many lines as they need beside it."""
    room = wide - 2 * _PAD * size.text
    figures = max((measure(f"{figure} ", size.text, Weight.SEMIBOLD) for figure, _ in lines), default=0.0)
    found: list[tuple[str, str]] = []
    for figure, words in lines:
        for number, line in enumerate(wrap_words(words, room - figures, size.text, measure)):
            found.append((figure if number == 0 else "", line))
    found += [("\n", line) for note in notes for line in wrap_words(note, room, size.text, measure)]
    return _Box((len(found) * _LEADING + 2 * _PAD) * size.text - (_LEADING - 1) * size.text, tuple(found))


def _draw(
    box: _Box, x: float, y: float, wide: float, size: FlowSize, measure: Measure, *, open_box: bool = False
) -> Iterator[Shape]:
    yield Rect(
        x, y, wide, box.height, fill=None if open_box else Tone.WASH, outline=Tone.EDGE, line=size.line, radius=2
    )
    figures = [figure for figure, _ in box.lines if figure.strip()]
    beside = max((measure(f"{figure} ", size.text, Weight.SEMIBOLD) for figure in figures), default=0.0)
    left = x + _PAD * size.text
    for place, (figure, words) in enumerate(box.lines):
        baseline = y + (_PAD + 0.83 + _LEADING * place) * size.text
        if figure.strip():
            end = left + beside - measure(" ", size.text, Weight.SEMIBOLD)
            yield Text(end, baseline, figure, size.text, Weight.SEMIBOLD, anchor=Anchor.END)
        is_note = figure == "\n"
        tone = Tone.SOFT if is_note else Tone.INK
        yield Text(left if is_note else left + beside, baseline, words, size.text, tone=tone)


def _arrow(x: float, top: float, bottom: float, size: FlowSize) -> Iterator[Shape]:
    head = 0.5 * size.text
    yield Line(x, top, x, bottom - head, size.line, Tone.EDGE)
    yield Poly(((x, bottom), (x - 0.5 * head, bottom - head), (x + 0.5 * head, bottom - head)), fill=Tone.EDGE)


def _sentence(flow: Flow) -> str:
    """The way in words for a screen reader."""
    parts = []
    for stage in flow.stages:
        parts.append(f"{stage.count:,} {stage.words}")
        parts += [f"left: {one.count:,} {one.reason}" for one in stage.leaving]
    return "; ".join(parts)


def _table(flow: Flow) -> tuple[tuple[str, ...], ...]:
    rows = [("People", "Which")]
    for stage in flow.stages:
        rows.append((f"{stage.count:,}", stage.words))
        rows += [(f"{one.count:,}", f"left out: {one.reason}") for one in stage.leaving]
    return tuple(rows)
