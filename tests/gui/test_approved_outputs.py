"""What leaves the window of an approved model, holding it here, the one-column window, and starting on a library."""

from pathlib import Path

import pytest
from PySide6.QtGui import QGuiApplication
from PySide6.QtPrintSupport import QPrinter
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.errors import PrintRefused
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.printing import PrintJob
from clinicalc.report.parts import USUAL_PARTS
from clinicalc.report.phrases import NOT_VETTED
from clinicalc.settings import FILE_NAME, Paper
from tests.assessment.cases import DEMO, MAN_50
from tests.gui.approving import Surgery, fill
from tests.gui.test_start import run_python
from tests.library.machines import machine_for, make_shelf
from tests.library.records_kit import POINT
from tests.report.printing import pages_of

pytestmark = pytest.mark.gui

APPROVAL = "Approved by Dr Ada Tarn (general practitioner) until 30 June 2027"


@pytest.fixture
def surgery(tmp_path: Path) -> Surgery:
    """A library with one model in use."""
    return Surgery(tmp_path)


def shown(qtbot: QtBot, window: MainWindow, width: int = 1280) -> MainWindow:
    """The window, seen."""
    qtbot.addWidget(window)
    window.resize(width, 800)
    with qtbot.waitExposed(window):
        window.show()
    return window


def test_every_page_of_an_approved_model_names_the_approval_and_has_no_strip(
    qtbot: QtBot, surgery: Surgery, tmp_path: Path
) -> None:
    path = tmp_path / "print.pdf"
    window = shown(qtbot, surgery.open(lambda *_: path))
    fill(window, DEMO)
    window.foot.save_pdf.click()
    pages = [" ".join(page.split()) for page in pages_of(path.read_bytes())]
    assert len(pages) == 2
    for page in pages:
        assert APPROVAL in page
        assert NOT_VETTED not in page
    window.foot.copy.click()
    assert APPROVAL in QGuiApplication.clipboard().text()


def test_a_file_tried_out_beside_a_library_has_the_strip_on_every_page(
    qtbot: QtBot, surgery: Surgery, tmp_path: Path
) -> None:
    path = tmp_path / "print.pdf"
    window = shown(qtbot, surgery.open(lambda *_: path))
    assert window.state.model is not None
    window.use_model(window.state.model)
    fill(window, DEMO)
    window.foot.save_pdf.click()
    assert all(NOT_VETTED in page for page in pages_of(path.read_bytes()))


def test_a_withdrawal_while_the_place_is_chosen_saves_nothing(qtbot: QtBot, surgery: Surgery, tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"

    def choose(parent: QWidget | None, name: str) -> Path:
        surgery.withdraw()
        return path

    window = shown(qtbot, surgery.open(choose))
    fill(window, DEMO)
    window.foot.save_pdf.click()
    assert not path.exists()
    assert window.sheet.number.figure == ""
    assert window.foot.message.text() == "Not saved: the model gives no number any more."


def test_a_withdrawal_while_a_printer_is_chosen_prints_nothing(qtbot: QtBot, surgery: Surgery, tmp_path: Path) -> None:
    window = shown(qtbot, surgery.open())
    fill(window, DEMO)
    assessment = window.state.assessment
    assert assessment is not None
    assert window.library is not None
    path = tmp_path / "print.pdf"

    def choose(printer: QPrinter, parent: QWidget | None) -> bool:
        surgery.withdraw()
        printer.setOutputFileName(str(path))
        return True

    may_print = window.outputs._may_print
    job = PrintJob(assessment, lambda: may_print(assessment), choose=choose, read_again=window.library.check)
    with pytest.raises(PrintRefused, match="gives no number any more"):
        job.send(None, Paper.A4, USUAL_PARTS)
    assert not path.exists()
    assert window.sheet.number.figure == ""


def test_a_model_is_held_and_released_from_the_menu(qtbot: QtBot, surgery: Surgery) -> None:
    window = shown(qtbot, surgery.open(why="the paper is being corrected"))
    fill(window, DEMO)
    figure, menu = window.sheet.number.figure, window.model_bar.chooser.menu
    window.model_bar.chooser.about_to_open.emit()
    hold = next(action for action in menu.actions() if action.text().startswith("Hold this model"))
    hold.trigger()
    assert window.sheet.number.figure == ""
    assert "the paper is being corrected" in window.sheet.sentence.text()
    assert window.foot.message.text() == "Held on this machine."
    window.model_bar.chooser.about_to_open.emit()
    assert not any(action.text().startswith("Hold") for action in menu.actions())
    release = next(action for action in menu.actions() if action.text().startswith("Release on this machine: "))
    release.trigger()
    assert window.sheet.number.figure == figure
    assert window.foot.message.text() == "Released on this machine."


def test_a_question_that_is_closed_holds_nothing(qtbot: QtBot, surgery: Surgery) -> None:
    window = shown(qtbot, surgery.open(why=None))
    fill(window, DEMO)
    assert window.desk is not None
    window.desk.hold()
    assert window.sheet.number.figure


def test_a_hold_needs_a_reason_and_says_so(qtbot: QtBot, surgery: Surgery) -> None:
    window = shown(qtbot, surgery.open(why="  "))
    fill(window, DEMO)
    assert window.desk is not None
    window.desk.hold()
    assert window.sheet.number.figure
    assert window.foot.message.text().startswith("A hold needs its reason.")


def test_recalibration_and_decision_points_are_those_of_the_approval(qtbot: QtBot, surgery: Surgery) -> None:
    chosen = surgery.add_model("cvd-2021-regional.json", recalibration="low", points=(POINT,))
    window = shown(qtbot, surgery.open())
    assert window.library is not None
    window.library.choose(chosen)
    fill(window, MAN_50)
    bar = window.model_bar
    assert not bar.recalibration.isVisible()
    assert (bar.fixed_recalibration.text(), bar.fixed_recalibration.isVisible()) == ("Low-risk region", True)
    # 5.9 %: SCORE2 working group, Eur Heart J 2021;42:2439-2454, worked example of a man of 50, low-risk region
    assert window.sheet.number.figure == "5.9"
    assert [point.label for point in window.state.decision_points] == [POINT.label]
    window.state.choose_recalibration(None)
    assert window.state.recalibration == "low"


def test_in_one_column_approval_and_reason_stay_in_sight(qtbot: QtBot, surgery: Surgery) -> None:
    window = shown(qtbot, surgery.open(), 700)
    fill(window, DEMO)
    pinned = window.patient.pinned
    assert APPROVAL in pinned.model.text()
    surgery.withdraw()
    assert window.library is not None
    window.library.check()
    assert "Withdrawn by Dr Ben Wick" in pinned.sentence.text()
    assert pinned.model.text().startswith("Not in use: ")
    assert pinned.band.text() == ""


START = """
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from clinicalc.gui import application
from clinicalc.gui.model_library import ModelLibrary
from tests.library.machines import NOW
application.ModelLibrary = lambda state: ModelLibrary(state, clock=lambda: NOW)
class Watched(application.MainWindow):
    def __init__(self, *words, **names):
        super().__init__(*words, **names)
        QTimer.singleShot(1500, self.look)
    def look(self):
        print(self.sheet.headline.text(), self.model_bar.approved.text(), sep="|")
        QApplication.quit()
application.MainWindow = Watched
application.run_window()
"""


def test_the_program_starts_on_the_library_of_its_settings(tmp_path: Path) -> None:
    shelf = make_shelf(tmp_path / "library")
    machine = machine_for(shelf, tmp_path / "machine")
    settings = f'library = "{shelf.place.as_posix()}"\npractice_key = "{machine.practice_key}"\n'
    (machine.folder / FILE_NAME).write_text(settings, encoding="utf-8")
    folders = {"XDG_RUNTIME_DIR": str(tmp_path), "CLINICALC_SETTINGS": str(machine.folder)}
    done = run_python(START, **folders)
    assert (done.stdout.strip(), done.stderr) == ("No number yet|1 Dec 2026, Dr Ada Tarn", "")
    (machine.folder / FILE_NAME).write_text(f'library = "{shelf.place.as_posix()}"\n', encoding="utf-8")
    done = run_python(START, **folders)
    assert (done.stdout.strip(), done.stderr) == ("The library cannot be used|", "")
