"""What every window test starts from: Qt without a screen, our typeface and colours, a model, a window."""

import gc
import os
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

os.environ["QT_QPA_PLATFORM"] = "offscreen"

from PySide6.QtWidgets import QApplication

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.application import dress
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
from tests.assessment.cases import DEMO
from tests.gui.walking import settle


@pytest.fixture(scope="session", autouse=True)
def _dressed(_own_folders: None, qapp: QApplication) -> None:
    dress(qapp)


@pytest.fixture(autouse=True)
def _collected() -> Iterator[None]:
    """Garbage is collected again after a test in which a library was out of reach."""
    yield
    gc.enable()


@pytest.fixture(scope="session")
def lipids() -> Model:
    """The shipped lipid form of 2008: mg/dL, one horizon, a band rebuilt from printed intervals."""
    return open_example("general-cvd-2008-lipids.json")


@pytest.fixture(scope="session")
def pooled() -> Model:
    """The shipped pooled cohort equations of 2013: mg/dL, one horizon, no band."""
    return open_example("ascvd-2013-pooled-cohort.json")


@pytest.fixture
def open_window(qtbot: QtBot) -> Callable[[Model | None], MainWindow]:
    """Opens a window on a model, shown and exposed."""

    def open_(model: Model | None) -> MainWindow:
        def choose_nothing(*_: object) -> Path | None:
            return None

        window = MainWindow(choose_open=choose_nothing, choose_save=choose_nothing)
        qtbot.addWidget(window)
        window.resize(1280, 800)
        if model is not None:
            window.use_model(model)
        with qtbot.waitExposed(window):
            window.show()
        window.activateWindow()
        return window

    return open_


@pytest.fixture
def window(open_window: Callable[[Model | None], MainWindow], lipids: Model) -> MainWindow:
    """A window on the lipid form with empty fields."""
    return open_window(lipids)


@pytest.fixture(scope="session")
def tarnwick() -> Model:
    """The invented model: band, spread, a decision point, shares, values that can be changed."""
    return open_example("tarnwick-cvd-10y.json")


@pytest.fixture
def viewed(open_window: Callable[[Model | None], MainWindow], tarnwick: Model) -> MainWindow:
    """A window on the invented model with its invented patient."""
    window = open_window(tarnwick)
    window.use_model(tarnwick, entry_from_texts(DEMO, "Ottilie Fenn"))
    settle()
    return window
