"""A file is put in place whole or not at all."""

import os
import stat
from pathlib import Path

import pytest

from clinicalc.replacement import OWNER_ONLY, READABLE, create_file, hold_alone, replace_file


@pytest.mark.parametrize("mode", [OWNER_ONLY, READABLE])
def test_the_content_takes_the_name_with_its_rights(tmp_path: Path, mode: int) -> None:
    path = tmp_path / "file"
    path.write_bytes(b"old")
    replace_file(path, b"new", mode)
    assert path.read_bytes() == b"new"
    assert stat.S_IMODE(path.stat().st_mode) == mode
    assert list(tmp_path.iterdir()) == [path]


@pytest.mark.parametrize("fault", [OSError("no room"), KeyboardInterrupt()])
@pytest.mark.parametrize("step", ["fsync", "replace"])
def test_stopped_on_the_way_it_leaves_the_old_content_and_nothing_else(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str, fault: BaseException
) -> None:
    def stop(*_: object) -> None:
        raise fault

    path = tmp_path / "file"
    path.write_bytes(b"old")
    monkeypatch.setattr(os, step, stop)
    with pytest.raises(type(fault)):
        replace_file(path, b"new")
    assert path.read_bytes() == b"old"
    assert list(tmp_path.iterdir()) == [path]


@pytest.mark.parametrize("mode", [OWNER_ONLY, READABLE])
def test_a_new_file_takes_its_name_with_its_rights(tmp_path: Path, mode: int) -> None:
    path = tmp_path / "file"
    create_file(path, b"new", mode)
    assert path.read_bytes() == b"new"
    assert stat.S_IMODE(path.stat().st_mode) == mode
    assert (list(tmp_path.iterdir()), path.stat().st_nlink) == ([path], 1)


def test_a_new_file_never_takes_a_name_that_is_taken(tmp_path: Path) -> None:
    (tmp_path / "file").write_bytes(b"old")
    (tmp_path / "link").symlink_to(tmp_path / "nowhere")
    (tmp_path / "folder").mkdir()
    for name in ("file", "link", "folder"):
        with pytest.raises(FileExistsError):
            create_file(tmp_path / name, b"new")
    assert (tmp_path / "file").read_bytes() == b"old"
    assert {path.name for path in tmp_path.iterdir()} == {"file", "link", "folder"}


def test_a_new_file_never_takes_a_name_that_was_taken_meanwhile(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = tmp_path / "file"
    give = os.link

    def overtaken(source: str, target: Path) -> None:
        path.write_bytes(b"first")
        give(source, target)

    monkeypatch.setattr(os, "link", overtaken)
    with pytest.raises(FileExistsError):
        create_file(path, b"new")
    assert path.read_bytes() == b"first"
    assert list(tmp_path.iterdir()) == [path]


def test_a_disk_without_links_takes_a_new_file_too(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object) -> None:
        raise PermissionError("no links here")

    monkeypatch.setattr(os, "link", refuse)
    create_file(tmp_path / "file", b"new")
    assert (tmp_path / "file").read_bytes() == b"new"
    assert list(tmp_path.iterdir()) == [tmp_path / "file"]
    with pytest.raises(FileExistsError):
        create_file(tmp_path / "file", b"newer")


@pytest.mark.parametrize("step", ["fsync", "link"])
def test_a_new_file_stopped_on_the_way_leaves_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str
) -> None:
    def stop(*_: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(os, step, stop)
    with pytest.raises(KeyboardInterrupt):
        create_file(tmp_path / "file", b"new")
    assert list(tmp_path.iterdir()) == []


def test_an_open_file_is_held_by_one_alone_until_it_is_closed(tmp_path: Path) -> None:
    with (tmp_path / "file").open("wb") as first, (tmp_path / "file").open("r+b") as second:
        assert hold_alone(first.fileno())
        assert not hold_alone(second.fileno())
        first.close()
        assert hold_alone(second.fileno())
