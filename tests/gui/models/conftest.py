"""Windows on a library with a model in every state."""

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
import shiboken6
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.gui.page_tabs import Page
from tests.gui.models.card_shelf import CardShelf, make_shelf
from tests.gui.models.shelves import FullShelf, page_of


@pytest.fixture(scope="session")
def card_shelf(_own_folders: None, tmp_path_factory: pytest.TempPathFactory) -> CardShelf:
    """A card in every standing, and a difference."""
    return make_shelf(tmp_path_factory.mktemp("cards"))


@pytest.fixture
def full(tmp_path: Path) -> FullShelf:
    """The library and the machine that has joined it."""
    return FullShelf(tmp_path)


@pytest.fixture
def open_full(qtbot: QtBot, full: FullShelf) -> Iterator[Callable[[], MainWindow]]:
    """Opens windows on the library, each with its Models page on screen and read."""
    opened: list[MainWindow] = []

    def open_() -> MainWindow:
        window = full.open()
        qtbot.addWidget(window)
        window.resize(1280, 800)
        with qtbot.waitExposed(window):
            window.show()
        window.activateWindow()
        window.show_page(Page.MODELS)
        wait_until_read(qtbot, page_of(window))
        opened.append(window)
        return window

    yield open_
    for window in opened:
        if shiboken6.isValid(window):
            window.close()


@pytest.fixture
def models_window(open_full: Callable[[], MainWindow]) -> MainWindow:
    """A window whose Models page is on screen and read."""
    return open_full()


@pytest.fixture
def page(models_window: MainWindow) -> ModelsPage:
    """Its Models page."""
    return page_of(models_window)


def wait_until_read(qtbot: QtBot, page: ModelsPage) -> None:
    """Until nothing is being read any more and the chosen model, if there is one, is shown."""
    qtbot.waitUntil(lambda: not page.errands.is_busy and page.reading.view is not None, timeout=20_000)
    qtbot.waitUntil(lambda: not page.side.list.fingerprint or page.card.shown is not None, timeout=20_000)
    qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=20_000)
