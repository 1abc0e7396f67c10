"""Export and import: the union of two places, or nothing; never less than what a machine has seen."""

import shutil
from pathlib import Path

import msgspec
import pytest

from clinicalc.errors import FileNotWritten, LibraryError
from clinicalc.library.bundle import Bundle, bundle_of
from clinicalc.library.carrying import export_library, import_bundle
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.memory import read_memory
from clinicalc.library.records import Commented
from clinicalc.library.standing import Standing
from tests.library.keys_at_hand import key_of
from tests.library.machines import NOW, Shelf, look, machine_for, make_shelf, standing
from tests.library.records_kit import BEN, pretending, record
from tests.library.shelf import everything_in


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use."""
    return make_shelf(tmp_path / "library")


def _bundle(shelf: Shelf) -> Bundle:
    return bundle_of(LibraryFolder(shelf.place))


def test_into_a_new_place_comes_the_very_same_library(shelf: Shelf, tmp_path: Path) -> None:
    target = tmp_path / "other"
    done = import_bundle(_bundle(shelf), target, None, NOW)
    assert everything_in(target) == everything_in(shelf.place)
    assert (done.created, done.new_models, done.new_records, done.practice) == (True, 1, 4, "Tarnwick Practice")
    machine = Machine(tmp_path / "settings", target, shelf.practice.key.id)
    machine.folder.mkdir()
    assert standing(look(machine)) is Standing.IN_USE
    assert sorted(path.name for path in tmp_path.iterdir()) == ["library", "other", "settings"]


def test_into_an_empty_folder_as_well(shelf: Shelf, tmp_path: Path) -> None:
    target = tmp_path / "other"
    target.mkdir()
    assert import_bundle(_bundle(shelf), target, None, NOW).created
    assert everything_in(target) == everything_in(shelf.place)


def test_both_places_together(shelf: Shelf, tmp_path: Path) -> None:
    """Two copies went on apart: the union has what either has, and a second import changes nothing."""
    other = tmp_path / "other"
    shutil.copytree(shelf.place, other)
    here = shelf.practice.remark(after=shelf.practice.about_model[1:])
    LibraryFolder(shelf.place).put_record(here)
    there = shelf.practice.withdraw(after=shelf.practice.about_model[1:2])
    LibraryFolder(other).put_record(there)
    done = import_bundle(_bundle(shelf), other, None, NOW)
    assert (done.created, done.new_models, done.new_records, done.records) == (False, 0, 1, 6)
    before = everything_in(other)
    assert import_bundle(_bundle(shelf), other, None, NOW).new_records == 0
    assert everything_in(other) == before


def test_an_older_bundle_is_refused_by_what_the_machine_has_seen(shelf: Shelf, tmp_path: Path) -> None:
    old = _bundle(shelf)
    machine = machine_for(shelf, tmp_path / "settings")
    gone = shelf.practice.withdraw()
    LibraryFolder(shelf.place).put_record(gone)
    look(machine)
    memory = read_memory(machine, shelf.practice.library)
    with pytest.raises(LibraryError, match="older than what this machine has seen") as refusal:
        import_bundle(old, tmp_path / "other", memory, NOW)
    assert gone.digest[:12] in str(refusal.value)
    assert "withdrawn" in str(refusal.value)
    assert not (tmp_path / "other").exists()
    # into the place that has the withdrawal it may go: nothing is lost there
    assert import_bundle(old, shelf.place, memory, NOW).new_records == 0
    assert import_bundle(_bundle(shelf), tmp_path / "other", memory, NOW).created


def test_an_old_copy_is_brought_up_to_date(shelf: Shelf, tmp_path: Path) -> None:
    other = tmp_path / "other"
    shutil.copytree(shelf.place, other)
    LibraryFolder(shelf.place).put_record(shelf.practice.withdraw())
    import_bundle(_bundle(shelf), other, None, NOW)
    machine = Machine(tmp_path / "settings", other, shelf.practice.key.id)
    machine.folder.mkdir()
    assert standing(look(machine)) is Standing.WITHDRAWN


def test_another_library_and_a_place_with_other_things_are_left_alone(shelf: Shelf, tmp_path: Path) -> None:
    other = make_shelf(tmp_path / "another", offline_hours=5)
    papers = tmp_path / "papers"
    papers.mkdir()
    (papers / "letter.txt").write_text("dear colleague")
    for place in (other.place, papers):
        before = everything_in(place)
        with pytest.raises(LibraryError):
            import_bundle(_bundle(shelf), place, None, NOW)
        assert everything_in(place) == before
    with pytest.raises(LibraryError, match="is not a folder"):
        import_bundle(_bundle(shelf), papers / "letter.txt", None, NOW)


def test_a_record_that_does_not_count_lets_nothing_in(shelf: Shelf, tmp_path: Path) -> None:
    """Signed by a thief in an approver's name: well-formed, and it would stop the library where it came in."""
    bundle = _bundle(shelf)
    thief = pretending(key_of("a thief"), BEN)
    last = bundle.about(shelf.fingerprint)[0].record
    forged = record(thief, Commented("forged"), bundle.library, shelf.fingerprint, last.follows)
    records = tuple(sorted((*bundle.records, forged), key=lambda s: (s.record.about, s.digest)))
    before = everything_in(shelf.place)
    for place in (shelf.place, tmp_path / "other"):
        with pytest.raises(LibraryError, match="nothing was changed"):
            import_bundle(Bundle(bundle.library, bundle.models, records), place, None, NOW)
    assert everything_in(shelf.place) == before
    assert not (tmp_path / "other").exists()


def test_the_bundle_of_another_practice_key_is_refused_where_this_one_was_seen(shelf: Shelf, tmp_path: Path) -> None:
    machine = machine_for(shelf, tmp_path / "settings")
    look(machine)
    memory = read_memory(machine, shelf.practice.library)
    assert memory is not None
    other = msgspec.structs.replace(memory, practice_key="0" * 64)
    with pytest.raises(LibraryError, match="nothing was changed"):
        import_bundle(_bundle(shelf), tmp_path / "other", other, NOW)


def test_a_place_whose_parent_is_not_there_is_said(shelf: Shelf, tmp_path: Path) -> None:
    with pytest.raises(LibraryError, match="It is not there"):
        import_bundle(_bundle(shelf), tmp_path / "none" / "other", None, NOW)
    assert not (tmp_path / "none").exists()


def test_what_was_new_is_gone_again_where_a_name_is_taken(shelf: Shelf, tmp_path: Path) -> None:
    """A folder stands where one of the new records would go; everything else could be put."""
    other = tmp_path / "other"
    shutil.copytree(shelf.place, other)
    first = shelf.practice.remark()
    second = shelf.practice.withdraw()
    for sealed in (first, second):
        LibraryFolder(shelf.place).put_record(sealed)
    bundle = _bundle(shelf)
    (other / "records" / shelf.file_of(first).name).mkdir()
    before = everything_in(other)
    with pytest.raises(LibraryError):
        import_bundle(bundle, other, None, NOW)
    assert everything_in(other) == before


def test_an_export_is_never_put_over_a_file_unasked(shelf: Shelf, tmp_path: Path) -> None:
    out = tmp_path / "bundle.json"
    export_library(LibraryFolder(shelf.place), out, NOW)
    first = out.read_bytes()
    with pytest.raises(FileNotWritten, match="already"):
        export_library(LibraryFolder(shelf.place), out, NOW)
    LibraryFolder(shelf.place).put_record(shelf.practice.remark())
    export_library(LibraryFolder(shelf.place), out, NOW, replace=True)
    assert out.read_bytes() != first
    with pytest.raises(FileNotWritten, match="could not be written"):
        export_library(LibraryFolder(shelf.place), tmp_path / "none" / "b.json", NOW)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["bundle.json", "library"]


def test_a_place_that_is_empty_may_be_a_share_that_is_not_there(shelf: Shelf, tmp_path: Path) -> None:
    mount = tmp_path / "mount"
    mount.mkdir()
    with pytest.raises(LibraryError, match="share may not be connected"):
        import_bundle(_bundle(shelf), mount, None, NOW, may_make=False)
    assert list(mount.iterdir()) == []


def test_an_import_that_died_halfway_gives_no_number_and_is_finished_by_another(shelf: Shelf, tmp_path: Path) -> None:
    """The newest record is put first, so what died after it leaves a record missing: the safe side."""
    other = tmp_path / "other"
    shutil.copytree(shelf.place, other)
    for sealed in (shelf.practice.withdraw(), shelf.practice.approve(), shelf.practice.remark()):
        LibraryFolder(shelf.place).put_record(sealed)
    LibraryFolder(other).put_record(shelf.practice.about_model[-1])
    machine = Machine(tmp_path / "settings", other, shelf.practice.key.id)
    machine.folder.mkdir()
    assert standing(look(machine)) is Standing.REFUSED
    assert import_bundle(_bundle(shelf), other, None, NOW).new_records == 2
    assert standing(look(machine)) is Standing.IN_USE
    assert everything_in(other) == everything_in(shelf.place)
