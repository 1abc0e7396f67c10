"""A library is made whole or not at all, in a new or an empty folder, and in no other."""

import errno
import os
import stat
from collections.abc import Callable
from pathlib import Path
from threading import Barrier, Thread

import pytest

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.records import ABOUT_THE_LIBRARY, Commented
from tests.library.shelf import everything_in, founding, is_whole, sealed


@pytest.mark.parametrize("way", ["new", "empty", "dropping", "link to empty", "link to nothing"])
def test_a_new_or_empty_folder_becomes_a_library(tmp_path: Path, way: str) -> None:
    place = target = tmp_path / "library"
    if way.startswith("link"):
        target = tmp_path / "target"
        place.symlink_to(target)
    if way in ("empty", "dropping", "link to empty"):
        target.mkdir()
    if way == "dropping":
        (target / ".DS_Store").write_bytes(b"\0")
    LibraryFolder(place).create(founding())
    assert LibraryFolder(place).library_id() == founding().digest
    assert is_whole(LibraryFolder(target))
    assert not target.is_symlink()
    assert {path.name for path in tmp_path.iterdir()} == {place.name, target.name}


def test_the_rights_of_an_empty_folder_are_kept(tmp_path: Path) -> None:
    place = tmp_path / "library"
    place.mkdir()
    place.chmod(0o2770)  # as an administrator prepares a folder for a group
    before = place.stat().st_ino
    LibraryFolder(place).create(founding())
    assert place.stat().st_ino == before
    for folder in (place, place / "models", place / "records"):
        assert stat.S_IMODE(folder.stat().st_mode) == 0o2770


@pytest.mark.parametrize(
    ("fill", "says"),
    [
        (lambda place: (place / "letter.txt").write_text("x"), "1 other thing"),
        (lambda place: (place / "folder").mkdir(), "1 other thing"),
        (lambda place: LibraryFolder(place).create(founding()), "a library in it already"),
        (lambda place: (place / "models").mkdir(), "broken off"),
    ],
)
def test_a_folder_that_is_not_empty_is_refused(tmp_path: Path, fill: Callable[[Path], object], says: str) -> None:
    place = tmp_path / "library"
    place.mkdir()
    fill(place)
    before = everything_in(tmp_path)
    with pytest.raises(LibraryError, match=says):
        LibraryFolder(place).create(founding("Another Practice"))
    assert everything_in(tmp_path) == before


@pytest.mark.parametrize(
    ("name", "says"),
    [("missing/library", "not there"), ("file", "not a folder"), ("file/library", "not a folder"), ("a\0b", "name")],
)
def test_a_place_that_cannot_be_is_said(tmp_path: Path, name: str, says: str) -> None:
    (tmp_path / "file").write_bytes(b"")
    before = everything_in(tmp_path)
    with pytest.raises(LibraryUnreachable, match=says):
        LibraryFolder(tmp_path / name).create(founding())
    with pytest.raises(LibraryUnreachable, match=says):
        LibraryFolder(tmp_path / name).library_id()
    assert everything_in(tmp_path) == before


def test_only_a_founding_record_begins_a_library(tmp_path: Path) -> None:
    remark = sealed(founding().digest, ABOUT_THE_LIBRARY, Commented(text="A remark."))
    with pytest.raises(LibraryError, match="begins with a founding record"):
        LibraryFolder(tmp_path / "library").create(remark)
    assert list(tmp_path.iterdir()) == []


def _try_to_create(place: Path) -> str:
    """What was said where it was refused."""
    try:
        LibraryFolder(place).create(founding())
    except LibraryUnreachable as fault:
        return str(fault)
    return ""


@pytest.mark.parametrize("is_empty_folder", [False, True])
@pytest.mark.parametrize("step", ["mkdir", "write", "fsync", "link", "rename"])
def test_a_refusal_at_any_step_leaves_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str, is_empty_folder: bool
) -> None:
    place = tmp_path / "library"
    if is_empty_folder:
        place.mkdir()
    system_call = getattr(os, step)
    refusals = 0
    for refused in range(12):
        calls = 0

        def refuse(*arguments: object, _refused: int = refused, **options: object) -> object:
            nonlocal calls, refusals
            calls += 1
            if calls != _refused + 1:
                return system_call(*arguments, **options)
            refusals += 1
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

        with monkeypatch.context() as patch:
            patch.setattr(os, step, refuse)
            said = _try_to_create(place)
        if calls <= refused:
            break
        assert "no library was made, and nothing was changed" in said
        assert everything_in(tmp_path) == ({"library": None} if is_empty_folder else {})
    assert refusals >= (0 if step == "rename" and is_empty_folder else 1)
    assert is_whole(LibraryFolder(place))


@pytest.mark.parametrize("is_empty_folder", [False, True])
@pytest.mark.parametrize("attempt", range(10))
def test_of_two_foundings_at_once_one_is_made(tmp_path: Path, is_empty_folder: bool, attempt: int) -> None:
    place = tmp_path / "library"
    if is_empty_folder:
        place.mkdir()
    foundings = [founding(f"Practice {number} of {attempt}") for number in range(2)]
    start = Barrier(2)
    made: list[str] = []
    refused: list[str] = []

    def begin(number: int) -> None:
        start.wait()
        try:
            LibraryFolder(place).create(foundings[number])
            made.append(foundings[number].digest)
        except LibraryError as fault:
            refused.append(str(fault))

    threads = [Thread(target=begin, args=(number,)) for number in range(2)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert (len(made), len(refused)) == (1, 1), refused
    assert "the folder is not empty" in refused[0]
    assert LibraryFolder(place).library_id() == made[0]
    assert is_whole(LibraryFolder(place))
    assert [record.digest for record in LibraryFolder(place).read_records()[0]] == made
    assert [path.name for path in tmp_path.iterdir()] == ["library"]
