"""The form without handles, which Windows uses, does the same; only what changes between two looks escapes it.

It is tried here on this system, which has handles, by saying that it has none.
"""

import os
from pathlib import Path

import pytest

from clinicalc.library import opened_folder
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.standing import Fault, FaultKind
from tests.library.shelf import comment, everything_in, found, founding, is_whole, model


@pytest.fixture
def without_handles(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(opened_folder, "_BY_HANDLE", False)


@pytest.mark.usefixtures("without_handles")
@pytest.mark.parametrize("is_empty_folder", [False, True])
def test_without_handles_a_library_is_made_filled_and_read(tmp_path: Path, is_empty_folder: bool) -> None:
    if is_empty_folder:
        (tmp_path / "library").mkdir()
    library = found(tmp_path / "library")
    fingerprint, content = model("one")
    library.put_model(fingerprint, content)
    library.put_record(comment(fingerprint, "A remark."))
    assert library.library_id() == founding().digest
    assert library.read_model(fingerprint) == content
    assert library.read_records(fingerprint) == ((comment(fingerprint, "A remark."),), ())
    assert library.list_strays() == ()
    assert is_whole(library)
    assert len(everything_in(tmp_path)) == 7


@pytest.mark.usefixtures("without_handles")
@pytest.mark.parametrize("what", ["file", "part"])
def test_without_handles_links_are_not_followed(tmp_path: Path, what: str) -> None:
    library = found(tmp_path / "library")
    fingerprint, content = model("one")
    library.put_model(fingerprint, content)
    linked = library.path / "models" if what == "part" else library.path / "models" / f"{fingerprint}.json"
    linked.rename(tmp_path / "moved")
    linked.symlink_to(tmp_path / "moved")
    fault = library.read_model(fingerprint)
    assert isinstance(fault, Fault)
    assert fault.kind is FaultKind.NOT_A_FILE


def test_an_opened_folder_is_the_same_though_its_name_changes(tmp_path: Path) -> None:
    (tmp_path / "a").mkdir()
    (tmp_path / "a" / "file").write_bytes(b"own")
    with OpenedFolder(tmp_path / "a") as folder:
        (tmp_path / "a").rename(tmp_path / "b")
        (tmp_path / "a").mkdir()
        with folder.entries() as entries:
            assert [entry.name for entry in entries] == ["file"]


@pytest.mark.skipif(not Path("/proc/self/fd").is_dir(), reason="this system does not list open handles")
def test_no_handle_stays_open(tmp_path: Path) -> None:
    before = len(os.listdir("/proc/self/fd"))
    library = found(tmp_path / "library")
    fingerprint, content = model("one")
    library.put_model(fingerprint, content)
    (library.path / "models" / f"{'a' * 64}.json").symlink_to("nothing")
    os.mkfifo(library.path / "models" / f"{'b' * 64}.json")
    for name in (fingerprint, "a" * 64, "b" * 64, "c" * 64):
        library.read_model(name)
    library.read_records()
    (library.path / "records").rename(tmp_path / "records")
    LibraryFolder(library.path).read_records()
    assert len(os.listdir("/proc/self/fd")) == before
