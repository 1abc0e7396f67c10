"""The founding of a library on the disk: made whole, or not there at all; and the one file that says which it is."""

import errno
import os
import re
from contextlib import suppress
from pathlib import Path

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.out_of_reach import out_of_reach
from clinicalc.library.places import FOUNDING_FILE, MODELS, MOST_FOUNDING_BYTES, RECORDS, RecordName, is_dropping
from clinicalc.library.placing import PART_PREFIX, PART_SUFFIX, Placed, place_file
from clinicalc.library.records import ABOUT_THE_LIBRARY, Founding
from clinicalc.library.safe_reading import NotRead, Obstacle, read_regular
from clinicalc.library.standing import SealedRecord

_CONTENT = re.compile(rb'\{"format":"clinicalc\.library/1","library":"([0-9a-f]{64})"\}')
_OTHER_VERSION = re.compile(rb'\{"format":"clinicalc\.library/(?!1")[0-9]+"')


def founding_content(library: str) -> bytes:
    """The exact bytes of library.json (they are canonical, RFC 8785) for a library of this id."""
    return f'{{"format":"clinicalc.library/1","library":"{library}"}}'.encode("ascii")


def read_library_id(folder: OpenedFolder) -> str:
    """The id that library.json states. Raises LibraryUnreachable where there is none to be read, LibraryError where it
    is not as the founding left it, OSError.
    """
    found = read_regular(folder, FOUNDING_FILE, MOST_FOUNDING_BYTES)
    if isinstance(found, NotRead):
        raise _no_library(folder, found)
    stated = _CONTENT.fullmatch(found)
    if stated:
        return stated[1].decode("ascii")
    if _OTHER_VERSION.match(found):
        raise LibraryError(
            "this library is not read.",
            where=str(folder.path),
            why="A newer version of this program made it.",
            do="Install that version on this computer.",
        )
    raise LibraryError(
        f"{FOUNDING_FILE} is not as the founding of the library left it.",
        where=str(folder.path),
        why="It was changed, or the folder is no library.",
        do="Put it back from a copy; the library is not used until then.",
    )


def create_library(path: Path, founding: SealedRecord) -> None:
    """Make the library in a new folder, or in an empty one that is there.

    A new folder is made beside under a passing name and renamed when it is whole; in an empty folder library.json comes
    last, without which there is no library. Raises LibraryError; then nothing is there that was not before.
    """
    record = founding.record
    if not isinstance(record.statement, Founding) or record.about != ABOUT_THE_LIBRARY or record.library:
        raise LibraryError("no library was made.", where=str(path), why="A library begins with a founding record.")
    target = path
    try:
        target = _behind_links(path)
        if os.path.lexists(target):
            with OpenedFolder(target) as folder:
                _refuse_full(folder)
                _fill(folder, founding)
        else:
            _make_beside(target, founding)
    except OSError as fault:
        if fault.errno in (errno.EEXIST, errno.ENOTEMPTY):
            raise _not_empty(target, "somebody else began to make a library there at the same time") from None
        raise out_of_reach("no library was made, and nothing was changed", target, fault) from None


def check_free(path: Path) -> None:
    """Nothing where `create_library` would make a library at `path` now; nothing stays of the trial.

    Raises LibraryError where the folder is not empty, LibraryUnreachable where nothing can be made there.
    """
    target = path
    try:
        target = _behind_links(path)
        is_there = os.path.lexists(target)
        with OpenedFolder(target if is_there else target.parent) as folder:
            if is_there:
                _refuse_full(folder)
            trial = f"{PART_PREFIX}{os.urandom(12).hex()}{PART_SUFFIX}"
            folder.make_part(trial)
            folder.remove_part(trial)
    except OSError as fault:
        raise out_of_reach("no library can be made here", target, fault) from None


def _behind_links(path: Path) -> Path:
    try:
        return Path(os.path.realpath(path))
    except ValueError:  # a name that no folder can have
        raise FileNotFoundError(errno.ENOENT, "no folder can have this name") from None


def _make_beside(target: Path, founding: SealedRecord) -> None:
    with OpenedFolder(target.parent) as parent:
        passing = f"{PART_PREFIX}{os.urandom(12).hex()}{PART_SUFFIX}"
        parent.make_part(passing)
        name = passing
        try:
            with parent.open_part(passing) as folder:
                _fill(folder, founding)
                try:
                    parent.rename(passing, target.name)
                    name = target.name
                    parent.bring_to_disk()
                except BaseException:
                    _empty(folder, founding)
                    raise
        except BaseException:
            with suppress(OSError):
                parent.remove_part(name)
            raise


def _fill(folder: OpenedFolder, founding: SealedRecord) -> None:
    """Raises FileExistsError, before anything is changed, where another has begun to fill the folder."""
    folder.make_part(MODELS)
    try:
        folder.make_part(RECORDS)
        folder.share_rights(MODELS)
        folder.share_rights(RECORDS)
        with folder.open_part(RECORDS) as records:
            _place_new(records, RecordName(ABOUT_THE_LIBRARY, founding.digest).file, founding.content)
        folder.bring_to_disk()
        _place_new(folder, FOUNDING_FILE, founding_content(founding.digest))
    except BaseException:
        _empty(folder, founding)
        raise


def _place_new(folder: OpenedFolder, name: str, content: bytes) -> None:
    placed = place_file(folder, name, content)
    if placed is not Placed.NEW:
        raise OSError(errno.EIO, f"{name} was not confirmed by the disk")


def _empty(folder: OpenedFolder, founding: SealedRecord) -> None:
    """Take away again what `_fill` made, library.json first, as far as the system lets us."""
    with suppress(OSError):
        if read_regular(folder, FOUNDING_FILE, MOST_FOUNDING_BYTES) == founding_content(founding.digest):
            folder.remove(FOUNDING_FILE)
    with suppress(OSError), folder.open_part(RECORDS) as records:
        records.remove(RecordName(ABOUT_THE_LIBRARY, founding.digest).file)
    for part in (RECORDS, MODELS):
        with suppress(OSError):
            folder.remove_part(part)


def _refuse_full(folder: OpenedFolder) -> None:
    with folder.entries() as entries:
        found = sorted(entry.name for entry in entries if not is_dropping(entry.name))
    if FOUNDING_FILE in found:
        raise _not_empty(folder.path, "there is a library in it already")
    if found and set(found) <= {MODELS, RECORDS}:
        raise _not_empty(folder.path, "it holds what a founding left behind that was broken off")
    if found:
        raise _not_empty(folder.path, f"it holds {len(found)} other thing{'' if len(found) == 1 else 's'}")


def _not_empty(place: Path, why: str) -> LibraryError:
    return LibraryError(
        "no library was made; the folder is not empty:",
        where=str(place),
        why=f"{why}.",
        do="Name a folder that does not exist yet, or an empty one.",
    )


def _no_library(folder: OpenedFolder, found: NotRead) -> LibraryError:
    if found.obstacle is Obstacle.MISSING:
        with folder.entries() as entries:
            left = {entry.name for entry in entries} & {MODELS, RECORDS}
        if not left:
            return LibraryUnreachable(
                f"there is no library here ({FOUNDING_FILE} is missing).",
                where=str(folder.path),
                why="The share may not be connected, or this is another folder.",
                do="Connect it, or choose the place of the library again.",
            )
        return LibraryError(
            f"{FOUNDING_FILE} is missing.",
            where=str(folder.path),
            why="It was removed, or the founding of the library was broken off.",
            do="Put it back from a copy; if there never was one, empty the folder and found the library again.",
        )
    kind = LibraryUnreachable if found.obstacle is Obstacle.UNREADABLE else LibraryError
    return kind(
        f"{FOUNDING_FILE} was not read.",
        where=str(folder.path),
        why=f"{found.why[:1].upper()}{found.why[1:]}.",
        do="Put it back from a copy, or ask who looks after the computer.",
    )
