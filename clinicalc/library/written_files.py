"""Files that somebody asks for beside the library: an exported library, a history; whole, or not at all."""

import os
from pathlib import Path

from clinicalc.errors import FileNotWritten
from clinicalc.replacement import OWNER_ONLY, create_file, replace_file


def put_file(path: Path, content: bytes, what: str, *, may_replace: bool, mode: int = OWNER_ONLY) -> None:
    """Put `content` at `path`; `what` says what it is ("the history"), `mode` who may read it.

    Raises FileNotWritten where a file is there already and may not be replaced, or where it cannot be written.
    """
    if not may_replace:
        require_free(path)
    try:
        (replace_file if may_replace else create_file)(path, content, mode)
    except FileExistsError:  # it came meanwhile
        raise _taken(path) from None
    except (OSError, ValueError) as fault:
        why = getattr(fault, "strerror", None) or "its name cannot be a file name"
        raise FileNotWritten(
            f"{what} could not be written.",
            where=str(path),
            why=f"The computer says: {why}.",
            do="Choose another folder, or make room on this one. Nothing was left behind.",
        ) from None


def require_free(path: Path) -> None:
    """Nothing where no file is at `path` yet. Raises FileNotWritten."""
    if os.path.lexists(path):
        raise _taken(path)


def _taken(path: Path) -> FileNotWritten:
    return FileNotWritten(
        "there is a file with this name already; it was left as it is.",
        where=str(path),
        do="Choose another name, or give --replace.",
    )
