"""The top of the clinician's page: for whom, the number with its dot grid, what it means, and the ruler."""

from collections.abc import Iterator
from dataclasses import dataclass, replace

from clinicalc.report.contents import Pair, Result, RulerPart, Sheet
from clinicalc.report.dots import draw_small_grid
from clinicalc.report.figure_blocks import FIGURES_END, RESULT_LEFT, ruler_size
from clinicalc.report.fonts import Lettering
from clinicalc.report.measured import Lane, Measured
from clinicalc.report.number import draw_number
from clinicalc.report.ruler import draw_ruler
from clinicalc.report.shapes import Anchor, Shape, Text, Tone, move
from clinicalc.report.strips import (
    BASE,
    CAPTION,
    CLOSE_LEADING,
    CLOSEST_LEADING,
    PLAIN,
    SEMIBOLD,
    SMALL,
    SOFT,
    WIDTH,
    Strip,
    Style,
    height_of,
    hold_together,
    set_lines,
)
from clinicalc.report.typeset import SectionStyle, set_facts, set_pair, set_section

_LABEL, _HEADLINE = Style(16.0, SEMIBOLD), Style(12.5, SEMIBOLD)
_DETAIL = Style(SMALL + 0.5, tone=Tone.SOFT)
_NUMBER, _WORDS = 51.0, Style(26.0, SEMIBOLD)
_GRID_SIDE, _GRID_LEFT = 45.0, 127.0
_NARROW = "\u202f"


@dataclass(frozen=True, slots=True)
class SheetStyle:
    """How the clinician's page is set: its sections, the pitch of the ruler's lanes, the words under the ruler.

    Beside the number stand what the outcome is in `detail`, and the number in people as a `sentence`.
    """

    sections: SectionStyle
    lane: float
    note: Style
    detail: Style
    sentence: Style


USUAL = SheetStyle(SectionStyle(above=9.0, grows=7.0), 21.0, CAPTION, _DETAIL, PLAIN)


def _set_close(leading: float, lane: float) -> SheetStyle:
    small = Style(SMALL, leading=leading)
    return SheetStyle(
        SectionStyle(text=small, above=4.0, after=2.0, grows=12.0, table=small, small=small),
        lane,
        replace(small, tone=Tone.SOFT),
        replace(_DETAIL, leading=leading),
        Style(leading=leading),
    )


CLOSE, CLOSEST = _set_close(CLOSE_LEADING, 15.5), _set_close(CLOSEST_LEADING, 15.0)
"""For much text on one page: smaller, but no smaller than any print's small type, and lines closer to each other."""
STYLES = (USUAL, CLOSE, CLOSEST)


def set_sheet(
    lettering: Lettering, sheet: Sheet, style: SheetStyle = USUAL, *, with_further: bool = False
) -> list[Strip]:
    """Everything for the clinician between head and foot, in reading order; the further sections where asked for."""
    further = sheet.further if with_further else ()
    strips = [
        *_named(lettering, sheet.label, sheet.assessed),
        *set_lines(lettering, sheet.person, 0, WIDTH, SOFT),
        Strip(4, grows=8),
        *_result(lettering, sheet.result, style),
        *([] if sheet.ruler is None else _ruler(lettering, sheet.ruler, style)),
        *([Strip(4), *set_facts(lettering, sheet.facts)] if sheet.facts.facts else []),
    ]
    for section in (*sheet.sections[:-1], *further, *sheet.sections[-1:]):
        if isinstance(section, Pair):
            strips += set_pair(lettering, section, style.sections)
        else:
            strips += set_section(lettering, section, style.sections)
    return strips


def set_further(lettering: Lettering, sheet: Sheet) -> list[Strip]:
    """The further sections for pages of their own."""
    sections = replace(USUAL.sections, text=replace(PLAIN, size=SMALL + 0.5), grows=0.0)
    return [strip for section in sheet.further for strip in set_section(lettering, section, sections)]


def _named(lettering: Lettering, label: str, assessed: str) -> list[Strip]:
    """The label, and on its first line at the right when it was assessed."""
    wide = lettering.width(assessed, BASE)
    lines = set_lines(lettering, label, 0, WIDTH - wide - 16, _LABEL)
    end = Text(WIDTH - wide, _LABEL.baseline, assessed, BASE, tone=Tone.SOFT)
    return [replace(lines[0], shapes=(*lines[0].shapes, end)), *lines[1:]]


def _result(lettering: Lettering, result: Result, style: SheetStyle) -> list[Strip]:
    """The number and its grid at the left, hanging beside the lines about it at the right."""
    width = WIDTH - RESULT_LEFT
    right = set_lines(lettering, result.headline, RESULT_LEFT, width, _HEADLINE)
    if result.detail:
        right += set_lines(lettering, result.detail, RESULT_LEFT, width, style.detail)
    for sentence in result.sentences:
        right += [Strip(3), *set_lines(lettering, sentence, RESULT_LEFT, width, style.sentence)]
    shapes = _figure(lettering, result)
    right[0] = replace(right[0], shapes=(*shapes, *right[0].shapes))
    short = _GRID_SIDE + 6 - height_of(right)
    return hold_together([*right, *([Strip(short)] if short > 0 else [])])


def _figure(lettering: Lettering, result: Result) -> tuple[Shape, ...]:
    """The number and the small grid on one baseline; words where there is no number."""
    if result.probability is None:
        return (Text(0, _WORDS.baseline, result.figure, _WORDS.size, _WORDS.weight),)
    number = draw_number(result.figure, lettering.width, vetted=result.vetted, size=_NUMBER)
    room = _GRID_LEFT - 12
    if number.width > room:  # ">99.9 %"
        size = _NUMBER * room / number.width
        number = draw_number(result.figure, lettering.width, vetted=result.vetted, size=size)
    grid = draw_small_grid(result.probability, side=_GRID_SIDE)
    written = (_with_its_space(lettering, shape) for shape in number.shapes)
    return (*move(written, 0, _GRID_SIDE - number.baseline), *move(grid.shapes, _GRID_LEFT, 0))


def _with_its_space(lettering: Lettering, shape: Shape) -> Shape:
    """The sign led by the narrow space that belongs to it: read back, number and sign are one text."""
    if not isinstance(shape, Text) or shape.text != "%":
        return shape
    return replace(shape, x=shape.x - lettering.width(_NARROW, shape.size), text=f"{_NARROW}%")


def _ruler(lettering: Lettering, part: RulerPart, style: SheetStyle) -> list[Strip]:
    """The lanes' names and figures at the left, the ruler at the right, and below it what they mean."""
    ruler = draw_ruler(part.measured, ruler_size(style.lane), lettering.width, tuple(_lanes(part.measured)))
    left: list[Shape] = []
    for lane in ruler.lanes:
        left.append(Text(0, lane.y, lane.name, BASE))
        left.append(Text(FIGURES_END, lane.y, lane.figures, BASE, SEMIBOLD, anchor=Anchor.END))
    caption = Text(FIGURES_END, ruler.figure.baseline, part.caption, SMALL, tone=Tone.SOFT, anchor=Anchor.END)
    drawn = move(ruler.figure.shapes, RESULT_LEFT - ruler.overhang, 0)
    notes = [strip for note in part.notes for strip in set_lines(lettering, note, 0, WIDTH, style.note)]
    strips = [Strip(4), Strip(ruler.figure.height + 4, (*left, caption, *drawn)), *notes]
    return hold_together(strips)


def _lanes(measured: Measured) -> Iterator[Lane]:
    """The lane of the band in any case, for its "no band"; the others where they hold something."""
    yield Lane.BAND
    if measured.spread is not None:
        yield Lane.SPREAD
    if measured.decisions:
        yield Lane.DECISION
