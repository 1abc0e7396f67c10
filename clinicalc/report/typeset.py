"""From contents to strips of page: each strip is one line high and may be parted from the next unless it says no."""

from dataclasses import dataclass, replace

from clinicalc.report.contents import (
    Block,
    Fact,
    FactList,
    Prose,
    Remark,
    RemarkList,
    Section,
    Table,
)
from clinicalc.report.contents import SignatureLine as Signature
from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Line, Shape, Text, Tone
from clinicalc.report.strips import (
    BASE,
    PLAIN,
    SEMIBOLD,
    SMALL,
    SOFT,
    STRONG,
    WIDTH,
    Strip,
    Style,
    hold_together,
    join_beside,
    set_lines,
)
from clinicalc.report.table import set_mark, set_table

TITLE = 11.5
"""Type size of headings in points."""
NAME_WIDTH, TEXT_LEFT = 120.0, 132.0
RESULT_LEFT = 192.0
HIGHEST_WHOLE = 560.0
"""Points; a section higher than this is not held together."""
_GRADE_LEFT, _REMARK_LEFT = 21.0, 72.0


@dataclass(frozen=True, slots=True)
class SectionStyle:
    """How sections are set: the heading's size, the text under it, the white above the heading and after a text."""

    heading: float = TITLE
    text: Style = PLAIN
    above: float = 13.0
    after: float = 3.0


def set_section(lettering: Lettering, section: Section, style: SectionStyle = SectionStyle()) -> list[Strip]:
    """A heading with a rule to the right edge, and what stands under it."""
    body = [strip for block in section.blocks for strip in set_block(lettering, block, style)]
    strips = [*set_heading(lettering, section.heading, style, off_first=section.off_first), *body]
    whole = section.whole and sum(strip.height for strip in strips) <= HIGHEST_WHOLE
    return [*(replace(strip, keep=True) for strip in strips[:-1]), strips[-1]] if whole else strips


def set_heading(
    lettering: Lettering, text: str, style: SectionStyle = SectionStyle(), *, off_first: bool = False
) -> list[Strip]:
    """The white above a heading and the heading itself, held to what follows."""
    letters = Style(style.heading, SEMIBOLD)
    end = lettering.width(text, letters.size, SEMIBOLD) + 10
    middle = letters.height / 2
    heading = Text(0, letters.baseline, text, letters.size, SEMIBOLD)
    rule = Line(end, middle, WIDTH, middle, 0.75, Tone.RULE)
    return [
        Strip(style.above, keep=True, off_first=off_first),
        Strip(letters.height + 3, (heading, rule), keep=True),
    ]


def set_block(lettering: Lettering, block: Block, style: SectionStyle = SectionStyle()) -> list[Strip]:
    """One block as strips."""
    match block:
        case FactList():
            return set_facts(lettering, block)
        case RemarkList():
            return [strip for remark in block.remarks for strip in _remark(lettering, remark)]
        case Table():
            return set_table(lettering, block)
        case Prose():
            lines = (set_lines(lettering, text, 0, WIDTH, style.text) for text in block.paragraphs)
            return [strip for paragraph in lines for strip in _spaced(paragraph, style.after)]
        case Signature():
            return [_signature(block)]


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


def _remark(lettering: Lettering, remark: Remark) -> list[Strip]:
    """The mark, the grade in words, the text."""
    mark = Strip(PLAIN.height, set_mark(lettering, remark.mark, 0.0))
    grade = Strip(PLAIN.height, (Text(_GRADE_LEFT, PLAIN.baseline, remark.grade, BASE, SEMIBOLD),))
    text = set_lines(lettering, remark.message, _REMARK_LEFT, WIDTH - _REMARK_LEFT)
    return _spaced(join_beside([[mark], [grade], text]), 3)


def _signature(block: Signature) -> Strip:
    lefts = (0.0, 206.0, 402.0)
    rights = (194.0, 390.0, WIDTH)
    shapes: list[Shape] = []
    for left, right, caption in zip(lefts, rights, block.captions, strict=True):
        shapes.append(Line(left, 40, right, 40, 0.8, Tone.INK))
        shapes.append(Text(left, 52, caption, SMALL, tone=Tone.SOFT))
    return Strip(56, tuple(shapes))


def _spaced(strips: list[Strip], after: float) -> list[Strip]:
    """A paragraph held together as long as it is short, with white below it."""
    return hold_together([*strips, Strip(after)])
