"""What lies in a folder of the library: the names that may be read, and what is there that should not be."""

import os
import re
import stat
from collections.abc import Callable
from dataclasses import dataclass
from typing import Generic, TypeVar

from clinicalc.coefficients.pointers import quoted
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.places import is_dropping
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.safe_reading import name_kind
from clinicalc.library.standing import Fault, FaultKind

Name = TypeVar("Name")
_DIGITS = re.compile(r"\b([0-9a-f]{12})[0-9a-f]{52}\b")


@dataclass(frozen=True, slots=True)
class Listing(Generic[Name]):
    """The names found, in order, and the faults. Nothing was opened: a name is no promise about the content."""

    names: tuple[Name, ...]
    faults: tuple[Fault, ...]


def list_part(
    folder: OpenedFolder,
    read_name: Callable[[str], Name | None],
    say_about: Callable[[Name], tuple[str, str]],
    begins: str = "",
) -> Listing[Name]:
    """What lies in the folder and begins so; `read_name` makes a name of a file's, or None.

    `say_about` gives the fingerprint and the record's digest for a fault. What bears a right name and is no file stops;
    what bears another name is only told, and what systems leave everywhere is passed over. Raises OSError.
    """
    names: list[tuple[str, Name]] = []  # with the file's name, by which they are sorted
    faults: list[Fault] = []
    with folder.entries() as entries:
        for entry in entries:
            if not entry.name.startswith(begins) or is_dropping(entry.name):
                continue
            name = read_name(entry.name)
            if name is not None and entry.is_file(follow_symlinks=False):
                names.append((entry.name, name))
            elif name is not None:
                about, digest = say_about(name)
                faults.append(Fault(FaultKind.NOT_A_FILE, about, _not_a_file(folder, entry), digest))
            else:
                faults.append(_stray(folder, entry))
    names.sort(key=lambda pair: pair[0])
    return Listing(tuple(name for _, name in names), tuple(sorted(faults, key=lambda one: one.sentence)))


def find_strays(folder: OpenedFolder, expected: tuple[str, ...]) -> tuple[Fault, ...]:
    """What lies in the folder beside what is expected there. Raises OSError."""
    with folder.entries() as entries:
        found = [entry for entry in entries if entry.name not in expected and not is_dropping(entry.name)]
        return tuple(sorted((_stray(folder, entry) for entry in found), key=lambda fault: fault.sentence))


def _not_a_file(folder: OpenedFolder, entry: os.DirEntry[str]) -> str:
    short = _DIGITS.sub(r"\1…", entry.name)
    return (
        f"{folder.path.name}/{short} is {_kind(entry)}, not a file, and was not opened. "
        "Remove it, and put the file back from another copy of the library."
    )


def _stray(folder: OpenedFolder, entry: os.DirEntry[str]) -> Fault:
    kind = _kind(entry)
    what = FaultKind.STRAY if kind == "a file" else FaultKind.NOT_A_FILE
    place = f"{folder.path.name}/{quoted(entry.name)[1:-1]}"
    sentence = f"{place} is {kind} that does not belong there. It is not read; remove it if nobody needs it."
    return Fault(what, ABOUT_THE_LIBRARY, sentence, stops=False)


def _kind(entry: os.DirEntry[str]) -> str:
    try:
        mode = entry.stat(follow_symlinks=False).st_mode
    except OSError:
        return "something that cannot be looked at"
    return name_kind(mode) if not stat.S_ISREG(mode) else "a file"
