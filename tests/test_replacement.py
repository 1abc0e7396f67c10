"""A file is put in place whole or not at all."""

import os
import stat
from pathlib import Path

import pytest

from clinicalc.replacement import OWNER_ONLY, READABLE, replace_file


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
