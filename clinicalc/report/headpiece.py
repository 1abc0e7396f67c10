"""The top of the clinician's page: for whom, the number with its dot grid, what it means, and the ruler."""

from dataclasses import replace

from clinicalc.report.contents import Result, RulerPart, Sheet
from clinicalc.report.dots import draw_small_grid
from clinicalc.report.fonts import Lettering
from clinicalc.report.number import draw_number
from clinicalc.report.ruler import RulerSize, draw_ruler
from clinicalc.report.shapes import Anchor, Shape, Text, Tone, move
from clinicalc.report.strips import (
    BASE,
    CAPTION,
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
from clinicalc.report.typeset import RESULT_LEFT, set_facts, set_section

_LABEL, _HEADLINE = Style(16.0, SEMIBOLD), Style(12.5, SEMIBOLD)
_DETAIL = Style(SMALL + 0.5, tone=Tone.SOFT)
_NUMBER, _WORDS = 51.0, Style(26.0, SEMIBOLD)
_GRID_SIDE, _GRID_LEFT = 45.0, 127.0
_FIGURES_END = 176.0
_RULER = RulerSize(WIDTH - RESULT_LEFT, lane=21.0, text=SMALL, line=0.75)
_NARROW = "\u202f"


def set_sheet(lettering: Lettering, sheet: Sheet) -> list[Strip]:
    """Everything for the clinician between head and foot, in reading order."""
    strips = [
        *_named(lettering, sheet.label, sheet.assessed),
        *set_lines(lettering, sheet.person, 0, WIDTH, SOFT),
        Strip(12),
        *_result(lettering, sheet.result),
        *([] if sheet.ruler is None else _ruler(lettering, sheet.ruler)),
        Strip(4),
        *set_facts(lettering, sheet.facts),
    ]
    for section in sheet.sections:
        strips += set_section(lettering, section)
    return strips


def _named(lettering: Lettering, label: str, assessed: str) -> list[Strip]:
    """The label, and on its first line at the right when it was assessed."""
    wide = lettering.width(assessed, BASE)
    lines = set_lines(lettering, label, 0, WIDTH - wide - 16, _LABEL)
    end = Text(WIDTH - wide, _LABEL.baseline, assessed, BASE, tone=Tone.SOFT)
    return [replace(lines[0], shapes=(*lines[0].shapes, end)), *lines[1:]]


def _result(lettering: Lettering, result: Result) -> list[Strip]:
    """The number and its grid at the left, hanging beside the lines about it at the right."""
    width = WIDTH - RESULT_LEFT
    right = set_lines(lettering, result.headline, RESULT_LEFT, width, _HEADLINE)
    if result.detail:
        right += set_lines(lettering, result.detail, RESULT_LEFT, width, _DETAIL)
    for sentence in result.sentences:
        right += [Strip(3), *set_lines(lettering, sentence, RESULT_LEFT, width)]
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


def _ruler(lettering: Lettering, part: RulerPart) -> list[Strip]:
    """The lanes' names and figures at the left, the ruler at the right, and below it what they mean."""
    ruler = draw_ruler(part.measured, _RULER, lettering.width)
    left: list[Shape] = []
    for lane in ruler.lanes:
        left.append(Text(0, lane.y, lane.name, BASE))
        left.append(Text(_FIGURES_END, lane.y, lane.figures, BASE, SEMIBOLD, anchor=Anchor.END))
    caption = Text(_FIGURES_END, ruler.figure.baseline, part.caption, SMALL, tone=Tone.SOFT, anchor=Anchor.END)
    drawn = move(ruler.figure.shapes, RESULT_LEFT - ruler.overhang, 0)
    notes = [strip for note in part.notes for strip in set_lines(lettering, note, 0, WIDTH, CAPTION)]
    strips = [Strip(4), Strip(ruler.figure.height + 6, (*left, caption, *drawn)), *notes]
    return hold_together(strips)
