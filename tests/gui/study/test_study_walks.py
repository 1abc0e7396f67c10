"""Walks over the Study page, each step and each form at each size: names, letters, cut texts, what is painted."""

import pytest
from PySide6.QtCore import QSize
from PySide6.QtWidgets import QLineEdit
from pytestqt.qtbot import QtBot

from clinicalc.gui import theme
from clinicalc.gui.chooser import Chooser
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.calibration_view import CalibrationView
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.settings import ThemeChoice
from tests.gui.page_walks import walk_page
from tests.gui.study.conftest import rest
from tests.gui.study.study_files import StudyFiles, let_others_die, make_binary, plan_methods, separate
from tests.gui.test_walks import SIZES

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@SIZES
def test_the_steps(
    qtbot: QtBot,
    study_window: MainWindow,
    page: StudyPage,
    files: StudyFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    study_window.resize(size)
    assert walk_page(study_window, monkeypatch) == {}
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    for step in Step:
        page.show_step(step)
        rest(qtbot, page)
        assert walk_page(study_window, monkeypatch) == {}, step
    page.foot.next.click()
    shorten(page)
    assert walk_page(study_window, monkeypatch) == {}, "writing"


@SIZES
def test_what_is_refused(
    qtbot: QtBot,
    study_window: MainWindow,
    page: StudyPage,
    files: StudyFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    study_window.resize(size)
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    files.change_people("person,age", "person,agge")
    page.work.read_again()
    rest(qtbot, page)
    for step in Step:
        page.show_step(step)
        assert walk_page(study_window, monkeypatch) == {}, step
    files.change_study('kind = "cox"', 'kind = "coxx"')
    page.work.read_again()
    rest(qtbot, page)
    assert walk_page(study_window, monkeypatch) == {}


@SIZES
def test_a_study_file_being_written(
    qtbot: QtBot,
    study_window: MainWindow,
    page: StudyPage,
    files: StudyFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    study_window.resize(size)
    page.work.begin_from(files.people)
    rest(qtbot, page)
    assert walk_page(study_window, monkeypatch) == {}, "data"
    for place, ask in ((3, Ask.COLUMN), (5, Ask.COLUMN)):
        page.sheet.tables[0].go_to(place)
        page.sheet.buttons[ask].click()
        assert walk_page(study_window, monkeypatch) == {}, (ask, place)
        leave(page)
    page.show_step(Step.MODEL)
    assert walk_page(study_window, monkeypatch) == {}, "model"
    for ask in (Ask.ABOUT, Ask.ADD_TERM, Ask.FITTING, Ask.METHODS, Ask.ANSWER):
        page.sheet.buttons[ask].click()
        assert walk_page(study_window, monkeypatch) == {}, ask
        for box in page.right.findChildren(Chooser):
            box.setCurrentIndex(box.count() - 1)  # what was hidden comes out
        assert walk_page(study_window, monkeypatch) == {}, (ask, "last entries")
        leave(page)
    assert page.foot.comes_next is Next.SAVE
    page.foot.next.click()
    shorten(page)
    assert walk_page(study_window, monkeypatch) == {}, "saving"


@SIZES
def test_every_method(
    qtbot: QtBot,
    study_window: MainWindow,
    page: StudyPage,
    files: StudyFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    """A Fine–Gray fit with values filled in and a bootstrap; the form in which a report is saved."""
    let_others_die(files)
    plan_methods(files)
    study_window.resize(size)
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    for step in (Step.MODEL, Step.FIT):
        page.show_step(step)
        assert walk_page(study_window, monkeypatch) == {}, step
    for view in page.sheet.findChildren(CalibrationView):
        view.as_text.click()
    assert walk_page(study_window, monkeypatch) == {}, "charts as text"
    page.sheet.buttons[Ask.REPORT].click()
    shorten(page)
    assert walk_page(study_window, monkeypatch) == {}, "report"


@SIZES
def test_penalties_offered(
    qtbot: QtBot,
    study_window: MainWindow,
    page: StudyPage,
    files: StudyFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    make_binary(files)
    separate(files)
    study_window.resize(size)
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    assert walk_page(study_window, monkeypatch) == {}
    page.sheet.buttons[Ask.RIDGE].click()
    rest(qtbot, page)
    assert walk_page(study_window, monkeypatch) == {}


def test_in_the_dark(
    qtbot: QtBot, study_window: MainWindow, page: StudyPage, files: StudyFiles, monkeypatch: pytest.MonkeyPatch
) -> None:
    theme.choose(ThemeChoice.DARK)
    try:
        page.work.open_study(files.study)
        rest(qtbot, page)
        page.work.fit()
        rest(qtbot, page)
        assert walk_page(study_window, monkeypatch) == {}
    finally:
        theme.choose(ThemeChoice.SYSTEM)


def leave(page: StudyPage) -> None:
    """Leave the form that is open."""
    form = page.right.currentWidget()
    assert isinstance(form, FormDeed)
    form.leave()


def shorten(page: StudyPage) -> None:
    """A path that has room in its field; a longer one scrolls there."""
    form = page.right.currentWidget()
    assert isinstance(form, FormDeed)
    form.findChildren(QLineEdit)[0].setText("people.toml")
