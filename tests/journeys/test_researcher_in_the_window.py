"""A researcher's path through the window by keyboard: a file of people, a study file, a fit, a file, a patient."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import statsmodels.api as sm
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit
from pytestqt.qtbot import QtBot

from clinicalc.coefficients.reader import read_file
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.steps import Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.study_files import people_csv
from tests.journeys.keyboard import ALT, ENTER, focused_name, hit, write

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu opens
    pytest.mark.qt_log_ignore("This plugin does not support"),
]
LONG = 60_000
ABOUT = (
    "Event within three years, invented",
    "The event within three years",
    "the event within three years",
    "Nobody: the people are invented",
    "A test",
    "Invented; it must not guide any decision.",
    "Cox fit to invented people.",
)


@pytest.fixture
def people(tmp_path: Path) -> Path:
    """The file of people, alone in its folder."""
    path = tmp_path / "tarnwick-people.csv"
    path.write_text(people_csv(), encoding="utf-8")
    return path


@pytest.fixture
def window(qtbot: QtBot, people: Path) -> MainWindow:
    """A window whose dialogs point to the file of people."""
    choices = FileChoices(
        which=lambda _, wanted: people if wanted is Wanted.COHORT else None,
        where=lambda *_: None,
        folder=lambda _: None,
    )
    window = MainWindow(choose_open=lambda _: None, choose_files=choices)
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    return window


def press(letter: str) -> None:
    """A letter with Alt; a button shows for a moment that it is pressed."""
    hit(Qt.Key(ord(letter.upper())), ALT)
    QTest.qWait(150)


def rest(qtbot: QtBot, page: StudyPage) -> None:
    """Until nothing is being done any more."""
    QTest.qWait(10)
    qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=LONG)
    QTest.qWait(10)


def retype(text: str) -> None:
    """Other words in the field that has the focus."""
    focused = QApplication.focusWidget()
    assert isinstance(focused, QLineEdit)
    hit(Qt.Key.Key_A, Qt.KeyboardModifier.ControlModifier)
    write(text)


def add_term(downs: int, enters: int) -> None:
    """A term of the value that stands so many places down, entering as its kind stands so many places down."""
    press("a")
    assert focused_name() == "Value"
    for _ in range(downs):
        hit(Qt.Key.Key_Down)
    hit(ENTER)
    assert focused_name() == "Enters"
    for _ in range(enters):
        hit(Qt.Key.Key_Down)
    press("a")  # the form's own: it adds the term


def write_study(qtbot: QtBot, page: StudyPage) -> None:
    """From the file of people to a study file that is saved and open."""
    press("b")
    rest(qtbot, page)
    assert page.pane.list.says(Step.DATA) == "being written, 6 columns"
    press("m")
    press("w")
    for text in ABOUT:
        retype(text)
        hit(ENTER)
    for downs, enters in ((0, 0), (1, 4), (2, 0)):  # age, sex by its answers, systolic blood pressure
        add_term(downs, enters)
    assert page.pane.list.says(Step.MODEL) == "being written, 3 terms"
    press("h")
    hit(ENTER)
    assert focused_name() == "Ties"
    hit(Qt.Key.Key_Down)
    hit(ENTER)
    assert focused_name() == "Penalty"
    hit(ENTER)
    hit(ENTER)
    assert focused_name() == "Horizons"
    retype("3")
    press("s")
    press("s")
    press("s")
    rest(qtbot, page)


def risk_of(people: Path, age: float, male: float, pressure: float, days: float) -> float:
    """1 - exp(-H0(t) exp(x'b)): b of PHReg, ties breslow, H0 by Breslow's sum, Biometrics 1974;30:89-99."""
    table = pd.read_csv(people)
    table = table[table.sbp != -9]
    x = np.column_stack([table.age, table.sex == "M", table.sbp]).astype(float)
    b = np.asarray(sm.PHReg(table.days, x, status=table.status, ties="breslow").fit().params)
    centre = x.mean(axis=0)
    weights = np.exp((x - centre) @ b)
    times = table.days.to_numpy()
    events = times[(table.status == 1) & (times <= days)]
    hazard = sum(1.0 / weights[times >= time].sum() for time in events)
    return float(-np.expm1(-hazard * np.exp((np.array([age, male, pressure]) - centre) @ b)))


def test_from_people_to_a_patient(qtbot: QtBot, window: MainWindow, people: Path) -> None:
    QTest.keyClick(window.windowHandle(), Qt.Key.Key_F4)
    page = window.others.study()
    write_study(qtbot, page)
    assert (people.parent / "tarnwick-people.toml").exists()
    assert page.state.opened is not None, page.sheet.words
    press("m")
    press("f")
    rest(qtbot, page)
    assert page.pane.list.says(Step.FIT) == "converged", page.sheet.words
    press("p")
    rest(qtbot, page)
    assert page.pane.list.says(Step.PACKAGE) == "ready to be written", page.sheet.words
    press("w")
    assert focused_name() == "File to write"
    press("w")
    rest(qtbot, page)
    written = page.state.written
    assert written == people.parent / "tarnwick-people.json"
    assert read_file(written).content.model.title == ABOUT[0]
    hit(ENTER)  # the focus stands on "Try it on the Patient page"
    assert window.page is Page.PATIENT
    for id, text in (("age", "61"), ("systolic_bp", "150")):
        window.values.focus_field(id)
        write(text)
        hit(ENTER)
    window.values.focus_field("sex")
    hit(Qt.Key.Key_M)
    expected = risk_of(people, 61, 1.0, 150, 3 * 365.25)
    qtbot.waitUntil(lambda: bool(window.sheet.number.figure), timeout=LONG)
    assert window.sheet.number.figure == f"{100 * expected:.1f}"
    assert "Not vetted" in window.sheet.strip.label.text()
