"""From strips to pages of paper: where a page ends, and what stands at its head and foot."""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace

from clinicalc.report.contents import Furniture, Sheet
from clinicalc.report.fonts import Lettering
from clinicalc.report.headpiece import CLOSE, STYLES, USUAL, set_further, set_sheet
from clinicalc.report.paper import Paper
from clinicalc.report.patient_page import set_patient
from clinicalc.report.shapes import Anchor, Line, Rect, Shape, Text, Tone, hatch, move
from clinicalc.report.strips import CAPTION, SEMIBOLD, SMALL, WIDTH, Strip, Style, height_of, set_lines

PAGE_WIDTH, PAGE_HEIGHT = Paper.A4.width, Paper.A4.height
MARGIN = (PAGE_WIDTH - WIDTH) / 2
"""15 mm at the sides of A4."""
TOP, BOTTOM = 32.0, 31.0
"""From the edge of the paper to the head and to the end of the foot."""
HEAD_STYLE = Style(BASE_HEAD := 10.5, SEMIBOLD)
FOOT_STYLE, FOOT_SOFT = Style(SMALL, SEMIBOLD), CAPTION
SIDE = 150.0
"""Points kept free for the short text at the right of head and foot."""
STRIP_HEIGHT = 19.0
_FURTHER = Style(SMALL)
_WHITE_OVER_FOOT = 6.0
_FOR_CLINICIAN, _FOR_PATIENT = "For the clinician", "For the patient"


@dataclass(frozen=True, slots=True)
class Page:
    """One page of the given width and height in points, ready to be painted."""

    shapes: tuple[Shape, ...]
    width: float = PAGE_WIDTH
    height: float = PAGE_HEIGHT


@dataclass(frozen=True, slots=True)
class _Part:
    """What stands between head and foot of one page."""

    reader: str
    name: str
    strips: Sequence[Strip]
    foot: tuple[tuple[Shape, ...], float]


def lay_out(lettering: Lettering, sheet: Sheet, paper: Paper = Paper.A4) -> tuple[Page, ...]:
    """The pages of a sheet: the clinician's, then the patient's where there is one."""
    furniture = sheet.furniture
    bare = furniture.practice or "".join(furniture.letterhead[:1]) or "no practice name"
    parts = _headed(lambda name: list(_parts(lettering, sheet, paper, name)), bare, furniture)
    return _pages(lettering, parts, furniture.strip, paper)


def _headed(break_under: Callable[[str], list[_Part]], bare: str, furniture: Furniture) -> list[_Part]:
    """The pages under the letterhead, as far as it takes no further page; else under the bare name."""
    parts = break_under(bare)
    for name in _letterhead_forms(furniture.letterhead):
        headed = break_under(name)
        if len(headed) <= len(parts):
            return headed
    return parts


def _letterhead_forms(lines: tuple[str, ...]) -> Iterator[str]:
    """The letterhead line by line, then the lines after the first in one."""
    if lines:
        yield "\n".join(lines)
        yield "\n".join((lines[0], *([" · ".join(lines[1:])] if lines[1:] else [])))


def lay_out_plain(
    lettering: Lettering, kind: str, strips: Sequence[Strip], furniture: Furniture, paper: Paper = Paper.A4
) -> tuple[Page, ...]:
    """The pages of a print without a result; `kind` stands at the head of each, the notes at the foot of the first."""
    bare = furniture.practice or "".join(furniture.letterhead[:1]) or furniture.label
    parts = _headed(lambda name: _plain_parts(lettering, kind, strips, furniture, paper, name), bare, furniture)
    return _pages(lettering, parts, furniture.strip, paper)


def _plain_parts(
    lettering: Lettering, kind: str, strips: Sequence[Strip], furniture: Furniture, paper: Paper, practice: str
) -> list[_Part]:
    notes = tuple(note for note in (furniture.fingerprint_note, furniture.caution) if note)
    first, later = _foot(lettering, furniture, notes), _foot(lettering, furniture)
    names = practice, furniture.label
    below = paper.height - BOTTOM - _WHITE_OVER_FOOT
    rooms = [
        below - foot[1] - _head(lettering, name, "", furniture.strip)[1]
        for name, foot in zip(names, (first, later), strict=True)
    ]
    broken = break_pages(strips, (rooms[0], rooms[1]))
    return [_Part(kind, names[place > 0], page, later if place else first) for place, page in enumerate(broken)]


def _pages(lettering: Lettering, parts: Sequence[_Part], strip_words: str, paper: Paper) -> tuple[Page, ...]:
    pages = []
    left = (paper.width - WIDTH) / 2
    for number, part in enumerate(parts, 1):
        side = f"{part.reader}, page {number} of {len(parts)}"
        head, y = _head(lettering, part.name, side, strip_words)
        shapes = list(move(head, left, 0))
        for strip in part.strips:
            shapes += move(strip.shapes, left, y)
            y += strip.height
        shapes += move(part.foot[0], left, paper.height - BOTTOM - part.foot[1])
        pages.append(Page(tuple(shapes), paper.width, paper.height))
    return tuple(pages)


def _parts(lettering: Lettering, sheet: Sheet, paper: Paper, practice: str) -> Iterator[_Part]:
    """The pages without their heads, which count all of them; `practice` stands over the first and the patient's."""
    furniture = sheet.furniture
    alone = _foot(lettering, furniture, (furniture.fingerprint_note,))
    first = _foot(lettering, furniture, (furniture.fingerprint_note, furniture.caution))
    later = _foot(lettering, furniture)
    below = paper.height - BOTTOM - _WHITE_OVER_FOOT

    def room(name: str, foot: tuple[tuple[Shape, ...], float]) -> float:
        return below - foot[1] - _head(lettering, name, "", furniture.strip)[1]

    free = room(furniture.label, later)
    whole, rest = _set_on_one(lettering, sheet, room(practice, alone))
    if whole:
        yield _Part(_FOR_CLINICIAN, practice, whole, alone)
        followed: list[list[Strip]] = list(break_pages(rest, (free, free)))
    else:
        rooms = room(practice, first), free
        styles = (list(break_pages([*set_sheet(lettering, sheet, style), *rest], rooms)) for style in (USUAL, CLOSE))
        opening, *followed = min(styles, key=len)
        yield _Part(_FOR_CLINICIAN, practice, opening, first)
    for strips in followed:
        yield _Part(_FOR_CLINICIAN, furniture.label, strips, later)
    if sheet.patient is not None:
        free = room(practice, later)
        for strips in break_pages(set_patient(lettering, sheet.patient, free), (free, free)):
            yield _Part(_FOR_PATIENT, practice, strips, later)


def _set_on_one(lettering: Lettering, sheet: Sheet, room: float) -> tuple[list[Strip], list[Strip]]:
    """What stands for the clinician on the one page, and what on further pages; the first is [] where it is too much.

    Everything together, set closer where it has to be; else all but the further sections, with white where there is
    room.
    """
    rest = set_further(lettering, sheet)
    for with_further in (True, False) if rest else (False,):
        for style in STYLES:
            strips = set_sheet(lettering, sheet, style, with_further=with_further)
            spare = room - height_of(strips)
            if spare >= 0:
                part = min(1.0, spare / max(sum(strip.grows for strip in strips), 0.1))
                grown = [replace(s, height=s.height + part * s.grows) if s.grows else s for s in strips]
                return grown, [] if with_further else rest
    return [], rest


def break_pages(strips: Sequence[Strip], rooms: tuple[float, float]) -> Iterator[list[Strip]]:
    """The strips page by page; `rooms` are the heights of the first page and of every later one, in points."""
    page: list[Strip] = []
    room, later = rooms
    for group in _groups(strips):
        height = height_of(group)
        if page and height_of(page) + height > room and height <= later:  # it goes over whole
            yield page
            page, room = list(group[0].head), later
        for strip in group:  # a group higher than a page is parted where the page ends
            if page and height_of(page) + strip.height > room:
                yield page
                page, room = list(strip.head), later
            if page or strip.shapes:  # no white at the top of a page
                page.append(strip)
    if page:
        yield page


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


def _head(lettering: Lettering, name: str, side: str, strip: str) -> tuple[list[Shape], float]:
    """The head of a page and the y below it: whose it is, which page, a rule, and the strip where there is one.

    Lines of `name` after its first are set smaller, over the whole width.
    """
    first, *further = name.split("\n")
    lines = set_lines(lettering, first, 0, WIDTH - SIDE, HEAD_STYLE)
    shapes, y = _stacked(
        [*lines, *(s for line in further for s in set_lines(lettering, line, 0, WIDTH, _FURTHER))], TOP
    )
    baseline = TOP + HEAD_STYLE.baseline
    shapes.append(Text(WIDTH, baseline, side, FOOT_SOFT.size, tone=Tone.SOFT, anchor=Anchor.END))
    y += 4
    shapes.append(Line(0, y, WIDTH, y, 1.0, Tone.INK))
    y += 6
    if not strip:
        return shapes, y + 4
    shapes += _strip(lettering, strip, y)
    return shapes, y + STRIP_HEIGHT + 7


def _strip(lettering: Lettering, words: str, y: float) -> list[Shape]:
    """The hatched strip with its words on a clear plate."""
    style = Style(BASE_HEAD, SEMIBOLD)
    wide = lettering.width(words, style.size, style.weight) + 20
    left = (WIDTH - wide) / 2
    baseline = y + (STRIP_HEIGHT + 0.66 * style.size) / 2
    return [
        *hatch(0, y, left, STRIP_HEIGHT),
        *hatch(left + wide, y, WIDTH - left - wide, STRIP_HEIGHT),
        Rect(0, y, WIDTH, STRIP_HEIGHT, outline=Tone.HATCH, line=0.6),
        Text(left + 10, baseline, words, style.size, style.weight),
    ]


def _foot(lettering: Lettering, furniture: Furniture, notes: tuple[str, ...] = ()) -> tuple[tuple[Shape, ...], float]:
    """The foot and its height: notes, a rule, which model, which file, which program, when."""
    shapes: list[Shape] = []
    y = 0.0
    for note in notes:
        lines, y = _stacked(set_lines(lettering, note, 0, WIDTH, FOOT_SOFT), y)
        shapes += lines
    y += 5 if notes else 0
    shapes.append(Line(0, y, WIDTH, y, 1.0, Tone.INK))
    y += 6
    end = Text(WIDTH, y + FOOT_STYLE.baseline, furniture.fingerprint, SMALL, FOOT_STYLE.weight, anchor=Anchor.END)
    lines, y = _stacked(set_lines(lettering, furniture.model, 0, WIDTH - SIDE, FOOT_STYLE), y)
    shapes += [*lines, end]
    if furniture.approval:
        lines, y = _stacked(set_lines(lettering, furniture.approval, 0, WIDTH, FOOT_SOFT), y)
        shapes += lines
    for text, x, anchor in ((furniture.program, 0.0, Anchor.START), (furniture.printed, WIDTH, Anchor.END)):
        shapes.append(Text(x, y + FOOT_SOFT.baseline, text, FOOT_SOFT.size, tone=Tone.SOFT, anchor=anchor))
    return tuple(shapes), y + FOOT_SOFT.height


def _stacked(lines: Sequence[Strip], y: float) -> tuple[list[Shape], float]:
    shapes: list[Shape] = []
    for line in lines:
        shapes += move(line.shapes, 0, y)
        y += line.height
    return shapes, y
