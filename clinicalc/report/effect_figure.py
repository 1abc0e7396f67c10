"""What a new version of a model does to numbers: one row each, the old one as an open dot, the new one as a filled dot.

On the ruler of the model's link, with the label and both figures at the left. A filled dot is smaller than an open one,
so that both are seen where they stand on the same place.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace

from clinicalc.assessment.numerals import EN_DASH, MOST_DECIMALS, NARROW_SPACE, percent
from clinicalc.prediction.links import Link
from clinicalc.report.columns import Columns, RowWords, SetRow, place_row, set_row
from clinicalc.report.phrases import count_words
from clinicalc.report.ruler import RulerSize, draw_axis_figures, draw_body
from clinicalc.report.scale import Scale, choose_scale
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Measure, Shape, Text, Tone, pointer

_ROW, _ABOVE, _UNDER = 20.0, 4.0, 8.0
"""Pitch of the rows, and room over the first and under the last of them, where lanes are 27 apart."""
_OPEN, _FILLED, _OPEN_LINE = 5.2, 3.4, 1.5
_ARROW, _AROUND = "→", 6.0
_NO_NUMBER = EN_DASH


@dataclass(frozen=True, slots=True)
class Move:
    """One patient with the probability of either version, None where that gives no number.

    `label` is a few words, `said` all that is to be said of the patient, for the table; "" where the label is all.
    """

    label: str
    old: float | None
    new: float | None
    said: str = ""


@dataclass(frozen=True, slots=True)
class Moves:
    """What is drawn: the patients, the names of both versions, and the unit of the axis: "% within 10 years"."""

    link: Link
    moves: tuple[Move, ...]
    old_name: str
    new_name: str
    caption: str = "%"


def draw_effect(moves: Moves, columns: Columns, measure: Measure) -> Figure:
    """The rows in the order given, with labels and figures; its `baseline` is that of the figures under the axis."""
    size, part = columns.ruler, columns.ruler.part
    numbers = [number for move in moves.moves for number in (move.old, move.new) if number is not None]
    scale = choose_scale(moves.link, size.width, *numbers, left=columns.ruler_at)
    rows = [_set_label(move.label, columns, _figures_begin(moves, columns, measure), measure) for move in moves.moves]
    tops = [_ABOVE * part]
    for row in rows:
        tops.append(tops[-1] + _ROW * part + row.deeper)
    axis = tops[-1] + _UNDER * part
    baseline = axis + 1.3 * size.text
    shapes: list[Shape] = [*draw_body(scale, 0.0, axis, size, wash=True)]
    for move, row, top in zip(moves.moves, rows, tops, strict=False):
        middle = top + 0.5 * _ROW * part
        shapes += place_row(row, middle + 0.34 * columns.base)
        shapes += _figures(move, moves, columns, middle + 0.34 * columns.base, measure)
        shapes += _dots(scale, move, middle, size)
    shapes += draw_axis_figures(scale, baseline, size, measure)
    legend = list(_legend(moves, columns, baseline, measure))
    lowest = max(text.y for text in legend)
    return Figure(
        width=columns.width,
        height=max(baseline + (1.6 if scale.wide else 0.3) * size.text, lowest + 0.3 * size.text),
        shapes=(*shapes, *legend),
        sentence=_sentence(moves, scale),
        table=_table(moves),
        baseline=baseline,
    )


def pair_words(old: float | None, new: float | None) -> tuple[str, str]:
    """Both probabilities in percent without the sign, "–" for no number.

    With one decimal, or with as many as tell the two apart; with one where even six do not.
    """
    if old is None or new is None:
        return _bare(old, 1), _bare(new, 1)
    if old != new:
        for decimals in range(1, MOST_DECIMALS + 1):
            before, after = _bare(old, decimals), _bare(new, decimals)
            if before != after:
                return before, after
    return _bare(old, 1), _bare(new, 1)


def _bare(number: float | None, decimals: int) -> str:
    return _NO_NUMBER if number is None else percent(number, decimals=decimals).removesuffix(f"{NARROW_SPACE}%")


def _ends(moves: Moves, measure: Measure, size: float) -> tuple[float, float]:
    """How wide the longest old figure and the longest new one are, the latter with its sign."""
    pairs = [pair_words(move.old, move.new) for move in moves.moves]
    before = max((measure(old, size) for old, _ in pairs), default=0.0)
    after = max((measure(_signed(new), size) for _, new in pairs), default=0.0)
    return before, after


def _signed(figure: str) -> str:
    return figure if figure == _NO_NUMBER else f"{figure}{NARROW_SPACE}%"


def _figures_begin(moves: Moves, columns: Columns, measure: Measure) -> float:
    before, after = _ends(moves, measure, columns.base)
    return columns.figures_end - after - before - measure(_ARROW, columns.base) - 2 * _AROUND * columns.ruler.part


def _set_label(label: str, columns: Columns, end: float, measure: Measure) -> SetRow:
    """The label in as many lines as it needs left of the figures."""
    row = set_row(RowWords(label, ""), replace(columns, figures_end=end), measure)
    return SetRow(tuple(text for text in row.texts if text.text), row.deeper)


def _figures(move: Move, moves: Moves, columns: Columns, y: float, measure: Measure) -> Iterator[Text]:
    """The old figure, an arrow, the new figure: each of them under those of the other rows."""
    old, new = pair_words(move.old, move.new)
    _, after = _ends(moves, measure, columns.base)
    gap = _AROUND * columns.ruler.part
    arrow = columns.figures_end - after - gap
    # in the order in which they are to be read, also back from a PDF
    yield Text(arrow - measure(_ARROW, columns.base) - gap, y, old, columns.base, anchor=Anchor.END)
    yield Text(arrow, y, _ARROW, columns.base, tone=Tone.SOFT, anchor=Anchor.END)
    yield Text(columns.figures_end, y, _signed(new), columns.base, anchor=Anchor.END)


def _dots(scale: Scale, move: Move, middle: float, size: RulerSize) -> Iterator[Shape]:
    """Both dots, joined by a thin line where they stand apart; one beyond the scale has a pointer beside its end."""
    part = size.part
    if move.old is not None and move.new is not None:
        old, new = scale.position(move.old), scale.position(move.new)
        towards = 1.0 if new > old else -1.0
        if abs(new - old) > (_OPEN + _FILLED) * part:
            yield Line(old + towards * _OPEN * part, middle, new, middle, size.line, Tone.ACCENT)
    if move.old is not None:
        outline = _OPEN_LINE * size.line
        x, radius = scale.position(move.old), _OPEN * part - outline / 2
        yield Dot(x, middle, radius, outline=Tone.ACCENT, line=outline)
    if move.new is not None:
        yield Dot(scale.position(move.new), middle, _FILLED * part, fill=Tone.ACCENT)
    for side in sorted({scale.side(number) for number in (move.old, move.new) if number is not None} - {0}):
        end = scale.left if side < 0 else scale.left + scale.width
        yield pointer(end + side * 13.0 * part, middle, side * 6.0 * part, Tone.ACCENT)


def _legend(moves: Moves, columns: Columns, baseline: float, measure: Measure) -> Iterator[Text]:
    """Which dot is which and the unit of the axis, in one line or, where that is too narrow, under each other."""
    size = columns.ruler.text
    words = f"open {moves.old_name}, filled {moves.new_name}"
    room = columns.figures_end - measure(moves.caption, size) - 2 * _AROUND * columns.ruler.part
    row = set_row(RowWords(words, ""), replace(columns, base=size, figures_end=columns.figures_end), measure)
    lines = [text for text in row.texts if text.text]
    lower = 0.0 if len(lines) == 1 and measure(words, size) <= room else 1.3 * size
    yield Text(columns.figures_end, baseline, moves.caption, size, tone=Tone.SOFT, anchor=Anchor.END)
    for line in lines:
        yield Text(line.x, line.y + baseline + lower, line.text, size, tone=Tone.SOFT)


def _said(number: float | None, figure: str) -> str:
    return "no number" if number is None else _signed(figure)


def _change(move: Move) -> str:
    """Both figures in words; that they are the same to the last bit, or as far as is written."""
    old, new = pair_words(move.old, move.new)
    words = f"{_said(move.old, old)} to {_said(move.new, new)}"
    if old != new or move.old is None:
        return words
    return f"{words}, {'the same' if move.old == move.new else f'the same to {MOST_DECIMALS} decimals'}"


def _sentence(moves: Moves, scale: Scale) -> str:
    """The rows in words for a screen reader."""
    rows = "; ".join(f"{move.label} {_change(move)}" for move in moves.moves)
    count = count_words(len(moves.moves), "patient")
    which = f"open dots {moves.old_name}, filled dots {moves.new_name}"
    return f"{count} on a scale of {scale.words}, {which}: {rows}" if moves.moves else "No patient to show"


def _table(moves: Moves) -> tuple[tuple[str, ...], ...]:
    """A heading, and for each row who it is and both figures."""
    heading = (f"From {moves.old_name} to {moves.new_name}", moves.caption)
    return (heading, *((move.said or move.label, _change(move)) for move in moves.moves))
