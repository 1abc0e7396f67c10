"""Putting a file in place whole or not at all: the one way in which this program writes a file that matters."""

import os
from contextlib import suppress
from pathlib import Path

OWNER_ONLY = 0o600
READABLE = 0o644


def replace_file(path: Path, content: bytes, mode: int = OWNER_ONLY) -> None:
    """Write `content` beside `path`, bring it to the disk, and only then give it the name.

    Whatever happens in between, `path` holds the old content or the new and nothing half-written is left. Raises
    OSError, and ValueError for a name that no file can have.
    """
    import tempfile  # costs every start, and most starts write nothing

    handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name[:40]}-", suffix=".part")
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(content)
            stream.flush()
            os.fsync(stream.fileno())
        Path(temporary).chmod(mode)
        os.replace(temporary, path)
    except BaseException:
        with suppress(OSError):
            os.unlink(temporary)
        raise
