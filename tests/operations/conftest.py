"""Fixtures of this room: a practice's room for the verbs of the window; a library in a folder, for its prints."""

import time
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from clinicalc.library.machine import Machine
from tests.library.machines import Shelf, machine_for, make_shelf
from tests.operations.practice_kit import Room, found_room


@pytest.fixture
def room(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Room:
    """A library that was just founded."""
    return found_room(tmp_path, monkeypatch)


@pytest.fixture
def clock(monkeypatch: pytest.MonkeyPatch) -> Iterator[Callable[[str], None]]:
    """Sets the zone of this process; at the beginning to universal time."""

    def set_zone(zone: str) -> None:
        monkeypatch.setenv("TZ", zone)
        if hasattr(time, "tzset"):
            time.tzset()

    set_zone("UTC")
    yield set_zone
    monkeypatch.undo()
    if hasattr(time, "tzset"):
        time.tzset()


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A library with one model in use."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that has joined it."""
    return machine_for(shelf, tmp_path / "machine")
