"""A process with disks of its own on which only so many files or bytes go: imports that break off everywhere.

    unshare -rm python -m tests.library.small_disks FOLDER

The disks end with the process. Writes one JSON object: how many imports were done and how many broke off, the
sentences, and what had changed all the same.
"""

import json
import shutil
import subprocess
import sys
from dataclasses import asdict, dataclass, field
from pathlib import Path

from clinicalc.errors import LibraryError
from clinicalc.library.bundle import bundle_of
from clinicalc.library.carrying import import_bundle
from clinicalc.library.folder import LibraryFolder
from tests.library.machines import NOW, make_shelf
from tests.library.shelf import everything_in


@dataclass(slots=True)
class Told:
    """What the process found."""

    done: int = 0
    broken_off: dict[str, int] = field(default_factory=lambda: {"new": 0, "older": 0})
    said: list[str] = field(default_factory=list)
    changed: list[str] = field(default_factory=list)


def carry_everywhere(folder: Path) -> Told:
    """Import into a new place and into an older copy, on disks that take ever more."""
    shelf = make_shelf(folder / "library")
    older = folder / "older"
    shutil.copytree(shelf.place, older)
    for said in (shelf.practice.remark, shelf.practice.withdraw):
        LibraryFolder(shelf.place).put_record(said())
    bundle = bundle_of(LibraryFolder(shelf.place))
    whole = everything_in(shelf.place)
    disk = folder / "disk"
    disk.mkdir()
    told = Told()
    for room in (*(f"nr_inodes={files}" for files in range(2, 20)), *(f"size={pages * 4}k" for pages in range(2, 40))):
        for start in (None, older):
            subprocess.run(["mount", "-t", "tmpfs", "-o", room, "tmpfs", str(disk)], check=True)
            place = disk / "place"
            try:
                if start is not None:
                    shutil.copytree(start, place)
            except (OSError, shutil.Error):
                subprocess.run(["umount", str(disk)], check=True)
                continue
            before = everything_in(disk)
            try:
                import_bundle(bundle, place, None, NOW)
                told.done += 1
                expected = {"place": None, **{f"place/{name}": content for name, content in whole.items()}}
            except LibraryError as refused:
                told.said.append(str(refused))
                told.broken_off["new" if start is None else "older"] += 1
                expected = before
            after = everything_in(disk)
            told.changed += [f"{room}: {name}" for name in after.keys() ^ expected.keys()]
            told.changed += [f"{room}: {name}" for name in after if after[name] != expected.get(name)]
            subprocess.run(["umount", str(disk)], check=True)
    return told


if __name__ == "__main__":
    sys.stdout.write(json.dumps(asdict(carry_everywhere(Path(sys.argv[1])))))
