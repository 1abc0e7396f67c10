"""Holding a model on one machine: anybody may, it only takes away, and only this machine knows of it."""

from datetime import timedelta
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.bedside import load_approved
from clinicalc.library.holds import hold, release
from clinicalc.library.machine import Machine
from clinicalc.library.standing import Standing
from tests.library.machines import NOW, Shelf, look, machine_for, make_shelf, only_state, standing

HOUR = timedelta(hours=1)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that has opened it."""
    machine = machine_for(shelf, tmp_path / "machine")
    look(machine)
    return machine


def test_a_held_model_gives_no_number_here_and_elsewhere_it_does(
    machine: Machine, shelf: Shelf, tmp_path: Path
) -> None:
    hold(machine, shelf.fingerprint, "  two patients got odd figures ", NOW)
    opened = look(machine, HOUR)
    state = only_state(opened)
    assert (state.standing, opened.in_use()) == (Standing.HELD, ())
    assert state.reason.startswith("Held on this machine since 1 December 2026")
    assert state.reason.endswith(": two patients got odd figures")
    assert standing(look(machine_for(shelf, tmp_path / "second"))) is Standing.IN_USE


def test_a_released_model_stands_where_the_library_says(machine: Machine, shelf: Shelf) -> None:
    hold(machine, shelf.fingerprint, "odd figures", NOW)
    assert release(machine, shelf.fingerprint, NOW + HOUR).why == "odd figures"
    assert standing(look(machine, HOUR)) is Standing.IN_USE
    hold(machine, shelf.fingerprint, "odd figures", NOW + HOUR)
    shelf.practice.withdraw()
    shelf.put()
    assert standing(look(machine, 2 * HOUR)) is Standing.WITHDRAWN
    release(machine, shelf.fingerprint, NOW + 2 * HOUR)
    assert standing(look(machine, 2 * HOUR)) is Standing.WITHDRAWN


def test_a_hold_placed_after_the_opening_counts_at_once(machine: Machine, shelf: Shelf) -> None:
    opened = look(machine)
    hold(machine, shelf.fingerprint, "odd figures", NOW)
    with pytest.raises(LibraryError, match="It is held on this machine: odd figures"):
        load_approved(opened, shelf.fingerprint)


def test_holding_twice_keeps_the_first_reason(machine: Machine, shelf: Shelf) -> None:
    hold(machine, shelf.fingerprint, "first", NOW)
    assert hold(machine, shelf.fingerprint, "second", NOW + HOUR).why == "first"
    release(machine, shelf.fingerprint, NOW + HOUR)
    assert standing(look(machine, HOUR)) is Standing.IN_USE


def test_a_hold_outlives_the_loss_of_the_library(machine: Machine, shelf: Shelf) -> None:
    hold(machine, shelf.fingerprint, "odd figures", NOW)
    shelf.place.rename(shelf.place.with_name("elsewhere"))
    assert standing(look(machine, HOUR)) is Standing.HELD


@pytest.mark.parametrize("why", ["", "  \n", "x" * 4001])
def test_a_hold_has_a_reason(machine: Machine, shelf: Shelf, why: str) -> None:
    with pytest.raises(LibraryError, match="reason"):
        hold(machine, shelf.fingerprint, why, NOW)
    assert standing(look(machine)) is Standing.IN_USE


def test_what_is_not_held_is_not_released(machine: Machine, shelf: Shelf) -> None:
    with pytest.raises(LibraryError, match="this model is not held on this machine"):
        release(machine, shelf.fingerprint, NOW)


def test_a_machine_that_never_opened_the_library_says_so(shelf: Shelf, tmp_path: Path) -> None:
    with pytest.raises(LibraryError, match="this machine has not opened the library yet"):
        hold(machine_for(shelf, tmp_path / "new"), shelf.fingerprint, "odd figures", NOW)
