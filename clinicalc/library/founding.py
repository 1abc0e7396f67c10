"""Founding a library, and joining one from another machine: which key speaks for the practice is pinned here."""

from collections.abc import Sequence
from dataclasses import replace
from datetime import datetime
from pathlib import Path

from clinicalc.errors import KeyRefused, LibraryError, UsageError
from clinicalc.library.cards import ID_DIGITS, compare_id
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.keys import SigningKey, decode_public, key_id
from clinicalc.library.machine import Machine
from clinicalc.library.memory import begin_memory
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    RECORD_FORMAT,
    Approver,
    Approvers,
    Follows,
    Founding,
    Policy,
    Record,
)
from clinicalc.library.sealing import is_signed_by, seal
from clinicalc.library.standing import Fault, SealedRecord
from clinicalc.library.writing import PRACTICE_ROLE, moment_of
from clinicalc.settings import read_settings, settings_folder, write_settings


def found_library(
    place: Path,
    *,
    practice: str,
    key: SigningKey,
    approvers: Sequence[Approver] = (),
    policy: Policy | None = None,
    now: datetime,
) -> SealedRecord:
    """Make a library at `place` and pin it, with the practice key, on this machine; the founding record comes back.

    Raises LibraryError where the place holds something already, and FileNotWritten where it cannot be written.
    """
    _check_approvers(key, approvers)
    founding = Founding(practice=practice, key=key.public, policy=policy or Policy())
    sealed = seal(_about_the_library(key, founding, "", (), practice, now), key)
    folder = LibraryFolder(place)
    folder.create(sealed)
    if approvers:
        listed = Approvers(tuple(approvers))
        folder.put_record(seal(_about_the_library(key, listed, sealed.digest, (sealed.digest,), practice, now), key))
    pin(place, key.id, sealed.digest, now)
    return sealed


def _check_approvers(practice_key: SigningKey, approvers: Sequence[Approver]) -> None:
    keys = [key_id(decode_public(approver.key)) for approver in approvers]
    if practice_key.id in keys:
        raise LibraryError(
            "the practice key cannot be an approver’s as well; keys of approvers belong to persons.",
            do="Let the person make a key with: clinicalc trust make-key.",
        )
    if len(set(keys)) < len(keys):
        raise LibraryError("one key is given for two approvers.", do="Give each person’s own card once.")


def join_library(place: Path, said: str, now: datetime) -> Founding:
    """Pin a library that was founded elsewhere, where its practice key is the one that was read aloud (`said`).

    Raises KeyRefused where any digit differs, and LibraryError where there is no library.
    """
    if not said.strip():
        raise UsageError("no id of a key is given.", do="Have all sixteen groups of four read aloud.")
    founding = _read_founding(place)
    own = key_id(decode_public(founding.key))
    found = compare_id(said, own)
    if not found.whole:
        # what this library's key is, is not said here: it would only be typed off the screen
        raise KeyRefused(
            "the practice key of this library is not the one that was read aloud:"
            f" {found.digits} of its {ID_DIGITS} digits agree, counted from the beginning, of {found.typed} typed.",
            where=str(place),
            do="Have all of them read aloud again, by the person who keeps the key. If they differ again, this is not"
            " the practice’s library. Nothing was changed.",
        )
    pin(place, own, LibraryFolder(place).library_id(), now)
    return founding


def pin(place: Path, practice_key: str, library: str, now: datetime) -> None:
    """Keep the place and the id of the practice key in this machine's settings, and begin its memory of the library.

    Raises FileNotWritten.
    A settings file that could not be read whole is not written over.
    """
    reading = read_settings()
    write_settings(replace(reading.settings, library=str(place.absolute()), practice_key=practice_key))
    begin_memory(Machine(settings_folder(), place.absolute(), practice_key), library, now)


def _read_founding(place: Path) -> Founding:
    """The founding statement, signed by the very key it names."""
    folder = LibraryFolder(place)
    founding = folder.read_record(ABOUT_THE_LIBRARY, folder.library_id())
    if isinstance(founding, Fault):
        raise LibraryError("its founding record cannot be used.", where=str(place), why=founding.sentence)
    statement = founding.record.statement
    if not isinstance(statement, Founding) or not is_signed_by(founding, decode_public(statement.key)):
        raise LibraryError(
            "its first record is not one that founds a library, signed by the key it names.",
            where=str(place),
            do="Do not use it, and ask who looks after it.",
        )
    return statement


def _about_the_library(
    key: SigningKey,
    statement: Founding | Approvers,
    library: str,
    follows: tuple[str, ...],
    practice: str,
    now: datetime,
) -> Record:
    return Record(
        format=RECORD_FORMAT,
        library=library,
        about=ABOUT_THE_LIBRARY,
        follows=Follows(follows, ()),
        written=moment_of(now),
        by=key.id,
        name=practice,
        role=PRACTICE_ROLE,
        statement=statement,
    )
