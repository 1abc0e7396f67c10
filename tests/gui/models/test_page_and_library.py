"""The page with a real library and real keys: a file is installed and approved, a practice is founded or joined."""

import os
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.practice.founded_page import FoundedPage
from clinicalc.gui.practice.join_form import JoinForm
from clinicalc.gui.preferences import Preferences
from clinicalc.library.standing import Standing
from clinicalc.operations.model_card import Deed
from clinicalc.settings import Settings, change_settings, read_settings, write_settings
from tests.cli.calling import example
from tests.cli.practices import FINGERPRINT, TARNWICK, Desk, found_practice
from tests.gui.bedside_hands import click
from tests.gui.models.conftest import wait_until_read
from tests.gui.models.shelves import page_of
from tests.library.keys_at_hand import PASSPHRASE
from tests.library.machines import make_shelf

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu or a window beside ours opens
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@pytest.fixture
def practice(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Desk:
    """A library that was just founded on this machine, with keys of two approvers."""
    return found_practice(tmp_path, monkeypatch)


def shows_candidate(page: ModelsPage) -> bool:
    """Whether the card is that of a file which is not in the library."""
    return page.card.is_candidate


def offers_ways(page: ModelsPage) -> bool:
    """Whether the ways to a library stand on the right side."""
    return page.first.is_shown


def library_of(window: MainWindow) -> ModelLibrary | None:
    """What the window works from."""
    return window.library


def choose_nothing(*_: object) -> Path | None:
    return None


def no_file(parent: QWidget, wanted: Wanted, suggestion: str = "") -> Path | None:
    return None


def show(qtbot: QtBot, window: MainWindow) -> ModelsPage:
    """The window on its Models page, and that page."""
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.show_page(Page.MODELS)
    return page_of(window)


@pytest.fixture
def joined(qtbot: QtBot, practice: Desk) -> Iterator[MainWindow]:
    """A window that works from the library, which is empty yet."""
    state = EntryState()
    library = ModelLibrary(state)
    window = MainWindow(state, library=library, choose_files=FileChoices(no_file, no_file, choose_nothing))
    library.start()
    show(qtbot, window)
    yield window
    window.close()


def rest(qtbot: QtBot, page: ModelsPage) -> None:
    for _ in range(3):
        qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=20_000)
        QTest.qWait(5)


def enter(*lines: str) -> None:
    """Each line into the field with the focus, then Enter."""
    for line in lines:
        QTest.keyClick(type_in(line), Qt.Key.Key_Return)


def type_in(line: str) -> QWidget:
    """The keys of a line into what has the focus; what that is."""
    focused = QApplication.focusWidget()
    assert focused is not None
    QTest.keyClicks(focused, line)
    return focused


def test_a_first_file_is_installed_and_approved_and_answers_at_once(
    qtbot: QtBot, joined: MainWindow, practice: Desk
) -> None:
    page = page_of(joined)
    rest(qtbot, page)
    assert page.first.is_shown
    assert page.side.note.text() == "The library holds no file yet."
    assert joined.sheet.number.figure == ""
    assert not page.foot.install.isVisible()  # the right side offers it
    page.open_deed(Deed.INSTALL, is_about_model=False)
    enter(example(TARNWICK))
    rest(qtbot, page)
    assert shows_candidate(page)
    assert page.card.shown is not None
    assert page.card.shown.fingerprint == FINGERPRINT
    click(page.foot.deeds[Deed.INSTALL])
    enter("handed over on a stick", practice.key("cleo"), PASSPHRASE)
    rest(qtbot, page)
    wait_until_read(qtbot, page)
    (row,) = page.side.list.entries.rows
    assert (row.standing, page.side.list.fingerprint) == (Standing.WAITING, FINGERPRINT)
    assert "Not vetted" in page.side.strip.words.text()
    page.card.view.focus_given()
    type_in(FINGERPRINT)
    click(page.foot.deeds[Deed.APPROVE])
    enter("agreed at the meeting", "", practice.key("ada"), PASSPHRASE)
    rest(qtbot, page)
    wait_until_read(qtbot, page)
    (row,) = page.side.list.entries.rows
    assert row.standing is Standing.IN_USE
    assert joined.library is not None
    qtbot.waitUntil(lambda: joined.state.approved is not None, timeout=20_000)  # the only one in use is chosen
    assert joined.page is Page.MODELS
    joined.show_page(Page.PATIENT)
    assert joined.model_bar.chooser.title == row.title


def test_a_candidate_is_left_for_a_model_of_the_list(qtbot: QtBot, joined: MainWindow, practice: Desk) -> None:
    assert practice.install().status == 0
    page = page_of(joined)
    rest(qtbot, page)
    page.read_again()
    wait_until_read(qtbot, page)
    click(page.foot.install)
    enter(example("ascvd-2013-pooled-cohort"))
    rest(qtbot, page)
    assert shows_candidate(page)
    assert page.side.list.fingerprint == ""
    assert page.foot.deeds[Deed.INSTALL].isVisible()
    page.side.list.setFocus()
    QTest.keyClick(page.side.list, Qt.Key.Key_Down)
    wait_until_read(qtbot, page)
    assert not shows_candidate(page)
    assert not page.foot.deeds[Deed.INSTALL].isVisible()


def test_a_file_that_is_there_already_is_shown_in_the_list(qtbot: QtBot, joined: MainWindow, practice: Desk) -> None:
    assert practice.install().status == 0
    page = page_of(joined)
    rest(qtbot, page)
    page.read_again()
    wait_until_read(qtbot, page)
    click(page.foot.install)
    enter(example(TARNWICK))
    rest(qtbot, page)
    assert page.side.list.fingerprint == FINGERPRINT
    assert "in the library already" in page.side.strip.words.text()


def _window_with_settings() -> MainWindow:
    preferences = Preferences(read_settings().settings, change_settings, read=read_settings)
    return MainWindow(preferences=preferences, choose_files=FileChoices(no_file, no_file, choose_nothing))


def test_a_library_founded_while_the_window_is_open_is_used_from_then_on(
    qtbot: QtBot, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    for folder in ("settings", "share", "stick"):
        (tmp_path / folder).mkdir()
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    window = _window_with_settings()
    page = show(qtbot, window)
    assert library_of(window) is None
    assert page.first.is_shown
    stick = tmp_path / "stick"
    with qtbot.waitSignal(page.founded, timeout=15_000):
        lines = ("", "Tarnwick Northgate", str(tmp_path / "share" / "models"), "R. Osei", "partner")
        for line in (*lines, str(stick / "osei.key"), PASSPHRASE, PASSPHRASE):
            enter(line)
            rest(qtbot, page)
        type_in("s")
        for line in ("", str(stick / "practice.key"), PASSPHRASE, PASSPHRASE):
            enter(line)
            rest(qtbot, page)
    rest(qtbot, page)
    assert library_of(window) is not None
    assert window.page_bar.practice.text() == "Tarnwick Northgate"
    assert read_settings().settings.practice_key
    assert page.reading.view is not None
    assert page.reading.view.practice == "Tarnwick Northgate"
    assert page.findChild(FoundedPage) is not None  # the id of the practice key is still there to be written down
    qtbot.waitUntil(lambda: window.sheet.headline.text() == "No model is in use", timeout=20_000)
    window.preferences.take(replace(window.preferences.settings, level=0.9))
    assert read_settings().settings.practice_key  # a window that changes its settings does not forget the library
    window.close()


def test_a_library_joined_while_the_window_is_open_is_used_from_then_on(
    qtbot: QtBot, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "settings").mkdir()
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
    shelf = make_shelf(tmp_path / "library")
    write_settings(Settings(library=os.fspath(shelf.place)))
    window = _window_with_settings()
    page = show(qtbot, window)
    form = page.findChild(JoinForm)
    if form is None:
        assert page.first._view is not None
        page.first._view.show_joining()
        form = page.findChild(JoinForm)
    assert form is not None
    form.focus_first()
    with qtbot.waitSignal(page.founded, timeout=15_000):
        enter("")
        rest(qtbot, page)
        enter(shelf.practice.key.id)
        rest(qtbot, page)
    wait_until_read(qtbot, page)
    assert len(page.side.list.entries.rows) == 1
    qtbot.waitUntil(lambda: window.state.approved is not None, timeout=20_000)
    window.close()


def test_settings_lead_to_the_ways_to_another_library_and_back(qtbot: QtBot, models_window: MainWindow) -> None:
    window, page = models_window, page_of(models_window)
    window.show_page(Page.SETTINGS)
    settings = window.others.settings()
    click(settings.library.join)
    assert window.page is Page.MODELS
    rest(qtbot, page)  # the library that is in use was read again meanwhile
    assert offers_ways(page)
    page.first.left.emit()
    wait_until_read(qtbot, page)
    assert not offers_ways(page)
    assert page.card.shown is not None
    assert settings.library.practice.text().startswith("Practice: ")
    click(settings.library.join)
    rest(qtbot, page)
    page.side.list.setCurrentIndex(page.side.list.entries.place_of(page.side.list.first()))
    page.side.list.chosen.emit(page.side.list.fingerprint)  # one of the list is a way back too
    wait_until_read(qtbot, page)
    assert not offers_ways(page)
