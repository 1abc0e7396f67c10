"""Walks over the steps Validation and Update and their forms at each size: names, letters, cut texts, paint."""

from dataclasses import replace

import pytest
from PySide6.QtCore import QSize
from PySide6.QtWidgets import QLineEdit
from pytestqt.qtbot import QtBot

from clinicalc.gui import theme
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.calibration_view import PlotView
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.gui.study.update_deed import UpdateDeed
from clinicalc.gui.study.validation_state import MadeUpdate, MadeValidation, ValidationState
from clinicalc.gui.view_tabs import ViewTabs
from clinicalc.operations.updating import NewVersion
from clinicalc.settings import ThemeChoice
from clinicalc.validation.updated import UpdateMethod
from tests.gui.page_walks import walk_page
from tests.gui.study.conftest import rest
from tests.gui.study.test_study_walks import leave, shorten
from tests.gui.study.validation_files import ValidationFiles
from tests.gui.test_walks import SIZES
from tests.operations.reported_validations import KINDS, reported

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@SIZES
def test_a_validation_file(
    qtbot: QtBot, study_window: MainWindow, held: StudyPage, monkeypatch: pytest.MonkeyPatch, size: QSize
) -> None:
    study_window.resize(size)
    for step in Step:
        held.show_step(step)
        assert walk_page(study_window, monkeypatch) == {}, step
    held.show_step(Step.VALIDATION)
    held.foot.next.click()
    rest(qtbot, held)
    assert walk_page(study_window, monkeypatch) == {}, "validated"
    held.sheet.findChildren(ViewTabs)[0].setCurrentIndex(0)
    for view in held.sheet.findChildren(PlotView):
        view.as_text.click()
    assert walk_page(study_window, monkeypatch) == {}, "another horizon, charts as text"
    for ask in (Ask.VALIDATION_REPORT, Ask.TABLES, Ask.DRAWINGS):
        held.sheet.buttons[ask].click()
        shorten(held)
        assert walk_page(study_window, monkeypatch) == {}, ask
        leave(held)


@SIZES
def test_what_is_stale(
    qtbot: QtBot,
    study_window: MainWindow,
    validated: StudyPage,
    held_files: ValidationFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    study_window.resize(size)
    held_files.change_people("person,age", "person,agge")
    validated.work.read_again()
    rest(qtbot, validated)
    for step in Step:
        validated.show_step(step)
        assert walk_page(study_window, monkeypatch) == {}, step
    held_files.change('method = "closed_test"', 'method = "closed"')
    validated.work.read_again()
    rest(qtbot, validated)
    assert walk_page(study_window, monkeypatch) == {}, "refused"


@SIZES
def test_updates(
    qtbot: QtBot, study_window: MainWindow, validated: StudyPage, monkeypatch: pytest.MonkeyPatch, size: QSize
) -> None:
    study_window.resize(size)
    for method in (UpdateMethod.CLOSED_TEST, UpdateMethod.INTERCEPT_SLOPE, UpdateMethod.TWO_SCALE):
        validated.show_step(Step.UPDATE)
        asks = validated.sheet.buttons
        asks[Ask.UPDATE].click() if Ask.UPDATE in asks else validated.foot.next.click()
        deed = validated.right.currentWidget()
        assert isinstance(deed, UpdateDeed)
        assert walk_page(study_window, monkeypatch) == {}, "the form"
        deed.method.chooser.setCurrentIndex(deed.method.chooser.findData(method))
        deed.ask()
        rest(qtbot, validated)
        assert validated.state.validating.update is not None, deed.form.refusal.text()
        assert walk_page(study_window, monkeypatch) == {}, method
    validated.foot.next.click()
    shorten(validated)
    assert walk_page(study_window, monkeypatch) == {}, "writing"
    form = validated.right.currentWidget()
    assert isinstance(form, FormDeed)
    assert form.findChildren(QLineEdit)[0].hasFocus()
    leave(validated)


@SIZES
def test_a_model_held_against_a_study(
    qtbot: QtBot,
    study_window: MainWindow,
    opened: StudyPage,
    held_files: ValidationFiles,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    study_window.resize(size)
    opened.validating.work.hold_model(held_files.model)
    rest(qtbot, opened)
    assert walk_page(study_window, monkeypatch) == {}
    opened.foot.next.click()
    rest(qtbot, opened)
    assert walk_page(study_window, monkeypatch) == {}, "validated"


def test_in_the_dark(
    qtbot: QtBot, study_window: MainWindow, validated: StudyPage, monkeypatch: pytest.MonkeyPatch
) -> None:
    theme.choose(ThemeChoice.DARK)
    try:
        assert walk_page(study_window, monkeypatch) == {}
        validated.show_step(Step.UPDATE)
        assert walk_page(study_window, monkeypatch) == {}
    finally:
        theme.choose(ThemeChoice.SYSTEM)


@SIZES
@pytest.mark.parametrize("kind", KINDS)
def test_every_kind_of_outcome_and_of_update(
    study_window: MainWindow, held: StudyPage, monkeypatch: pytest.MonkeyPatch, size: QSize, kind: str
) -> None:
    """Times, competing events, a yes or no, people so few that next to nothing is known; each way of updating."""
    study_window.resize(size)
    told, opened = reported(kind), held.state.validating.opened
    assert opened is not None
    ground = replace(opened, settled=replace(opened.settled, model=told.model))
    state = ValidationState(opened=ground, made=MadeValidation(told.validation, ground))
    if told.updated is not None:
        new = NewVersion("9.0.0", "These people")
        made = MadeUpdate(told.updated.update, ground, new, told.updated.package, told.validation, told.updated.after)
        state = replace(state, update=made)
    held.work.show(replace(held.state, validating=state), Step.UPDATE if told.updated else Step.VALIDATION)
    assert walk_page(study_window, monkeypatch) == {}
    said = held.sheet.words
    for sentence in told.validation.verdict if told.updated is None else told.updated.update.remarks:
        assert sentence in said
    assert "nan" not in said.split()
    assert "None" not in said.split()
