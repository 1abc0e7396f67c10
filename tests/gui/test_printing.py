"""Printer and PDF show the same pages, and nothing is printed of values that have changed since."""

import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray
from PySide6.QtGui import QImage, QPageSize
from PySide6.QtPrintSupport import QPrinter
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused
from clinicalc.gui import printing
from clinicalc.gui.printing import PrintJob, make_printer, paint_document, preview
from clinicalc.operations.documents import lay_out_print
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.report.pdf import make_report
from clinicalc.settings import Paper
from tests.assessment.cases import DEMO, WOMAN_61, run
from tests.gui.bedside_hands import POOLED_2013
from tests.report.printing import PRACTICE, PRINTED, pages_of, with_band

DPI = 150
MOST_DIFFERING = 0.01
LARGEST_DIFFERENCE = 32
needs_pdftoppm = pytest.mark.skipif(shutil.which("pdftoppm") is None, reason="pdftoppm (Poppler) is not installed")

Pixels = NDArray[np.int16]
CASES: dict[str, Callable[[], Assessment]] = {
    "rebuilt band, worked out of other units": lambda: run(
        "general-cvd-2008-lipids", WOMAN_61, total_cholesterol="4.655 mmol/L"
    ),
    "no band": lambda: run("ascvd-2013-pooled-cohort", POOLED_2013),
    "band, a finding at a value": lambda: run("tarnwick-cvd-10y", DEMO, systolic_bp="215"),
    "a name in two typefaces": lambda: with_band("Żółć Őry Аԥсҳа"),
}
PAGES = {case: 3 if case.startswith("rebuilt band") else 2 for case in CASES}
"""What a rebuilt band assumes takes a page of its own."""


def printed_through_qt(assessment: Assessment, paper: Paper, path: Path) -> bytes:
    """What a printer gets; Qt's PDF stands for it."""
    printer = make_printer(paper, "a print")
    printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(path))
    paint_document(printer, lay_out_print(assessment, practice=PRACTICE, paper=paper, printed_at=PRINTED))
    return path.read_bytes()


def words_of(pdf: bytes) -> list[str]:
    """The text page by page, every kind of white space made one space."""
    return [" ".join(page.split()) for page in pages_of(pdf)]


def rastered(pdf: bytes, folder: Path, name: str, dpi: float = DPI) -> list[Pixels]:
    (folder / f"{name}.pdf").write_bytes(pdf)
    subprocess.run(["pdftoppm", "-r", str(dpi), "-png", str(folder / f"{name}.pdf"), str(folder / name)], check=True)
    return [pixels_of(QImage(str(picture))) for picture in sorted(folder.glob(f"{name}-*.png"))]


def pixels_of(image: QImage) -> Pixels:
    plain = image.convertToFormat(QImage.Format.Format_RGB888)
    rows = np.frombuffer(plain.constBits(), np.uint8).reshape(plain.height(), plain.bytesPerLine())
    return rows[:, : 3 * plain.width()].reshape(plain.height(), plain.width(), 3).astype(np.int16)


def share_differing(one: Pixels, other: Pixels) -> float:
    """The share of pixels that differ by more than the limit; A4 in whole points may lack the last row or column."""
    assert max(abs(a - b) for a, b in zip(one.shape, other.shape, strict=True)) <= 1
    rows, columns = (min(sizes) for sizes in zip(one.shape[:2], other.shape[:2], strict=True))
    apart = np.abs(one[:rows, :columns] - other[:rows, :columns]).max(axis=2) > LARGEST_DIFFERENCE
    return float(apart.mean())


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("case", CASES)
def test_printer_and_pdf_say_the_same_page_by_page(case: str, paper: Paper, tmp_path: Path) -> None:
    assessment = CASES[case]()
    pdf = make_report(assessment, practice=PRACTICE, printed_at=PRINTED, paper=Sheet(paper.value))
    through_qt = printed_through_qt(assessment, paper, tmp_path / "printer.pdf")
    assert len(words_of(pdf)) == PAGES[case]
    assert words_of(through_qt) == words_of(pdf)


@needs_pdftoppm
@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("case", CASES)
def test_printer_and_pdf_look_the_same(case: str, paper: Paper, tmp_path: Path) -> None:
    assessment = CASES[case]()
    pdf = make_report(assessment, practice=PRACTICE, printed_at=PRINTED, paper=Sheet(paper.value))
    through_qt = printed_through_qt(assessment, paper, tmp_path / "printer.pdf")
    pairs = list(zip(rastered(pdf, tmp_path, "saved"), rastered(through_qt, tmp_path, "sent"), strict=True))
    assert len(pairs) == PAGES[case]
    for saved, sent in pairs:
        assert (saved.min(axis=2) < 200).mean() > 0.01  # there is something to compare
        assert share_differing(saved, sent) <= MOST_DIFFERING


@needs_pdftoppm
def test_a_difference_between_two_prints_would_be_seen(tmp_path: Path) -> None:
    one, other = (make_report(with_band(age=age), practice=PRACTICE, printed_at=PRINTED) for age in ("50", "70"))
    pairs = zip(rastered(one, tmp_path, "one"), rastered(other, tmp_path, "other"), strict=True)
    shares = [share_differing(*pair) for pair in pairs]
    assert shares[-1] > MOST_DIFFERING  # the dots of the patient's page
    assert words_of(one) != words_of(other)


@pytest.mark.skipif(shutil.which("pdffonts") is None, reason="pdffonts (Poppler) is not installed")
def test_a_printer_gets_letters_and_no_pictures_of_them(tmp_path: Path) -> None:
    printed_through_qt(with_band("Żółć"), Paper.A4, tmp_path / "printer.pdf")
    done = subprocess.run(["pdffonts", str(tmp_path / "printer.pdf")], capture_output=True, text=True, check=True)
    fonts = done.stdout.splitlines()[2:]
    assert {"SourceSans3" in font for font in fonts} == {True}
    images = subprocess.run(["pdfimages", "-list", str(tmp_path / "printer.pdf")], capture_output=True, text=True)
    assert len(images.stdout.splitlines()) <= 2  # the head of an empty list


def job_of(
    assessment: Assessment, current: list[bool], path: Path, meanwhile: Callable[[], None] = lambda: None
) -> PrintJob:
    """A job whose printer, once chosen, writes a file; `meanwhile` happens while it is being chosen."""

    def choose(printer: QPrinter, _: QWidget | None) -> bool:
        printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
        printer.setOutputFileName(str(path))
        meanwhile()
        return True

    return PrintJob(assessment, lambda: current[0], practice=PRACTICE, choose=choose)


def test_what_is_sent_to_the_printer_is_the_print(qtbot: QtBot, tmp_path: Path) -> None:
    job = job_of(with_band("Ottilie Fenn"), [True], tmp_path / "sent.pdf")
    assert job.send(None, Paper.A4, parts=USUAL_PARTS)
    pages = words_of((tmp_path / "sent.pdf").read_bytes())
    assert len(pages) == 2
    assert "Ottilie Fenn" in pages[0]
    assert "18.2 % An invented event within 10 years" in pages[0]


def test_what_is_sent_has_the_patient_page_only_where_it_is_wanted(qtbot: QtBot, tmp_path: Path) -> None:
    assert job_of(with_band(), [True], tmp_path / "sent.pdf").send(
        None, Paper.LETTER, parts=PrintParts(patient_page=False)
    )
    pages = words_of((tmp_path / "sent.pdf").read_bytes())
    assert len(pages) == 1
    assert all("For the clinician, page 1 of 1" in page for page in pages)


def test_a_value_changed_while_the_printer_is_chosen_is_not_printed(qtbot: QtBot, tmp_path: Path) -> None:
    current = [True]

    def change() -> None:
        current[0] = False

    job = job_of(with_band(), current, tmp_path / "sent.pdf", change)
    job.check()
    with pytest.raises(PrintRefused, match="the values on screen have changed since this preview was opened"):
        job.send(None, Paper.A4, parts=USUAL_PARTS)
    assert not (tmp_path / "sent.pdf").exists()


def test_no_printer_chosen_prints_nothing(qtbot: QtBot) -> None:
    job = PrintJob(with_band(), lambda: True, choose=lambda *_: False)
    assert not job.send(None, Paper.A4, parts=USUAL_PARTS)


def test_the_refusal_is_said_in_a_sentence(qtbot: QtBot) -> None:
    said: list[str] = []
    done = preview(None, with_band(), lambda: False, explain=lambda _, sentence: said.append(sentence))
    assert not done
    assert len(said) == 1
    assert said[0].startswith("Nothing was printed: the values on screen have changed")
    assert "Open the print again" in said[0]


def test_a_name_that_cannot_be_printed_opens_no_preview() -> None:
    with pytest.raises(PrintRefused, match=r"U\+4E2D"):
        preview(None, with_band("Fenn \u4e2d"), lambda: True)


@pytest.mark.parametrize(
    ("size", "wanted"),
    [
        (QPageSize.PageSizeId.A4, Paper.A4),
        (QPageSize.PageSizeId.Letter, Paper.LETTER),
        (QPageSize.PageSizeId.A5, Paper.LETTER),  # of neither size: the nearer one, made smaller
    ],
)
def test_another_sheet_chosen_at_the_printer_gets_its_own_layout(size: QPageSize.PageSizeId, wanted: Paper) -> None:
    printer = make_printer(Paper.A4, "a print")
    printer.setPageSize(QPageSize(size))
    assert printing._paper_of(printer) is wanted


@pytest.mark.qt_log_ignore("QPainter::begin")
def test_a_printer_that_does_not_begin_is_answered_in_words(tmp_path: Path) -> None:
    printer = make_printer(Paper.A4, "a print")
    printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(tmp_path / "no such folder" / "print.pdf"))
    with pytest.raises(PrintRefused, match="does not take the print"):
        paint_document(printer, lay_out_print(with_band()))


def test_the_name_of_the_job_says_nothing_about_the_patient() -> None:
    named: list[str] = []

    def note(printer: QPrinter, _: QWidget | None) -> bool:
        named.append(printer.docName())
        return False

    PrintJob(with_band("Ottilie Fenn"), lambda: True, choose=note).send(None, Paper.A4, parts=USUAL_PARTS)
    assert named == ["tiny-logit 2026-12-01 1418"]
