"""Tables set as strips: cells of text, typed values, marks of findings and range lines."""

from collections.abc import Iterator
from dataclasses import replace

from clinicalc.report.contents import Cell, Column, Mark, MarksCell, RangeCell, Row, Table, TypedCell
from clinicalc.report.fonts import Lettering
from clinicalc.report.range_line import draw_range
from clinicalc.report.shapes import Anchor, Line, Rect, Shape, Text, Tone, move
from clinicalc.report.strips import (
    CAPTION,
    PLAIN,
    SEMIBOLD,
    SMALL,
    SOFT,
    STRONG,
    WIDTH,
    Strip,
    hold_together,
    join_beside,
    set_lines,
)

_ABOVE, _BELOW, _RULE_AT, _GAP = 1.5, 2.3, 1.8, 6.0
_MARK_SIDE = 13.0
_RANGE_TEXT = 9.75
"""Size of the figures of a range line, of which the line's own width follows."""


def set_table(lettering: Lettering, table: Table) -> list[Strip]:
    """The headings and one strip a row, each row closed by a rule."""
    head = [replace(strip, keep=True) for strip in (*_headings(lettering, table.columns), _ruled())]
    strips, ends = list(head), []
    for row in table.rows:
        strips += [replace(strip, head=tuple(head)) for strip in _row(lettering, table.columns, row)]
        ends.append(len(strips) - 1)
    if len(ends) > 2:
        strips[ends[-2]] = replace(strips[ends[-2]], keep=True)  # the last row never goes over alone
    return strips


def set_mark(lettering: Lettering, mark: Mark, left: float) -> tuple[Shape, ...]:
    """The number of a finding: on a filled square, in an outlined one, or over a short line, by its weight."""
    digits = lettering.width(mark.number, SMALL, SEMIBOLD)
    wide, top = max(_MARK_SIDE, digits + 6), (PLAIN.height - _MARK_SIDE) / 2
    bottom, middle = top + _MARK_SIDE, left + wide / 2
    shape: Shape
    if mark.weight == 0:
        shape = Rect(left, top, wide, _MARK_SIDE, fill=Tone.INK, radius=2)
    elif mark.weight == 1:
        shape = Rect(left + 0.6, top + 0.6, wide - 1.2, _MARK_SIDE - 1.2, outline=Tone.INK, line=1.2, radius=1.5)
    else:
        shape = Line(middle - 5, bottom - 0.4, middle + 5, bottom - 0.4, 0.8, Tone.INK)
    tone = Tone.SHEET if mark.weight == 0 else Tone.INK
    baseline = (top + bottom + 0.66 * SMALL) / 2
    return (shape, Text(middle - digits / 2, baseline, mark.number, SMALL, SEMIBOLD, tone))


def _headings(lettering: Lettering, columns: tuple[Column, ...]) -> list[Strip]:
    """The headings side by side, each as wide as the columns without one after it let it be; none where all are ""."""
    named = [column for column in columns if column.heading]
    if not named:
        return []
    ends = [*(column.left - _GAP for column in named[1:]), WIDTH]
    set_apart = [_heading(lettering, column, end) for column, end in zip(named, ends, strict=True)]
    return join_beside(set_apart)


def _heading(lettering: Lettering, column: Column, end: float) -> list[Strip]:
    if not column.at_end:
        return set_lines(lettering, column.heading, column.left, end - column.left, CAPTION)
    right = column.left + column.width
    text = Text(right, CAPTION.baseline, column.heading, SMALL, tone=CAPTION.tone, anchor=Anchor.END)
    return [Strip(CAPTION.height, (text,))]


def _row(lettering: Lettering, columns: tuple[Column, ...], row: Row) -> list[Strip]:
    cells = [_cell(lettering, cell, column) for column, cell in zip(columns, row.cells, strict=True)]
    return hold_together([Strip(_ABOVE), *join_beside(cells), _ruled()])


def _ruled() -> Strip:
    return Strip(_BELOW, (Line(0, _RULE_AT, WIDTH, _RULE_AT, 0.6, Tone.RULE),))


def _cell(lettering: Lettering, cell: Cell, column: Column) -> list[Strip]:
    match cell:
        case str():
            return set_lines(lettering, cell, column.left, column.width)
        case TypedCell():
            return _typed(lettering, cell, column)
        case MarksCell():
            return list(_marks(lettering, cell, column))
        case RangeCell():
            return [_range(lettering, cell, column)]


def _typed(lettering: Lettering, cell: TypedCell, column: Column) -> list[Strip]:
    """The value in semibold, and softer what stands after it: on the same line as far as there is room."""
    if not cell.value:
        return set_lines(lettering, cell.after, column.left, column.width, SOFT)
    strong = set_lines(lettering, cell.value, column.left, column.width, STRONG)
    if len(strong) > 1:
        return [*strong, *set_lines(lettering, cell.after, column.left, column.width, SOFT)]
    wide = lettering.width(cell.value, STRONG.size, SEMIBOLD)
    # a space begins the softer text, so that both are read back as two words
    beside, below = _part(lettering, f" {cell.after}", column.width - wide)
    after = Text(column.left + wide, SOFT.baseline, beside, SOFT.size, tone=SOFT.tone)
    first = replace(strong[0], shapes=(*strong[0].shapes, *([after] if beside.strip() else [])))
    return [first, *(set_lines(lettering, below, column.left, column.width, SOFT) if below else [])]


def _part(lettering: Lettering, text: str, room: float) -> tuple[str, str]:
    """The words that go into a room, and those that do not."""
    words = text.split(" ")
    fits = len(words)
    while fits and lettering.width(" ".join(words[:fits]), SOFT.size) > room:
        fits -= 1
    return " ".join(words[:fits]), " ".join(words[fits:])


def _marks(lettering: Lettering, cell: MarksCell, column: Column) -> Iterator[Strip]:
    for mark in cell.marks:
        yield Strip(PLAIN.height, set_mark(lettering, mark, column.left))


def _range(lettering: Lettering, cell: RangeCell, column: Column) -> Strip:
    figure = draw_range(cell.span, cell.value, lettering.width, inside=cell.inside, size=_RANGE_TEXT)
    left = column.left + column.width - figure.width
    return Strip(PLAIN.height, move(figure.shapes, left, PLAIN.baseline - figure.baseline))
