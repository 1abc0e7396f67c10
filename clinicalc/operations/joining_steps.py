"""Joining a library that was founded elsewhere, on a share or in an exported file: whose it is has to be heard."""

from dataclasses import dataclass, field
from datetime import UTC, datetime
from pathlib import Path

from clinicalc.errors import KeyRefused
from clinicalc.library.bundle import Bundle, read_bundle_file
from clinicalc.library.bundle_checks import practice_key_of
from clinicalc.library.carrying import import_bundle
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.founding import check_settings, read_founding
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.records import Founding
from clinicalc.operations import practice_founding
from clinicalc.operations.founding_steps import check_new_place, keep_practice_name
from clinicalc.operations.read_aloud import KeyToHear


@dataclass(frozen=True, slots=True)
class StrangeLibrary:
    """A library that this machine does not use. What it says of itself proves nothing until its key was heard."""

    practice: str
    key: KeyToHear
    models: int
    """How many files lie in it."""


@dataclass(frozen=True, slots=True)
class StrangeBundle:
    """The same for a library in an exported file, which was read once and is what would be brought in."""

    practice: str
    key: KeyToHear
    models: int
    content: Bundle = field(repr=False)


def look_at_library(place: Path) -> StrangeLibrary:
    """The library at `place`. Raises LibraryError and LibraryUnreachable where there is none that can be joined.

    Raises FileNotWritten where this machine's settings would not take it, before anybody reads an id aloud for nothing.
    """
    check_settings()
    founding = read_founding(place)
    models = len(LibraryFolder(place).list_models().names)
    return StrangeLibrary(founding.practice, KeyToHear(key_id(decode_public(founding.key))), models)


def look_at_bundle(path: Path) -> StrangeBundle:
    """The library in an exported file. Raises LibraryError with the reason why it cannot be used.

    Raises FileNotWritten as `look_at_library` does.
    """
    check_settings()
    bundle = read_bundle_file(path)
    founding = bundle.founding.record.statement
    practice = founding.practice if isinstance(founding, Founding) else ""
    return StrangeBundle(practice, KeyToHear(practice_key_of(bundle)), len(bundle.models), bundle)


def say_files(count: int) -> str:
    """How many coefficient files, in words: "no coefficient file yet"."""
    return f"{count} coefficient file{'' if count == 1 else 's'}" if count else "no coefficient file yet"


def join(place: Path, said: str) -> str:
    """Use the library at `place` on this machine, where its key is the one that was heard; the practice's name.

    Raises KeyRefused where any digit differs, LibraryError, LibraryUnreachable, FileNotWritten.
    """
    _require_heard(look_at_library(place).key, said, str(place))
    practice = practice_founding.join(place, said)
    keep_practice_name(practice)
    return practice


def bring_in_and_join(bundle: StrangeBundle, place: Path, said: str) -> str:
    """Make the library of a bundle at `place`, a new or an empty folder, and use it on this machine.

    The key is compared first: of a library that is not the practice's nothing is written. Raises as `join` does.
    """
    _require_heard(bundle.key, said, "")
    check_settings()
    check_new_place(place)
    import_bundle(bundle.content, place, None, datetime.now(UTC))
    return join(place, said)


def _require_heard(key: KeyToHear, said: str, where: str) -> None:
    heard = key.judge(said)
    if heard.whole:
        return
    raise KeyRefused(
        "the id does not agree with this library’s practice key." if heard.differs_in else "the id is not whole yet.",
        where=where,
        why=heard.says,
        do="All sixteen groups are needed, as the person who keeps the key reads them. Nothing was changed.",
    )
