"""A print is saved whole or not at all."""

import os
import stat
from pathlib import Path

import pytest

from clinicalc.errors import FileNotWritten, PrintRefused
from clinicalc.report import save_report
from tests.report.printing import PRINTED, printed, with_band


def test_the_saved_file_is_the_print(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(b"an older file")
    save_report(path, with_band("Ottilie Fenn"), practice="Tarnwick Northgate", printed_at=PRINTED)
    assert path.read_bytes() == printed(with_band("Ottilie Fenn"))
    assert [entry.name for entry in tmp_path.iterdir()] == ["print.pdf"]


def test_a_place_that_does_not_exist_is_answered_in_words(tmp_path: Path) -> None:
    path = tmp_path / "absent" / "print.pdf"
    with pytest.raises(FileNotWritten) as refused:
        save_report(path, with_band())
    assert str(path) in str(refused.value)
    assert list(tmp_path.iterdir()) == []


def test_a_folder_in_the_place_of_the_file_stays_and_nothing_is_left(tmp_path: Path) -> None:
    folder = tmp_path / "print.pdf"
    folder.mkdir()
    with pytest.raises(FileNotWritten):
        save_report(folder, with_band())
    assert [entry.name for entry in tmp_path.iterdir()] == ["print.pdf"]
    assert list(folder.iterdir()) == []


def test_a_file_in_the_place_of_the_folder_is_answered_in_words(tmp_path: Path) -> None:
    (tmp_path / "file").write_bytes(b"")
    with pytest.raises(FileNotWritten):
        save_report(tmp_path / "file" / "print.pdf", with_band())


@pytest.mark.parametrize("name", ["a" * 300 + ".pdf", "nul\x00l.pdf"])
def test_a_name_that_the_system_does_not_take_is_answered_in_words(tmp_path: Path, name: str) -> None:
    with pytest.raises(FileNotWritten):
        save_report(tmp_path / name, with_band())
    assert list(tmp_path.iterdir()) == []


@pytest.mark.skipif(os.name != "posix" or os.geteuid() == 0, reason="the folder's rights do not bind this user")
def test_a_read_only_folder_is_answered_in_words(tmp_path: Path) -> None:
    tmp_path.chmod(stat.S_IRUSR | stat.S_IXUSR)
    try:
        with pytest.raises(FileNotWritten):
            save_report(tmp_path / "print.pdf", with_band())
        assert list(tmp_path.iterdir()) == []
    finally:
        tmp_path.chmod(stat.S_IRWXU)


def test_a_refused_print_leaves_the_older_file(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(b"an older file")
    with pytest.raises(PrintRefused):
        save_report(path, with_band("\u4e2d"))
    assert path.read_bytes() == b"an older file"
    assert len(list(tmp_path.iterdir())) == 1
