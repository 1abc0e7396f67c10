"""The Study page from a study file to the patient's page, and what is refused on the way."""

import re
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import statsmodels.api as sm
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import MINUS
from clinicalc.coefficients.reader import read_file
from clinicalc.gui.file_choosing import Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.problem_list import ProblemEntry
from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.gui.study.write_deed import WriteDeed
from tests.gui.page_walker import NOT_IT, SECRET
from tests.gui.study.conftest import Chooser, rest
from tests.gui.study.study_files import StudyFiles
from tests.gui.test_start import run_python
from tests.gui.walking import settle
from tests.library.keys_at_hand import key_file
from tests.library.records_kit import ADA

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


def grades(page: StudyPage) -> list[Grade]:
    """The grades of what is listed on the step that is shown, in order."""
    return [entry.stated.grade for entry in page.sheet.findChildren(ProblemEntry)]


def fitted(qtbot: QtBot, page: StudyPage) -> StudyPage:
    """The page with the study fitted."""
    page.work.fit()
    rest(qtbot, page)
    assert page.state.fit is not None
    return page


def go_to_package(qtbot: QtBot, page: StudyPage) -> None:
    """The step Package with the file ready to be written."""
    page.show_step(Step.PACKAGE)
    rest(qtbot, page)
    assert page.state.package is not None, page.sheet.words


def write(qtbot: QtBot, page: StudyPage) -> WriteDeed:
    """The form in which the file is written."""
    page.foot.next.click()
    deed = page.right.currentWidget()
    assert isinstance(deed, WriteDeed)
    return deed


def test_the_page_is_empty_at_first_and_says_what_it_is_for(study_window: MainWindow, page: StudyPage) -> None:
    assert study_window.windowTitle() == "Study"
    assert "Open one, or begin from a file of people" in page.sheet.words
    assert page.foot.comes_next is None
    assert [page.pane.list.says(step) for step in Step] == ["not started"] * len(Step)


def test_people_and_events_are_counted(opened: StudyPage, files: StudyFiles) -> None:
    people = pd.read_csv(files.people)
    assert opened.pane.list.says(Step.DATA) == f"{len(people)} people, {int(people.status.sum())} events"
    assert opened.pane.list.says(Step.MODEL) == "Cox, 3 terms"
    assert opened.pane.name.text() == "small.toml"
    missing = int((people.sbp == -9).sum())
    assert re.search(rf'"sbp".*\bmissing in {missing} of {len(people)} lines', opened.sheet.words)
    assert Grade.STOP not in grades(opened)


def test_the_model_is_shown_as_the_study_file_says_it(opened: StudyPage) -> None:
    opened.foot.next.click()
    assert opened.step is Step.MODEL
    for words in (
        "one term for each answer of sex but female",
        "systolic_bp: divided by 10",
        "1 year, 3 years",
        "Efron",
    ):
        assert words in opened.sheet.words
    assert opened.foot.comes_next is Next.FIT


def test_the_coefficients_are_those_of_another_program(qtbot: QtBot, opened: StudyPage, files: StudyFiles) -> None:
    """statsmodels PHReg, ties efron, of the complete cases."""
    page = fitted(qtbot, opened)
    people = pd.read_csv(files.people)
    people = people[people.sbp != -9]
    x = np.column_stack([people.age, people.sex == "M", people.sbp / 10]).astype(float)
    other = sm.PHReg(people.days, x, status=people.status, ties="efron").fit()
    facts = page.sheet.tables[0].rows.facts
    assert [fact.cells[0] for fact in facts] == ["age", "sex_male", "systolic_bp"]
    assert [fact.cells[1] for fact in facts] == ["1 year", "sex is male", "10 mmHg"]
    for place, fact in enumerate(facts):
        assert float(fact.cells[2].replace(MINUS, "-")) == pytest.approx(other.params[place], rel=2e-6)
        assert float(fact.cells[3]) == pytest.approx(other.bse[place], rel=2e-6)
    assert f"{len(people)} of 400" in page.sheet.words
    assert page.pane.list.says(Step.FIT) == "converged"


def test_the_file_is_written_and_tried_on_the_patients_page(
    qtbot: QtBot, study_window: MainWindow, opened: StudyPage, tmp_path: Path
) -> None:
    fitted(qtbot, opened)
    go_to_package(qtbot, opened)
    assert "Documentation: " in opened.sheet.words
    assert "Not answered, and the file says so: " in opened.sheet.words
    deed = write(qtbot, opened)
    deed.ask()
    rest(qtbot, opened)
    path = tmp_path / "tarnwick-small-cox.json"
    assert opened.state.written == path
    read = read_file(path)
    assert opened.state.package is not None
    assert read.fingerprint == opened.state.package.model.fingerprint
    assert opened.foot.comes_next is Next.TRY
    opened.foot.next.click()
    assert study_window.page is Page.PATIENT
    assert study_window.state.model is not None
    assert study_window.state.model.fingerprint == read.fingerprint
    assert study_window.state.approved is None
    study_window.show_page(Page.STUDY)
    assert opened.state.written == path


def test_the_file_can_be_signed(qtbot: QtBot, opened: StudyPage, tmp_path: Path) -> None:
    key = tmp_path / "ada.key"
    key_file(key, ADA)
    fitted(qtbot, opened)
    go_to_package(qtbot, opened)
    deed = write(qtbot, opened)
    deed.key.edit.setText(str(key))
    deed.ask()
    assert "the passphrase of the key is missing" in deed.form.refusal.text().lower()
    deed.secret.edit.setText(NOT_IT)
    deed.ask()
    rest(qtbot, opened)
    assert not (tmp_path / "tarnwick-small-cox.json").exists()
    assert deed.secret.secret == ""
    deed.secret.edit.setText(SECRET)
    deed.ask()
    rest(qtbot, opened)
    assert len(read_file(tmp_path / "tarnwick-small-cox.json").content.signatures) == 1


def test_a_file_that_is_there_is_left_alone(qtbot: QtBot, opened: StudyPage, tmp_path: Path) -> None:
    path = tmp_path / "tarnwick-small-cox.json"
    path.write_text("mine", encoding="utf-8")
    fitted(qtbot, opened)
    go_to_package(qtbot, opened)
    deed = write(qtbot, opened)
    deed.ask()
    rest(qtbot, opened)
    assert path.read_text(encoding="utf-8") == "mine"
    assert "--replace" not in deed.form.refusal.text()
    assert "is there already" in deed.form.refusal.text()
    deed.leave()
    assert opened.state.written is None
    assert opened.foot.isVisible()


def test_a_refused_study_file_leaves_the_one_before(qtbot: QtBot, opened: StudyPage, files: StudyFiles) -> None:
    before = opened.state.opened
    files.change_study("[cohort]\nfile", "[cohort]\nfiel")
    opened.work.read_again()
    rest(qtbot, opened)
    assert opened.state.opened is before
    assert "small.toml was not opened" in opened.sheet.words
    assert "file" in opened.sheet.words
    assert Grade.STOP in grades(opened)
    assert "as it was opened before" in opened.sheet.words


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("1,", "1,,,,,", "people not read"),
        ("person,age", "person,agge", "1 stop in the data"),
    ],
)
def test_people_that_cannot_be_used_stop_the_fit_and_keep_it(
    qtbot: QtBot, opened: StudyPage, files: StudyFiles, old: str, new: str, words: str
) -> None:
    fit = fitted(qtbot, opened).state.fit
    files.change_people(old, new)
    opened.work.read_again()
    rest(qtbot, opened)
    assert opened.pane.list.says(Step.DATA) == words
    assert grades(opened)[0] is Grade.STOP
    assert opened.state.fit is fit
    opened.show_step(Step.FIT)
    assert opened.state.is_stale
    assert "not of what is open now" in opened.sheet.words
    assert not opened.foot.next.isEnabled()
    opened.show_step(Step.PACKAGE)
    assert "earlier data" in opened.sheet.words


def test_reading_the_same_bytes_again_keeps_everything(qtbot: QtBot, opened: StudyPage) -> None:
    fitted(qtbot, opened)
    go_to_package(qtbot, opened)
    package = opened.state.package
    opened.work.read_again()
    rest(qtbot, opened)
    assert not opened.state.is_stale
    assert opened.state.package is package
    assert opened.pane.list.says(Step.FIT) == "converged"


def test_a_refused_fit_is_said_over_the_fit_before(qtbot: QtBot, opened: StudyPage, files: StudyFiles) -> None:
    """No event is left: nothing can be estimated."""
    fit = fitted(qtbot, opened).state.fit
    lines = files.people.read_text(encoding="utf-8").splitlines()
    none = [lines[0], *(f"{line.rpartition(',')[0]},0" for line in lines[1:])]
    files.people.write_text("\n".join(none) + "\n", encoding="utf-8")
    opened.work.read_again()
    rest(qtbot, opened)
    assert grades(opened)[0] is Grade.STOP or opened.state.may_fit
    opened.work.fit()
    rest(qtbot, opened)
    assert opened.state.fit is fit
    opened.show_step(Step.FIT)
    assert "not of what is open now" in opened.sheet.words


def test_work_that_is_stopped_changes_nothing(qtbot: QtBot, opened: StudyPage) -> None:
    before = opened.state
    opened.work.fit()
    opened.errands.stop()
    rest(qtbot, opened)
    assert opened.state.opened is before.opened
    if opened.state.fit is None:
        assert "stopped" in opened.strip.words.text()


def test_the_keys_lead_through_the_page(qtbot: QtBot, study_window: MainWindow, opened: StudyPage) -> None:
    handle = study_window.windowHandle()
    study_window.show_page(Page.PATIENT)
    QTest.keyClick(handle, Qt.Key.Key_F4)
    assert study_window.page is Page.STUDY
    assert opened.pane.list.hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_Down)
    assert opened.step is Step.MODEL
    assert opened.pane.list.hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_F6)
    assert opened.sheet.hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_Tab)
    assert opened.sheet.tables[0].hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_F6)
    assert opened.pane.list.hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_F, Qt.KeyboardModifier.AltModifier)
    qtbot.waitUntil(lambda: opened.step is Step.FIT, timeout=20_000)  # the button shows that it is pressed first


def test_a_form_closes_by_escape(qtbot: QtBot, study_window: MainWindow, opened: StudyPage) -> None:
    fitted(qtbot, opened)
    go_to_package(qtbot, opened)
    write(qtbot, opened)
    assert not opened.foot.isVisible()
    QTest.keyClick(study_window.windowHandle(), Qt.Key.Key_Escape)
    settle()
    assert opened.foot.isVisible()
    focused = QApplication.focusWidget()
    assert focused is opened.sheet


def test_the_dialogs_are_asked(qtbot: QtBot, page: StudyPage, files: StudyFiles, chooser: Chooser) -> None:
    page.foot.open.click()
    assert page.state.opened is None
    chooser.answers[Wanted.STUDY] = files.study
    page.foot.open.click()
    rest(qtbot, page)
    assert page.state.opened is not None


def test_the_page_loads_no_pandas_and_no_statsmodels() -> None:
    program = """
import sys
from PySide6.QtWidgets import QApplication
from clinicalc.gui.application import dress
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
application = QApplication([])
dress(application)
window = MainWindow()
window.show()
window.show_page(Page.STUDY)
application.processEvents()
print([name for name in sys.modules if name.split(".")[0] in ("pandas", "statsmodels", "scipy")])
"""
    done = run_python(program)
    assert (done.stdout.strip(), done.returncode) == ("[]", 0), done.stderr
