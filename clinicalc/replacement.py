"""Putting a file in place whole or not at all: the one way in which this program writes a file that matters."""

import errno
import os
from collections.abc import Callable
from contextlib import suppress
from pathlib import Path

OWNER_ONLY = 0o600
READABLE = 0o644


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
    _put_in_place(path, content, mode, _give_free_name)


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


def _give_free_name(temporary: str, path: Path) -> None:
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
