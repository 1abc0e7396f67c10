"""The first reading of the library goes on beside the window, which can be used meanwhile."""

import gc
from collections.abc import Callable
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.library.machine import Machine
from clinicalc.library.memory import memory_path
from clinicalc.operations.bedside import open_example
from tests.assessment.cases import DEMO
from tests.gui.approving import Surgery, fill
from tests.library.machines import MODEL_ID

pytestmark = pytest.mark.gui

Open = Callable[[], MainWindow]


@pytest.fixture
def surgery(tmp_path: Path) -> Surgery:
    """A library with one model in use, and a machine that has never read it."""
    return Surgery(tmp_path)


@pytest.fixture
def open_here(qtbot: QtBot, surgery: Surgery) -> Open:
    """Opens a window whose library is being read beside it."""

    def open_() -> MainWindow:
        window = surgery.open(start=ModelLibrary.start_beside)
        qtbot.addWidget(window)
        return window

    return open_


def library_of(window: MainWindow) -> ModelLibrary:
    """The window's library."""
    assert window.library is not None
    return window.library


def wait(qtbot: QtBot, window: MainWindow) -> None:
    """Until the reading is over and taken in."""
    errands = library_of(window)._errands
    qtbot.waitUntil(lambda: not errands.is_busy)


def test_the_only_model_is_chosen_when_the_reading_is_over(qtbot: QtBot, open_here: Open) -> None:
    window = open_here()
    assert window.state.model is None
    wait(qtbot, window)
    assert window.state.approved is not None
    assert window.state.approved.model.content.id == MODEL_ID
    assert gc.isenabled()


def test_a_file_that_was_opened_meanwhile_stays(qtbot: QtBot, open_here: Open) -> None:
    window = open_here()
    window.use_model(open_example("tarnwick-cvd-10y.json"))
    fill(window, DEMO)
    wait(qtbot, window)
    assert window.state.approved is None
    assert window.sheet.number.figure
    assert len(library_of(window).in_use) == 1


def test_what_was_asked_for_meanwhile_is_newer_and_stays(qtbot: QtBot, surgery: Surgery, open_here: Open) -> None:
    window = open_here()
    library_of(window)._errands._thread.join()  # type: ignore[union-attr]
    surgery.withdraw()
    assert library_of(window).offered() == ()
    wait(qtbot, window)
    assert library_of(window).in_use == ()
    assert window.state.model is None


def test_a_library_out_of_reach_is_said_and_asked_again(qtbot: QtBot, surgery: Surgery, open_here: Open) -> None:
    surgery.lose()
    window = open_here()
    said: list[str] = []
    library_of(window).told.connect(lambda headline, words: said.extend((headline, words)))
    wait(qtbot, window)
    assert said[0] == "The library cannot be used"
    assert not gc.isenabled()  # a thread may still be waiting for it
    surgery.find_again()
    assert len(library_of(window).offered()) == 1
    assert gc.isenabled()


def test_what_nobody_expected_reaches_the_window(qtbot: QtBot, surgery: Surgery) -> None:
    def fail() -> Machine:
        raise RuntimeError("nobody expected this")

    def start_unluckily(library: ModelLibrary) -> None:
        library.reading.machine = fail
        library.start_beside()

    with qtbot.captureExceptions() as raised:
        window = surgery.open(start=start_unluckily)
        qtbot.addWidget(window)
        wait(qtbot, window)
    assert [str(one[1]) for one in raised] == ["nobody expected this"]
    library_of(window).reading.machine = lambda: surgery.machine
    assert len(library_of(window).offered()) == 1


def test_the_reading_is_remembered(qtbot: QtBot, surgery: Surgery, open_here: Open) -> None:
    path = memory_path(surgery.machine, surgery.shelf.practice.library)
    assert not path.exists()
    wait(qtbot, open_here())
    assert path.exists()
