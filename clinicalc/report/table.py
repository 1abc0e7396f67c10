"""Tables set as strips: cells of text, typed values, marks of findings and range lines."""

from collections.abc import Iterator, Sequence
from dataclasses import replace

from clinicalc.report.contents import (
    NOTHING,
    Cell,
    Column,
    Mark,
    MarksCell,
    NotedCell,
    RangeCell,
    Row,
    RowKind,
    Table,
    TypedCell,
)
from clinicalc.report.fonts import Lettering
from clinicalc.report.range_line import draw_range
from clinicalc.report.shapes import Anchor, Line, Rect, Shape, Text, Tone, move
from clinicalc.report.strips import (
    CAPTION,
    PLAIN,
    SEMIBOLD,
    SMALL,
    SMALL_PRINT,
    WIDTH,
    Strip,
    Style,
    hold_together,
    join_beside,
    join_columns,
    part_words,
    set_lines,
)

_ABOVE, _BELOW, _RULE_AT, _GAP = 1.5, 2.3, 1.8, 6.0
_MARK_SIDE = 13.0
_RANGE_TEXT = 9.75
"""Size of the figures of a range line, of which the line's own width follows."""
_LONGEST_APART = 24
"""Rows; more than these stand below each other, so that pages can be broken between them."""
_NUMBER_PLACES = ((0.0, 106.0), (112.0, 76.0), (192.0, 54.0), (246.0, 13.0), (265.0, 90.0))
_ANSWER_PLACES = ((370.0, 76.0), (450.0, 40.0), (WIDTH, 0.0), (496.0, 14.0), (WIDTH, 0.0))
_NUMBERS_END = 355.0


def set_table(lettering: Lettering, table: Table, apart: Style = PLAIN) -> list[Strip]:
    """The headings and one strip a row, each closed by a rule; kinds `apart` in that type where the table says so."""
    if table.kinds_apart and len(table.rows) <= _LONGEST_APART and len({row.kind for row in table.rows}) > 1:
        return hold_together(list(_kinds_apart(lettering, table, apart)))
    head = [replace(strip, keep=True) for strip in (*_headings(lettering, table.columns), _ruled())]
    style = SMALL_PRINT if table.small else PLAIN
    strips, ends = list(head), []
    for row in table.rows:
        strips += [replace(strip, head=tuple(head)) for strip in _row(lettering, table.columns, row, style)]
        strips[-1] = replace(strips[-1], keep=row.keep)
        ends.append(len(strips) - 1)
    if len(ends) > 2:
        strips[ends[-2]] = replace(strips[ends[-2]], keep=True)  # the last row never goes over alone
    return strips


def _kinds_apart(lettering: Lettering, table: Table, style: Style) -> Iterator[Strip]:
    """Questions across the page, their answers in the column of the answers; then numbers, and answers at their right.

    Everything is read column by column: a question, then every number with its range, then every answer.
    """
    rows = {kind: [row for row in table.rows if row.kind is kind] for kind in RowKind}
    numbers, answers = (_placed(table.columns, places) for places in (_NUMBER_PLACES, _ANSWER_PLACES))
    question = (replace(table.columns[0], left=0.0, width=answers[1].left - 12), *answers[1:])
    for row in rows[RowKind.QUESTION]:
        yield from _row(lettering, question, _in_one_cell(row), style)
    left = [*_headings(lettering, numbers, _NUMBERS_END), _ruled(0.0, _NUMBERS_END)]
    left += [s for row in rows[RowKind.NUMBER] for s in _row(lettering, numbers, row, style, 0.0, _NUMBERS_END)]
    start = answers[0].left
    right = [s for row in rows[RowKind.ANSWER] for s in _row(lettering, answers, _in_one_cell(row), style, start)]
    yield join_columns([left, right])


def _in_one_cell(row: Row) -> Row:
    """An answer followed by what was used in its place; it says itself where that is nothing."""
    label, typed, used, marks, span = row.cells
    if isinstance(typed, TypedCell) and isinstance(used, str) and used not in ("", NOTHING):
        typed = replace(typed, after=f"{typed.after} {used}".strip())
    return replace(row, cells=(label, typed, "", marks, span))


def _placed(columns: Sequence[Column], places: Sequence[tuple[float, float]]) -> tuple[Column, ...]:
    """The columns at other places, each a left edge and a width."""
    return tuple(replace(column, left=left, width=width) for column, (left, width) in zip(columns, places, strict=True))


def set_mark(lettering: Lettering, mark: Mark, left: float, style: Style = PLAIN) -> tuple[Shape, ...]:
    """The number of a finding: on a filled square, in an outlined one, or over a short line, by its weight."""
    digits = lettering.width(mark.number, SMALL, SEMIBOLD)
    side = min(_MARK_SIDE, style.height)
    wide, top = max(side, digits + 6), (style.height - side) / 2
    bottom, middle = top + side, left + wide / 2
    shape: Shape
    if mark.weight == 0:
        shape = Rect(left, top, wide, side, fill=Tone.INK, radius=2)
    elif mark.weight == 1:
        shape = Rect(left + 0.6, top + 0.6, wide - 1.2, side - 1.2, outline=Tone.INK, line=1.2, radius=1.5)
    else:
        shape = Line(middle - 5, bottom - 0.4, middle + 5, bottom - 0.4, 0.8, Tone.INK)
    tone = Tone.SHEET if mark.weight == 0 else Tone.INK
    baseline = (top + bottom + 0.66 * SMALL) / 2
    return (shape, Text(middle - digits / 2, baseline, mark.number, SMALL, SEMIBOLD, tone))


def _headings(lettering: Lettering, columns: tuple[Column, ...], end: float = WIDTH) -> list[Strip]:
    """The headings side by side, each as wide as the columns without one after it let it be; none where all are ""."""
    named = [column for column in columns if column.heading]
    if not named:
        return []
    ends = [*(column.left - _GAP for column in named[1:]), end]
    set_apart = [_heading(lettering, column, until) for column, until in zip(named, ends, strict=True)]
    return join_beside(set_apart)


def _heading(lettering: Lettering, column: Column, end: float) -> list[Strip]:
    if not column.at_end:
        return set_lines(lettering, column.heading, column.left, end - column.left, CAPTION)
    return _set_right(set_lines(lettering, column.heading, column.left, column.width, CAPTION), column)


def _set_right(strips: list[Strip], column: Column) -> list[Strip]:
    """The same lines, ending where the column ends."""
    right = column.left + column.width
    return [
        replace(
            strip,
            shapes=tuple(
                replace(shape, x=right, anchor=Anchor.END) if isinstance(shape, Text) else shape
                for shape in strip.shapes
            ),
        )
        for strip in strips
    ]


def _row(
    lettering: Lettering,
    columns: Sequence[Column],
    row: Row,
    style: Style = PLAIN,
    start: float = 0.0,
    end: float = WIDTH,
) -> list[Strip]:
    widths = _widths(columns, row, end)
    style = replace(style, weight=SEMIBOLD) if row.marked else style
    cells = [
        _cell(lettering, cell, column if width == column.width else replace(column, width=width), style)
        for column, cell, width in zip(columns, row.cells, widths, strict=True)
    ]
    strips = hold_together([Strip(_ABOVE), *join_beside(cells), _ruled(start, end)])
    return [_on_wash(strip, start, end) for strip in strips] if row.marked else strips


def _on_wash(strip: Strip, start: float, end: float) -> Strip:
    return replace(strip, shapes=(Rect(start, 0.0, end - start, strip.height, fill=Tone.WASH), *strip.shapes))


def _widths(columns: Sequence[Column], row: Row, end: float) -> list[float]:
    """How wide each cell may be: as its column, and on over empty cells after it."""
    widths = []
    for place, column in enumerate(columns):
        more = zip(columns[place + 1 :], row.cells[place + 1 :], strict=True)
        next_left = next((other.left - _GAP for other, cell in more if not _is_empty(cell)), end)
        widths.append(column.width if column.at_end else max(column.width, next_left - column.left))
    return widths


def _is_empty(cell: Cell) -> bool:
    return cell == "" or cell == MarksCell(())


def _ruled(start: float = 0.0, end: float = WIDTH) -> Strip:
    return Strip(_BELOW, (Line(start, _RULE_AT, end, _RULE_AT, 0.6, Tone.RULE),))


def _cell(lettering: Lettering, cell: Cell, column: Column, style: Style) -> list[Strip]:
    match cell:
        case str():
            lines = set_lines(lettering, cell, column.left, column.width, style) if cell else []
            return _set_right(lines, column) if column.at_end else lines
        case TypedCell():
            return _typed(lettering, cell, column, style)
        case NotedCell():
            noted = _noted(lettering, cell, column, style)
            return _set_right(noted, column) if column.at_end else noted
        case MarksCell():
            return list(_marks(lettering, cell, column, style))
        case RangeCell():
            return [_range(lettering, cell, column, style)]


def _typed(lettering: Lettering, cell: TypedCell, column: Column, style: Style) -> list[Strip]:
    """The value in semibold, and softer what stands after it: on the same line as far as there is room."""
    soft, firm = replace(style, tone=Tone.SOFT), replace(style, weight=SEMIBOLD)
    if not cell.value:
        return set_lines(lettering, cell.after, column.left, column.width, soft)
    strong = set_lines(lettering, cell.value, column.left, column.width, firm)
    if len(strong) > 1:
        return [*strong, *(set_lines(lettering, cell.after, column.left, column.width, soft) if cell.after else [])]
    wide = lettering.width(cell.value, firm.size, SEMIBOLD)
    # a space begins the softer text, so that both are read back as two words
    beside, below = part_words(lettering, f" {cell.after}", column.width - wide, soft.size)
    after = Text(column.left + wide, soft.baseline, beside, soft.size, tone=soft.tone)
    first = replace(strong[0], shapes=(*strong[0].shapes, *([after] if beside.strip() else [])))
    return [first, *(set_lines(lettering, below, column.left, column.width, soft) if below else [])]


def _noted(lettering: Lettering, cell: NotedCell, column: Column, style: Style) -> list[Strip]:
    """The text, and each note under it in soft letters."""
    soft = replace(style, tone=Tone.SOFT)
    notes = (set_lines(lettering, note, column.left, column.width, soft) for note in cell.notes)
    return [
        *set_lines(lettering, cell.text, column.left, column.width, style),
        *(line for note in notes for line in note),
    ]


def _marks(lettering: Lettering, cell: MarksCell, column: Column, style: Style) -> Iterator[Strip]:
    """The marks one below the other, as narrow as their column is."""
    for mark in cell.marks:
        yield Strip(style.height, set_mark(lettering, mark, column.left, style))


def _range(lettering: Lettering, cell: RangeCell, column: Column, style: Style) -> Strip:
    size = min(_RANGE_TEXT, 0.95 * style.size)
    figure = draw_range(cell.span, cell.value, lettering.width, inside=cell.inside, size=size)
    left = column.left + column.width - figure.width
    return Strip(style.height, move(figure.shapes, left, style.baseline - figure.baseline))
