"""Somebody without rights reads, puts and founds. Run as a process of its own; gives up being root first.

python -m tests.library.other_person FOLDER
"""

import json
import os
import sys
from collections.abc import Callable
from pathlib import Path

from clinicalc.errors import LibraryError
from clinicalc.library.folder import LibraryFolder
from tests.library.shelf import founding, model

NOBODY = 65534


def said(work: Callable[[], object]) -> str:
    """What was said where it was refused, "" where it was done."""
    try:
        work()
    except LibraryError as refused:
        return str(refused)
    return ""


def main(folder: Path) -> None:
    """Writes one JSON object: what was said to each attempt."""
    library, new = LibraryFolder(folder / "library"), model("two")
    first = founding()  # everything is imported before the rights are gone
    if os.geteuid() == 0:
        os.setgroups([])
        os.setgid(NOBODY)
        os.setuid(NOBODY)
    told = {
        "read": said(lambda: library.read_model(model("one")[0])),
        "put": said(lambda: library.put_model(*new)),
        "create": said(lambda: LibraryFolder(folder / "empty").create(first)),
    }
    sys.stdout.write(json.dumps(told))


if __name__ == "__main__":
    main(Path(sys.argv[1]))
