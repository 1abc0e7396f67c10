"""The pages of a window: tabs, keys, titles, and that nothing of the other pages is loaded at a start."""

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QColor, QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui import theme
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008, press
from tests.gui.test_start import run_python
from tests.gui.walking import settle

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu or a window beside ours opens
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@pytest.fixture
def numbered(
    open_window: Callable[[Model | None], MainWindow], lipids: Model, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> MainWindow:
    """A window with a number, on a machine without a library."""
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path))
    window = open_window(lipids)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008, "Ottilie Fenn"))
    settle()
    return window


def shown(window: MainWindow) -> Page:
    """The page that is on screen."""
    return window.page


def underlined(window: MainWindow) -> list[int]:
    """Where the line under the tabs has the colour of the accent, as tab numbers."""
    tabs = window.page_bar.tabs
    image = tabs.grab().toImage()
    scale = image.devicePixelRatio()
    accent = QColor(theme.tokens().accent)
    middles = [QPoint(tabs.tabRect(index).left() + 12, tabs.height() - 2) for index in range(tabs.count())]
    return [place for place, at in enumerate(middles) if image.pixelColor((QPointF(at) * scale).toPoint()) == accent]


def test_function_keys_lead_to_the_pages(numbered: MainWindow) -> None:
    handle = numbered.windowHandle()
    assert underlined(numbered) == [0]
    QTest.keyClick(handle, Qt.Key.Key_F3)
    assert shown(numbered) is Page.MODELS
    assert numbered.windowTitle() == "Models"
    assert underlined(numbered) == [1]
    QTest.keyClick(handle, Qt.Key.Key_F4)
    assert shown(numbered) is Page.STUDY
    assert numbered.windowTitle() == "Study"
    assert underlined(numbered) == [2]
    QTest.keyClick(handle, Qt.Key.Key_Comma, Qt.KeyboardModifier.ControlModifier)
    assert shown(numbered) is Page.SETTINGS
    assert numbered.windowTitle() == "Settings"
    assert underlined(numbered) == []
    QTest.keyClick(handle, Qt.Key.Key_F2)
    assert shown(numbered) is Page.PATIENT
    assert numbered.windowTitle() == "Patient: General cardiovascular disease, lipid form"
    assert numbered.sheet.number.figure == "10.5"


def test_the_field_that_was_left_has_the_focus_again(numbered: MainWindow) -> None:
    handle = numbered.windowHandle()
    numbered.values.focus_field("hdl_cholesterol")
    left = QApplication.focusWidget()
    QTest.keyClick(handle, Qt.Key.Key_F3)
    assert QApplication.focusWidget() is not left
    QTest.keyClick(handle, Qt.Key.Key_F2)
    assert QApplication.focusWidget() is left


def test_tabs_are_pressed_walked_and_named(numbered: MainWindow) -> None:
    tabs = numbered.page_bar.tabs
    names = [tabs.accessibleTabName(index) for index in range(tabs.count())]
    assert names == ["Patient, key F2", "Models, key F3", "Study, key F4"]
    QTest.mouseClick(tabs, Qt.MouseButton.LeftButton, pos=tabs.tabRect(Page.MODELS).center())
    assert shown(numbered) is Page.MODELS
    tabs.setFocus()
    press(tabs, Qt.Key.Key_Left)
    assert shown(numbered) is Page.PATIENT
    assert tabs.hasFocus()
    numbered.show_page(Page.SETTINGS)
    QTest.mouseClick(tabs, Qt.MouseButton.LeftButton, pos=tabs.tabRect(Page.PATIENT).center())
    assert shown(numbered) is Page.PATIENT


def test_a_wheel_over_the_tabs_leaves_no_page(numbered: MainWindow) -> None:
    tabs = numbered.page_bar.tabs
    at = QPointF(tabs.rect().center())
    turn = QWheelEvent(
        at,
        tabs.mapToGlobal(at),
        QPoint(0, 0),
        QPoint(0, -240),
        Qt.MouseButton.NoButton,
        Qt.KeyboardModifier.NoModifier,
        Qt.ScrollPhase.NoScrollPhase,
        False,
    )
    QApplication.sendEvent(tabs, turn)
    assert shown(numbered) is Page.PATIENT


def test_keys_of_the_patients_page_do_nothing_on_another(numbered: MainWindow) -> None:
    handle = numbered.windowHandle()
    QApplication.clipboard().setText("before")
    numbered.show_page(Page.MODELS)
    settle()
    both = Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier
    QTest.keyClick(handle, Qt.Key.Key_C, both)
    assert QApplication.clipboard().text() == "before"
    for letter in "NRV":
        QTest.keyClick(handle, Qt.Key(ord(letter)), Qt.KeyboardModifier.AltModifier)
    assert shown(numbered) is Page.MODELS
    numbered.show_page(Page.PATIENT)
    assert numbered.sheet.number.figure == "10.5"
    QTest.keyClick(handle, Qt.Key.Key_C, both)
    assert "10.5" in QApplication.clipboard().text()


def test_a_file_that_is_opened_shows_the_patients_page(numbered: MainWindow, tmp_path: Path) -> None:
    numbered.show_page(Page.SETTINGS)
    numbered.open_path(tmp_path / "nowhere.json")
    assert shown(numbered) is Page.PATIENT
    assert numbered.refusal.isVisible()


def test_the_window_keeps_its_number_on_every_page(qtbot: QtBot) -> None:
    window = MainWindow(number=3)
    qtbot.addWidget(window)
    window.show_page(Page.MODELS)
    assert window.windowTitle() == "Models, window 3"
    assert window.page_bar.tabs.tabText(Page.PATIENT) == "Patient 3"
    window.close()


def test_a_start_loads_nothing_of_the_other_pages() -> None:
    program = """
import sys
from PySide6.QtWidgets import QApplication
from clinicalc.gui.application import dress
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
application = QApplication([])
dress(application)
window = MainWindow()
window.use_model(open_example("general-cvd-2008-lipids.json"))
window.show()
application.processEvents()
rooms = ("clinicalc.gui.models", "clinicalc.gui.practice", "clinicalc.gui.form", "clinicalc.operations.vetting")
rooms += ("clinicalc.gui.study", "clinicalc.operations.study", "clinicalc.cohort", "clinicalc.development")
print([name for name in sys.modules if name.startswith(rooms)])
"""
    done = run_python(program)
    assert (done.stdout.strip(), done.returncode) == ("[]", 0), done.stderr


def test_the_practice_gives_way_before_the_pages_do(numbered: MainWindow) -> None:
    bar = numbered.page_bar
    bar.show_practice("Tarnwick Northgate")
    assert bar.practice.isVisible()
    numbered.resize(640, 400)
    settle()
    assert not bar.practice.isVisible()
    assert bar.tabs.tabRect(Page.STUDY).right() <= bar.tabs.width()
    numbered.resize(1280, 800)
    settle()
    assert bar.practice.isVisible()
