"""Machines with settings of their own."""

from collections.abc import Callable
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

from tests.gui.practice.desks import Person


@pytest.fixture
def machine(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> Callable[[str], Path]:
    """Sits down at the machine of this name: its settings are those that count from now on."""

    def use(name: str) -> Path:
        folder = tmp_path / name
        folder.mkdir(exist_ok=True)
        monkeypatch.setenv("CLINICALC_SETTINGS", str(folder))
        return folder

    return use


@pytest.fixture
def person(qtbot: QtBot, machine: Callable[[str], Path]) -> Person:
    """At a machine that knows nothing yet."""
    machine("first machine")
    return Person(qtbot)
