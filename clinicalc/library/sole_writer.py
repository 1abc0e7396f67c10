"""One process at a time: a lock on a small file of this machine, for what is read, changed and written back."""

import os
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from clinicalc.replacement import hold_alone

LONGEST_WAIT = 5.0
"""Seconds; what is done under the lock takes milliseconds."""
_PAUSE = 0.01


@contextmanager
def sole_writer(path: Path) -> Iterator[None]:
    """Holds the lock named by `path` (the file stays, empty). Raises OSError where it cannot be had within seconds.

    The system frees it when a process ends in whatever way. Only for files on this machine, never inside a library:
    locks on shares are not to be relied on.
    """
    handle = os.open(path, os.O_RDWR | os.O_CREAT, 0o600)
    try:
        _wait_for(handle, path)
        yield
    finally:
        os.close(handle)  # this frees the lock


def _wait_for(handle: int, path: Path) -> None:
    end = time.monotonic() + LONGEST_WAIT
    while not hold_alone(handle):
        if time.monotonic() > end:
            raise TimeoutError(f"another window or command has held {path.name} for {LONGEST_WAIT:g} seconds")
        time.sleep(_PAUSE)
