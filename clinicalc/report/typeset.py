"""From contents to strips of page: each strip is one line high and may be parted from the next unless it says no."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from clinicalc.report.contents import Block, Fact, FactList, Prose, Remark, RemarkList, Result, Section, Sheet, Table
from clinicalc.report.contents import SignatureLine as Signature
from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Line, Rect, Shape, Text, Tone
from clinicalc.report.typefaces import Weight

WIDTH = 510.0
"""Points between the margins of a page."""
BASE, SMALL, TITLE, LABEL, FIGURE, SIGN, WORDS = 10.0, 9.0, 11.5, 18.0, 56.0, 22.0, 30.0
"""Type sizes in points."""
LEADING = 1.36
"""Height of a line in type sizes."""
NAME_WIDTH, TEXT_LEFT = 120.0, 132.0
RESULT_LEFT = 198.0
LONGEST_WHOLE = 12
"""Strips; a paragraph or table row of more may be parted by a page break, but for its first and last two lines."""
HIGHEST_WHOLE = 560.0
"""Points; a section higher than this is not held together."""

SEMIBOLD = Weight.SEMIBOLD


@dataclass(frozen=True, slots=True)
class Strip:
    """A strip across the page, shapes measured from its top left corner.

    `keep` holds it to the strip after it; `head` is repeated above it where it comes first on a page.
    """

    height: float
    shapes: tuple[Shape, ...] = ()
    keep: bool = False
    head: tuple["Strip", ...] = ()


@dataclass(frozen=True, slots=True)
class Style:
    """How a text is set."""

    size: float = BASE
    weight: Weight = Weight.REGULAR
    tone: Tone = Tone.INK

    @property
    def height(self) -> float:
        """The height of a line."""
        return self.size * LEADING

    @property
    def baseline(self) -> float:
        """From the top of a line down to its baseline, so that capitals (0.66 of the size) stand in the middle."""
        return (self.height + 0.66 * self.size) / 2


PLAIN, STRONG, SOFT = Style(), Style(weight=SEMIBOLD), Style(tone=Tone.SOFT)
CAPTION = Style(SMALL, tone=Tone.SOFT)


def set_lines(lettering: Lettering, text: str, left: float, width: float, style: Style = PLAIN) -> list[Strip]:
    """A paragraph as one strip a line."""
    lines = lettering.wrap(text, width, style.size, style.weight)
    return [
        Strip(style.height, (Text(left, style.baseline, line, style.size, style.weight, style.tone),)) for line in lines
    ]


def set_sheet(lettering: Lettering, sheet: Sheet) -> list[Strip]:
    """Everything between head and foot, in reading order."""
    strips = [
        *set_lines(lettering, sheet.label, 0, WIDTH, Style(LABEL, SEMIBOLD)),
        *_ends(lettering, sheet.person, sheet.assessed),
        Strip(12),
        *_result(lettering, sheet.result),
        Strip(8),
        *_facts(lettering, sheet.facts),
    ]
    for section in sheet.sections:
        strips += _section(lettering, section)
    return strips


def _ends(lettering: Lettering, left: str, right: str) -> list[Strip]:
    """Two texts on one line; the left one goes on below where it is long, the right one is short."""
    style, wide = Style(11), lettering.width(right, BASE)
    lines = set_lines(lettering, left, 0, WIDTH - wide - 16, style)
    end = Text(WIDTH - wide, style.baseline, right, BASE, tone=Tone.SOFT)
    return [replace(lines[0], shapes=(*lines[0].shapes, end)), *lines[1:]]


def _result(lettering: Lettering, result: Result) -> list[Strip]:
    """The number at the left, hanging beside the lines about it at the right."""
    size = FIGURE if result.sign else WORDS
    baseline = 0.66 * size + 6
    tone = Tone.SOFT if result.sign else Tone.INK  # soft: the file is not vetted
    weight = Weight.REGULAR if result.sign else SEMIBOLD
    shapes: list[Shape] = [Text(0, baseline, result.figure.rstrip(), size, weight, tone)]
    if result.sign:
        after = lettering.width(result.figure.rstrip(), size) + 5
        shapes.append(Text(after, baseline, result.sign, SIGN, tone=tone))
    width = WIDTH - RESULT_LEFT
    right = set_lines(lettering, result.outcome, RESULT_LEFT, width, Style(TITLE, SEMIBOLD))
    for sentence in result.sentences:
        right += [Strip(4), *set_lines(lettering, sentence, RESULT_LEFT, width, Style(11))]
    right[0] = replace(right[0], shapes=(*shapes, *right[0].shapes))
    short = baseline + 10 - sum(strip.height for strip in right)
    return _whole([*right, *([Strip(short)] if short > 0 else [])])


def _section(lettering: Lettering, section: Section) -> list[Strip]:
    style = Style(TITLE, SEMIBOLD)
    end = lettering.width(section.heading, style.size, SEMIBOLD) + 10
    middle = style.height / 2
    heading = Strip(
        style.height + 3,
        (
            Text(0, style.baseline, section.heading, style.size, SEMIBOLD),
            Line(end, middle, WIDTH, middle, 0.75, Tone.RULE),
        ),
        keep=True,
    )
    body = [strip for block in section.blocks for strip in set_block(lettering, block)]
    strips = [Strip(14, keep=True), heading, *body]
    whole = section.whole and sum(strip.height for strip in strips) <= HIGHEST_WHOLE
    return [*(replace(strip, keep=True) for strip in strips[:-1]), strips[-1]] if whole else strips


def set_block(lettering: Lettering, block: Block) -> list[Strip]:
    """One block as strips."""
    match block:
        case FactList():
            return _facts(lettering, block)
        case RemarkList():
            return [strip for remark in block.remarks for strip in _remark(lettering, remark)]
        case Table():
            return _table(lettering, block)
        case Prose():
            return [s for text in block.paragraphs for s in _spaced(set_lines(lettering, text, 0, WIDTH), 3)]
        case Signature():
            return [_signature(block)]


def _facts(lettering: Lettering, facts: FactList) -> list[Strip]:
    left = RESULT_LEFT if facts.key else TEXT_LEFT
    return [strip for fact in facts.facts for strip in _fact(lettering, fact, left)]


def _fact(lettering: Lettering, fact: Fact, left: float) -> list[Strip]:
    names = set_lines(lettering, fact.name, 0, NAME_WIDTH, SOFT)
    texts: list[Strip] = []
    for place, paragraph in enumerate(fact.paragraphs):
        style = STRONG if fact.strong and place == 0 else PLAIN
        texts += [*([Strip(2)] if place else []), *set_lines(lettering, paragraph, left, WIDTH - left, style)]
    return _spaced(_beside([names, texts]), 3)


def _remark(lettering: Lettering, remark: Remark) -> list[Strip]:
    """The number in its mark (filled, outlined or underlined: the weight by the amount of ink), the grade, the text."""
    side, top = 13.0, 0.5
    digit = lettering.width(remark.number, SMALL, SEMIBOLD)
    wide = max(side, digit + 6)
    tone = Tone.PAPER if remark.weight == 0 else Tone.INK
    number = Text((wide - digit) / 2, PLAIN.baseline, remark.number, SMALL, SEMIBOLD, tone)
    mark: Shape
    if remark.weight == 0:
        mark = Rect(0, top, wide, side, fill=Tone.INK)
    elif remark.weight == 1:
        mark = Rect(0.5, top, wide - 1, side, outline=Tone.INK, line=1.2)
    else:
        mark = Line(2, top + side, wide - 2, top + side, 0.8, Tone.INK)
    grade = Text(24, PLAIN.baseline, remark.grade, BASE, SEMIBOLD)
    marks = [Strip(PLAIN.height, (mark, number, grade))]
    return _spaced(_beside([marks, set_lines(lettering, remark.message, 72, WIDTH - 72)]), 4)


def _table(lettering: Lettering, table: Table) -> list[Strip]:
    captions = [set_lines(lettering, c.heading, c.left, c.width, CAPTION) for c in table.columns]
    head = [*_beside(captions), Strip(2.5, (_ruled(1.0),))]
    head = [replace(strip, keep=True) for strip in head]
    strips, ends = list(head), []
    for row in table.rows:
        cells = [
            set_lines(lettering, cell, column.left, column.width, STRONG if column.strong else PLAIN)
            for column, cell in zip(table.columns, row.cells, strict=True)
        ]
        lines = [Strip(2.5), *_beside(cells), Strip(3.0, (_ruled(2.5),))]
        strips += [replace(strip, head=tuple(head)) for strip in _whole(lines)]
        ends.append(len(strips) - 1)
    if len(ends) > 2:
        strips[ends[-2]] = replace(strips[ends[-2]], keep=True)  # the last row never goes over alone
    return strips


def _ruled(y: float) -> Line:
    return Line(0, y, WIDTH, y, 0.6, Tone.RULE)


def _signature(block: Signature) -> Strip:
    lefts = (0.0, 206.0, 402.0)
    rights = (194.0, 390.0, WIDTH)
    shapes: list[Shape] = []
    for left, right, caption in zip(lefts, rights, block.captions, strict=True):
        shapes.append(Line(left, 40, right, 40, 0.8, Tone.INK))
        shapes.append(Text(left, 52, caption, SMALL, tone=Tone.SOFT))
    return Strip(56, tuple(shapes))


def _beside(columns: Sequence[Sequence[Strip]]) -> list[Strip]:
    """Columns side by side: one strip that is read column by column, or where they are long one strip a line."""
    rows = max(len(column) for column in columns)
    if rows <= LONGEST_WHOLE:
        return [_joined(columns)]
    return [_joined([column[place : place + 1] for column in columns]) for place in range(rows)]


def _joined(columns: Sequence[Sequence[Strip]]) -> Strip:
    """All strips of all columns as one, the highest column giving the height."""
    shapes: list[Shape] = []
    height = 0.0
    for column in columns:
        y = 0.0
        for strip in column:
            shapes += [shape.moved(0, y) for shape in strip.shapes if not _is_empty(shape)]
            y += strip.height
        height = max(height, y)
    return Strip(height, tuple(shapes))


def _is_empty(shape: Shape) -> bool:
    return isinstance(shape, Text) and not shape.text


def _spaced(strips: list[Strip], after: float) -> list[Strip]:
    """A paragraph held together as long as it is short, with white below it."""
    return _whole([*strips, Strip(after)])


def _whole(strips: list[Strip]) -> list[Strip]:
    """The strips held together where they are few; else only the first and the last two lines are."""
    last = len(strips) - 1
    held = range(last) if len(strips) <= LONGEST_WHOLE else (0, 1, last - 2, last - 1)
    return [replace(strip, keep=strip.keep or place in held) for place, strip in enumerate(strips)]
