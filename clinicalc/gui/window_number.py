"""Which window of this program this is, among those open on the machine, so that two patients are told apart."""

import os
from pathlib import Path

from PySide6.QtCore import QLockFile

_MOST = 99


class WindowNumber:
    """Holds the lowest free number, 1 upwards, until it is let go or the process ends.

    A number is taken by a lock file that names process, program and machine, and nothing about a patient. Where none
    can be made the number is 1, because a window must open all the same.
    """

    def __init__(self, folder: Path | None = None) -> None:
        self._lock: QLockFile | None = None
        self.number = 1
        place = _own_place() if folder is None else folder
        for number in range(1, _MOST + 1):
            lock = QLockFile(str(place / f"clinicalc-{_user()}-window-{number}.lock"))
            lock.setStaleLockTime(0)  # held as long as its process lives, however long that is
            if lock.tryLock(0):
                self._lock, self.number = lock, number
                return
            if lock.error() is not QLockFile.LockError.LockFailedError:
                return

    def let_go(self) -> None:
        """Free the number; its file goes."""
        if self._lock is not None:
            self._lock.unlock()
            self._lock = None


def _own_place() -> Path:
    """Where the system keeps what lives no longer than a session."""
    runtime = os.environ.get("XDG_RUNTIME_DIR", "")
    if os.path.isabs(runtime) and os.path.isdir(runtime):
        return Path(runtime)
    import tempfile  # here and below: most starts need neither

    return Path(tempfile.gettempdir())


def _user() -> str:
    """A name that differs from user to user: in a folder of all users each counts their own windows."""
    if hasattr(os, "getuid"):
        return str(os.getuid())
    import getpass

    return getpass.getuser()
