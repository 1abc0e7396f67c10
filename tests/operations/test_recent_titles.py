"""Titles of the files opened lately, whatever has become of them."""

import os
from pathlib import Path

import pytest

from clinicalc.operations.recent_titles import RecentFile, name_recent_files
from clinicalc.resources import read_shipped

LIPIDS = read_shipped("example_models/general-cvd-2008-lipids.json")


def test_files_are_known_by_title_and_version(tmp_path: Path) -> None:
    path = tmp_path / "a.json"
    path.write_bytes(LIPIDS)
    # title and version as the shipped file states them
    named = RecentFile(path, "General cardiovascular disease, lipid form, 1.1.0")
    assert name_recent_files([str(path)]) == (named,)


def test_two_of_one_title_are_told_apart(tmp_path: Path) -> None:
    paths = [tmp_path / "a.json", tmp_path / "b.json"]
    for path in paths:
        path.write_bytes(LIPIDS)
    titles = [file.title for file in name_recent_files([str(path) for path in paths])]
    assert [title.rpartition(" ")[2] for title in titles] == ["(a.json)", "(b.json)"]


@pytest.mark.parametrize(
    "content",
    [b"", b"\xff\xfe", b"[]", b"{}", b'{"model": []}', b'{"model": {"title": 5, "version": "1"}}', b"[" * 100_000],
    ids=["empty", "no text", "a list", "nothing", "no model", "no title", "brackets"],
)
def test_damaged_files_go_by_their_file_name(tmp_path: Path, content: bytes) -> None:
    path = tmp_path / "damaged.json"
    path.write_bytes(content)
    assert name_recent_files([str(path)]) == (RecentFile(path, "damaged.json"),)


def test_missing_file_and_folder_go_by_their_name(tmp_path: Path) -> None:
    gone = tmp_path / "gone.json"
    assert [file.title for file in name_recent_files([str(gone), str(tmp_path)])] == ["gone.json", tmp_path.name]


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="no pipes on this system")
def test_a_pipe_is_not_waited_for(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe.json"
    os.mkfifo(pipe)
    assert name_recent_files([str(pipe)])[0].title == "pipe.json"
