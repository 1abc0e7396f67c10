"""Page breaks: nothing is lost, nothing is painted outside the margins, headings stay with their text."""

import msgspec
import pytest

from clinicalc.coefficients.schema import ModelContent, YesNoPredictor
from clinicalc.report.compose import compose
from clinicalc.report.contents import Column, Row, Table
from clinicalc.report.fonts import read_lettering
from clinicalc.report.headpiece import USUAL, set_sheet
from clinicalc.report.pages import MARGIN, PAGE_HEIGHT, Page, break_pages, lay_out
from clinicalc.report.paper import Paper
from clinicalc.report.shapes import Anchor, Dot, Line, Poly, Rect, Text, Tone, hatch
from clinicalc.report.strips import SMALL, WIDTH, Strip
from clinicalc.report.typeset import TITLE, set_block
from tests.assessment.cases import FULL, run
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import PRACTICE, PRINTED, pages_of, printed, with_band

OVERHANG = 12.0


def long_model() -> ModelContent:
    """A model with 60 more questions and 30 long cautions."""
    content = tiny_logit_model()
    more = tuple(
        YesNoPredictor(f"extra_{n}", f"Question {n} with a label that needs more than one line of its column", "More")
        for n in range(60)
    )
    cautions = tuple(f"Caution {n}: {'many words that go on and on ' * 30}end {n}." for n in range(30))
    use = msgspec.structs.replace(content.use, cautions=cautions, setting="W" * 600)
    return msgspec.structs.replace(
        content, use=use, outcome="A long outcome " * 250, predictors=content.predictors + more
    )


def laid_out(content: ModelContent, label: str = "") -> tuple[Page, ...]:
    sheet = compose(with_band(label, content=content), practice=PRACTICE, printed_at=PRINTED)
    return lay_out(read_lettering(), sheet)


@pytest.mark.parametrize("label", ["", "Żółć Őry " * 13])
@pytest.mark.parametrize("content", [tiny_logit_model(), long_model()], ids=["short", "long"])
def test_nothing_is_painted_outside_the_margins(content: ModelContent, label: str) -> None:
    lettering = read_lettering()
    for page in laid_out(content, label):
        for shape in page.shapes:
            match shape:
                case Text():
                    wide = lettering.width(shape.text, shape.size, shape.weight)
                    left, right = shape.left(wide), shape.left(wide) + wide
                    top, bottom = shape.y - shape.size, shape.y
                case Line():
                    left, right = shape.x, shape.to_x
                    top, bottom = min(shape.y, shape.to_y), max(shape.y, shape.to_y)
                case Rect():
                    left, right = shape.x, shape.x + shape.width
                    top, bottom = shape.y, shape.y + shape.height
                case Dot():
                    left, right = shape.x - shape.radius, shape.x + shape.radius
                    top, bottom = shape.y - shape.radius, shape.y + shape.radius
                case Poly():
                    left, right = min(x for x, _ in shape.points), max(x for x, _ in shape.points)
                    top, bottom = min(y for _, y in shape.points), max(y for _, y in shape.points)
            # the axis ends at the margin: its last figure stands on its end, a pointer beyond it
            hangs_over = (isinstance(shape, Text) and shape.anchor is Anchor.MIDDLE) or isinstance(shape, Poly)
            spare = OVERHANG if hangs_over else 0.01
            assert MARGIN - spare <= left <= right <= MARGIN + WIDTH + spare
            assert 30 <= top <= bottom <= PAGE_HEIGHT - 30


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("id", FULL)
def test_a_usual_print_has_a_page_for_the_clinician_and_one_for_the_patient(id: str, paper: Paper) -> None:
    pages = shipped_pages(id, paper)
    assert len(pages) == (3 if id == "general-cvd-2008-lipids" else 2)  # what a rebuilt band assumes goes on a page
    texts = [shape for shape in pages[0].shapes if isinstance(shape, Text)]
    assert {"Values as typed", "The model", "Practitioner’s signature"} <= {text.text for text in texts}
    assert min(text.size for text in texts) >= 0.95 * SMALL  # so small are the ends of derivation ranges alone


def test_room_to_spare_goes_to_the_white_above_headings() -> None:
    def headings(paper: Paper) -> list[float]:
        pages = lay_out(lettering, sheet, paper)
        return [shape.y for shape in pages[0].shapes if isinstance(shape, Text) and shape.size == TITLE]

    lettering, sheet = read_lettering(), compose(with_band(), practice=PRACTICE, printed_at=PRINTED)
    strips = set_sheet(lettering, sheet)
    whites = [strip.height + strip.grows for strip in strips if strip.grows][1:]
    assert whites == [USUAL.sections.above + USUAL.sections.grows] * 3
    assert headings(Paper.A4) == headings(Paper.LETTER)  # there is more room than it takes on either paper


def shipped_pages(id: str, paper: Paper = Paper.A4) -> tuple[Page, ...]:
    """The print of a shipped file's usual patient."""
    recalibration = "low" if id == "cvd-2021-regional" else None
    sheet = compose(run(id, FULL[id], recalibration=recalibration), practice=PRACTICE, printed_at=PRINTED)
    return lay_out(read_lettering(), sheet, paper)


@pytest.mark.parametrize("pages", ["long", *FULL])
def test_no_two_lines_of_text_lie_on_each_other(pages: str) -> None:
    lettering = read_lettering()

    def ends(text: Text) -> tuple[float, float]:
        wide = lettering.width(text.text, text.size, text.weight)
        return text.left(wide), text.left(wide) + wide

    for page in laid_out(long_model(), "Żółć Őry " * 13) if pages == "long" else shipped_pages(pages):
        texts = [shape for shape in page.shapes if isinstance(shape, Text)]
        for place, one in enumerate(texts):
            for other in texts[place + 1 :]:
                apart = abs(one.y - other.y) >= 0.7 * min(one.size, other.size)
                (_, end), (start, _) = sorted((ends(one), ends(other)))
                assert apart or end <= start + 0.01, (one, other)


def test_long_tables_and_cautions_come_back_whole() -> None:
    pages = pages_of(printed(with_band(content=long_model())))
    text = " ".join(pages)
    for number in range(60):
        assert f"Question {number} with" in text
    for number in range(30):
        assert f"Caution {number}:" in text
        assert f"end {number}." in text
    continued = [page for page in pages if "Question 20 with" in page or "Question 45 with" in page]
    assert continued
    assert all("typed in the file’s unit derivation range" in page for page in continued)
    *clinical, for_patient = pages
    assert f"For the patient, page {len(pages)} of {len(pages)}" in for_patient
    assert "Practitioner’s signature" in clinical[-1]
    assert "For qualified clinicians only." in clinical[-1]  # what is signed stands on the page of the signature


def test_held_strips_go_over_together_and_white_does_not_open_a_page() -> None:
    text = (Text(0, 8, "x", 10),)
    strips = [Strip(60, text), Strip(14, keep=True), Strip(20, text, keep=True), Strip(20, text)]
    first, second = break_pages(strips, (100.0, 100.0))
    assert first == strips[:1]
    assert second == strips[2:]


def test_a_held_run_higher_than_a_page_is_parted() -> None:
    text = (Text(0, 8, "x", 10),)
    strips = [Strip(30, text, keep=True) for _ in range(10)]
    pages = list(break_pages(strips, (100.0, 100.0)))
    assert [len(page) for page in pages] == [3, 3, 3, 1]


def test_the_head_of_a_table_is_repeated() -> None:
    text = (Text(0, 8, "x", 10),)
    head = Strip(10, (Text(0, 8, "head", 10),), keep=True)
    rows = [Strip(30, text, head=(head,)) for _ in range(5)]
    pages = list(break_pages([head, *rows], (100.0, 100.0)))
    assert [page[0] for page in pages] == [head, head]
    assert sum(len(page) for page in pages) == 7


def test_the_last_row_of_a_table_never_goes_over_alone() -> None:
    column = Column("asked", 0.0, 100.0)
    strips = set_block(read_lettering(), Table((column,), tuple(Row((f"row {n}",)) for n in range(8))))
    whole = sum(strip.height for strip in strips)
    first, second = break_pages(strips, (whole - 1.0, whole))
    texts = [shape.text for strip in second for shape in strip.shapes if isinstance(shape, Text)]
    assert texts == ["asked", "row 6", "row 7"]
    assert len(first) + len(second) > len(strips)


def test_hatching_stays_inside_its_box() -> None:
    strokes = list(hatch(10.0, 20.0, 100.0, 19.0))
    assert len(strokes) > 15
    for stroke in strokes:
        assert 10.0 <= stroke.x <= stroke.to_x <= 110.0
        assert 20.0 <= stroke.to_y <= stroke.y <= 39.0
        assert stroke.to_x - stroke.x == pytest.approx(stroke.y - stroke.to_y)


def test_a_number_from_a_file_that_is_not_vetted_is_soft() -> None:
    figure = next(s for s in laid_out(tiny_logit_model())[0].shapes if isinstance(s, Text) and s.size > 40)
    assert (figure.text, figure.tone) == ("18.2", Tone.SOFT)
