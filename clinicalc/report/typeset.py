"""From contents to strips of page: each strip is one line high and may be parted from the next unless it says no."""

from dataclasses import dataclass, replace

from clinicalc.report.contents import (
    Block,
    Fact,
    FactList,
    Pair,
    Prose,
    Remark,
    RemarkList,
    Section,
    Table,
)
from clinicalc.report.contents import SignatureLine as Signature
from clinicalc.report.figure_blocks import RESULT_LEFT, set_figure
from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Line, Shape, Text, Tone, move
from clinicalc.report.strips import (
    BASE,
    PLAIN,
    SEMIBOLD,
    SMALL,
    SMALL_PRINT,
    SOFT,
    STRONG,
    TABLE,
    WIDTH,
    Strip,
    Style,
    height_of,
    hold_together,
    join_beside,
    join_columns,
    part_words,
    set_lines,
)
from clinicalc.report.table import set_mark, set_table

TITLE = 11.5
"""Type size of headings in points."""
NAME_WIDTH, TEXT_LEFT = 120.0, 132.0
HIGHEST_WHOLE = 560.0
"""Points; a section higher than this is not held together."""
HIGHEST_PAIR = 330.0
"""Points; sections of a pair that are higher stand below each other in usual type."""
_BETWEEN, _NARROWEST = 20.0, 212.0
_SIGNED = 160
"""Letters in small type that would be as high as the places to sign."""
_GRADE_LEFT, _REMARK_LEFT = 21.0, 72.0
_LINE_TO_WRITE_ON = 22.0


@dataclass(frozen=True, slots=True)
class SectionStyle:
    """How sections are set: the heading's size, the text under it, the white above the heading and after a text.

    `grows` is how much more white there may be above, `table` and `small` are the type of values in short tables and
    of pairs; sections narrower than the page put names before their texts.
    """

    heading: float = TITLE
    text: Style = PLAIN
    above: float = 13.0
    after: float = 3.0
    grows: float = 0.0
    table: Style = TABLE
    small: Style = SMALL_PRINT
    width: float = WIDTH


def set_pair(lettering: Lettering, pair: Pair, style: SectionStyle = SectionStyle()) -> list[Strip]:
    """Two sections side by side in small type; in usual type below each other where one of them is long."""
    beside = replace(style, text=style.small, above=0.0, after=2.0, grows=0.0)
    widths = _pair_widths(pair)
    left, right = (
        set_section(lettering, section, replace(beside, width=width))
        for section, width in zip((pair.left, pair.right), widths, strict=True)
    )
    if max(height_of(left), height_of(right)) > HIGHEST_PAIR:
        apart = replace(style, text=PLAIN)
        return [strip for part in (pair.left, pair.right) for strip in set_section(lettering, part, apart)]
    moved = [replace(strip, shapes=move(strip.shapes, WIDTH - widths[1], 0)) for strip in right]
    return [Strip(style.above, keep=True, grows=style.grows), join_columns([left, moved])]


def _pair_widths(pair: Pair) -> tuple[float, float]:
    """Widths of both by how much stands in them, so that they end about equally low."""
    left, right = (sum(map(_letters, section.blocks)) for section in (pair.left, pair.right))
    free = WIDTH - _BETWEEN
    first = min(max(round(free * left / max(left + right, 1)), _NARROWEST), free - _NARROWEST)
    return first, free - first


def _letters(block: Block) -> int:
    match block:
        case FactList():
            return sum(len(fact.name) + sum(map(len, fact.paragraphs)) for fact in block.facts)
        case Prose():
            return sum(map(len, block.paragraphs))
        case _:
            return _SIGNED


def set_section(lettering: Lettering, section: Section, style: SectionStyle = SectionStyle()) -> list[Strip]:
    """A heading with a rule to the right edge, and what stands under it."""
    body = [strip for block in section.blocks for strip in set_block(lettering, block, style)]
    strips = [*set_heading(lettering, section.heading, style), *body]
    whole = section.whole and sum(strip.height for strip in strips) <= HIGHEST_WHOLE
    return [*(replace(strip, keep=True) for strip in strips[:-1]), *strips[-1:]] if whole else strips


def set_heading(lettering: Lettering, text: str, style: SectionStyle = SectionStyle()) -> list[Strip]:
    """The white above a heading and the heading itself, held to what follows."""
    letters = Style(style.heading, SEMIBOLD)
    end = lettering.width(text, letters.size, SEMIBOLD) + 10
    middle = letters.height / 2
    heading = Text(0, letters.baseline, text, letters.size, SEMIBOLD)
    rule = Line(end, middle, style.width, middle, 0.75, Tone.RULE)
    return [
        Strip(style.above, keep=True, grows=style.grows),
        Strip(letters.height + 3, (heading, rule), keep=True),
    ]


def set_block(lettering: Lettering, block: Block, style: SectionStyle = SectionStyle()) -> list[Strip]:
    """One block as strips."""
    match block:
        case FactList():
            if style.width < WIDTH:
                return [strip for fact in block.facts for strip in _run_in(lettering, fact, style)]
            return set_facts(lettering, block)
        case RemarkList():
            return [strip for remark in block.remarks for strip in _remark(lettering, remark, style)]
        case Table():
            return set_table(lettering, block, style.table)
        case Prose():
            lines = (set_lines(lettering, text, 0, style.width, style.text) for text in block.paragraphs)
            strips = [strip for paragraph in lines for strip in _spaced(paragraph, style.after)]
            return [*strips[:-1], *(replace(strip, keep=strip.keep or block.keep) for strip in strips[-1:])]
        case Signature():
            return [_signature(lettering, block, style.width)]
        case _:
            return set_figure(lettering, block)


def set_facts(lettering: Lettering, facts: FactList) -> list[Strip]:
    """Names at the left, statements at their right."""
    left = RESULT_LEFT if facts.key else TEXT_LEFT
    return [strip for fact in facts.facts for strip in _fact(lettering, fact, left)]


def _fact(lettering: Lettering, fact: Fact, left: float) -> list[Strip]:
    names = set_lines(lettering, fact.name, 0, NAME_WIDTH, SOFT)
    texts: list[Strip] = []
    for place, paragraph in enumerate(fact.paragraphs):
        style = STRONG if fact.strong and place == 0 else PLAIN
        texts += [*([Strip(2)] if place else []), *set_lines(lettering, paragraph, left, WIDTH - left, style)]
    return _spaced(join_beside([names, texts]), 3)


def _run_in(lettering: Lettering, fact: Fact, style: SectionStyle) -> list[Strip]:
    """The name in semibold, and its statements after it in one paragraph."""
    size = style.text.size
    words = " ".join([*(f"{text.rstrip('.')}." for text in fact.paragraphs[:-1]), fact.paragraphs[-1]])
    wide = lettering.width(fact.name, size, SEMIBOLD) + 5
    name = Text(0, style.text.baseline, fact.name, size, SEMIBOLD)
    beside, below = part_words(lettering, words, style.width - wide, size)
    first = Strip(style.text.height, (name, Text(wide, style.text.baseline, beside, size)))
    return _spaced([first, *(set_lines(lettering, below, 0, style.width, style.text) if below else [])], style.after)


def _remark(lettering: Lettering, remark: Remark, style: SectionStyle) -> list[Strip]:
    """The mark, the grade in words, the text."""
    letters = style.text
    mark = Strip(letters.height, set_mark(lettering, remark.mark, 0.0, letters))
    grade = Strip(letters.height, (Text(_GRADE_LEFT, letters.baseline, remark.grade, letters.size, SEMIBOLD),))
    left = _REMARK_LEFT * letters.size / BASE
    text = set_lines(lettering, remark.message, left, WIDTH - left, letters)
    return _spaced(join_beside([[mark], [grade], text]), style.after)


def _signature(lettering: Lettering, block: Signature, width: float) -> Strip:
    """Lines to write on after their captions: in one row where the page is wide, else the first in a row of its own."""
    first, second, third = block.captions
    if width == WIDTH:
        places = ((first, 0.0, 250.0, 1), (second, 262.0, 402.0, 1), (third, 414.0, width, 1))
    else:
        places = ((first, 0.0, width, 1), (second, 0.0, 0.62 * width, 2), (third, 0.62 * width + 10, width, 2))
    shapes: list[Shape] = []
    for caption, left, right, row in places:
        y = row * _LINE_TO_WRITE_ON
        shapes.append(Text(left, y - 2, caption, SMALL, tone=Tone.SOFT))
        shapes.append(Line(left + lettering.width(caption, SMALL) + 5, y, right, y, 0.8, Tone.INK))
    return Strip(max(row for *_, row in places) * _LINE_TO_WRITE_ON + 2, tuple(shapes))


def _spaced(strips: list[Strip], after: float) -> list[Strip]:
    """A paragraph held together as long as it is short, with white below it."""
    return hold_together([*strips, Strip(after)])
