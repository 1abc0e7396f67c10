"""What writers left behind that died while they wrote: files under a passing name, which nothing ever reads.

Whoever sits down to write takes them away. Another's may be in the making at this moment, so only those go that are a
day older than the last change in their folder, both by the clock of the disk: a machine's own may be years ahead.
"""

import re
import stat
from contextlib import suppress
from pathlib import Path

from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.places import MODELS, RECORDS
from clinicalc.library.placing import PART_PREFIX, PART_SUFFIX

OLD = 24 * 60 * 60
"""Seconds. A file is written in less than one."""
_PASSING = re.compile(f"{re.escape(PART_PREFIX)}[0-9a-f]{{24}}{re.escape(PART_SUFFIX)}")


def remove_leftovers(library: Path) -> int:
    """How many were taken away from a library's folder; never raises.

    Only regular files whose names are exactly of the kind that `placing` gives, and no link is followed. Where they
    cannot be removed they stay: they are in nobody's way.
    """
    removed = 0
    with suppress(OSError), OpenedFolder(library) as root:
        removed += _sweep(root)
        for name in (MODELS, RECORDS):
            with suppress(OSError), root.open_part(name) as part:
                removed += _sweep(part)
    return removed


def _sweep(folder: OpenedFolder) -> int:
    with folder.entries() as entries:
        passing = [entry.name for entry in entries if _PASSING.fullmatch(entry.name)]
    if not passing:
        return 0
    changed = folder.look_at(".").st_mtime
    removed = 0
    for name in passing:
        with suppress(OSError):
            seen = folder.look_at(name)
            if stat.S_ISREG(seen.st_mode) and seen.st_mtime < changed - OLD:
                folder.remove(name)
                removed += 1
    return removed
