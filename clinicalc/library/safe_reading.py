"""Reading a file that anybody may have put there: a regular file of bounded size, no link, read at most once.

Nothing is waited for (a pipe, a device), and no more is read than the limit and one byte.
"""

import errno
import os
import stat
from dataclasses import dataclass
from enum import Enum

from clinicalc.library.opened_folder import OpenedFolder

_OF_THE_FILE = {errno.EACCES, errno.EPERM, errno.EIO, errno.EAGAIN, errno.EBUSY, errno.ETXTBSY, errno.EDEADLK}
"""Refusals that may concern this one file; all others are the folder's or the machine's."""
_LINKS = {errno.ELOOP, getattr(errno, "EMLINK", errno.ELOOP), getattr(errno, "EFTYPE", errno.ELOOP)}
_CHUNK = 1 << 20


class Obstacle(Enum):
    """Why a file was not read."""

    MISSING = "missing"
    NOT_A_FILE = "not_a_file"
    TOO_LARGE = "too_large"
    UNREADABLE = "unreadable"


@dataclass(frozen=True, slots=True)
class NotRead:
    """A file that was not read; `why` is a clause that begins with a small letter and has no full stop."""

    obstacle: Obstacle
    why: str


def read_regular(folder: OpenedFolder, name: str, limit: int) -> bytes | NotRead:
    """The bytes of the file `name`, at most `limit` of them, or why it was not read.

    Raises OSError where the folder as a whole seems to be out of reach.
    """
    try:
        seen = folder.look_at(name)  # before opening: to open a device may already do something
        if not stat.S_ISREG(seen.st_mode):
            return NotRead(Obstacle.NOT_A_FILE, f"it is {name_kind(seen.st_mode)}")
        handle = folder.open_file(name)
    except FileNotFoundError:
        return NotRead(Obstacle.MISSING, "there is no such file")
    except OSError as fault:
        if fault.errno in _LINKS:
            return NotRead(Obstacle.NOT_A_FILE, "it is a link")
        return _not_read(fault)
    try:
        return _read_opened(handle, limit)
    except OSError as fault:
        return _not_read(fault)
    finally:
        os.close(handle)


def name_kind(mode: int) -> str:
    """What a mode of stat stands for, with its article."""
    kinds = {
        stat.S_IFREG: "a file",
        stat.S_IFLNK: "a link",
        stat.S_IFDIR: "a folder",
        stat.S_IFCHR: "a device",
        stat.S_IFBLK: "a device",
        stat.S_IFIFO: "a pipe (FIFO)",
        stat.S_IFSOCK: "a socket",
    }
    return kinds.get(stat.S_IFMT(mode), "something else than a regular file")


def _read_opened(handle: int, limit: int) -> bytes | NotRead:
    seen = os.fstat(handle)
    if not stat.S_ISREG(seen.st_mode):
        return NotRead(Obstacle.NOT_A_FILE, f"it is {name_kind(seen.st_mode)}")
    parts: list[bytes] = []
    room = limit + 1 if seen.st_size <= limit else 0
    while room and (part := os.read(handle, min(room, _CHUNK))):
        parts.append(part)
        room -= len(part)
    if not room:
        size = f"{max(seen.st_size, limit + 1):,}"
        return NotRead(Obstacle.TOO_LARGE, f"it has {size} bytes, and at most {limit:,} are read")
    return b"".join(parts)


def _not_read(fault: OSError) -> NotRead:
    if fault.errno not in _OF_THE_FILE:
        raise fault
    if fault.errno in (errno.EACCES, errno.EPERM):
        return NotRead(Obstacle.UNREADABLE, "it may not be read by you, or another program keeps it to itself")
    return NotRead(Obstacle.UNREADABLE, f"it could not be read ({fault.strerror or 'no reason was given'})")
