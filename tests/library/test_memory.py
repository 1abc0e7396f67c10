"""The memory file: it grows forward, loses nothing to another process, and is never taken for empty."""

import random
import subprocess
import sys
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from msgspec.structs import replace

from clinicalc.errors import FileNotWritten, LibraryError
from clinicalc.library.machine import Machine, read_moment, spell_moment
from clinicalc.library.memory import (
    Memory,
    SeenModel,
    change_memory,
    memory_of_place,
    memory_path,
    new_memory,
    read_memory,
    resting_mark,
)
from clinicalc.library.recollection import brought_forward, find_lacking
from clinicalc.library.sealing import is_proved
from clinicalc.library.sole_writer import sole_writer
from clinicalc.library.standing import SealedRecord
from tests.library.machines import NOW
from tests.library.records_kit import Practice, practice

LIBRARY = "ab" * 32


@pytest.fixture
def machine(tmp_path: Path) -> Machine:
    """A machine with a settings folder that does not exist yet."""
    return Machine(tmp_path / "machine", tmp_path / "library", "cd" * 32)


def test_there_is_no_memory_before_there_is_one(machine: Machine) -> None:
    assert (read_memory(machine, LIBRARY), memory_of_place(machine)) == (None, None)
    change_memory(machine, LIBRARY, lambda memory: memory, NOW)
    assert read_memory(machine, LIBRARY) == memory_of_place(machine) == new_memory(machine, LIBRARY, NOW)


def test_a_memory_under_another_librarys_name_is_refused(machine: Machine) -> None:
    change_memory(machine, LIBRARY, lambda memory: memory, NOW)
    memory_path(machine, LIBRARY).rename(memory_path(machine, "ef" * 32))
    with pytest.raises(LibraryError, match="It is the memory of another library"):
        read_memory(machine, "ef" * 32)


def test_a_folder_in_its_place_is_said(machine: Machine) -> None:
    memory_path(machine, LIBRARY).mkdir(parents=True)
    with pytest.raises(LibraryError, match="cannot be read"):
        read_memory(machine, LIBRARY)


def test_where_it_cannot_be_kept_is_said(machine: Machine) -> None:
    machine.folder.write_text("a file where the folder should be", encoding="utf-8")
    with pytest.raises(FileNotWritten, match="what this machine has seen of the library could not be kept"):
        change_memory(machine, LIBRARY, lambda memory: memory, NOW)


def test_of_two_libraries_at_a_place_the_last_opened_counts(machine: Machine) -> None:
    change_memory(machine, LIBRARY, lambda memory: memory, NOW)
    change_memory(machine, "ef" * 32, lambda memory: memory, NOW + timedelta(days=1))
    found = memory_of_place(machine)
    assert found is not None
    assert found.library == "ef" * 32
    assert memory_of_place(Machine(machine.folder, Path("/elsewhere"), machine.practice_key)) is None
    assert memory_of_place(Machine(machine.folder, machine.place, "0" * 64)) is None


ADDER = """
import sys
from datetime import UTC, datetime
from pathlib import Path
from msgspec.structs import replace
from clinicalc.library.machine import Machine
from clinicalc.library.memory import Hold, change_memory

folder, place, library, name = sys.argv[1:]
now = datetime(2026, 12, 1, 12, tzinfo=UTC)
for number in range(40):
    held = Hold(fingerprint=f"{name}{number:063d}", since="2026-12-01T12:00:00Z", why="odd figures")
    change_memory(
        Machine(Path(folder), Path(place), "cd" * 32), library,
        lambda memory: replace(memory, holds=(*memory.holds, held)), now,
    )
"""


def test_two_processes_lose_nothing_of_each_other(machine: Machine) -> None:
    machine.folder.mkdir()
    arguments = [str(machine.folder), str(machine.place), LIBRARY]
    running = [subprocess.Popen([sys.executable, "-c", ADDER, *arguments, name]) for name in "ab"]
    assert [process.wait(timeout=60) for process in running] == [0, 0]
    memory = read_memory(machine, LIBRARY)
    assert memory is not None
    assert len(memory.holds) == 80


def test_whoever_waits_too_long_for_the_other_is_told(machine: Machine, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("clinicalc.library.sole_writer.LONGEST_WAIT", 0.05)
    machine.folder.mkdir()
    with (
        sole_writer(memory_path(machine, LIBRARY).with_suffix(".lock")),
        pytest.raises(FileNotWritten, match="another window or command has held"),
    ):
        change_memory(machine, LIBRARY, lambda memory: memory, NOW)


def test_a_mark_stands_for_the_records_in_any_order() -> None:
    assert resting_mark("ab", "cd") == resting_mark("ba", "dc")
    assert (
        len({resting_mark("a", "bc"), resting_mark("ab", "c"), resting_mark("", "abc"), resting_mark("abc", "")}) == 4
    )


moments = st.datetimes(datetime(1900, 1, 1), datetime(9998, 12, 31), timezones=st.just(UTC))


@given(moments)
def test_moments_are_spelt_as_records_spell_them_and_sort_as_texts(at: datetime) -> None:
    assert read_moment(spell_moment(at)) == at.replace(microsecond=0)
    assert sorted([spell_moment(at), "2026-12-01T12:00:00Z"]) == [
        spell_moment(one) for one in sorted([at, datetime(2026, 12, 1, 12, tzinfo=UTC)])
    ]


def test_a_moment_has_a_zone() -> None:
    with pytest.raises(ValueError, match="time zone"):
        spell_moment(datetime(2026, 12, 1))


def _chain(seed: int) -> Practice:
    """A history of remarks that part and come together again, as several writers would make it."""
    chance = random.Random(seed)
    made = practice()
    made.install()
    for _ in range(chance.randrange(1, 8)):
        count = min(len(made.about_model), chance.randrange(1, 3))
        made.remark(after=chance.sample(made.about_model, count))
    return made


def _reached(made: Practice, sealed: SealedRecord) -> list[SealedRecord]:
    """The record and everything that it follows, near or far."""
    by_digest = {one.digest: one for one in made.about_model}
    found: dict[str, SealedRecord] = {}
    waiting = [sealed]
    while waiting:
        one = waiting.pop()
        found[one.digest] = one
        waiting += [by_digest[digest] for digest in one.record.follows.model]
    return list(found.values())


@settings(max_examples=60)
@given(st.integers(0, 10**6), st.data())
def test_whatever_was_seen_once_is_missed_for_ever_when_it_is_gone(seed: int, data: st.DataObject) -> None:
    """Any sound parts of a history may be seen in any order; afterwards no record that was seen can be taken away."""
    made = _chain(seed)
    machine = Machine(Path("/nowhere"), Path("/library"), made.key.id)
    memory: Memory = new_memory(machine, made.library, NOW)
    authority = made.authority()
    seen: dict[str, SealedRecord] = {}
    for _ in range(data.draw(st.integers(1, 4))):
        tips = data.draw(st.lists(st.sampled_from(made.about_model), min_size=1, max_size=3))
        part = {one.digest: one for tip in tips for one in _reached(made, tip)}
        view = Practice(made.key, made.about_library, list(part.values()), made.model)
        state = view.replay(NOW)
        memory = brought_forward(memory, machine, authority, made.about_library, [state], NOW, sound=True)
        seen |= part
    (model,) = memory.models
    assert find_lacking(model.heads, seen.values(), made.model, "it") == ()
    gone = data.draw(st.sampled_from(sorted(seen)))
    left = [one for one in seen.values() if one.digest != gone]
    lacking = find_lacking(model.heads, left, made.model, "it")
    followed = {digest for one in left for digest in one.record.follows.model}
    assert lacking or gone in followed  # either this machine misses it, or the chain itself does
    assert all(is_proved(one) for one in seen.values())


def test_a_model_without_proved_heads_is_not_remembered(machine: Machine) -> None:
    made = practice()
    made.install("Nobody In Particular")
    state = made.replay(NOW)
    memory = new_memory(machine, made.library, NOW)
    after = brought_forward(memory, machine, made.authority(), made.about_library, [state], NOW, sound=True)
    assert after.models == ()


def test_what_was_seen_stays_where_a_later_look_finds_only_part_of_it(machine: Machine) -> None:
    made = practice()
    made.install()
    made.approve()
    memory = new_memory(machine, made.library, NOW)
    authority = made.authority()
    whole = made.replay(NOW)
    memory = brought_forward(memory, machine, authority, made.about_library, [whole], NOW, sound=True)
    part = replace(memory, models=memory.models)
    made.about_model.pop()
    part = brought_forward(part, machine, authority, made.about_library, [made.replay(NOW)], NOW, sound=True)
    model: SeenModel = part.models[0]
    assert {head.digest for head in memory.models[0].heads} <= {head.digest for head in model.heads}
