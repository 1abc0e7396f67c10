"""A folder held open, so that nobody can put another in its place between two looks at it.

Where the platform can, every file is reached from the folder's handle and no link inside is followed. On Windows, which
has no such handles, paths are joined, and links and junctions are refused by a look before each opening.
"""

import errno
import os
import stat
import sys
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from types import TracebackType
from typing import Self

_BY_HANDLE = os.open in os.supports_dir_fd and os.scandir in os.supports_fd and hasattr(os, "O_NOFOLLOW")
_ALWAYS = getattr(os, "O_CLOEXEC", 0) | getattr(os, "O_NOINHERIT", 0) | getattr(os, "O_BINARY", 0)
_NO_LINK = getattr(os, "O_NOFOLLOW", 0) | getattr(os, "O_NONBLOCK", 0)
_FOLDER = os.O_RDONLY | getattr(os, "O_DIRECTORY", 0)
_CANNOT_SYNC_FOLDERS = {errno.EINVAL, errno.ENOTSUP, errno.EOPNOTSUPP, errno.ENOSYS, errno.EBADF}
"""What network file systems answer that know no such thing; the file itself was brought to the disk before."""


class OpenedFolder:
    """A folder to be used in a `with` statement. Every method raises OSError as the system says it."""

    __slots__ = ("_handle", "path")

    def __init__(self, path: Path) -> None:
        """Opens the folder; links on the way to it are followed, since where a library lies is for its owner to say."""
        self.path = path
        self._handle: int | None = None
        if _BY_HANDLE:
            try:
                self._handle = os.open(path, _FOLDER | _ALWAYS)
            except ValueError:  # a name that no folder can have
                raise FileNotFoundError(errno.ENOENT, "no folder can have this name", os.fspath(path)) from None
        if self._handle is None and not path.is_dir():
            raise NotADirectoryError(errno.ENOTDIR, os.strerror(errno.ENOTDIR), os.fspath(path))

    def __enter__(self) -> Self:
        return self

    def __exit__(self, kind: type[BaseException] | None, fault: BaseException | None, at: TracebackType | None) -> None:
        if self._handle is not None:
            os.close(self._handle)
            self._handle = None

    def open_part(self, name: str) -> "OpenedFolder":
        """The folder `name` inside this one. Raises NotADirectoryError for a link or whatever else is no folder."""
        if not stat.S_ISDIR(self.look_at(name).st_mode):
            raise NotADirectoryError(errno.ENOTDIR, os.strerror(errno.ENOTDIR), name)
        part = OpenedFolder.__new__(OpenedFolder)
        part.path = self.path / name
        part._handle = None
        if self._handle is not None:
            part._handle = os.open(name, _FOLDER | _ALWAYS | os.O_NOFOLLOW, dir_fd=self._handle)
        return part

    def open_file(self, name: str, flags: int = os.O_RDONLY, mode: int = 0o666) -> int:
        """A handle on the file `name`; never one behind a link, and never waiting for the other end of a pipe."""
        return os.open(self._at(name), flags | _ALWAYS | _NO_LINK, mode, dir_fd=self._handle)

    def look_at(self, name: str) -> os.stat_result:
        """What `name` is, links not followed; a Windows junction shows as a link."""
        seen = os.stat(self._at(name), dir_fd=self._handle, follow_symlinks=False)
        if sys.platform == "win32" and seen.st_file_attributes & stat.FILE_ATTRIBUTE_REPARSE_POINT:
            return os.stat_result((stat.S_IFLNK | stat.S_IMODE(seen.st_mode), *seen[1:]))
        return seen

    @contextmanager
    def entries(self) -> Iterator[Iterator[os.DirEntry[str]]]:
        """What lies in the folder, in no order."""
        with os.scandir(self.path if self._handle is None else self._handle) as found:
            yield found

    def link(self, old: str, new: str) -> None:
        """A second name for a file. Raises FileExistsError where the name is taken."""
        os.link(self._at(old), self._at(new), src_dir_fd=self._handle, dst_dir_fd=self._handle)

    def rename(self, old: str, new: str) -> None:
        """Another name for a file; takes the place of a file that has it, except on Windows (FileExistsError)."""
        os.rename(self._at(old), self._at(new), src_dir_fd=self._handle, dst_dir_fd=self._handle)

    def remove(self, name: str) -> None:
        """The file `name` is gone."""
        os.unlink(self._at(name), dir_fd=self._handle)

    def make_part(self, name: str) -> None:
        """A new folder inside. Raises FileExistsError where the name is taken."""
        os.mkdir(self._at(name), dir_fd=self._handle)

    def share_rights(self, name: str) -> None:
        """The folder `name` inside may be used by whoever may use this one, unless a share has its own rules."""
        with suppress(OSError):
            os.chmod(self._at(name), stat.S_IMODE(self._look_at_this().st_mode), dir_fd=self._handle)

    def let_read(self, handle: int) -> None:
        """A new file, opened for writing, may be read by whoever may read this folder, and changed by nobody else."""
        if sys.platform != "win32":
            with suppress(OSError):
                os.fchmod(handle, stat.S_IMODE(self._look_at_this().st_mode) & 0o444 | stat.S_IWUSR | stat.S_IRUSR)

    def remove_part(self, name: str) -> None:
        """The empty folder `name` is gone."""
        os.rmdir(self._at(name), dir_fd=self._handle)

    def bring_to_disk(self) -> None:
        """What was named or removed here survives a power failure; where the system cannot say so, nothing happens."""
        if self._handle is None:
            return
        try:
            os.fsync(self._handle)
        except OSError as fault:
            if fault.errno not in _CANNOT_SYNC_FOLDERS:
                raise

    def _look_at_this(self) -> os.stat_result:
        return os.stat(self.path if self._handle is None else self._handle)

    def _at(self, name: str) -> str:
        return name if self._handle is not None else os.fspath(self.path / name)
