"""Prints of the library: long tables over pages under their headings, nothing lost, nothing outside, both papers."""

from dataclasses import replace
from datetime import UTC, datetime
from itertools import pairwise

import pytest

from clinicalc.errors import PrintRefused
from clinicalc.report.contents import Block, EffectPart, Furniture, Prose, Section
from clinicalc.report.effect_figure import Move, Moves
from clinicalc.report.fonts import read_lettering
from clinicalc.report.pages import BOTTOM, MARGIN, TOP, Page
from clinicalc.report.palette import PAPER
from clinicalc.report.paper import Paper
from clinicalc.report.pdf import write_document
from clinicalc.report.shapes import Dot, Text, Tone
from clinicalc.report.strips import WIDTH
from clinicalc.report.vetting_document import make_vetting_document
from clinicalc.report.vetting_sheet import (
    DayRow,
    DifferenceRow,
    DigestRow,
    ExampleRow,
    OpenFigureRow,
    RecordRow,
    VettingSheet,
)
from clinicalc.report.vetting_tables import (
    ABSENT,
    lay_days,
    lay_difference,
    lay_digests,
    lay_examples,
    lay_open_figures,
    lay_records,
)
from tests.report.printing import pages_of, text_of
from tests.report.viewing import reach

PRINTED = datetime(2026, 12, 1, 14, 20, tzinfo=UTC)
FURNITURE = Furniture(
    practice="Tarnwick Northgate",
    label="History of everything",
    strip="",
    fingerprint_note="Fingerprint e82d 04a7",
    caution="The program advises nothing.",
    model="A score 1.0.0",
    fingerprint="e82d 04a7 ad40",
    program="clinicalc 0",
    printed="",
)
DIGEST = "51c7 c488 ea2e 5ef1 b8d9 d469 ea48 c77d 9b25 0e0e ba02 2c8c e298 1b77 ece4 a55d"


def sheet_of(*blocks: Block, furniture: Furniture = FURNITURE) -> VettingSheet:
    """A print with one section."""
    section = Section("What changed", blocks)
    return VettingSheet(
        "A kind", "A score 1.0.0", "About a score", ("As of today.",), "All said.", (section,), furniture
    )


def pages(*blocks: Block, paper: Paper = Paper.A4) -> tuple[Page, ...]:
    return make_vetting_document(sheet_of(*blocks), printed_at=PRINTED, paper=paper).pages


def pdf(*blocks: Block, paper: Paper = Paper.A4) -> bytes:
    return write_document(make_vetting_document(sheet_of(*blocks), printed_at=PRINTED, paper=paper), "A subject")


def changes(count: int) -> list[DifferenceRow]:
    """Rows of three kinds: a figure with all its digits, a long text, and one that only the new version has."""
    return [
        DifferenceRow(
            f"Kind {number // 20}",
            f"equation all: coefficient c{number}",
            "" if number % 3 == 2 else f"{number}.0956673218875703",
            f"a text that goes on and on {number} " * 12 if number % 3 == 1 else f"{number}.1641465295055435",
            f"/model/equations/0/terms/{number}/coefficient",
        )
        for number in range(count)
    ]


def records(count: int) -> list[RecordRow]:
    """Records of which every tenth has a fault."""
    return [
        RecordRow(
            "1 December 2026",
            "13:24 UTC+00:00",
            "Dr Ada Tarn, GP partner",
            f"remarked: number {number} is as it was",
            f"because of {number}",
            "key 6466 a68e 1110",
            "51c7 c488 ea2e",
            (f"something is wrong with number {number}.",) if number % 10 == 0 else (),
        )
        for number in range(1, count + 1)
    ]


def everything() -> tuple[Block, ...]:
    """Every kind of table with long words in every cell, and the figure."""
    long = "W" * 60 + " and more"
    moves = Moves("logit", (Move("woman of 61", 0.1, 0.2), Move(long, 0.3, None)), "1.0.0", "1.1.0")
    return (
        lay_difference([DifferenceRow(long, long, long, long, long)]),
        lay_examples([ExampleRow(long, ("12.3 (old)", "14.4 (new)"), "12.3", "14.4", (long,))]),
        lay_records([RecordRow("1 December 2026", "13:24", long, long, long, "key", "record", (long,))]),
        lay_open_figures(
            [OpenFigureRow(long, long, long, long, long, long), OpenFigureRow("a", "", "b", "c", "d", "")]
        ),
        lay_digests([DigestRow(long, long, DIGEST)]),
        lay_days([DayRow(long, long, "e82d", "no", long, (long, long))]),
        EffectPart(moves),
    )


@pytest.mark.parametrize("paper", list(Paper))
def test_every_row_of_a_long_difference_is_there_in_order(paper: Paper) -> None:
    rows = changes(300)
    read = pages_of(pdf(lay_difference(rows), paper=paper))
    assert len(read) > 10
    whole = " ".join(read)
    places = [whole.index(f" coefficient c{number} ") for number in range(300)]
    assert places == sorted(places)
    for row in rows:
        for cell in (row.old or ABSENT, row.new.strip()):
            assert cell.split()[0] in whole, row
        assert row.place in whole.replace(" ", ""), row
    assert whole.count(ABSENT) == 100


@pytest.mark.parametrize("paper", list(Paper))
def test_every_page_of_a_table_begins_with_its_headings(paper: Paper) -> None:
    for read in pages_of(pdf(lay_difference(changes(300)), paper=paper)):
        assert read.count("what old new") == 1, read[:200]
    for read in pages_of(pdf(lay_records(records(200)), paper=paper)):
        assert read.count("when, by whom what and why key, record") == 1, read[:200]


def test_what_rows_are_about_never_ends_a_page() -> None:
    for page in pages(lay_difference(changes(300))):
        texts = [shape.text for shape in page.shapes if isinstance(shape, Text)]
        last = max(place for place, text in enumerate(texts) if text.startswith(("Kind ", "equation all")))
        assert texts[last].startswith("equation all")


def test_two_hundred_records_are_numbered_and_their_faults_stand_below_them() -> None:
    read = pages_of(pdf(lay_records(records(200))))
    whole = " ".join(read)
    for number in range(1, 201):
        assert f" {number}. 1 December 2026" in whole
    faults = [number for number in range(1, 201) if f"Fault: something is wrong with number {number}." in whole]
    assert faults == list(range(10, 201, 10))
    for number in faults:
        (page,) = (page for page in read if f"Fault: something is wrong with number {number}." in page)
        assert f" {number}. 1 December 2026" in page, number


@pytest.mark.parametrize("paper", list(Paper))
def test_nothing_is_painted_outside_the_margins(paper: Paper) -> None:
    left = (paper.width - WIDTH) / 2
    assert left >= MARGIN
    for page in pages(*everything(), paper=paper):
        assert (page.width, page.height) == (paper.width, paper.height)
        for shape in page.shapes:
            begins, top, ends, bottom = reach(shape)
            assert begins >= left - 0.5, shape
            assert ends <= left + WIDTH + 12.5, shape
            assert top >= TOP - 1, shape
            assert bottom <= paper.height - BOTTOM + 1, shape


def test_no_two_texts_of_a_page_run_into_each_other() -> None:
    for page in pages(*everything()):
        boxes = [(shape.text, reach(shape)) for shape in page.shapes if isinstance(shape, Text) and shape.text]
        for place, (one, (left, top, right, bottom)) in enumerate(boxes):
            for other, (begin, above, end, below) in boxes[place + 1 :]:
                apart = right <= begin + 0.1 or end <= left + 0.1 or bottom <= above or below <= top
                assert apart, (one, other)


def test_head_and_foot_say_what_it_is_and_the_notes_stand_on_the_first_page_only() -> None:
    read = pages_of(pdf(lay_records(records(40))))
    assert len(read) > 1
    for number, page in enumerate(read, 1):
        assert f"A kind, page {number} of {len(read)}" in page
        assert "A score 1.0.0 e82d 04a7 ad40" in page
        assert "Printed 1 December 2026, 14:20" in page
        assert page.startswith("Tarnwick Northgate" if number == 1 else "History of everything")
        assert ("The program advises nothing." in page) == (number == 1)


def test_without_a_practice_the_label_stands_at_the_head() -> None:
    sheet = sheet_of(Prose(("A text.",)), furniture=replace(FURNITURE, practice=""))
    document = make_vetting_document(sheet, printed_at=PRINTED)
    assert pages_of(write_document(document, "A subject"))[0].startswith("History of everything")
    assert document.author == "clinicalc 0"


def test_the_same_print_has_the_same_bytes_and_another_time_has_others() -> None:
    assert pdf(*everything()) == pdf(*everything())
    later = make_vetting_document(sheet_of(*everything()), printed_at=PRINTED.replace(minute=21))
    assert write_document(later, "A subject") != pdf(*everything())


def test_the_time_stated_for_reproducible_prints_is_taken(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", str(int(PRINTED.timestamp())))
    document = make_vetting_document(sheet_of(Prose(("A text.",))))
    assert "Printed 1 December 2026, 14:20" in text_of(write_document(document, "A subject"))


@pytest.mark.parametrize("where", ["title", "cell", "figure"])
def test_a_letter_that_the_typefaces_lack_is_refused_by_name(where: str) -> None:
    row = DifferenceRow("Texts", "a text 中" if where == "cell" else "a text", "old", "new", "")
    moves = Moves("logit", (Move("中" if where == "figure" else "A", 0.1, 0.2),), "1.0.0", "1.1.0")
    sheet = sheet_of(lay_difference([row]), EffectPart(moves))
    with pytest.raises(PrintRefused, match=r"A text on the print, from the library or the file.*U\+4E2D"):
        make_vetting_document(replace(sheet, title="Ein 中" if where == "title" else sheet.title), printed_at=PRINTED)


def test_in_grey_every_text_is_dark_and_the_two_dots_differ_by_their_shape() -> None:
    tones = {shape.tone for page in pages(*everything()) for shape in page.shapes if isinstance(shape, Text)}
    assert tones <= {Tone.INK, Tone.SOFT}
    for tone in tones:
        # WCAG 2.2, "relative luminance"; 0.13 on white is a contrast of 5.8
        parts = [int(PAPER[tone][at : at + 2], 16) / 255 for at in (1, 3, 5)]
        linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
        assert 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2] < 0.13
    dots = [shape for page in pages(*everything()) for shape in page.shapes if isinstance(shape, Dot)]
    assert {(dot.fill is None, dot.outline is None) for dot in dots} == {(True, False), (False, True)}


def test_rows_stand_below_each_other() -> None:
    (page, *_) = pages(lay_digests([DigestRow(f"record {n}", "by Ada", DIGEST) for n in range(5)]))
    ys = [shape.y for shape in page.shapes if isinstance(shape, Text) and shape.text.startswith("record ")]
    assert len(ys) == 5
    assert all(one < other for one, other in pairwise(ys))


def test_a_whole_digest_goes_on_one_line() -> None:
    texts = [shape.text for page in pages(lay_digests([DigestRow("a", "b", DIGEST)])) for shape in page.shapes
             if isinstance(shape, Text)]  # fmt: skip
    assert DIGEST in texts
    widest = " ".join(["dddd"] * 16)  # of the sixteen digits it is the widest
    assert read_lettering().width(widest, 9.0) <= 347.0
