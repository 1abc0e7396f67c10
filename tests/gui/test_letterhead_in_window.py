"""The letterhead of the settings goes to preview, printer and PDF: all of them show the same shapes."""

from dataclasses import replace
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.printing import PrintJob
from clinicalc.report.document import make_document
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.parts import USUAL_PARTS
from clinicalc.settings import Paper, Settings
from tests.assessment.cases import DEMO
from tests.gui.bedside_hands import click
from tests.report.printing import pages_of

pytestmark = pytest.mark.gui

LINES = ("Tarnwick Northgate Practice", "3 Quay Lane, Tarnwick")
CHOSEN = Settings(practice="Tarnwick Northgate", paper=Paper.LETTER, letterhead=LINES)


def test_preview_and_printer_lay_out_what_the_pdf_has(viewed: MainWindow) -> None:
    assessment = viewed.state.assessment
    assert assessment is not None
    job = PrintJob(assessment, lambda: True, practice=CHOSEN.practice, letterhead=LINES)
    document = make_document(
        assessment, practice=CHOSEN.practice, printed_at=job.printed_at, paper=Sheet.LETTER, letterhead=LINES
    )
    assert job.lay_out(Paper.LETTER, USUAL_PARTS).pages == document.pages


def test_what_the_window_saves_bears_it_and_follows_the_settings(qtbot: QtBot, tarnwick: Model, tmp_path: Path) -> None:
    pdf = tmp_path / "saved.pdf"
    window = MainWindow(preferences=Preferences(CHOSEN), choose_save=lambda *_: pdf)
    qtbot.addWidget(window)
    window.use_model(tarnwick, entry_from_texts(DEMO, "Ottilie Fenn"))
    click(window.foot.save_pdf)
    assert [page.startswith(" ".join(LINES)) for page in pages_of(pdf.read_bytes())] == [True, True]
    window.preferences.take(replace(CHOSEN, letterhead=()))
    click(window.foot.save_pdf)
    assert [page.startswith("Tarnwick Northgate For the") for page in pages_of(pdf.read_bytes())] == [True, True]
