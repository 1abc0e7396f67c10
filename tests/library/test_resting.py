"""Opening in less time: models out of use rest, until anybody says another word about them or about the library."""

from datetime import timedelta
from pathlib import Path

import pytest

from clinicalc.library.machine import Machine
from clinicalc.library.opening import open_for_bedside, verify_all
from clinicalc.library.standing import FaultKind, Standing
from tests.library.machines import NOW, Shelf, look, machine_for, make_shelf, only_state, standing, stops
from tests.library.records_kit import ADA, BEN, CLEO

HOUR = timedelta(hours=1)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model, withdrawn."""
    shelf = make_shelf(tmp_path / "library")
    shelf.practice.withdraw()
    shelf.put()
    return shelf


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that has seen the withdrawal."""
    machine = machine_for(shelf, tmp_path / "machine")
    assert standing(look(machine)) is Standing.WITHDRAWN
    return machine


def test_a_withdrawn_model_rests(machine: Machine) -> None:
    opened = open_for_bedside(machine, NOW)
    assert (opened.models, opened.faults) == ((), ())
    assert standing(look(machine)) is Standing.WITHDRAWN


def test_nothing_rests_on_a_machine_that_has_seen_nothing(shelf: Shelf, tmp_path: Path) -> None:
    assert standing(open_for_bedside(machine_for(shelf, tmp_path / "new"), NOW)) is Standing.WITHDRAWN


def test_a_deleted_withdrawal_wakes_it(machine: Machine, shelf: Shelf) -> None:
    open_for_bedside(machine, NOW)
    shelf.file_of(shelf.practice.about_model[-1]).unlink()
    opened = open_for_bedside(machine, NOW + HOUR)
    assert (standing(opened), stops(opened)) == (Standing.REFUSED, {FaultKind.LACKS_WHAT_WAS_SEEN})


def test_every_record_deleted_wakes_it(machine: Machine, shelf: Shelf) -> None:
    for sealed in shelf.practice.about_model:
        shelf.file_of(sealed).unlink()
    assert standing(open_for_bedside(machine, NOW + HOUR)) is Standing.REFUSED


def test_a_new_approval_wakes_it(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.approve()
    shelf.put()
    assert standing(open_for_bedside(machine, NOW + HOUR)) is Standing.IN_USE
    assert standing(open_for_bedside(machine, NOW + HOUR)) is Standing.IN_USE  # what is in use never rests


def test_a_word_about_the_library_wakes_it(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.appoint(ADA, BEN, CLEO)
    shelf.put()
    assert standing(open_for_bedside(machine, NOW + HOUR)) is Standing.WITHDRAWN
    assert open_for_bedside(machine, NOW + 2 * HOUR).models == ()


def test_what_was_refused_never_rests(machine: Machine, shelf: Shelf) -> None:
    forged = shelf.practice.remark("Nobody In Particular")
    shelf.put()
    for hours in (1, 2):
        assert FaultKind.UNKNOWN_SIGNER in stops(open_for_bedside(machine, NOW + hours * HOUR))
    shelf.file_of(forged).unlink()
    assert standing(open_for_bedside(machine, NOW + 3 * HOUR)) is Standing.WITHDRAWN


def test_resting_counts_as_having_looked(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.approve()
    shelf.put()
    open_for_bedside(machine, NOW + 20 * HOUR)
    shelf.place.rename(shelf.place.with_name("elsewhere"))
    assert standing(open_for_bedside(machine, NOW + 43 * HOUR)) is Standing.IN_USE
    assert open_for_bedside(machine, NOW + 44 * HOUR).in_use() == ()


def test_whoever_verifies_all_sees_what_rests_and_recalls_nothing(machine: Machine, shelf: Shelf) -> None:
    opened = verify_all(machine, NOW + HOUR)
    assert only_state(opened).standing is Standing.WITHDRAWN
    path = shelf.file_of(shelf.practice.about_model[0])
    path.write_bytes(path.read_bytes()[:-1])
    assert FaultKind.CHANGED_FILE in stops(verify_all(machine, NOW + HOUR))
    assert open_for_bedside(machine, NOW + HOUR).in_use() == ()
