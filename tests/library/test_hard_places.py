"""Full disks, disks set to be read only, folders without rights, and one folder under two paths."""

import json
import os
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from pathlib import Path

import pytest

from clinicalc.library.folder import LibraryFolder
from tests.library.own_mounts import Told
from tests.library.private_mounts import run_with_own_mounts
from tests.library.shelf import found, founding, is_whole, model
from tests.library.two_writers import COMMON, OWN, SHARED, WRITERS, things, write_through
from tests.packaging.checkout import ROOT


def _with_own_mounts(what: str, folder: Path) -> Told:
    """What the process with mounts of its own tells."""
    return Told(**json.loads(run_with_own_mounts("tests.library.own_mounts", folder, what)))


def _all_is_there(library: LibraryFolder) -> None:
    expected = {name: record for writer in range(WRITERS) for (name, _), record in things(writer)}
    assert len(expected) == WRITERS * OWN + SHARED
    assert is_whole(library)
    assert set(library.list_models().names) == set(expected)
    records, faults = library.read_records(COMMON)
    assert {record.digest for record in records} == {record.digest for record in expected.values()}
    assert faults == ()
    assert not list(library.path.rglob("*.part"))


def test_two_processes_through_a_link_lose_nothing(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    (tmp_path / "linked").symlink_to("real")
    library = found(tmp_path / "real" / "library")
    write_through([tmp_path / "real" / "library", tmp_path / "linked" / "library"], tmp_path)
    _all_is_there(library)


def test_two_processes_through_two_mounts_lose_nothing(tmp_path: Path) -> None:
    told = _with_own_mounts("two-paths", tmp_path)
    assert told.is_whole
    _all_is_there(LibraryFolder(tmp_path / "library"))


def test_on_a_full_disk_nothing_changes_and_one_sentence_says_it(tmp_path: Path) -> None:
    told = _with_own_mounts("full", tmp_path)
    assert told.is_whole
    assert told.changed == []
    assert len(told.said) == 2 + told.foundings.count(False)
    assert {False, True} == set(told.foundings)
    for sentence in told.said:
        assert "nothing was changed" in sentence
        assert "There is no room left on the disk" in sentence
        assert "Make room there" in sentence


def test_on_a_disk_that_takes_no_more_files_nothing_changes(tmp_path: Path) -> None:
    told = _with_own_mounts("full-of-files", tmp_path)
    assert told.is_whole
    assert told.changed == []
    assert {False, True} == set(told.foundings)
    assert all("There is no room left on the disk" in sentence for sentence in told.said)


def test_on_a_disk_set_to_be_read_only_nothing_changes_and_reading_goes_on(tmp_path: Path) -> None:
    told = _with_own_mounts("read-only", tmp_path)
    assert told.is_whole
    assert told.changed == []
    assert len(told.said) == 4
    for sentence in told.said:
        assert "nothing was changed" in sentence
        assert "The disk is set to be read only" in sentence


@pytest.fixture
def open_folder() -> Iterator[Path]:
    """A folder that other users may enter."""
    with tempfile.TemporaryDirectory() as name:
        Path(name).chmod(0o755)
        yield Path(name)


@pytest.mark.skipif(not hasattr(os, "geteuid"), reason="this system has other rights")
@pytest.mark.parametrize(("mode", "may_read"), [(0o555, True), (0o000, False)], ids=["reading only", "no rights"])
def test_without_rights_nothing_changes_and_one_sentence_says_it(open_folder: Path, mode: int, may_read: bool) -> None:
    library = found(open_folder / "library")
    library.put_model(*model("one"))
    (open_folder / "empty").mkdir()
    for place in (library.path / "models", library.path, open_folder / "empty"):
        place.chmod(mode)
    try:
        done = subprocess.run(
            [sys.executable, "-m", "tests.library.other_person", str(open_folder)],
            cwd=ROOT,
            capture_output=True,
            text=True,
            timeout=60,
        )
    finally:
        for place in (library.path, library.path / "models", open_folder / "empty"):
            place.chmod(0o755)
    assert done.returncode == 0, done.stderr
    told = json.loads(done.stdout)
    assert ("the library was not read" not in told["read"]) == may_read, told
    refusals = [told["put"], told["create"], *([] if may_read else [told["read"]])]
    for sentence in refusals:
        assert "You may not do this there" in sentence
        assert "Ask who looks after the computer" in sentence
    assert is_whole(library)
    assert library.library_id() == founding().digest
    assert library.list_models().names == (model("one")[0],)
    assert list((open_folder / "empty").iterdir()) == []
