"""What dead writers left goes when somebody sits down to write a day later; whatever else lies there stays."""

import os
import time
from pathlib import Path

import pytest

from clinicalc.library.leftovers import OLD, remove_leftovers
from clinicalc.library.placing import is_part
from clinicalc.library.writing import sit_down
from tests.library.machines import look, machine_for, make_shelf
from tests.library.shelf import comment, everything_in, found, is_whole, model

PART = ".clinicalc-0123456789abcdef01234567.part"
PARTS = ("", "models", "records")


def age(path: Path, seconds: float, of: Path | None = None) -> None:
    """The file was last changed so long before the last change in its folder."""
    changed = (of or path.parent).stat().st_mtime
    os.utime(path, (changed - seconds, changed - seconds), follow_symlinks=False)


@pytest.fixture
def library(tmp_path: Path) -> Path:
    """A library with a model."""
    made = found(tmp_path / "library")
    made.put_model(*model("one"))
    made.put_record(comment(model("one")[0], "A remark."))
    return made.path


@pytest.mark.parametrize("part", PARTS)
def test_what_is_older_than_a_day_goes(library: Path, part: str) -> None:
    before = everything_in(library)
    left = library / part / PART
    left.write_bytes(b"half a rec")
    age(left, OLD + 60)
    assert remove_leftovers(library) == 1
    assert everything_in(library) == before


@pytest.mark.parametrize("part", PARTS)
def test_what_may_still_be_in_the_making_stays(library: Path, part: str) -> None:
    left = library / part / PART
    left.write_bytes(b"half a rec")
    age(left, OLD - 60)
    assert remove_leftovers(library) == 0
    assert left.exists()


def test_a_clock_of_this_machine_that_is_years_ahead_takes_nothing(
    library: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (library / "records" / PART).write_bytes(b"half a rec")
    ahead = time.time() + 10 * 365 * OLD
    monkeypatch.setattr(time, "time", lambda: ahead)
    assert remove_leftovers(library) == 0


@pytest.mark.parametrize(
    "name",
    [".clinicalc-0123.part", ".clinicalc-0123456789ABCDEF01234567.part", f"{PART}.json", "notes.part", f"x{PART}"],
)
def test_another_name_stays(library: Path, name: str) -> None:
    other = library / "records" / name
    other.write_bytes(b"somebody's")
    age(other, 10 * OLD)
    assert remove_leftovers(library) == 0
    assert other.exists()


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="this system has no pipes with names")
@pytest.mark.parametrize("kind", ["link", "folder", "pipe"])
def test_what_is_no_file_stays_and_no_link_is_followed(library: Path, tmp_path: Path, kind: str) -> None:
    left, target = library / "records" / PART, tmp_path / "target"
    target.write_bytes(b"somebody's")
    if kind == "link":
        left.symlink_to(target)
    elif kind == "folder":
        left.mkdir()
    else:
        os.mkfifo(left)
    age(left, 10 * OLD)
    os.utime(target, (0, 0))
    assert remove_leftovers(library) == 0
    assert os.path.lexists(left)
    assert target.read_bytes() == b"somebody's"


@pytest.mark.skipif(not hasattr(os, "symlink"), reason="this system has no links")
def test_a_part_of_the_library_that_is_a_link_is_not_entered(library: Path, tmp_path: Path) -> None:
    elsewhere = tmp_path / "elsewhere"
    (library / "records").rename(elsewhere)
    (library / "records").symlink_to(elsewhere)
    (elsewhere / PART).write_bytes(b"half a rec")
    age(elsewhere / PART, 10 * OLD)
    assert remove_leftovers(library) == 0
    assert (elsewhere / PART).exists()


def test_no_folder_there_is_no_matter(tmp_path: Path) -> None:
    assert remove_leftovers(tmp_path / "nothing") == 0


def test_whoever_sits_down_to_write_takes_them_away(tmp_path: Path) -> None:
    shelf = make_shelf(tmp_path / "library")
    machine = machine_for(shelf, tmp_path / "machine")
    left = [shelf.place / part / PART for part in PARTS]
    for path in left:
        path.write_bytes(b"half a rec")
        assert is_part(path.name)
        age(path, OLD + 60)
    opened = look(machine)
    assert all(path.exists() for path in left)  # who only reads changes nothing
    desk = sit_down(opened)
    assert not any(path.exists() for path in left)
    assert is_whole(desk.folder)
