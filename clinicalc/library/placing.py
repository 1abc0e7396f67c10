"""Placing a file whose name is its content: whole or not at all, and never over another.

Two writers of one name write the same bytes, so no lock is needed: whoever comes second finds the work done.
"""

import errno
import os
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from enum import Enum

from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.safe_reading import NotRead, read_regular

PART_PREFIX, PART_SUFFIX = ".clinicalc-", ".part"
"""How the name of a file begins and ends that is still being written, or was when its writer died."""
_NO_LINKS_HERE = {errno.EPERM, errno.ENOTSUP, errno.EOPNOTSUPP, errno.ENOSYS, errno.EMLINK, errno.EINVAL}


class Placed(Enum):
    """What became of a file that was to be placed."""

    NEW = "new"
    THERE_ALREADY = "there_already"
    NAME_TAKEN = "name_taken"
    UNCONFIRMED = "unconfirmed"


def place_file(folder: OpenedFolder, name: str, content: bytes) -> Placed:
    """Bring `content` to the disk under a passing name, then give it its own, if that is still free.

    NAME_TAKEN where something else than these bytes has the name; it is left as it is. UNCONFIRMED where the file is
    there, whole, and the disk did not say that its name would outlast a power failure. Raises OSError; the folder is
    then as it was.
    """
    taken = _look_for(folder, name, content)
    if taken is not None:
        return taken
    with _written(folder, content) as part:
        try:
            _name_it(folder, part, name)
        except FileExistsError:
            return _look_for(folder, name, content) or Placed.NAME_TAKEN
    return _confirmed(folder, Placed.NEW)


def is_part(name: str) -> bool:
    """Whether a name is that of a file which is being written."""
    return name.startswith(PART_PREFIX) and name.endswith(PART_SUFFIX)


def _look_for(folder: OpenedFolder, name: str, content: bytes) -> Placed | None:
    """Whether the name is taken, and by these bytes; None where it is free."""
    try:
        folder.look_at(name)
    except FileNotFoundError:
        return None
    found = read_regular(folder, name, len(content))
    if isinstance(found, NotRead) or found != content:
        return Placed.NAME_TAKEN
    return _confirmed(folder, Placed.THERE_ALREADY)  # its writer may have died before he could


def _confirmed(folder: OpenedFolder, placed: Placed) -> Placed:
    try:
        folder.bring_to_disk()
    except OSError:
        return Placed.UNCONFIRMED
    return placed


@contextmanager
def _written(folder: OpenedFolder, content: bytes) -> Iterator[str]:
    """The name of a new file that holds `content` on the disk; that name is gone afterwards."""
    part = f"{PART_PREFIX}{os.urandom(12).hex()}{PART_SUFFIX}"
    handle = folder.open_file(part, os.O_WRONLY | os.O_CREAT | os.O_EXCL)
    try:
        try:
            rest = memoryview(content)
            while rest:
                rest = rest[os.write(handle, rest) :]
            folder.let_read(handle)
            _bring_to_disk(handle)
        finally:
            os.close(handle)
        yield part
    finally:
        with suppress(OSError):
            folder.remove(part)


def _name_it(folder: OpenedFolder, part: str, name: str) -> None:
    """Raises FileExistsError where the name is taken.

    Some file systems know no second names (FAT, many shares). There a file is renamed, which off Windows takes the
    place of one that came between the look and now; that one was meant to hold the same bytes.
    """
    if os.name != "nt":
        try:
            folder.link(part, name)
            return
        except OSError as fault:
            if fault.errno not in _NO_LINKS_HERE:
                raise
    folder.rename(part, name)


def _bring_to_disk(handle: int) -> None:
    """As far as the system can: on a Mac, fsync alone stops at the drive's own memory."""
    try:
        from fcntl import F_FULLFSYNC, fcntl  # type: ignore[attr-defined, unused-ignore]
    except ImportError:
        os.fsync(handle)
        return
    try:
        fcntl(handle, F_FULLFSYNC)
    except OSError:
        os.fsync(handle)
