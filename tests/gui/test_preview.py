"""The preview shows the pages of the PDF, to the pixel and to the word, on paper that is light in every theme."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from PySide6.QtGui import QColor
from pytestqt.qtbot import QtBot

from clinicalc.gui import theme
from clinicalc.gui.page_stack import Zoom
from clinicalc.report.palette import PAPER
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.pdf import make_report
from clinicalc.report.shapes import Tone
from clinicalc.settings import Paper, ThemeChoice
from tests.gui.previewing import open_preview, picture_of
from tests.gui.test_printing import (
    CASES,
    MOST_DIFFERING,
    PAGES,
    needs_pdftoppm,
    pixels_of,
    rastered,
    share_differing,
    words_of,
)
from tests.report.printing import PRACTICE, with_band

pytestmark = pytest.mark.gui


@pytest.fixture(autouse=True)
def _light_again() -> Iterator[None]:
    yield
    theme.choose(ThemeChoice.SYSTEM)


@needs_pdftoppm
@pytest.mark.parametrize("zoom", [Zoom.FULL, Zoom.DOUBLE])
@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("case", CASES)
def test_preview_and_pdf_look_the_same(qtbot: QtBot, case: str, paper: Paper, zoom: Zoom, tmp_path: Path) -> None:
    assessment = CASES[case]()
    view, job = open_preview(qtbot, assessment, paper)
    view.pages.take_zoom(zoom)
    pdf = make_report(assessment, practice=PRACTICE, printed_at=job.printed_at, paper=Sheet(paper.value))
    pairs = list(zip(rastered(pdf, tmp_path, "saved"), view.pages.sheets, strict=True))
    assert len(pairs) == PAGES[case]
    for saved, sheet in pairs:
        assert (saved.min(axis=2) < 200).mean() > 0.01  # there is something to compare
        assert share_differing(saved, picture_of(sheet)) <= MOST_DIFFERING


@needs_pdftoppm
@pytest.mark.parametrize("zoom", Zoom)
def test_pixel_for_pixel_on_a_plain_screen(qtbot: QtBot, zoom: Zoom, tmp_path: Path) -> None:
    """The same at the size that the window has here, whatever that comes to in dots to the inch."""
    view, job = open_preview(qtbot)
    view.pages.take_zoom(zoom)
    dpi = view.pages.sheets[0].scale * 72
    pdf = make_report(with_band("Ottilie Fenn"), practice=PRACTICE, printed_at=job.printed_at)
    for saved, sheet in zip(rastered(pdf, tmp_path, "saved", dpi), view.pages.sheets, strict=True):
        assert share_differing(saved, pixels_of(sheet.grab().toImage())) <= MOST_DIFFERING


@needs_pdftoppm
def test_another_patient_would_be_seen(qtbot: QtBot, tmp_path: Path) -> None:
    view, job = open_preview(qtbot, with_band(age="50"))
    view.pages.take_zoom(Zoom.FULL)
    other = make_report(with_band(age="70"), practice=PRACTICE, printed_at=job.printed_at)
    patients_page = rastered(other, tmp_path, "other")[-1]
    assert share_differing(patients_page, picture_of(view.pages.sheets[-1])) > MOST_DIFFERING


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("case", CASES)
def test_preview_and_pdf_say_the_same_page_by_page(qtbot: QtBot, case: str, paper: Paper) -> None:
    """Word for word; a word in two typefaces may be read back in two parts, so white space is not compared."""
    assessment = CASES[case]()
    view, job = open_preview(qtbot, assessment, paper)
    pdf = make_report(assessment, practice=PRACTICE, printed_at=job.printed_at, paper=Sheet(paper.value))
    shown = ["".join("".join(sheet.texts).split()) for sheet in view.pages.sheets]
    assert shown == ["".join(page.split()) for page in words_of(pdf)]


@pytest.mark.parametrize("choice", [ThemeChoice.LIGHT, ThemeChoice.DARK])
def test_pages_are_paper_in_every_theme(qtbot: QtBot, choice: ThemeChoice) -> None:
    theme.choose(choice)
    view, _ = open_preview(qtbot)
    picture = view.grab().toImage()
    sheet = view.pages.sheets[0]
    corner = sheet.mapTo(view, sheet.rect().topLeft())
    paper = QColor(PAPER[Tone.SHEET])
    assert picture.pixelColor(corner.x() + 2, corner.y() + 2) == paper
    assert picture.pixelColor(corner.x() - 1, corner.y() + 40) == QColor(theme.tokens().edge)
    assert picture.pixelColor(corner.x() - 5, corner.y() + 40) == QColor(theme.tokens().ground)
