"""Saying why a library's folder cannot be used now, and what to do: one sentence for each reason a system gives."""

import errno
from pathlib import Path

from clinicalc.errors import LibraryUnreachable

_SHARE = (
    errno.ESTALE, errno.ENOTCONN, errno.ETIMEDOUT, errno.EHOSTDOWN, errno.EHOSTUNREACH, errno.ENETDOWN,
    errno.ENETUNREACH, errno.ECONNABORTED, errno.ECONNRESET, errno.ECONNREFUSED, errno.ENODEV, errno.ENXIO,
)  # fmt: skip
_REASONS: dict[int, tuple[str, str]] = {
    errno.ENOENT: (
        "It is not there",
        "Connect the share or the drive on which it lies, or choose the place of the library again.",
    ),
    errno.ENOTDIR: ("This is not a folder", "Choose the folder in which library.json lies."),
    errno.EACCES: ("You may not do this there", "Ask who looks after the computer for the right to use the folder."),
    errno.EPERM: ("You may not do this there", "Ask who looks after the computer for the right to use the folder."),
    errno.ENOSPC: ("There is no room left on the disk", "Make room there, and do it again."),
    errno.EDQUOT: ("Your share of the disk is used up", "Make room there, and do it again."),
    errno.EFBIG: ("The file system takes no file of this size", "Move the library to another disk."),
    errno.EROFS: ("The disk is set to be read only", "Have it mounted for writing, and do it again."),
    errno.EIO: ("The disk could not be read or written", "Have the disk and its cable or network looked at."),
    errno.EMFILE: ("Too many files are open", "Close other programs, and do it again."),
    errno.ENFILE: ("Too many files are open", "Close other programs, and do it again."),
    errno.ENOMEM: ("The computer has no memory left", "Close other programs, and do it again."),
    errno.ENAMETOOLONG: ("The name of the folder is too long", "Choose a place with a shorter name."),
    errno.ELOOP: ("Links on the way to it lead in a circle", "Choose the place of the library again."),
    **dict.fromkeys(_SHARE, ("The share on which it lies does not answer", "Connect it again, and do it again.")),
}


def out_of_reach(what: str, place: Path, fault: OSError) -> LibraryUnreachable:
    """The error for something the system refused; `what` says what was not done, as a clause."""
    why, do = _REASONS.get(fault.errno or 0, ("The system refused it", "Do it again."))
    reason = fault.strerror or "the system gave no reason"
    return LibraryUnreachable(f"{what}.", where=str(place), why=f"{why} ({reason}).", do=do)
