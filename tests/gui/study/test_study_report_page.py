"""A report of a fit, saved from the steps Fit and Package."""

from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from clinicalc.gui.file_choosing import Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.report_deed import ReportDeed
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.conftest import Chooser, rest
from tests.gui.study.study_files import StudyFiles

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@pytest.fixture
def fitted(qtbot: QtBot, opened: StudyPage) -> StudyPage:
    """The small study fitted."""
    opened.work.fit()
    rest(qtbot, opened)
    assert opened.state.fit is not None, opened.sheet.words
    return opened


def report(page: StudyPage) -> ReportDeed:
    """The form that the button of the sheet opens."""
    page.sheet.buttons[Ask.REPORT].click()
    deed = page.right.currentWidget()
    assert isinstance(deed, ReportDeed)
    return deed


def test_there_is_none_before_a_fit(opened: StudyPage) -> None:
    opened.show_step(Step.FIT)
    assert Ask.REPORT not in opened.sheet.buttons


def test_it_is_saved_with_the_keys_alone(
    qtbot: QtBot, study_window: MainWindow, fitted: StudyPage, tmp_path: Path
) -> None:
    fitted.sheet.focus_first()
    QTest.keyClick(study_window.windowHandle(), Qt.Key.Key_E, Qt.KeyboardModifier.AltModifier)
    qtbot.waitUntil(lambda: isinstance(fitted.right.currentWidget(), ReportDeed), timeout=5000)
    QTest.keyClick(study_window.windowHandle(), Qt.Key.Key_Return)
    rest(qtbot, fitted)
    path = tmp_path / "tarnwick-small-cox-report.pdf"
    assert path.read_bytes().startswith(b"%PDF")
    assert fitted.step is Step.FIT
    assert str(path) in fitted.strip.words.text()
    assert fitted.strip.isVisible()
    assert fitted.sheet.buttons[Ask.REPORT].hasFocus()
    assert fitted.foot.isVisible()


def test_one_that_is_there_is_replaced_only_where_the_dialog_asked(
    qtbot: QtBot, fitted: StudyPage, chooser: Chooser, tmp_path: Path
) -> None:
    path = tmp_path / "tarnwick-small-cox-report.pdf"
    path.write_bytes(b"%PDF-1.4 mine")
    deed = report(fitted)
    deed.ask()
    rest(qtbot, fitted)
    assert path.read_bytes() == b"%PDF-1.4 mine"
    assert fitted.right.currentWidget() is deed
    assert deed.form.refusal.text()
    assert "--" not in deed.form.refusal.text()
    chooser.answers[Wanted.REPORT_PDF] = path
    deed.place.button.click()
    deed.ask()
    rest(qtbot, fitted)
    assert fitted.right.currentWidget() is fitted.sheet, deed.form.refusal.text()
    assert b"mine" not in path.read_bytes()


def test_a_folder_that_is_not_there_is_refused(qtbot: QtBot, fitted: StudyPage, tmp_path: Path) -> None:
    deed = report(fitted)
    deed.place.edit.setText(str(tmp_path / "nowhere" / "report.pdf"))
    deed.ask()
    rest(qtbot, fitted)
    assert fitted.right.currentWidget() is deed
    assert deed.place.edit.hasFocus()
    deed.place.edit.setText("")
    deed.ask()
    assert "no place is named" in deed.form.refusal.text().casefold()


def test_it_is_saved_from_the_package_too_and_of_a_fit_of_earlier_people(
    qtbot: QtBot, fitted: StudyPage, files: StudyFiles, tmp_path: Path
) -> None:
    fitted.show_step(Step.PACKAGE)
    rest(qtbot, fitted)
    assert fitted.state.package is not None
    report(fitted).ask()
    rest(qtbot, fitted)
    assert (tmp_path / "tarnwick-small-cox-report.pdf").exists()
    files.change_people("1,", "1,,,,,")
    fitted.work.read_again()
    rest(qtbot, fitted)
    fitted.show_step(Step.FIT)
    deed = report(fitted)
    deed.place.edit.setText(str(tmp_path / "earlier.pdf"))
    deed.ask()
    rest(qtbot, fitted)
    assert (tmp_path / "earlier.pdf").exists()
