"""The letterhead: over both pages, in place of the practice's bare name, and never at the price of a further page."""

from io import BytesIO

import msgspec
import pytest
from pypdf import PdfReader

from clinicalc.errors import PrintRefused
from clinicalc.operations.bedside import assess_patient
from clinicalc.operations.demonstration import demo_case
from clinicalc.report.document import Document, make_document
from clinicalc.report.pages import TOP
from clinicalc.report.paper import Paper
from clinicalc.report.parts import PrintParts
from clinicalc.report.pdf import make_report
from clinicalc.report.shapes import Line, Text
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import AT, PRACTICE, PRINTED, pages_of, with_band

LINES = (
    "Tarnwick Northgate Practice",
    "3 Quay Lane, Tarnwick",
    "Telephone 01632 960100, open on working days from 8 to 18",
    "R. Osei, M. Lind, J. Abara",
)
LONG = tuple(f"{number} {'wide Words ' * 8}"[:79] + "." for number in range(1, 5))
CASE = demo_case()
FULL = assess_patient(CASE.model, CASE.entry, at=AT)
"""The demonstration, whose clinician's page is full: findings, spread, a decision point."""


def heads_of(document: Document) -> list[str]:
    """What stands over the first page, line by line from the top."""
    shapes = document.pages[0].shapes
    rule = min(s.y for s in shapes if isinstance(s, Line) and s.y > TOP)
    texts = [s for s in shapes if isinstance(s, Text) and s.y < rule]
    return [s.text for s in sorted(texts, key=lambda s: (s.y, s.x)) if not s.text.startswith("For the clinician")]


def test_it_stands_over_both_pages_in_place_of_the_name() -> None:
    pages = pages_of(make_report(FULL, practice=PRACTICE, printed_at=PRINTED, letterhead=LINES))
    bare = pages_of(make_report(FULL, practice=PRACTICE, printed_at=PRINTED))
    assert len(pages) == len(bare) == 2
    for page, before in zip(pages, bare, strict=True):
        assert page.startswith(" ".join(LINES)), page[:200]
        assert before.startswith(PRACTICE)
        assert page.removeprefix(" ".join(LINES)) == before.removeprefix(PRACTICE)


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("lines", [LINES, LONG, LINES[:1]], ids=["usual", "long", "one"])
@pytest.mark.parametrize(
    "parts", [PrintParts(), PrintParts(shares=True, comparison=True), PrintParts(patient_page=False)]
)
def test_it_takes_no_further_page(lines: tuple[str, ...], paper: Paper, parts: PrintParts) -> None:
    def count(letterhead: tuple[str, ...]) -> int:
        document = make_document(
            FULL, practice=PRACTICE, printed_at=PRINTED, parts=parts, paper=paper, letterhead=letterhead
        )
        return len(document.pages)

    assert count(lines) == count(())


def test_each_line_is_a_line_where_there_is_room() -> None:
    document = make_document(FULL, practice=PRACTICE, printed_at=PRINTED, letterhead=LINES)
    assert heads_of(document) == list(LINES)


def test_with_less_and_less_room_the_lines_come_together_and_at_last_the_name_stands_alone() -> None:
    """As a caution of the model takes more and more words: over one page and a further one there are all three."""
    content = tiny_logit_model()
    lines = (LINES[0], *LONG[1:])
    forms = set()
    for words in range(230, 300, 5):
        use = msgspec.structs.replace(content.use, cautions=("caution " * words,))
        assessment = with_band(content=msgspec.structs.replace(content, use=use))
        bare = make_document(assessment, practice=PRACTICE, printed_at=PRINTED)
        headed = make_document(assessment, practice=PRACTICE, printed_at=PRINTED, letterhead=lines)
        assert len(headed.pages) == len(bare.pages)
        first, *further = heads_of(headed)
        forms.add((first, " ".join(further)))
    assert forms == {(LINES[0], " ".join(lines[1:])), (LINES[0], " · ".join(lines[1:])), (PRACTICE, "")}


def test_a_practice_without_a_name_has_its_letterhead() -> None:
    pages = pages_of(make_report(FULL, printed_at=PRINTED, letterhead=LINES))
    assert pages[0].startswith(" ".join(LINES))
    assert "no practice name" not in pages[0]
    about = PdfReader(BytesIO(make_report(FULL, printed_at=PRINTED, letterhead=LINES))).metadata
    assert about is not None
    assert about.keywords == "\n".join(LINES)


def test_a_line_that_cannot_be_shown_is_named() -> None:
    with pytest.raises(PrintRefused, match="Line 2 of the letterhead"):
        make_report(FULL, practice=PRACTICE, printed_at=PRINTED, letterhead=("Tarnwick", "\u0e01\u0e33"))
