"""From strips to pages of A4: where a page ends, and what stands at its head and foot."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from clinicalc.report.contents import Furniture, Sheet
from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Line, Rect, Shape, Text, Tone, hatch
from clinicalc.report.typefaces import Weight
from clinicalc.report.typeset import SMALL, WIDTH, Strip, Style, set_lines, set_sheet

PAGE_WIDTH, PAGE_HEIGHT = 595.28, 841.89
"""A4 in points."""
MARGIN = (PAGE_WIDTH - WIDTH) / 2
"""15 mm."""
TOP, BOTTOM = 36.0, PAGE_HEIGHT - 34.0
HEAD_STYLE = Style(BASE_HEAD := 10.5, Weight.SEMIBOLD)
FOOT_STYLE, FOOT_SOFT = Style(SMALL, Weight.SEMIBOLD), Style(SMALL, tone=Tone.SOFT)
SIDE = 150.0
"""Points kept free for the short text at the right of head and foot."""
STRIP_HEIGHT = 19.0


@dataclass(frozen=True, slots=True)
class Page:
    """One page, ready to be painted."""

    shapes: tuple[Shape, ...]


def lay_out(lettering: Lettering, sheet: Sheet) -> tuple[Page, ...]:
    """The pages of a sheet."""
    furniture = sheet.furniture
    strips = set_sheet(lettering, sheet)
    heights = _head(lettering, furniture, 1, 1)[1], _head(lettering, furniture, 2, 2)[1]
    foot = _foot(lettering, furniture)
    bottom = BOTTOM - foot[1] - 8
    parts = list(break_pages(strips, (bottom - heights[0], bottom - heights[1])))
    pages = []
    for number, part in enumerate(parts, 1):
        head, y = _head(lettering, furniture, number, len(parts))
        shapes = list(head)
        for strip in part:
            shapes += [shape.moved(MARGIN, y) for shape in strip.shapes]
            y += strip.height
        shapes += [shape.moved(0, BOTTOM - foot[1]) for shape in foot[0]]
        pages.append(Page(tuple(shapes)))
    return tuple(pages)


def break_pages(strips: Sequence[Strip], rooms: tuple[float, float]) -> Iterator[list[Strip]]:
    """The strips page by page; `rooms` are the heights of the first page and of every later one, in points."""
    page: list[Strip] = []
    room, later = rooms
    for group in _groups(strips):
        height = _height(group)
        if page and _height(page) + height > room and height <= later:  # goes over whole
            yield page
            page, room = list(group[0].head), later
        for strip in group:  # a group higher than a page is parted where the page ends
            if page and _height(page) + strip.height > room:
                yield page
                page, room = list(strip.head), later
            if page or strip.shapes:  # no white at the top of a page
                page.append(strip)
    if page:
        yield page


def _height(strips: Sequence[Strip]) -> float:
    return sum(strip.height for strip in strips)


def _groups(strips: Sequence[Strip]) -> Iterator[list[Strip]]:
    """Runs of strips that hold to each other."""
    group: list[Strip] = []
    for strip in strips:
        group.append(strip)
        if not strip.keep:
            yield group
            group = []
    if group:
        yield group


def _head(lettering: Lettering, furniture: Furniture, number: int, total: int) -> tuple[list[Shape], float]:
    """The head of a page and the y below it: practice and page, a rule, the strip; the label on every later page."""
    side = f"{furniture.reader}, page {number} of {total}"
    name = furniture.practice if number == 1 else furniture.label
    lines = set_lines(lettering, name or "no practice name", 0, WIDTH - SIDE, HEAD_STYLE)
    shapes, y = _stacked(lines, TOP)
    right = MARGIN + WIDTH - lettering.width(side, FOOT_SOFT.size)
    shapes.append(Text(right, TOP + HEAD_STYLE.baseline, side, FOOT_SOFT.size, tone=Tone.SOFT))
    y += 4
    shapes.append(Line(MARGIN, y, MARGIN + WIDTH, y, 1.0, Tone.INK))
    y += 6
    shapes += _strip(lettering, furniture.strip, y)
    return shapes, y + STRIP_HEIGHT + 10


def _strip(lettering: Lettering, words: str, y: float) -> list[Shape]:
    """The hatched strip with its words on a clear plate."""
    style = Style(BASE_HEAD, Weight.SEMIBOLD)
    wide = lettering.width(words, style.size, style.weight) + 20
    left = MARGIN + (WIDTH - wide) / 2
    baseline = y + (STRIP_HEIGHT + 0.66 * style.size) / 2
    return [
        *hatch(MARGIN, y, WIDTH, STRIP_HEIGHT),
        Rect(left, y, wide, STRIP_HEIGHT, fill=Tone.PAPER),
        Rect(MARGIN, y, WIDTH, STRIP_HEIGHT, outline=Tone.HATCH, line=0.6),
        Text(left + 10, baseline, words, style.size, style.weight),
    ]


def _foot(lettering: Lettering, furniture: Furniture) -> tuple[list[Shape], float]:
    """The foot from its rule down, and its height: which model, which file, which program, when."""
    shapes, y = _stacked(set_lines(lettering, furniture.model, 0, WIDTH - SIDE, FOOT_STYLE), 6)
    shapes.insert(0, Line(MARGIN, 0, MARGIN + WIDTH, 0, 1.0, Tone.INK))
    end = MARGIN + WIDTH
    wide = lettering.width(furniture.fingerprint, FOOT_STYLE.size, FOOT_STYLE.weight)
    shapes.append(Text(end - wide, 6 + FOOT_STYLE.baseline, furniture.fingerprint, SMALL, Weight.SEMIBOLD))
    for text, left in (
        (furniture.program, MARGIN),
        (furniture.printed, end - lettering.width(furniture.printed, FOOT_SOFT.size)),
    ):
        shapes.append(Text(left, y + FOOT_SOFT.baseline, text, FOOT_SOFT.size, tone=Tone.SOFT))
    return shapes, y + FOOT_SOFT.height


def _stacked(lines: list[Strip], y: float) -> tuple[list[Shape], float]:
    shapes: list[Shape] = []
    for line in lines:
        shapes += [shape.moved(MARGIN, y) for shape in line.shapes]
        y += line.height
    return shapes, y
