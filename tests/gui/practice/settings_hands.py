"""The page of settings opened as in the program, and typing in it."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui import theme
from clinicalc.gui.practice.settings_page import SettingsPage
from clinicalc.gui.preferences import Preferences
from clinicalc.settings import Settings, ThemeChoice, change_settings, read_settings, write_settings
from clinicalc.settings.folder import VARIABLE
from tests.gui.bedside_hands import press, type_text

MODELS = (("tarnwick-cvd-10y", "Tarnwick cardiovascular"), ("tarnwick-falls", "Falls after 65"))


def own_folder(folder: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """The settings in this folder; the theme is as before afterwards."""
    monkeypatch.setenv(VARIABLE, str(folder))
    yield folder
    theme.choose(ThemeChoice.SYSTEM)


def kept() -> Preferences:
    """Settings that are read from the file and written to it, as in the program."""
    reading = read_settings()
    return Preferences(
        reading.settings, change_settings, read=read_settings, write=write_settings, problems=reading.problems
    )


def opened(qtbot: QtBot, preferences: Preferences, width: int = 1280) -> SettingsPage:
    page = SettingsPage(preferences, models=lambda: MODELS)
    qtbot.addWidget(page)
    page.resize(width, 700)
    with qtbot.waitExposed(page):
        page.show()
    page.activateWindow()
    page.open()
    return page


def retype(edit: QWidget, text: str) -> None:
    """Another text in place of what stands there, and on with the tab key."""
    edit.setFocus()
    press(edit, Qt.Key.Key_A, Qt.KeyboardModifier.ControlModifier)
    press(edit, Qt.Key.Key_Delete)
    type_text(edit, text)
    press(edit, Qt.Key.Key_Tab)


def in_file() -> Settings:
    reading = read_settings()
    assert reading.problems == ()
    return reading.settings
