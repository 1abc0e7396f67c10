"""What can be chosen in the preview beside the patient's page: what is there, and shown, printed and saved alike."""

from pathlib import Path

import pytest
from PySide6.QtCore import QSize
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import QAbstractButton, QApplication
from pytestqt.qtbot import QtBot

from clinicalc.gui.preview_view import NARROWEST
from clinicalc.gui.printing import make_printer, paint_document
from clinicalc.operations.documents import lay_out_print
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.parts import PrintParts
from clinicalc.report.pdf import make_report
from clinicalc.report.phrases_comparison import NO_PROMISE
from clinicalc.settings import Paper
from tests.gui.bedside_hands import click
from tests.gui.previewing import open_preview, picture_of
from tests.gui.test_printing import MOST_DIFFERING, needs_pdftoppm, rastered, share_differing, words_of
from tests.report.beside import EVERYTHING, LIPIDS, TARNWICK, full
from tests.report.printing import PRACTICE, PRINTED, with_band

pytestmark = pytest.mark.gui

OPEN = {"hdl_cholesterol": "not measured"}


def test_only_what_is_there_can_be_chosen(qtbot: QtBot) -> None:
    offered = [
        tuple(open_preview(qtbot, assessment)[0].part_buttons)
        for assessment in (
            full(),
            full(changes=(), matching_age=False),
            full(LIPIDS, (), values=OPEN, matching_age=False),
            full(changes=("smoker=perhaps",), matching_age=False),
        )
    ]
    assert offered == [("comparison", "shares", "matching_age"), ("shares",), (), ("shares",)]


def test_a_comparison_is_chosen_at_first_and_what_persuades_is_not(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot, full())
    assert view.parts == PrintParts()
    assert any(NO_PROMISE in " ".join(sheet.accessibleDescription().split()) for sheet in view.pages.sheets)
    for button in view.part_buttons.values():
        click(button)
    QApplication.processEvents()
    assert view.parts == PrintParts(comparison=False, shares=True, matching_age=True)
    assert not any(NO_PROMISE[:30] in sheet.accessibleDescription() for sheet in view.pages.sheets)
    click(view.print_button)
    assert job.sent == [(Paper.A4, PrintParts(comparison=False, shares=True, matching_age=True))]


@pytest.mark.parametrize("size", [QSize(1024, 640), QSize(640, 400), NARROWEST], ids=["usual", "200 % text", "least"])
def test_the_buttons_have_their_room_and_their_name(qtbot: QtBot, size: QSize) -> None:
    view, _ = open_preview(qtbot, full(), size=size)
    QApplication.processEvents()
    for button in view.findChildren(QAbstractButton):
        if button.isVisible():
            assert view.rect().contains(button.mapTo(view, button.rect().bottomRight())), button.accessibleName()
    for words, button in zip(("Comparison", "Shares", "Matching age"), view.part_buttons.values(), strict=True):
        interface = QAccessible.queryAccessibleInterface(button)
        assert interface is not None
        assert interface.text(QAccessible.Text.Name) == words
        assert interface.state().checkable
        assert min(button.width(), button.height()) >= 24


def test_nothing_to_choose_takes_no_room(qtbot: QtBot) -> None:
    bare, _ = open_preview(qtbot, full(LIPIDS, (), values=OPEN, matching_age=False))
    more, _ = open_preview(qtbot, with_band())
    assert bare.pages.height() > more.pages.height()


@needs_pdftoppm
@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize(("id", "pages"), [(TARNWICK, 3), (LIPIDS, 4)])
def test_preview_printer_and_pdf_are_equal(qtbot: QtBot, id: str, pages: int, paper: Paper, tmp_path: Path) -> None:
    assessment = full(id)
    pdf = make_report(assessment, practice=PRACTICE, printed_at=PRINTED, parts=EVERYTHING, paper=Sheet(paper.value))
    printer = make_printer(paper, "a print")
    printer.setOutputFileName(str(tmp_path / "printer.pdf"))
    paint_document(
        printer, lay_out_print(assessment, practice=PRACTICE, parts=EVERYTHING, paper=paper, printed_at=PRINTED)
    )
    through_qt = (tmp_path / "printer.pdf").read_bytes()
    assert words_of(through_qt) == words_of(pdf)
    saved = rastered(pdf, tmp_path, "saved")
    assert len(saved) == pages
    for one, other in zip(saved, rastered(through_qt, tmp_path, "sent"), strict=True):
        assert share_differing(one, other) <= MOST_DIFFERING
    view, job = open_preview(qtbot, assessment, paper)
    job.printed_at = PRINTED
    for name in ("shares", "matching_age"):
        click(view.part_buttons[name])
    QApplication.processEvents()
    for one, sheet in zip(saved, view.pages.sheets, strict=True):
        assert share_differing(one, picture_of(sheet)) <= MOST_DIFFERING
