"""Walks over the Models page in its states: names, letters, sizes, cut texts, what is painted."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import QSize
from PySide6.QtWidgets import QMenu
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.operations.model_card import Deed
from tests.gui.models.conftest import wait_until_read
from tests.gui.models.shelves import HELD, IN_USE, REFUSED, WAITING, FullShelf
from tests.gui.page_walks import walk_page
from tests.gui.test_walks import SIZES
from tests.gui.walking import settle

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu or a window beside ours opens
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@SIZES
def test_list_and_card(
    qtbot: QtBot,
    models_window: MainWindow,
    page: ModelsPage,
    full: FullShelf,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
) -> None:
    models_window.resize(size)
    settle()
    assert walk_page(models_window, monkeypatch) == {}
    for title in (IN_USE, WAITING, REFUSED, HELD):
        page.side.list.choose(full.fingerprints[title])
        page.read_again()
        wait_until_read(qtbot, page)
        page.go_across()
        settle()
        assert walk_page(models_window, monkeypatch) == {}, title
        page.go_across()


@SIZES
@pytest.mark.parametrize("deed", [*Deed, *LibraryDeed])
def test_deeds(
    qtbot: QtBot,
    models_window: MainWindow,
    page: ModelsPage,
    monkeypatch: pytest.MonkeyPatch,
    size: QSize,
    deed: Deed | LibraryDeed,
) -> None:
    models_window.resize(size)
    page.open_deed(deed, is_about_model=deed in set(Deed) - {Deed.INSTALL})
    qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=20_000)
    settle()
    assert walk_page(models_window, monkeypatch) == {}


@SIZES
def test_ways_to_another_library(
    models_window: MainWindow, page: ModelsPage, monkeypatch: pytest.MonkeyPatch, size: QSize
) -> None:
    """The foot stays under them, and its letters are not theirs."""
    models_window.resize(size)
    page.show_ways()
    first = page.first._made()
    for show in (first.show_start, first.show_joining, first.show_bundle, lambda: first.show_step(0)):
        show()
        assert walk_page(models_window, monkeypatch) == {}


def test_menus_of_the_foot(page: ModelsPage) -> None:
    """Every entry has words and a letter of its own in its menu."""
    shown: tuple[tuple[QMenu, Callable[[], None]], ...] = (
        (page.foot.menu, page.foot.open_menu),
        (page.foot.more_menu, page.foot.open_more),
    )
    for menu, open_ in shown:
        open_()
        settle()
        entries = [action for action in menu.actions() if action.isVisible()]
        letters = [action.text()[action.text().index("&") + 1].lower() for action in entries]
        assert entries
        assert sorted(set(letters)) == sorted(letters)
        assert menu.activeAction() is entries[0]
        menu.close()
