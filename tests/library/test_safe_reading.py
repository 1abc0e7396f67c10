"""Reading what anybody may have put there: at once, never more than the limit, and never through a link."""

import errno
import os
import resource
import socket
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.places import RecordName
from clinicalc.library.safe_reading import NotRead, Obstacle, read_regular
from clinicalc.library.standing import Fault, FaultKind
from tests.library.shelf import comment, found, model

AT_ONCE = 2.0
"""Seconds, on a machine that does other things too; waiting for a pipe would never end, 5 GB would take as long."""


def _link(path: Path) -> None:
    path.symlink_to(path.parent.parent / "library.json")


def _link_to_nothing(path: Path) -> None:
    path.symlink_to("nothing")


def _pipe(path: Path) -> None:
    os.mkfifo(path)


def _folder(path: Path) -> None:
    path.mkdir()


def _socket(path: Path) -> None:
    before = Path.cwd()
    os.chdir(path.parent)  # a socket's path may have about a hundred characters
    try:
        with socket.socket(socket.AF_UNIX) as end:
            end.bind("s")
        os.rename("s", path.name)
    finally:
        os.chdir(before)


def _five_gigabytes(path: Path) -> None:
    with path.open("wb") as stream:
        stream.truncate(5_000_000_000)


THINGS: list[tuple[Callable[[Path], None], FaultKind, str]] = [
    (_link, FaultKind.NOT_A_FILE, "a link"),
    (_link_to_nothing, FaultKind.NOT_A_FILE, "a link"),
    (_pipe, FaultKind.NOT_A_FILE, "a pipe"),
    (_folder, FaultKind.NOT_A_FILE, "a folder"),
    (_socket, FaultKind.NOT_A_FILE, "a socket"),
    (_five_gigabytes, FaultKind.CHANGED_FILE, "5,000,000,000 bytes"),
]


@pytest.mark.parametrize(("put", "kind", "word"), THINGS)
@pytest.mark.parametrize("part", ["models", "records"])
def test_what_is_no_small_file_is_named_at_once(
    tmp_path: Path, put: Callable[[Path], None], kind: FaultKind, word: str, part: str
) -> None:
    library = found(tmp_path / "library")
    fingerprint, content = model("sound")
    library.put_model(fingerprint, content)
    sound = comment(fingerprint, "Sound.")
    library.put_record(sound)
    bad = RecordName(fingerprint, "d" * 64)
    put(library.path / part / (f"{'d' * 64}.json" if part == "models" else bad.file))

    began = time.monotonic()
    size_before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    listed = library.list_models().faults if part == "models" else library.list_records(fingerprint).faults
    read = library.read_model("d" * 64) if part == "models" else library.read_record(fingerprint, bad.digest)
    records, faults = library.read_records(fingerprint)
    seconds = time.monotonic() - began
    grown = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - size_before

    assert isinstance(read, Fault)
    assert (read.kind, read.about) == (kind, "d" * 64 if part == "models" else fingerprint)
    assert word in read.sentence
    assert read.stops
    assert [fault.kind for fault in listed] == ([FaultKind.NOT_A_FILE] if kind is FaultKind.NOT_A_FILE else [])
    assert all(word in fault.sentence and fault.stops for fault in listed)
    assert records == (sound,)
    assert [fault.kind for fault in faults] == ([kind] if part == "records" else [])
    assert library.read_model(fingerprint) == content
    assert seconds < AT_ONCE
    assert grown < 50_000  # kilobytes


@pytest.mark.parametrize(("put", "kind", "word"), [one for one in THINGS if one[1] is FaultKind.NOT_A_FILE])
def test_in_place_of_the_founding_file_too(
    tmp_path: Path, put: Callable[[Path], None], kind: FaultKind, word: str
) -> None:
    with OpenedFolder(tmp_path) as folder:
        put(tmp_path / "library.json")
        found_there = read_regular(folder, "library.json", 4096)
    assert isinstance(found_there, NotRead)
    assert (found_there.obstacle, kind) == (Obstacle.NOT_A_FILE, FaultKind.NOT_A_FILE)
    assert word in found_there.why


@pytest.mark.parametrize(("put", "kind", "word"), THINGS)
def test_a_library_whose_founding_file_is_no_file_is_refused_at_once(
    tmp_path: Path, put: Callable[[Path], None], kind: FaultKind, word: str
) -> None:
    library = found(tmp_path / "library")
    (library.path / "library.json").unlink()
    put(library.path / "library.json")
    began = time.monotonic()
    with pytest.raises(LibraryError, match=word) as raised:
        library.library_id()
    assert time.monotonic() - began < AT_ONCE
    assert not isinstance(raised.value, LibraryUnreachable), kind


@pytest.mark.parametrize(("size", "is_read"), [(0, True), (99, True), (100, True), (101, False), (3_000_000, False)])
def test_the_limit_is_the_last_size_that_is_read(tmp_path: Path, size: int, is_read: bool) -> None:
    (tmp_path / "file").write_bytes(b"x" * size)
    with OpenedFolder(tmp_path) as folder:
        content = read_regular(folder, "file", 100)
    if is_read:
        assert content == b"x" * size
    else:
        assert content == NotRead(Obstacle.TOO_LARGE, f"it has {size:,} bytes, and at most 100 are read")


def test_a_file_that_grows_while_it_is_read_is_cut_off(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "file"
    path.write_bytes(b"x" * 100)
    asked: list[int] = []
    system_read = os.read

    def grow(handle: int, most: int) -> bytes:
        path.write_bytes(b"x" * 5000)
        asked.append(most)
        return system_read(handle, most)

    monkeypatch.setattr(os, "read", grow)
    with OpenedFolder(tmp_path) as folder:
        content = read_regular(folder, "file", 100)
    assert content == NotRead(Obstacle.TOO_LARGE, "it has 101 bytes, and at most 100 are read")
    assert asked == [101]


def test_a_link_that_comes_between_look_and_opening_is_not_followed(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "file").write_bytes(b"own")
    (tmp_path / "other").write_bytes(b"other")
    system_open = os.open

    def exchange(name: str, *arguments: object, **options: object) -> int:
        if name == "file":
            (tmp_path / "file").unlink()
            (tmp_path / "file").symlink_to("other")
        return system_open(name, *arguments, **options)  # type: ignore[arg-type]

    with OpenedFolder(tmp_path) as folder:
        monkeypatch.setattr(os, "open", exchange)
        content = read_regular(folder, "file", 100)
    assert content == NotRead(Obstacle.NOT_A_FILE, "it is a link")


def _refuse_to_read(monkeypatch: pytest.MonkeyPatch, code: int, is_one_file: bool) -> None:
    """The system answers so, for the file of 40 bytes alone or for every file."""
    system_read = os.read

    def refuse(handle: int, most: int) -> bytes:
        if is_one_file and os.fstat(handle).st_size != 40:
            return system_read(handle, most)
        raise OSError(code, os.strerror(code))

    monkeypatch.setattr(os, "read", refuse)


def test_a_bad_spot_on_the_disk_is_the_files_alone(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    library = found(tmp_path / "library")
    bad = RecordName("d" * 64, "e" * 64)
    for path in (library.path / "models" / f"{'d' * 64}.json", library.path / "records" / bad.file):
        path.write_bytes(b"x" * 40)
    _refuse_to_read(monkeypatch, errno.EIO, is_one_file=True)
    read = library.read_model("d" * 64)
    assert isinstance(read, Fault)
    assert (read.kind, read.stops) == (FaultKind.MISSING_FILE, True)
    assert [fault.kind for fault in library.read_records("d" * 64)[1]] == [FaultKind.UNREADABLE_RECORD]
    assert len(library.read_records("0" * 64)[0]) == 1


@pytest.mark.parametrize("code", [errno.EIO, errno.ESTALE, errno.EHOSTDOWN, errno.ETIMEDOUT, errno.ENOTCONN])
def test_a_share_that_goes_away_is_the_whole_librarys(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, code: int
) -> None:
    library: LibraryFolder = found(tmp_path / "library")
    fingerprint, content = model("one")
    library.put_model(fingerprint, content)
    _refuse_to_read(monkeypatch, code, is_one_file=False)
    with pytest.raises(LibraryUnreachable):
        library.read_model(fingerprint)
    with pytest.raises(LibraryUnreachable):
        library.read_records("0" * 64)
    with pytest.raises(LibraryUnreachable):
        library.library_id()
