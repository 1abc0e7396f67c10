"""The patient's page set as strips: large dots, both counts, plain sentences and lines to write on."""

from dataclasses import dataclass

from clinicalc.report.contents import Count, PatientSheet
from clinicalc.report.dots import draw_people
from clinicalc.report.fonts import Lettering
from clinicalc.report.shapes import Line, Shape, Text, Tone
from clinicalc.report.strips import SEMIBOLD, WIDTH, Strip, Style, height_of, join_columns, set_lines
from clinicalc.report.typeset import SectionStyle, set_heading, set_section


@dataclass(frozen=True, slots=True)
class _Measures:
    """One size of the page: width of a large dot, size of the text, distance of the lines to write on, in points.

    `fewest` is how many lines to write on there have to be.
    """

    dot: float
    text: float
    pitch: float
    fewest: int = 3

    @property
    def plain(self) -> Style:
        """The sentences."""
        return Style(self.text)

    @property
    def soft(self) -> Style:
        """What stands under the title, and how the dots are to be read."""
        return Style(self.text - 1.0, tone=Tone.SOFT)

    @property
    def sections(self) -> SectionStyle:
        """Headings and what stands under them."""
        return SectionStyle(heading=13.0, text=self.plain, above=self.text, after=0.3 * self.text)


_SIZES = (
    _Measures(21.0, 13.5, 28.0),
    _Measures(18.0, 13.5, 27.0),
    _Measures(14.5, 12.75, 26.0),
    _Measures(12.5, 12.75, 25.0, fewest=2),
)
_TITLE = Style(20.0, SEMIBOLD)
_COUNT, _COUNT_IN_WORDS = 40.0, 18.0
_DOTS_ACROSS, _GAP, _WORDS_LEFT = 13.0, 26.0, 62.0
"""How wide the dots are in widths of one; the white after them; where the words beside a count begin."""
_MOST_LINES = 7


def set_patient(lettering: Lettering, sheet: PatientSheet, room: float) -> list[Strip]:
    """Everything for the patient between head and foot; `room` is the height of a page.

    Set in the largest size that leaves it on one page; the lines to write on fill what is left of that.
    """
    for measures in _SIZES:
        sections = [s for section in sheet.sections for s in set_section(lettering, section, measures.sections)]
        strips = [*_opening(lettering, sheet, measures), *sections]
        agreed = _agreed(lettering, sheet.agreed, room - height_of(strips), measures)
        if height_of(strips) + height_of(agreed) <= room:
            break
    return [*strips, *agreed]


def _opening(lettering: Lettering, sheet: PatientSheet, measures: _Measures) -> list[Strip]:
    """The title, what stands under it, and the people."""
    strips = set_lines(lettering, sheet.title, 0, WIDTH, _TITLE)
    for line in sheet.lines:
        strips += [Strip(1), *set_lines(lettering, line, 0, WIDTH, measures.soft)]
    return [*strips, Strip(18), _people(lettering, sheet, measures)]


def _people(lettering: Lettering, sheet: PatientSheet, measures: _Measures) -> Strip:
    """The dots at the left; at their right how many have it, how many do not, and how the dots are to be read."""
    across = _DOTS_ACROSS * measures.dot
    dots = draw_people(sheet.probability, dot=measures.dot, room=across)
    left = across + _GAP
    right = set_lines(lettering, sheet.opening, left, WIDTH - left, measures.plain)
    tones = (Tone.ACCENT if sheet.vetted else Tone.SOFT, Tone.INK)
    for count, tone in zip(sheet.counts, tones, strict=True):
        right += [Strip(14), *_count(lettering, count, tone, left, measures.plain)]
    right += [Strip(14), *set_lines(lettering, sheet.note, left, WIDTH - left, measures.soft)]
    return join_columns([[Strip(dots.height, dots.shapes)], right])


def _count(lettering: Lettering, count: Count, tone: Tone, left: float, style: Style) -> list[Strip]:
    """A large figure with its words beside it; a figure in words stands over them."""
    if not count.figure.isdecimal():
        figure = Style(_COUNT_IN_WORDS, SEMIBOLD, tone)
        return [
            *set_lines(lettering, count.figure, left, WIDTH - left, figure),
            *set_lines(lettering, count.words, left, WIDTH - left, style),
        ]
    at = left + max(_WORDS_LEFT, lettering.width(count.figure, _COUNT) + 14)
    words = set_lines(lettering, count.words, at, WIDTH - at, style)
    baseline = min(len(words), 2) * style.height / 2 + 0.33 * _COUNT
    lift = max(0.0, 0.66 * _COUNT - baseline)  # one line of words beside it is lower than the figure
    shapes: tuple[Shape, ...] = (Text(left, baseline + lift, count.figure, _COUNT, tone=tone),)
    return [join_columns([[Strip(baseline + lift + 2, shapes)], [Strip(lift), *words]])]


def _agreed(lettering: Lettering, heading: str, room: float, measures: _Measures) -> list[Strip]:
    """Ruled lines to write on, as many as the page has room for, held together with their heading."""
    above = set_heading(lettering, heading, measures.sections)
    count = int((room - height_of(above)) // measures.pitch)
    if count < measures.fewest:
        count = _MOST_LINES  # they go over to a page of their own
    at = measures.pitch - 1
    ruled = Strip(measures.pitch, (Line(0, at, WIDTH, at, 0.75, Tone.EDGE),))
    return [*above, *(Strip(ruled.height, ruled.shapes, keep=True) for _ in range(min(count, _MOST_LINES) - 1)), ruled]
