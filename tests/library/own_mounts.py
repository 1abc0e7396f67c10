"""A process with mounts of its own: a full disk, a disk set to be read only, one folder under two paths.

    unshare -rm python -m tests.library.own_mounts full|full-of-files|read-only|two-paths FOLDER

The mounts end with the process. Writes one JSON object: what was said, and whether anything changed.
"""

import json
import subprocess
import sys
from collections.abc import Callable
from dataclasses import asdict, dataclass, field
from pathlib import Path

from clinicalc.errors import LibraryError
from clinicalc.library.folder import LibraryFolder
from tests.library.shelf import comment, everything_in, found, founding, is_whole, model
from tests.library.two_writers import write_through

FINGERPRINT, CONTENT = model("put before")
LARGE = model("x" * 50_000)


@dataclass(slots=True)
class Told:
    """What the other process found. `foundings`: for each disk tried, whether the library came to be there whole."""

    said: list[str] = field(default_factory=list)
    changed: list[str] = field(default_factory=list)
    foundings: list[bool] = field(default_factory=list)
    is_whole: bool = False


def mount(*words: str) -> None:
    """Mount something, or raise."""
    subprocess.run(["mount", *words], check=True)


def attempt(told: Told, place: Path, work: Callable[[], None]) -> bool:
    """Whether it was done; otherwise what was said, and what changed, is noted."""
    before = everything_in(place)
    try:
        work()
    except LibraryError as refused:
        told.said.append(str(refused))
        after = everything_in(place)
        told.changed += [name for name in before.keys() | after.keys() if before.get(name, "") != after.get(name, "")]
        return False
    return True


def fill_up(path: Path) -> None:
    """A file that takes all the room there is."""
    with path.open("wb", buffering=0) as stream:
        for size in (65536, 4096, 1):
            try:
                while True:
                    stream.write(b"x" * size)
            except OSError:
                continue


def try_full(folder: Path) -> Told:
    """Put a model and a record on a full disk, and again when there is room; found libraries on ever fuller disks."""
    told = Told()
    mount("-t", "tmpfs", "-o", "size=512k", "tmpfs", str(folder))
    library = found(folder / "library")
    library.put_model(FINGERPRINT, CONTENT)
    fill_up(folder / "filler")
    for put in (lambda: library.put_model(*LARGE), lambda: library.put_record(comment(FINGERPRINT, "A remark."))):
        assert not attempt(told, library.path, put)
    (folder / "filler").unlink()
    library.put_model(*LARGE)
    library.put_record(comment(FINGERPRINT, "A remark."))
    told.is_whole = is_whole(library)
    try_foundings(told, folder, [f"size={pages * 4}k" for pages in range(1, 9)])
    return told


def try_full_of_files(folder: Path) -> Told:
    """The same on disks that take only so many files."""
    told = Told(is_whole=True)
    try_foundings(told, folder, [f"nr_inodes={files}" for files in range(2, 12)])
    return told


def try_foundings(told: Told, folder: Path, disks: list[str]) -> None:
    """Found a library on each of these disks, in an empty folder of it and in a new one."""
    for disk in disks:
        for is_empty_folder in (False, True):
            mount("-t", "tmpfs", "-o", disk, "tmpfs", str(folder))
            library = LibraryFolder(folder if is_empty_folder else folder / "library")
            is_made = attempt(told, folder, lambda library=library: library.create(founding()))  # type: ignore[misc]
            told.foundings.append(is_made)
            told.is_whole &= is_whole(library) if is_made else everything_in(folder) == {}
            subprocess.run(["umount", str(folder)], check=True)


def try_read_only(folder: Path) -> Told:
    """Read, put and found where nothing may be written."""
    told = Told()
    library = found(folder / "library")
    library.put_model(FINGERPRINT, CONTENT)
    (folder / "empty").mkdir()
    mount("--bind", str(folder), str(folder))
    mount("-o", "remount,bind,ro", str(folder))
    again = LibraryFolder(library.path)
    for work in (
        lambda: again.put_model(*LARGE),
        lambda: again.put_record(comment(FINGERPRINT, "A remark.")),
        lambda: LibraryFolder(folder / "empty").create(founding()),
        lambda: LibraryFolder(folder / "new").create(founding()),
    ):
        assert not attempt(told, folder, work)
    again.put_model(FINGERPRINT, CONTENT)  # it is there, so there is nothing to write
    told.is_whole = is_whole(again) and again.read_model(FINGERPRINT) == CONTENT
    return told


def try_two_paths(folder: Path) -> Told:
    """Two processes put at once, each through a mount of its own."""
    library = found(folder / "library")
    paths = [folder / "one", folder / "other"]
    for path in paths:
        path.mkdir()
        mount("--bind", str(library.path), str(path))
    write_through(paths, folder)
    return Told(is_whole=is_whole(library))


TRIES = {
    "full": try_full,
    "full-of-files": try_full_of_files,
    "read-only": try_read_only,
    "two-paths": try_two_paths,
}

if __name__ == "__main__":
    sys.stdout.write(json.dumps(asdict(TRIES[sys.argv[1]](Path(sys.argv[2])))))
