"""A file is placed whole or not at all, never over another; where it cannot be, one sentence says why."""

import errno
import os
import stat
from collections.abc import Callable
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.placing import Placed, is_part, place_file
from tests.library.shelf import comment, everything_in, found, is_whole, model

STEPS = ("write", "fsync", "link")


def _refuse(code: int) -> Callable[..., None]:
    def refuse(*_: object, **__: object) -> None:
        raise OSError(code, os.strerror(code))

    return refuse


def test_a_new_name_is_taken_once(tmp_path: Path) -> None:
    with OpenedFolder(tmp_path) as folder:
        assert place_file(folder, "a", b"one") is Placed.NEW
        assert place_file(folder, "a", b"one") is Placed.THERE_ALREADY
        assert place_file(folder, "a", b"two") is Placed.NAME_TAKEN
        assert place_file(folder, "empty", b"") is Placed.NEW
        assert place_file(folder, "large", b"x" * 4_000_000) is Placed.NEW
    assert everything_in(tmp_path) == {"a": b"one", "empty": b"", "large": b"x" * 4_000_000}


@pytest.mark.parametrize(("of_folder", "of_file"), [(0o2775, 0o644), (0o750, 0o640), (0o700, 0o600), (0o1777, 0o644)])
def test_whoever_may_read_the_folder_may_read_the_file(tmp_path: Path, of_folder: int, of_file: int) -> None:
    """Whatever this person's habit (umask) is: colleagues must be able to read what was put there."""
    tmp_path.chmod(of_folder)
    before = os.umask(0o077)
    try:
        with OpenedFolder(tmp_path) as folder:
            place_file(folder, "a", b"one")
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "a").stat().st_mode) == of_file


@pytest.mark.parametrize("kind", ["link", "link to the same bytes", "pipe", "folder"])
def test_whatever_has_the_name_is_left_as_it_is(tmp_path: Path, kind: str) -> None:
    (tmp_path / "target").write_bytes(b"one" if kind == "link to the same bytes" else b"target")
    if kind.startswith("link"):
        (tmp_path / "a").symlink_to("target")
    elif kind == "pipe":
        os.mkfifo(tmp_path / "a")
    else:
        (tmp_path / "a").mkdir()
    before = everything_in(tmp_path)
    with OpenedFolder(tmp_path) as folder:
        assert place_file(folder, "a", b"one") is Placed.NAME_TAKEN
    assert everything_in(tmp_path) == before


@pytest.mark.parametrize(("other", "placed"), [(b"one", Placed.THERE_ALREADY), (b"two", Placed.NAME_TAKEN)])
def test_another_writer_may_come_first_at_the_last_moment(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, other: bytes, placed: Placed
) -> None:
    system_link = os.link

    def come_first(old: str, new: str, *, src_dir_fd: int, dst_dir_fd: int) -> None:
        (tmp_path / "a").write_bytes(other)
        system_link(old, new, src_dir_fd=src_dir_fd, dst_dir_fd=dst_dir_fd)

    monkeypatch.setattr(os, "link", come_first)
    with OpenedFolder(tmp_path) as folder:
        assert place_file(folder, "a", b"one") is placed
    assert everything_in(tmp_path) == {"a": other}


@pytest.mark.parametrize("code", [errno.EPERM, errno.EOPNOTSUPP, errno.ENOSYS])
def test_where_there_are_no_second_names_the_file_is_renamed(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, code: int
) -> None:
    """As FAT, exFAT and many shares answer."""
    monkeypatch.setattr(os, "link", _refuse(code))
    with OpenedFolder(tmp_path) as folder:
        assert place_file(folder, "a", b"one") is Placed.NEW
        assert place_file(folder, "a", b"one") is Placed.THERE_ALREADY
        assert place_file(folder, "a", b"two") is Placed.NAME_TAKEN
    assert everything_in(tmp_path) == {"a": b"one"}


def test_the_system_may_write_a_little_at_a_time(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    system_write = os.write
    monkeypatch.setattr(os, "write", lambda handle, content: system_write(handle, content[:7]))
    with OpenedFolder(tmp_path) as folder:
        place_file(folder, "a", bytes(range(100)))
    assert (tmp_path / "a").read_bytes() == bytes(range(100))


@pytest.mark.parametrize("step", STEPS)
@pytest.mark.parametrize(
    ("code", "says"),
    [
        (errno.ENOSPC, "no room left on the disk"),
        (errno.EDQUOT, "used up"),
        (errno.EROFS, "read only"),
        (errno.EIO, "could not be read or written"),
        (errno.ESTALE, "does not answer"),
        (errno.ENOTCONN, "does not answer"),
        (errno.EACCES, "may not do this there"),
        (errno.EMLINK + 1000, "refused it"),
    ],
)
def test_a_refusal_on_the_way_changes_nothing_and_is_said(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str, code: int, says: str
) -> None:
    library = found(tmp_path / "library")
    before = everything_in(tmp_path)
    fingerprint, content = model("one")
    with monkeypatch.context() as patch:
        patch.setattr(os, step, _refuse(code))
        puts: tuple[Callable[[], None], ...] = (
            lambda: library.put_model(fingerprint, content),
            lambda: library.put_record(comment(fingerprint, "A remark.")),
        )
        for put in puts:
            with pytest.raises(LibraryUnreachable, match=says) as raised:
                put()
            assert "was not written, and nothing was changed" in str(raised.value)
            assert "\n" not in str(raised.value)
            assert everything_in(tmp_path) == before
    library.put_model(fingerprint, content)
    assert is_whole(library)


def test_a_name_that_the_disk_does_not_confirm_is_said(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    library = found(tmp_path / "library")
    fingerprint, content = model("one")
    system_fsync = os.fsync

    def refuse_folders(handle: int) -> None:
        if stat.S_ISDIR(os.fstat(handle).st_mode):
            raise OSError(errno.EIO, os.strerror(errno.EIO))
        system_fsync(handle)

    with monkeypatch.context() as patch:
        patch.setattr(os, "fsync", refuse_folders)
        for _ in range(2):
            with pytest.raises(LibraryUnreachable, match="was written, but the disk did not confirm"):
                library.put_model(fingerprint, content)
    library.put_model(fingerprint, content)
    assert library.read_model(fingerprint) == content


@pytest.mark.parametrize("code", [errno.EINVAL, errno.EOPNOTSUPP])
def test_a_share_that_cannot_confirm_names_is_taken_as_it_is(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, code: int
) -> None:
    system_fsync = os.fsync

    def refuse_folders(handle: int) -> None:
        if stat.S_ISDIR(os.fstat(handle).st_mode):
            raise OSError(code, os.strerror(code))
        system_fsync(handle)

    monkeypatch.setattr(os, "fsync", refuse_folders)
    with OpenedFolder(tmp_path) as folder:
        assert place_file(folder, "a", b"one") is Placed.NEW


def test_a_library_that_is_not_there_is_said(tmp_path: Path) -> None:
    library = found(tmp_path / "library")
    (tmp_path / "library").rename(tmp_path / "elsewhere")
    with pytest.raises(LibraryUnreachable, match="is not there") as raised:
        library.put_model(*model("one"))
    assert str(tmp_path / "library") in str(raised.value)
    assert isinstance(raised.value, LibraryError)
    assert raised.value.exit_status == 6
    assert not (tmp_path / "library").exists()


def test_without_its_founding_file_nothing_is_put_into_a_folder(tmp_path: Path) -> None:
    library = found(tmp_path / "library")
    (library.path / "library.json").unlink()
    before = everything_in(tmp_path)
    with pytest.raises(LibraryError, match="removed, or the founding"):
        library.put_model(*model("one"))
    assert everything_in(tmp_path) == before


def test_passing_names_are_known_again() -> None:
    assert is_part(".clinicalc-0123.part")
    assert not is_part("clinicalc-0123.part")
    assert not is_part(".clinicalc-0123.json")
