"""Random walks over all pages of a window on a real library: pages, forms, keys, sizes, others' records, a lost folder.

Each walk is named by its seed; what a step began is often still being done when the next one comes, so that a walk is
not the same twice to the last event.
"""

import random
from collections.abc import Iterator
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.gui import theme
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.settings import ThemeChoice
from tests.gui.models.conftest import wait_until_read
from tests.gui.models.shelves import page_of
from tests.gui.page_walker import PageWalker, WalkedRoom, require_all, require_no_secret_on_disk

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]
STEPS = 40


@pytest.fixture
def room(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[WalkedRoom]:
    """The practice; the theme is as before afterwards."""
    yield WalkedRoom(tmp_path, monkeypatch)
    theme.choose(ThemeChoice.SYSTEM)


@pytest.fixture
def window(qtbot: QtBot, room: WalkedRoom) -> Iterator[MainWindow]:
    """A window whose Models page was read."""
    window = room.open_at_desk()
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.show_page(Page.MODELS)
    wait_until_read(qtbot, page_of(window))
    yield window
    window.close()


@pytest.mark.parametrize("seed", range(4))
def test_whatever_is_done_everything_holds(qtbot: QtBot, room: WalkedRoom, window: MainWindow, seed: int) -> None:
    walker = PageWalker(room, window, qtbot, random.Random(seed))
    for _ in range(STEPS):
        walker.step()
        try:
            require_all(walker)
        except AssertionError as error:
            error.add_note("; ".join(walker.walked[-8:]))
            raise
    walker.rest()
    require_no_secret_on_disk(room)
