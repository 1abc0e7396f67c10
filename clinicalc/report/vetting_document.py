"""A print of the library laid out once: the pages that the PDF, the printer and the preview all show."""

from collections.abc import Iterator
from dataclasses import replace
from datetime import datetime

from clinicalc.report.document import Document, check_letterhead, texts_of, time_of_printing
from clinicalc.report.fonts import Lettering, check_texts, read_lettering
from clinicalc.report.pages import lay_out_plain
from clinicalc.report.paper import Paper
from clinicalc.report.phrases import moment_words
from clinicalc.report.strips import PLAIN, SEMIBOLD, SOFT, WIDTH, Strip, Style, set_lines
from clinicalc.report.typeset import SectionStyle, set_section
from clinicalc.report.vetting_sheet import VettingSheet

_TITLE, _SAYS = Style(16.0, SEMIBOLD), Style(12.5, SEMIBOLD)
_SECTIONS = SectionStyle(text=PLAIN, above=13.0)


def make_vetting_document(
    sheet: VettingSheet,
    *,
    printed_at: datetime | None = None,
    paper: Paper = Paper.A4,
    letterhead: tuple[str, ...] = (),
) -> Document:
    """The pages of a print. `printed_at` stands in the foot; left out, it is `time_of_printing()`.

    `letterhead` stands in place of the practice's bare name, as far as it takes no further page.

    Raises PrintRefused for a text that could only be shown wrongly.
    """
    lettering = read_lettering()
    now = time_of_printing()  # asked for in any case: the PDF library reads the same variable
    moment = printed_at or now
    check_letterhead(lettering, letterhead)
    check_texts(lettering, tuple(texts_of(sheet)), "A text on the print, from the library or the file,")
    lines = tuple(line.strip() for line in letterhead)
    furniture = replace(sheet.furniture, printed=f"Printed {moment_words(moment)}", letterhead=lines)
    strips = list(set_vetting(lettering, sheet))
    return Document(
        pages=lay_out_plain(lettering, sheet.kind, strips, furniture, paper),
        lettering=lettering,
        title=sheet.about,
        author=furniture.practice or furniture.program,
        program=furniture.program,
        printed_at=moment,
        letterhead=lines,
    )


def set_vetting(lettering: Lettering, sheet: VettingSheet) -> Iterator[Strip]:
    """Everything between head and foot, in reading order."""
    yield from set_lines(lettering, sheet.title, 0, WIDTH, _TITLE)
    for line in sheet.lines:
        yield from set_lines(lettering, line, 0, WIDTH, SOFT)
    if sheet.says:
        yield Strip(6)
        yield from set_lines(lettering, sheet.says, 0, WIDTH, _SAYS)
    for section in sheet.sections:
        yield from set_section(lettering, section, _SECTIONS)
