"""Opening a library: what is sound is in use, and whatever is amiss takes the number away and says why."""

import hashlib
import json
import os
import shutil
from datetime import datetime, timedelta
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.memory import begin_memory, memory_path, read_memory
from clinicalc.library.opening import open_for_bedside, open_library, verify_all
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.standing import FaultKind, Standing
from tests.library.machines import (
    NOW,
    Shelf,
    look,
    machine_for,
    make_shelf,
    only_state,
    replace_folder,
    standing,
    stops,
)
from tests.library.records_kit import ADA, BEN, Practice

HOUR, DAY = timedelta(hours=1), timedelta(days=1)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that has not opened it yet."""
    return machine_for(shelf, tmp_path / "machine")


def test_a_sound_library_is_in_use(machine: Machine, shelf: Shelf) -> None:
    opened = look(machine)
    assert (opened.library, opened.reachable, opened.served_until) == (shelf.practice.library, True, None)
    assert (opened.faults, opened.caution) == ((), "")
    (state,) = opened.in_use()
    assert (state.id, state.standing, state.faults) == ("tarnwick-cvd-10y", Standing.IN_USE, ())
    assert state.approval is not None
    assert state.approval.name == ADA


def test_an_opening_changes_nothing_in_the_library(machine: Machine, shelf: Shelf) -> None:
    before = {path: path.stat().st_mtime_ns for path in shelf.place.rglob("*")}
    look(machine)
    verify_all(machine, NOW)
    assert {path: path.stat().st_mtime_ns for path in shelf.place.rglob("*")} == before


def test_what_was_seen_is_remembered(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    memory = read_memory(machine, shelf.practice.library)
    assert memory is not None
    assert [head.digest for head in memory.library_heads] == [shelf.practice.about_library[-1].digest]
    (model,) = memory.models
    assert (model.id, model.version, [head.digest for head in model.heads]) == (
        "tarnwick-cvd-10y",
        "1.0.0",
        [shelf.practice.about_model[-1].digest],
    )
    assert (memory.latest, memory.verified) == ("2026-12-01T12:00:00Z", "2026-12-01T12:00:00Z")


def test_a_withdrawal_takes_the_number_away(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    shelf.practice.withdraw()
    shelf.put()
    opened = look(machine, HOUR)
    assert (standing(opened), opened.in_use(), stops(opened)) == (Standing.WITHDRAWN, (), set())


def test_a_deleted_withdrawal_is_missed(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.withdraw()
    shelf.put()
    look(machine)
    shelf.file_of(shelf.practice.about_model[-1]).unlink()
    state = only_state(look(machine, HOUR))
    assert (state.standing, state.approval) == (Standing.REFUSED, None)
    (fault,) = state.faults
    assert fault.kind is FaultKind.LACKS_WHAT_WAS_SEEN
    assert "lacks the withdrawal of tarnwick-cvd-10y 1.0.0 that Dr Ben Wick signed on 1 December 2026" in fault.sentence
    assert "This machine saw it on 1 December 2026" in fault.sentence
    assert "tarnwick-cvd-10y 1.0.0 gives no number here" in fault.sentence
    # it is missed for as long as it is away, and the model is withdrawn again once it is back
    assert standing(look(machine, 2 * HOUR)) is Standing.REFUSED
    shelf.put()
    assert standing(look(machine, 3 * HOUR)) is Standing.WITHDRAWN


def test_a_withdrawal_is_missed_though_the_remark_before_it_went_first(machine: Machine, shelf: Shelf) -> None:
    """A head that stands without what it follows counts no more, and is still not forgotten."""
    remark = shelf.practice.remark()
    withdrawal = shelf.practice.withdraw()
    shelf.put()
    look(machine)
    shelf.file_of(remark).unlink()
    assert standing(look(machine, HOUR)) in (Standing.REFUSED, Standing.WITHDRAWN)
    shelf.file_of(withdrawal).unlink()
    opened = look(machine, 2 * HOUR)
    assert standing(opened) is Standing.REFUSED
    assert FaultKind.LACKS_WHAT_WAS_SEEN in stops(opened)


def test_an_older_copy_of_the_whole_folder_is_found_out(machine: Machine, shelf: Shelf, tmp_path: Path) -> None:
    look(machine)
    shutil.copytree(shelf.place, tmp_path / "older")
    shelf.practice.appoint(ADA, BEN)
    shelf.practice.withdraw()
    shelf.put()
    look(machine, HOUR)
    replace_folder(shelf.place, tmp_path / "older")
    opened = look(machine, 2 * HOUR)
    assert standing(opened) is Standing.REFUSED
    assert stops(opened) == {FaultKind.LACKS_WHAT_WAS_SEEN}
    assert opened.faults[0].about == ABOUT_THE_LIBRARY
    assert "lacks the list of approvers that Tarnwick Practice signed" in opened.faults[0].sentence
    assert "no model gives a number here" in opened.faults[0].sentence


def test_a_missing_revocation_stops_every_model(machine: Machine, shelf: Shelf) -> None:
    revocation = shelf.practice.revoke(BEN)
    shelf.put()
    assert standing(look(machine)) is Standing.IN_USE
    shelf.file_of(revocation).unlink()
    opened = look(machine, HOUR)
    assert (standing(opened), stops(opened)) == (Standing.REFUSED, {FaultKind.LACKS_WHAT_WAS_SEEN})


def test_a_model_of_which_every_record_is_gone_is_still_named(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    for sealed in shelf.practice.about_model:
        shelf.file_of(sealed).unlink()
    state = only_state(look(machine, HOUR))
    assert (state.id, state.version, state.standing) == ("tarnwick-cvd-10y", "1.0.0", Standing.REFUSED)
    assert FaultKind.LACKS_WHAT_WAS_SEEN in {fault.kind for fault in state.faults}


def test_two_histories_that_come_together_are_no_loss(machine: Machine, shelf: Shelf, tmp_path: Path) -> None:
    """Two copies of a library were written in apart from each other; merged, everything that was seen is there."""
    look(machine)
    _, approved = shelf.practice.about_model
    beside = shelf.practice.withdraw(BEN, after=[approved])
    shelf.put()
    assert standing(look(machine, HOUR)) is Standing.WITHDRAWN
    extended = shelf.practice.approve(ADA, "2027-12-31", after=[approved])
    shelf.put()
    opened = look(machine, 2 * HOUR)
    assert (standing(opened), stops(opened)) == (Standing.WITHDRAWN, set())
    memory = read_memory(machine, shelf.practice.library)
    assert memory is not None
    assert {head.digest for head in memory.models[0].heads} == {beside.digest, extended.digest}
    shelf.practice.approve(ADA, "2027-12-31", after=[beside, extended])
    shelf.put()
    assert standing(look(machine, 3 * HOUR)) is Standing.IN_USE


@pytest.mark.parametrize("thorough", [False, True])
def test_a_changed_model_file_is_refused(machine: Machine, shelf: Shelf, thorough: bool) -> None:
    look(machine)
    content = bytearray(shelf.model_file.read_bytes())
    content[len(content) // 2] ^= 1
    shelf.model_file.write_bytes(content)
    opened = verify_all(machine, NOW + HOUR) if thorough else look(machine, HOUR)
    assert (standing(opened), stops(opened)) == (Standing.REFUSED, {FaultKind.CHANGED_FILE})


def test_a_missing_model_file_is_refused(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    shelf.model_file.unlink()
    opened = look(machine, HOUR)
    assert (standing(opened), stops(opened)) == (Standing.REFUSED, {FaultKind.MISSING_FILE})


@pytest.mark.parametrize("place", [0, 1])
def test_a_record_changed_in_its_file_is_found_though_it_is_known(machine: Machine, shelf: Shelf, place: int) -> None:
    look(machine)
    path = shelf.file_of(shelf.practice.about_model[place])
    path.write_bytes(path.read_bytes().replace(b"2026-12-01", b"2026-12-02"))
    opened = look(machine, HOUR)
    assert standing(opened) is Standing.REFUSED
    assert FaultKind.CHANGED_FILE in stops(opened)


def test_a_changed_record_of_a_withdrawn_model_is_found_when_all_is_verified(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.withdraw()
    shelf.put()
    look(machine)
    path = shelf.file_of(shelf.practice.about_model[0])
    path.write_bytes(path.read_bytes().replace(b"2026-12-01", b"2026-12-02"))
    assert look(machine, HOUR).in_use() == ()
    assert FaultKind.CHANGED_FILE in stops(verify_all(machine, NOW + HOUR))


def test_a_known_record_under_the_name_of_another_model_is_found(machine: Machine, shelf: Shelf) -> None:
    withdrawn = Practice(shelf.practice.key, shelf.practice.about_library, [], "ab" * 32)
    withdrawn.install()
    withdrawn.withdraw()
    for sealed in withdrawn.about_model:
        LibraryFolder(shelf.place).put_record(sealed)
    look(machine)
    known = shelf.file_of(shelf.practice.about_model[-1])
    shutil.copyfile(known, known.with_name(known.name.replace(shelf.fingerprint, withdrawn.model)))
    assert FaultKind.MISNAMED_RECORD in stops(look(machine, HOUR))


def test_a_forgery_planted_in_the_library_and_in_the_copy_is_refused(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    content = shelf.practice.about_model[-1].content.replace(b"2027-06-30", b"2099-06-30")
    digest = hashlib.sha256(content).hexdigest()
    (shelf.place / "records" / f"{shelf.fingerprint}-{digest}.json").write_bytes(content)
    kept = machine.folder / f"kept-{shelf.practice.library}" / "records.jsonl"
    kept.write_bytes(kept.read_bytes() + b"\n" + content)
    for hours, open_it in enumerate((open_library, open_for_bedside, verify_all), start=1):
        opened = open_it(machine, NOW + hours * HOUR)
        assert (opened.in_use(), stops(opened)) == ((), {FaultKind.BAD_SIGNATURE})
        assert digest[:12] in only_state(opened).reason
    (shelf.place / "records" / f"{shelf.fingerprint}-{digest}.json").unlink()
    assert standing(verify_all(machine, NOW + 4 * HOUR)) is Standing.IN_USE
    assert content not in kept.read_bytes()  # the copy was made anew


def test_a_forged_approval_is_refused_and_not_remembered(machine: Machine, shelf: Shelf) -> None:
    shelf.practice.withdraw()
    shelf.put()
    look(machine)
    forged = shelf.practice.approve("Nobody In Particular")
    shelf.put()
    opened = look(machine, HOUR)
    assert opened.in_use() == ()
    assert FaultKind.UNKNOWN_SIGNER in stops(opened)
    memory = read_memory(machine, shelf.practice.library)
    assert memory is not None
    assert forged.digest not in {head.digest for head in memory.models[0].heads}
    shelf.file_of(forged).unlink()
    assert standing(look(machine, 2 * HOUR)) is Standing.WITHDRAWN


def test_a_verified_signature_is_judged_anew_when_its_key_is_revoked(machine: Machine, shelf: Shelf) -> None:
    assert standing(look(machine)) is Standing.IN_USE
    shelf.practice.revoke(ADA)
    shelf.put()
    assert look(machine, HOUR).in_use() == ()


def test_another_practice_key_than_the_pinned_one_gives_nothing(shelf: Shelf, tmp_path: Path) -> None:
    machine = Machine(tmp_path, shelf.place, "0" * 64)
    opened = look(machine)
    assert (standing(opened), opened.in_use()) == (Standing.REFUSED, ())
    assert FaultKind.OTHER_PRACTICE_KEY in stops(opened)


def test_another_library_at_the_same_place_is_opened_only_after_joining(
    machine: Machine, shelf: Shelf, tmp_path: Path
) -> None:
    look(machine)
    other = make_shelf(tmp_path / "other", offline_hours=12)
    replace_folder(shelf.place, other.place)
    with pytest.raises(LibraryError, match="another library lies where this machine’s library was"):
        look(machine, HOUR)
    begin_memory(machine, other.practice.library, NOW + HOUR)
    assert standing(look(machine, HOUR)) is Standing.IN_USE


@pytest.mark.parametrize("back", [timedelta(minutes=3), 365 * DAY])
def test_a_clock_set_back_stops_everything(machine: Machine, back: timedelta) -> None:
    look(machine)
    opened = look(machine, -back)
    assert standing(opened) is Standing.REFUSED
    (fault,) = opened.faults
    assert (fault.kind, fault.about) == (FaultKind.CLOCK_SET_BACK, ABOUT_THE_LIBRARY)
    sentence = fault.sentence
    assert f"{(NOW - back).astimezone():%Y, %H:%M}" in sentence
    assert f"{NOW.astimezone():%Y, %H:%M}" in sentence
    assert standing(look(machine)) is Standing.IN_USE  # once it is right again


def test_a_clock_that_went_back_two_minutes_is_none(machine: Machine) -> None:
    look(machine)
    assert standing(look(machine, -timedelta(minutes=2))) is Standing.IN_USE


def test_a_withdrawal_seen_while_the_clock_is_wrong_is_remembered(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    withdrawal = shelf.practice.withdraw()
    shelf.put()
    assert FaultKind.CLOCK_SET_BACK in stops(look(machine, -DAY))
    shelf.file_of(withdrawal).unlink()
    assert FaultKind.LACKS_WHAT_WAS_SEEN in stops(look(machine, HOUR))


def test_the_first_opening_is_held_against_the_times_of_all_records(machine: Machine) -> None:
    """A machine whose clock is a year behind has nothing of its own to tell; the records have."""
    opened = look(machine, -365 * DAY)
    assert standing(opened) is Standing.REFUSED
    assert FaultKind.CLOCK_SET_BACK in stops(opened)


def test_a_record_from_a_clock_ahead_stops_its_model_only(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    shelf.practice.approve(written="2027-12-01T10:00:00Z")
    shelf.put()
    opened = look(machine, HOUR)
    assert (standing(opened), stops(opened)) == (Standing.REFUSED, {FaultKind.FROM_THE_FUTURE})
    assert opened.faults == ()


def test_joining_again_puts_right_a_clock_that_stood_ahead(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    look(machine, 400 * DAY)
    assert FaultKind.CLOCK_SET_BACK in stops(look(machine, HOUR))
    begin_memory(machine, shelf.practice.library, NOW + HOUR)
    assert standing(look(machine, HOUR)) is Standing.IN_USE


def test_the_review_date_counts_to_its_last_midnight_here(machine: Machine) -> None:
    last = datetime(2027, 6, 30, 23, 59).astimezone()
    assert standing(open_library(machine, last)) is Standing.IN_USE
    assert standing(open_library(machine, last + timedelta(minutes=2))) is Standing.REVIEW_OVERDUE


def test_an_opening_is_good_until_midnight(machine: Machine) -> None:
    tomorrow = (NOW.astimezone() + DAY).replace(tzinfo=None, hour=0, minute=0)
    assert look(machine).good_until == tomorrow.astimezone()


def test_a_memory_that_cannot_be_read_gives_no_number(machine: Machine, shelf: Shelf) -> None:
    look(machine)
    path = memory_path(machine, shelf.practice.library)
    whole = path.read_bytes()
    twice = whole.replace(b"{", b'{"place":"",', 1)
    no_day = whole.replace(b"2026-12-01T12", b"2026-12-99T12")
    for broken in (b"", whole[:-1], b"[]", whole.replace(b'"holds"', b'"hold"'), twice, no_day):
        path.write_bytes(broken)
        with pytest.raises(LibraryError, match="what this machine remembers of the library cannot be read"):
            look(machine, HOUR)
        assert path.read_bytes() == broken
    begin_memory(machine, shelf.practice.library, NOW + HOUR)
    assert standing(look(machine, HOUR)) is Standing.IN_USE
    assert path.with_name(f"{path.stem}-1.json").exists()


def test_only_some_models_may_be_asked_for(machine: Machine, shelf: Shelf) -> None:
    assert open_library(machine, NOW, only=["0" * 63 + "1"]).models == ()
    memory = read_memory(machine, shelf.practice.library)
    assert memory is not None
    assert memory.verified == ""  # not the whole library was looked at
    assert len(open_library(machine, NOW, only=[shelf.fingerprint]).in_use()) == 1


def test_strangers_in_the_folder_are_told_and_stop_nothing(machine: Machine, shelf: Shelf) -> None:
    (shelf.place / "records" / "notes.txt").write_text("mind the gap", encoding="utf-8")
    opened = look(machine)
    assert standing(opened) is Standing.IN_USE
    assert [fault.kind for fault in opened.faults] == [FaultKind.STRAY]


def test_a_second_machine_sees_the_same(machine: Machine, shelf: Shelf, tmp_path: Path) -> None:
    first, second = look(machine), look(machine_for(shelf, tmp_path / "second"))
    assert (first.models, first.authority) == (second.models, second.authority)


def test_times_of_the_memory_are_written_as_records_write_them(machine: Machine, shelf: Shelf) -> None:
    look(machine, timedelta(microseconds=123))
    memory = json.loads(memory_path(machine, shelf.practice.library).read_bytes())
    assert (memory["format"], memory["latest"]) == ("clinicalc.memory/1", "2026-12-01T12:00:00Z")
    assert os.stat(memory_path(machine, shelf.practice.library)).st_mode & 0o777 == 0o600
