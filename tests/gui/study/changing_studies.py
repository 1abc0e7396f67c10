"""A study being changed in its forms, as somebody at the window does it."""

import tomllib
from typing import Any

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from pytestqt.qtbot import QtBot

from clinicalc.gui.chooser import Chooser as Box
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.methods_deed import MethodsDeed
from clinicalc.gui.study.save_deed import SaveDeed
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.operations.study_toml import spell_toml
from tests.gui.study.conftest import rest


def tree_of(page: StudyPage) -> dict[str, Any]:
    """The tree that would be saved, by way of the text that it would be saved as."""
    assert page.state.draft is not None
    return tomllib.loads(spell_toml(page.state.draft.tree))


def fitting(page: StudyPage) -> FittingDeed:
    """The form of the fit."""
    page.sheet.buttons[Ask.FITTING].click()
    deed = page.right.currentWidget()
    assert isinstance(deed, FittingDeed)
    return deed


def methods(page: StudyPage) -> MethodsDeed:
    """The form of missing values and optimism."""
    page.sheet.buttons[Ask.METHODS].click()
    deed = page.right.currentWidget()
    assert isinstance(deed, MethodsDeed)
    return deed


def point(box: Box, data: str) -> None:
    """Choose an entry as somebody would."""
    assert box.findData(data) >= 0
    box.setCurrentIndex(box.findData(data))


def offered(box: Box) -> list[str]:
    """What can be chosen."""
    return [str(box.itemData(place)) for place in range(box.count())]


def save(qtbot: QtBot, page: StudyPage) -> None:
    """Save the study file, which is then opened."""
    page.foot.next.click()
    deed = page.right.currentWidget()
    assert isinstance(deed, SaveDeed)
    deed.ask()
    rest(qtbot, page)


def press(window: MainWindow, key: Qt.Key, modifier: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
    """A key, as the window gets it from the system."""
    QTest.keyClick(window.windowHandle(), key, modifier)
