"""Printer, preview and PDF show the same pages, and nothing is printed of values that have changed since."""

import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray
from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QImage, QPageSize, QPainter
from PySide6.QtPrintSupport import QPrinter, QPrintPreviewWidget
from PySide6.QtWidgets import QGraphicsView
from pytestqt.qtbot import QtBot

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused
from clinicalc.gui import printing
from clinicalc.gui.painting import colours_of, paint
from clinicalc.gui.printing import PrintPreview, make_printer, paint_document, preview
from clinicalc.gui.tokens import LIGHT
from clinicalc.operations.documents import lay_out_print
from clinicalc.report import Paper as Sheet
from clinicalc.report import make_report
from clinicalc.settings import Paper
from tests.assessment.cases import DEMO, WOMAN_61, run
from tests.report.printing import PRACTICE, PRINTED, pages_of, with_band

DPI = 150
MOST_DIFFERING = 0.01
LARGEST_DIFFERENCE = 32
needs_pdftoppm = pytest.mark.skipif(shutil.which("pdftoppm") is None, reason="pdftoppm (Poppler) is not installed")

Pixels = NDArray[np.int16]
CASES: dict[str, Callable[[], Assessment]] = {
    "no band, worked out of other units": lambda: run(
        "general-cvd-2008-lipids", WOMAN_61, total_cholesterol="4.655 mmol/L"
    ),
    "band, a finding at a value": lambda: run("tarnwick-cvd-10y", DEMO, systolic_bp="215"),
    "a name in two typefaces": lambda: with_band("Żółć Őry Аԥсҳа"),
}


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


def rastered(pdf: bytes, folder: Path, name: str) -> list[Pixels]:
    (folder / f"{name}.pdf").write_bytes(pdf)
    subprocess.run(["pdftoppm", "-r", str(DPI), "-png", str(folder / f"{name}.pdf"), str(folder / name)], check=True)
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
    assert len(words_of(pdf)) == 3
    assert words_of(through_qt) == words_of(pdf)


@needs_pdftoppm
@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("case", CASES)
def test_printer_and_pdf_look_the_same(case: str, paper: Paper, tmp_path: Path) -> None:
    assessment = CASES[case]()
    pdf = make_report(assessment, practice=PRACTICE, printed_at=PRINTED, paper=Sheet(paper.value))
    through_qt = printed_through_qt(assessment, paper, tmp_path / "printer.pdf")
    pairs = list(zip(rastered(pdf, tmp_path, "saved"), rastered(through_qt, tmp_path, "sent"), strict=True))
    assert len(pairs) == 3
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


def opened(qtbot: QtBot, assessment: Assessment, current: list[bool], paper: Paper = Paper.A4) -> PrintPreview:
    dialog = PrintPreview(None, assessment, lambda: current[0], practice=PRACTICE, paper=paper)
    qtbot.addWidget(dialog)
    dialog.show()
    return dialog


def test_the_preview_shows_the_pages_that_the_pdf_is_painted_from(qtbot: QtBot) -> None:
    """The same shapes painted straight away: their likeness to the PDF is measured elsewhere, with sharp letters."""
    assessment = run("tarnwick-cvd-10y", DEMO)
    dialog = opened(qtbot, assessment, [True], Paper.LETTER)
    view, shown = dialog.findChild(QGraphicsView), dialog.findChild(QPrintPreviewWidget)
    assert isinstance(view, QGraphicsView)
    assert isinstance(shown, QPrintPreviewWidget)
    shown.updatePreview()
    document = lay_out_print(assessment, practice=PRACTICE, paper=Paper.LETTER, printed_at=dialog.printed_at)
    assert shown.pageCount() == len(document.pages) == 3
    lettering, colours = document.lettering, colours_of(LIGHT)
    for page, preview_of_it in zip(document.pages, pages_in(view), strict=True):
        image = blank_sheet()
        painter = QPainter(image)
        paint(painter, page.shapes, colours, lettering, scale=DPI / 72, snap=False)
        painter.end()
        assert share_differing(pixels_of(image), preview_of_it) <= MOST_DIFFERING


def blank_sheet() -> QImage:
    """A sheet of Letter at the resolution of the comparison."""
    image = QImage(round(612 * DPI / 72), round(792 * DPI / 72), QImage.Format.Format_RGB32)
    image.fill(QColor("white"))
    return image


def pages_in(view: QGraphicsView) -> list[Pixels]:
    """Every page of the preview as pixels, in order."""
    scene = view.scene()
    pictures = []
    for item in sorted(scene.items(), key=lambda item: (item.pos().y(), item.pos().x())):
        image = blank_sheet()
        painter = QPainter(image)
        round_it = -item.boundingRect().left()  # kept free for the shadow: the sheet itself begins at nought
        sheet = item.mapRectToScene(item.boundingRect()).adjusted(round_it, round_it, -round_it, -round_it)
        scene.render(painter, QRectF(image.rect()), sheet, Qt.AspectRatioMode.IgnoreAspectRatio)
        painter.end()
        pictures.append(pixels_of(image))
    return pictures


def test_what_is_printed_from_the_preview_is_the_print(qtbot: QtBot, tmp_path: Path) -> None:
    dialog = opened(qtbot, with_band("Ottilie Fenn"), [True])
    send(dialog, tmp_path / "sent.pdf")
    pages = words_of((tmp_path / "sent.pdf").read_bytes())
    assert len(pages) == 3
    assert "Ottilie Fenn" in pages[0]
    assert "18.2 % An invented event within 10 years" in pages[0]
    assert dialog.refusal == ""


def send(dialog: PrintPreview, path: Path) -> None:
    """Print as the print button does, once a printer is chosen: this one writes a file."""
    dialog.printer_in_use.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    dialog.printer_in_use.setOutputFileName(str(path))
    widget = dialog.findChild(QPrintPreviewWidget)
    assert isinstance(widget, QPrintPreviewWidget)
    widget.print_()


def test_a_value_changed_after_the_preview_is_not_printed(qtbot: QtBot, tmp_path: Path) -> None:
    current = [True]
    dialog = opened(qtbot, with_band(), current)
    qtbot.waitUntil(dialog.isVisible)
    assert dialog.refusal == ""
    current[0] = False
    send(dialog, tmp_path / "sent.pdf")
    assert not (tmp_path / "sent.pdf").exists()
    assert "the values on screen have changed since this preview was opened" in dialog.refusal
    qtbot.waitUntil(lambda: not dialog.isVisible())


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
def test_another_sheet_chosen_in_the_preview_gets_its_own_layout(size: QPageSize.PageSizeId, wanted: Paper) -> None:
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


def test_the_name_of_the_job_says_nothing_about_the_patient(qtbot: QtBot) -> None:
    dialog = opened(qtbot, with_band("Ottilie Fenn"), [True])
    assert dialog.printer_in_use.docName() == "tiny-logit 2026-12-01 1418"
    assert "Fenn" not in dialog.windowTitle()
