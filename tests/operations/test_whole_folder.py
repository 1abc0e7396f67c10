"""A folder of files is put in place whole or not at all, and what is not ours in it is never touched."""

import os
import stat
from pathlib import Path

import pytest

from clinicalc.errors import FileNotWritten
from clinicalc.operations.whole_folder import put_folder, require_folder

FILES = {"one.csv": b"1\n", "two.csv": b"2\n"}


def held(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir()}


def test_an_empty_folder_is_filled_and_keeps_its_rights(tmp_path: Path) -> None:
    folder = tmp_path / "tables"
    folder.mkdir(mode=0o750)
    put_folder(folder, FILES, "the tables")
    assert held(folder) == FILES
    assert stat.S_IMODE(folder.stat().st_mode) == 0o750
    assert list(tmp_path.iterdir()) == [folder]


def test_a_link_to_a_folder_stays_a_link(tmp_path: Path) -> None:
    folder, link = tmp_path / "tables", tmp_path / "link"
    folder.mkdir()
    link.symlink_to(folder)
    put_folder(link, FILES, "the tables")
    assert link.is_symlink()
    assert held(folder) == FILES


def test_older_files_are_replaced_only_where_that_is_asked_for(tmp_path: Path) -> None:
    folder = tmp_path / "tables"
    put_folder(folder, {"one.csv": b"old"}, "the tables")
    with pytest.raises(FileNotWritten, match="left as they are"):
        put_folder(folder, FILES, "the tables")
    assert held(folder) == {"one.csv": b"old"}
    put_folder(folder, FILES, "the tables", replace=True)
    assert held(folder) == FILES


def test_what_is_not_ours_stays(tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_bytes(b"mine")
    for replace in (False, True):
        with pytest.raises(FileNotWritten, match=r"notes\.txt"):
            put_folder(tmp_path, FILES, "the tables", replace=replace)
    assert held(tmp_path) == {"notes.txt": b"mine"}


def test_a_folder_by_the_name_of_a_file_stays(tmp_path: Path) -> None:
    (tmp_path / "tables" / "one.csv").mkdir(parents=True)
    with pytest.raises(FileNotWritten, match="holds something else"):
        put_folder(tmp_path / "tables", FILES, "the tables", replace=True)


def test_places_that_cannot_be(tmp_path: Path) -> None:
    (tmp_path / "file").write_bytes(b"")
    with pytest.raises(FileNotWritten, match="a file, and not a folder"):
        require_folder(tmp_path / "file", FILES, "the tables", replace=True)
    with pytest.raises(FileNotWritten, match="There is no folder"):
        require_folder(tmp_path / "nowhere" / "tables", FILES, "the tables", replace=False)
    with pytest.raises(FileNotWritten, match="could not be written"):
        put_folder(tmp_path / "nul\0l", FILES, "the tables")


def test_what_fails_in_the_middle_leaves_the_old_ones(tmp_path: Path) -> None:
    folder = tmp_path / "tables"
    put_folder(folder, {"one.csv": b"old"}, "the tables")
    with pytest.raises(FileNotWritten, match="The system says"):
        put_folder(folder, {"one.csv": b"new", "no/where.csv": b""}, "the tables", replace=True)
    assert held(folder) == {"one.csv": b"old"}
    assert list(tmp_path.iterdir()) == [folder]


@pytest.mark.skipif(os.geteuid() == 0, reason="nothing is forbidden to root")
def test_a_folder_that_may_not_be_written_to(tmp_path: Path) -> None:
    tmp_path.chmod(0o500)
    try:
        with pytest.raises(FileNotWritten, match="The system says: Permission denied"):
            put_folder(tmp_path / "tables", FILES, "the tables")
    finally:
        tmp_path.chmod(0o700)
