"""Putting a file in place whole or not at all, and holding one alone: how this program writes a file that matters."""

import errno
import os
import sys
from collections.abc import Callable
from contextlib import suppress
from pathlib import Path

OWNER_ONLY = 0o600
READABLE = 0o644
_FAR = 1 << 40
"""The byte that is locked where bytes are, far behind all that is read or written."""


def replace_file(path: Path, content: bytes, mode: int = OWNER_ONLY) -> None:
    """Write `content` beside `path`, bring it to the disk, and only then give it the name.

    Whatever happens in between, `path` holds the old content or the new and nothing half-written is left. Raises
    OSError, and ValueError for a name that no file can have.
    """
    _put_in_place(path, content, mode, os.replace)


def create_file(path: Path, content: bytes, mode: int = OWNER_ONLY) -> None:
    """The same for a name that is still free: what stands there already is never replaced.

    Raises FileExistsError where the name is taken, otherwise as `replace_file`.
    """
    _put_in_place(path, content, mode, give_free_name)


def give_free_name(temporary: str | Path, path: Path) -> None:
    """Give a file beside `path` that name, which must be free. Raises FileExistsError where it is not, and OSError."""
    if os.path.lexists(path):
        raise FileExistsError(errno.EEXIST, os.strerror(errno.EEXIST), str(path))
    try:
        os.link(temporary, path)  # unlike a renaming on POSIX it refuses a name taken in the meantime
    except FileExistsError:
        raise
    except OSError:  # a disk without links
        os.rename(temporary, path)
    else:
        os.unlink(temporary)


def hold_alone(handle: int) -> bool:
    """Whether this process alone now holds an open file; the system frees it when the handle is closed in whatever way.

    Raises OSError where the disk knows no locks.
    """
    try:
        if sys.platform == "win32":
            import msvcrt

            os.lseek(handle, _FAR, os.SEEK_SET)
            try:
                msvcrt.locking(handle, msvcrt.LK_NBLCK, 1)
            finally:
                os.lseek(handle, 0, os.SEEK_SET)
        else:
            import fcntl

            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError as error:
        if error.errno in (errno.EACCES, errno.EAGAIN, errno.EDEADLK):
            return False
        raise
    return True


def _put_in_place(path: Path, content: bytes, mode: int, name_it: Callable[[str, Path], None]) -> None:
    import tempfile  # costs every start, and most starts write nothing

    handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name[:40]}-", suffix=".part")
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(content)
            stream.flush()
            os.fsync(stream.fileno())
        Path(temporary).chmod(mode)
        name_it(temporary, path)
    except BaseException:
        with suppress(OSError):
            os.unlink(temporary)
        raise
