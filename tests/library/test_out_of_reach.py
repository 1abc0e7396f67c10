"""The library is out of reach: the verified copy serves for the practice's hours, and not a minute longer."""

import hashlib
import shutil
import threading
from datetime import timedelta
from pathlib import Path

import pytest

from clinicalc.errors import LibraryUnreachable
from clinicalc.library.bedside import load_approved, vetting_of
from clinicalc.library.gathering import ask_in_time, reach_library
from clinicalc.library.kept_copy import read_kept
from clinicalc.library.machine import Machine
from clinicalc.library.memory import memory_path
from clinicalc.library.opening import OpenedLibrary, verify_all
from clinicalc.library.standing import FaultKind, Standing
from tests.library.machines import NOW, Shelf, look, machine_for, make_shelf, standing, stops

HOUR, MINUTE = timedelta(hours=1), timedelta(minutes=1)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that has not opened it yet."""
    return machine_for(shelf, tmp_path / "machine")


def cut_off(shelf: Shelf) -> Path:
    """The share goes away; where it is now."""
    return shelf.place.rename(shelf.place.with_name("elsewhere"))


def look_after(machine: Machine, later: timedelta) -> OpenedLibrary:
    """The library, later."""
    return look(machine, later)


def test_the_copy_serves_with_a_caution_within_the_hours(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    cut_off(shelf)
    opened = look_after(machine, 24 * HOUR - MINUTE)
    assert (opened.reachable, opened.served_until, standing(opened)) == (False, NOW + 24 * HOUR, Standing.IN_USE)
    assert "this machine’s copy serves until" in opened.caution
    assert "A withdrawal since then is not known here." in opened.caution
    assert load_approved(opened, shelf.fingerprint, NOW + 24 * HOUR - MINUTE).fingerprint == shelf.fingerprint
    assert vetting_of(opened, shelf.fingerprint).caution == opened.caution
    assert opened.good_until <= NOW + 24 * HOUR


@pytest.mark.parametrize("later", [24 * HOUR, 25 * HOUR, 400 * 24 * HOUR])
def test_after_the_hours_there_is_no_number(machine: Machine, shelf: Shelf, later: timedelta) -> None:
    look(machine)
    cut_off(shelf)
    opened = look_after(machine, later)
    assert (opened.served_until, opened.in_use(), stops(opened)) == (None, (), {FaultKind.OUT_OF_REACH})
    assert "No model gives a number until it is reached again." in opened.faults[0].sentence


def test_looking_again_does_not_prolong_the_hours(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    cut_off(shelf)
    for hours in range(1, 24):
        assert standing(look_after(machine, hours * HOUR)) is Standing.IN_USE
    assert look_after(machine, 24 * HOUR).in_use() == ()


def test_reaching_it_again_begins_the_hours_anew(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    look(machine, 20 * HOUR)
    cut_off(shelf)
    assert standing(look_after(machine, 43 * HOUR)) is Standing.IN_USE
    assert look_after(machine, 44 * HOUR).in_use() == ()


def test_setting_the_clock_back_does_not_prolong_the_hours(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    cut_off(shelf)
    look_after(machine, 25 * HOUR)
    opened = look_after(machine, HOUR)
    assert opened.in_use() == ()
    assert FaultKind.CLOCK_SET_BACK in stops(opened)


def test_a_practice_may_allow_no_hours(tmp_path: Path) -> None:
    shelf = make_shelf(tmp_path / "library", offline_hours=0)
    machine = machine_for(shelf, tmp_path / "machine")
    look(machine)
    cut_off(shelf)
    assert look_after(machine, timedelta(0)).in_use() == ()


def test_an_opening_that_found_the_library_unsound_does_not_begin_the_hours(machine: Machine, shelf: Shelf) -> None:
    revocation = shelf.practice.revoke("Dr Ben Wick")
    shelf.put()
    look(machine)
    shelf.file_of(revocation).unlink()
    look(machine, 20 * HOUR)
    cut_off(shelf)
    assert look_after(machine, 25 * HOUR).in_use() == ()


def test_a_withdrawal_that_was_seen_holds_in_the_copy(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    shelf.practice.withdraw()
    shelf.put()
    look(machine, HOUR)
    cut_off(shelf)
    assert standing(look_after(machine, 2 * HOUR)) is Standing.WITHDRAWN
    assert read_kept(machine, shelf.practice.library).models() == frozenset()


def test_a_machine_that_never_opened_it_has_nothing(machine: Machine, shelf: Shelf) -> None:
    cut_off(shelf)
    with pytest.raises(LibraryUnreachable):
        look(machine)


def test_an_empty_mount_point_counts_as_out_of_reach(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    cut_off(shelf)
    shelf.place.mkdir()
    opened = look_after(machine, HOUR)
    assert (opened.reachable, standing(opened)) == (False, Standing.IN_USE)


@pytest.mark.parametrize("lost", ["records.jsonl", "models", "everything"])
def test_a_copy_that_was_cut_down_gives_no_number(machine: Machine, shelf: Shelf, lost: str) -> None:
    look(machine)
    cut_off(shelf)
    kept = read_kept(machine, shelf.practice.library)
    if lost == "records.jsonl":
        lines = (kept.folder / lost).read_bytes().split(b"\n")
        about_model = [line for line in lines if b'"approved"' not in line]
        assert len(about_model) == len(lines) - 1
        (kept.folder / lost).write_bytes(b"\n".join(about_model))
    else:
        shutil.rmtree(kept.folder / lost if lost == "models" else kept.folder)
    opened = look_after(machine, HOUR)
    assert opened.in_use() == ()
    assert stops(opened) & {FaultKind.LACKS_WHAT_WAS_SEEN, FaultKind.MISSING_FILE, FaultKind.MISSING_RECORD}


def test_a_changed_copy_of_a_model_gives_no_number(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    cut_off(shelf)
    path = read_kept(machine, shelf.practice.library).folder / "models" / f"{shelf.fingerprint}.json"
    path.write_bytes(path.read_bytes().replace(b"0.", b"1.", 1))
    assert look_after(machine, HOUR).in_use() == ()


def test_a_record_changed_in_the_copy_is_read_from_the_library(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    path = read_kept(machine, shelf.practice.library).folder / "records.jsonl"
    path.write_bytes(path.read_bytes().replace(b"2027-06-30", b"2099-06-30"))
    opened = look(machine, HOUR)
    assert standing(opened) is Standing.IN_USE
    approval = opened.models[0].approval
    assert approval is not None
    assert approval.review_until.year == 2027


def test_the_copy_of_another_program_version_is_verified_again(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    path = read_kept(machine, shelf.practice.library).folder / "records.jsonl"
    head, *lines = path.read_bytes().split(b"\n")
    path.write_bytes(b"\n".join([head.replace(b'"program":"', b'"program":"0.'), *lines]))
    assert not read_kept(machine, shelf.practice.library).verified
    assert standing(look(machine, HOUR)) is Standing.IN_USE
    assert read_kept(machine, shelf.practice.library).verified


def test_nothing_is_written_where_nothing_changed(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    path = read_kept(machine, shelf.practice.library).folder / "records.jsonl"
    memory = memory_path(machine, shelf.practice.library)
    before = path.stat().st_mtime_ns, path.stat().st_ino, memory.stat().st_ino
    look(machine, timedelta(seconds=30))
    assert (path.stat().st_mtime_ns, path.stat().st_ino, memory.stat().st_ino) == before


def test_what_does_not_answer_is_not_waited_for(tmp_path: Path) -> None:
    silence = threading.Event()
    with pytest.raises(TimeoutError, match=r"no answer in 0\.05 seconds"):
        ask_in_time(silence.wait, 0.05)
    silence.set()
    assert ask_in_time(silence.wait, 60)
    with pytest.raises(LibraryUnreachable):
        reach_library(tmp_path / "nowhere", 60)


def _plant(machine: Machine, shelf: Shelf, line: bytes) -> str:
    """The line is added to this machine's copy; its digest comes back."""
    path = read_kept(machine, shelf.practice.library).folder / "records.jsonl"
    path.write_bytes(path.read_bytes() + b"\n" + line)
    return hashlib.sha256(line).hexdigest()


def test_an_approval_planted_in_the_copy_is_not_believed(machine: Machine, shelf: Shelf) -> None:
    """Whoever wrote it had no key: the signature is that of another approval."""
    look(machine)
    genuine = shelf.practice.about_model[-1].content
    digest = _plant(machine, shelf, genuine.replace(b"2027-06-30", b"2099-06-30"))
    assert standing(look(machine, HOUR)) is Standing.IN_USE  # while the library itself is read nobody asks for it
    cut_off(shelf)
    opened = look_after(machine, 2 * HOUR)
    assert (opened.in_use(), stops(opened)) == ((), {FaultKind.BAD_SIGNATURE})
    (state,) = opened.models
    assert f"The record {digest[:12]}…" in state.reason
    assert "is not as Dr Ada Tarn signed it" in state.reason
    assert "this machine’s own copy of the library" in state.reason
    assert "library’s folder" not in state.reason


def test_an_approval_by_a_stranger_planted_in_the_copy_is_not_believed(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.withdraw()
    shelf.put()
    look(machine)
    _plant(machine, shelf, shelf.practice.approve("Nobody In Particular").content)
    cut_off(shelf)
    opened = look_after(machine, HOUR)
    assert (opened.in_use(), stops(opened)) == ((), {FaultKind.UNKNOWN_SIGNER})


def test_a_record_in_a_second_spelling_planted_in_the_copy_is_not_believed(machine: Machine, shelf: Shelf) -> None:
    """Signed words in other bytes would be another record, which nobody withdrew or revoked."""
    look(machine)
    digest = _plant(machine, shelf, shelf.practice.about_model[-1].content.replace(b'":', b'": ', 1))
    cut_off(shelf)
    opened = look_after(machine, HOUR)
    assert (opened.in_use(), stops(opened)) == ((), {FaultKind.BAD_SIGNATURE})
    assert digest[:12] in opened.models[0].reason


def test_what_is_no_record_in_the_copy_is_named_and_goes_when_all_is_verified(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    digest = _plant(machine, shelf, b"{}")
    away = cut_off(shelf)
    opened = look_after(machine, HOUR)
    assert (opened.in_use(), stops(opened)) == ((), {FaultKind.UNREADABLE_RECORD, FaultKind.OUT_OF_REACH})
    assert f"a line of it ({digest[:12]}…) is no record" in opened.models[0].reason
    away.rename(shelf.place)
    assert verify_all(machine, NOW + 2 * HOUR).faults == ()
    cut_off(shelf)
    assert standing(look_after(machine, 3 * HOUR)) is Standing.IN_USE


def test_what_a_damaged_library_lacks_stays_in_the_copy(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    approval = shelf.practice.about_model[-1]
    shelf.file_of(approval).unlink()
    assert stops(verify_all(machine, NOW + HOUR)) == {FaultKind.LACKS_WHAT_WAS_SEEN}
    assert approval.digest in read_kept(machine, shelf.practice.library).lines
