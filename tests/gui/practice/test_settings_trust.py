"""The library among the settings, and the forms of trust that stand in for them."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from clinicalc.gui.practice.change_passphrase_form import ChangePassphraseForm
from clinicalc.gui.practice.settings_page import SettingsPage
from clinicalc.settings import Settings, write_settings
from tests.gui.bedside_hands import click, press
from tests.gui.practice.settings_hands import kept, opened, own_folder

pytestmark = pytest.mark.gui


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """A settings folder of the test's own; the theme is as before afterwards."""
    yield from own_folder(tmp_path, monkeypatch)


@pytest.fixture
def page(qtbot: QtBot) -> SettingsPage:
    """The page, over a file that is not there yet."""
    return opened(qtbot, kept())


def test_library_and_pinned_key_are_shown(qtbot: QtBot, tmp_path: Path) -> None:
    write_settings(Settings(library=str(tmp_path / "models"), practice_key="0123456789abcdef" * 4))
    page = opened(qtbot, kept())
    assert page.library.place.text() == f"Place: {tmp_path / 'models'}."
    assert page.library.key is not None
    assert page.library.key.accessibleName().endswith(" ".join(["0123 4567 89ab cdef"] * 4))
    page.show_library("Tarnwick Northgate")
    assert page.library.practice.text() == "Practice: Tarnwick Northgate"
    with qtbot.waitSignal(page.library_asked, timeout=1000):
        click(page.library.join)


@pytest.mark.parametrize("button", ["publishers", "make_key", "passphrase"])
def test_a_form_of_trust_stands_in_for_the_settings_until_it_is_left(
    qtbot: QtBot, page: SettingsPage, button: str
) -> None:
    click(getattr(page.library, button))
    qtbot.waitUntil(lambda: not page.trust.errands.is_busy)
    form = page.trust.form
    assert form is not None
    assert form.isVisible()
    assert not page.practice.isVisible()
    focused = QApplication.focusWidget()
    assert focused is not None
    assert form.isAncestorOf(focused)
    with qtbot.assertNotEmitted(page.left, wait=10):
        press(focused, Qt.Key.Key_Escape)
    assert page.trust.form is None
    assert page.practice.isVisible()
    assert page.library.join.hasFocus()


def test_a_passphrase_is_forgotten_when_another_page_is_shown(page: SettingsPage) -> None:
    click(page.library.passphrase)
    form = page.trust.form
    assert isinstance(form, ChangePassphraseForm)
    form.old.edit.setText("a secret of many words")
    page.hide()
    assert form.old.secret == ""


def test_without_a_library_that_is_said(page: SettingsPage) -> None:
    assert page.library.place.text().startswith("This machine uses no library")
    assert page.library.key is None
