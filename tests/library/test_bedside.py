"""The way to the bedside: only the approved bytes, proved, and with their approval."""

from datetime import date, timedelta
from pathlib import Path

import pytest

from clinicalc.assessment.proof import load_model_bytes
from clinicalc.assessment.vetting import Vetting
from clinicalc.errors import LibraryError
from clinicalc.library.bedside import load_approved, vetting_of
from clinicalc.library.machine import Machine
from clinicalc.resources import read_shipped
from tests.library.machines import MODEL_ID, NOW, Shelf, look, machine_for, make_shelf
from tests.library.records_kit import ADA

HOUR = timedelta(hours=1)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that has joined."""
    return machine_for(shelf, tmp_path / "machine")


def test_an_approved_model_is_the_model_of_its_file(machine: Machine, shelf: Shelf) -> None:
    model = load_approved(look(machine), shelf.fingerprint, NOW)
    assert model.fingerprint == shelf.fingerprint
    assert model.content == load_model_bytes(read_shipped(f"example_models/{MODEL_ID}.json"), MODEL_ID).content


def test_the_vetting_says_who_approved_and_until_when(machine: Machine, shelf: Shelf) -> None:
    assert vetting_of(look(machine), shelf.fingerprint) == Vetting(
        practice="Tarnwick Practice",
        approved_by=ADA,
        role="general practitioner",
        approved_on=date(2026, 12, 1),
        review_until=date(2027, 6, 30),
        by_author=False,
        fingerprint=shelf.fingerprint,
        library=shelf.practice.library,
    )


def test_a_model_that_is_not_in_use_is_not_given(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.withdraw()
    shelf.put()
    opened = look(machine)
    for give in (load_approved, vetting_of):
        with pytest.raises(LibraryError, match=r"It was withdrawn\. Withdrawn by Dr Ben Wick"):
            give(opened, shelf.fingerprint)
        with pytest.raises(LibraryError, match="It is not in the library"):
            give(opened, "0" * 64)


def test_a_file_changed_after_the_opening_is_not_given(machine: Machine, shelf: Shelf) -> None:
    opened = look(machine)
    shelf.model_file.write_bytes(shelf.model_file.read_bytes() + b" ")
    with pytest.raises(LibraryError, match="was changed after it was installed"):
        load_approved(opened, shelf.fingerprint)


@pytest.mark.parametrize("later", [-HOUR, 36 * HOUR])
def test_an_opening_of_another_day_gives_nothing(machine: Machine, shelf: Shelf, later: timedelta) -> None:
    with pytest.raises(LibraryError, match="Open it again"):
        load_approved(look(machine), shelf.fingerprint, NOW + later)


def test_a_recalibration_that_the_model_does_not_have_is_not_given(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.approve(recalibration="not-there")
    shelf.put()
    with pytest.raises(LibraryError, match="names a recalibration that it does not have"):
        load_approved(look(machine), shelf.fingerprint)
