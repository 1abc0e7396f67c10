"""Opening coefficient files and saving prints from the window."""

from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.resources import read_shipped
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008, click

pytestmark = pytest.mark.gui


class Dialogs:
    """Stands in for the person at the system's dialogs: answers with the paths it was given."""

    def __init__(self) -> None:
        self.open: Path | None = None
        self.save: Path | None = None
        self.suggested = ""

    def choose_open(self, parent: QWidget) -> Path | None:
        return self.open

    def choose_save(self, parent: QWidget, suggestion: str) -> Path | None:
        self.suggested = suggestion
        return self.save


@pytest.fixture
def dialogs() -> Dialogs:
    return Dialogs()


@pytest.fixture
def with_number(qtbot: QtBot, lipids: Model, dialogs: Dialogs) -> MainWindow:
    window = MainWindow(choose_open=dialogs.choose_open, choose_save=dialogs.choose_save)
    qtbot.addWidget(window)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008, "Ottilie Fenn"))
    with qtbot.waitExposed(window):
        window.show()
    return window


def test_window_without_a_file(qtbot: QtBot) -> None:
    window = MainWindow()
    qtbot.addWidget(window)
    assert window.sheet.headline.text() == "No coefficient file is open"
    assert window.sheet.number.figure == ""
    assert not window.foot.save_pdf.isEnabled()
    assert window.sheet.strip.isHidden()


def test_opening_another_file_leaves_nothing_of_the_last_patient(
    qtbot: QtBot, with_number: MainWindow, dialogs: Dialogs, tmp_path: Path
) -> None:
    dialogs.open = tmp_path / "regional.json"
    dialogs.open.write_bytes(read_shipped("example_models/cvd-2021-regional.json"))
    with_number.model_bar.chooser.open_action.trigger()
    assert with_number.model_bar.chooser.title == "Cardiovascular disease, regional form"
    assert with_number.sheet.number.figure == ""
    assert dict(with_number.state.entry.typed) == {}
    assert with_number.state.entry.label == ""
    assert not with_number.sheet.strip.isHidden()


def test_refused_file_is_explained_and_covers_the_number(
    qtbot: QtBot, with_number: MainWindow, dialogs: Dialogs, tmp_path: Path
) -> None:
    dialogs.open = tmp_path / "broken.json"
    dialogs.open.write_text('{"format": "<b>x</b>", "model": {"id": "A"}}')
    with_number.model_bar.chooser.open_action.trigger()
    assert with_number.refusal.isVisible()
    assert not with_number.sheet.isVisible()
    assert not with_number.foot.save_pdf.isEnabled()
    problems = with_number.refusal.problems
    assert "/format" in problems.toPlainText()
    assert "<b>x</b>" in problems.toPlainText()
    assert "/model" in problems.toPlainText()
    assert problems.textInteractionFlags() & Qt.TextInteractionFlag.TextSelectableByKeyboard
    assert with_number.refusal.title.text() == "broken.json was not opened"
    click(with_number.refusal.back)
    assert with_number.sheet.isVisible()
    assert with_number.sheet.number.figure == "10.5"
    assert with_number.model_bar.chooser.title == "General cardiovascular disease, lipid form"


def test_file_that_is_not_there(qtbot: QtBot, with_number: MainWindow, dialogs: Dialogs, tmp_path: Path) -> None:
    dialogs.open = tmp_path / "nowhere.json"
    with_number.model_bar.chooser.open_action.trigger()
    assert with_number.refusal.isVisible()
    assert with_number.refusal.problems.toPlainText() != ""


def test_saving_writes_the_print_and_suggests_no_patient_data(
    qtbot: QtBot, with_number: MainWindow, dialogs: Dialogs, tmp_path: Path
) -> None:
    dialogs.save = tmp_path / "print.pdf"
    click(with_number.foot.save_pdf)
    assert dialogs.save.read_bytes()[:5] == b"%PDF-"
    assert with_number.foot.message.text() == "Saved as print.pdf."
    assert "general-cvd-2008-lipids" in dialogs.suggested
    for word in ("Ottilie", "Fenn", "female", "10.5"):
        assert word not in dialogs.suggested
    click(with_number.foot.new_patient)
    assert with_number.foot.message.text() == ""


def test_print_that_cannot_be_written_is_said_in_words(
    qtbot: QtBot, with_number: MainWindow, dialogs: Dialogs, tmp_path: Path
) -> None:
    dialogs.save = tmp_path / "no such folder" / "print.pdf"
    click(with_number.foot.save_pdf)
    assert with_number.foot.message.isVisible()
    assert with_number.foot.message.text().startswith("Not saved: ")
    assert with_number.sheet.number.figure == "10.5"


def test_print_refused_for_a_character_is_said_in_words(
    qtbot: QtBot, with_number: MainWindow, dialogs: Dialogs, tmp_path: Path
) -> None:
    assert with_number.values.label_row is not None
    with_number.values.label_row.edit.setText("\N{HIRAGANA LETTER A}")
    dialogs.save = tmp_path / "print.pdf"
    click(with_number.foot.save_pdf)
    assert with_number.foot.message.text().startswith("Not saved: ")
    assert not dialogs.save.exists()
