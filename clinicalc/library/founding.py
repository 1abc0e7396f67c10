"""Founding a library, and joining one from another machine: which key speaks for the practice is pinned here."""

from collections.abc import Sequence
from dataclasses import replace
from datetime import datetime
from pathlib import Path

from clinicalc.errors import ClinicalcError, FileNotWritten, KeyRefused, LibraryError, UsageError
from clinicalc.library.appointing import check_label
from clinicalc.library.cards import ID_DIGITS, compare_id
from clinicalc.library.creation import check_free
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.keys import KeyCard, SigningKey, decode_public, key_id
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
from clinicalc.settings import change_settings, read_settings, settings_folder


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

    Raises LibraryError where the place holds something already, and FileNotWritten where it cannot be written; where
    the library stands all the same, that says so, and how to go on.
    """
    check_founding(place, practice, key.card, approvers)
    founding = Founding(practice=practice, key=key.public, policy=policy or Policy())
    sealed = seal(_about_the_library(key, founding, "", (), practice, now), key)
    listed = Approvers(tuple(approvers))
    people = seal(_about_the_library(key, listed, sealed.digest, (sealed.digest,), practice, now), key)
    folder = LibraryFolder(place)
    folder.create(sealed)
    unlisted = _put_list(folder, people) if approvers else None
    try:
        pin(place, key.id, sealed.digest, now)
    except ClinicalcError as fault:
        raise _stands_unused(place, fault, is_listed=unlisted is None) from None
    if unlisted is not None:
        raise _stands_without_approvers(place, unlisted)
    return sealed


def check_founding(place: Path, practice: str, key: KeyCard, approvers: Sequence[Approver] = ()) -> None:
    """Nothing where a library may be founded so; the card of the practice key is enough.

    Raises LibraryError where the place holds something already or the persons' keys will not do, UsageError for a name
    of the practice that cannot be, FileNotWritten where this machine's settings would not take the library.
    """
    check_settings()
    check_label(practice, "practice")
    _check_approvers(key, approvers)
    check_free(place)


def _put_list(folder: LibraryFolder, people: SealedRecord) -> ClinicalcError | None:
    """The list of approvers put into the new library; what hindered it, None where nothing did."""
    try:
        folder.put_record(people)
    except ClinicalcError as fault:
        return fault
    return None


def _stands_unused(place: Path, fault: ClinicalcError, *, is_listed: bool) -> FileNotWritten:
    """The library is there and whole, and this machine does not use it."""
    people = "" if is_listed else " Its approvers were not listed; appoint each with: clinicalc library appoint."
    return FileNotWritten(
        "the library was founded and stands, but this machine does not use it yet.",
        where=str(place.absolute()),
        why=_cause(fault),
        do="Do not found it again. When that is put right, join it with the id of your practice key (clinicalc library"
        f" join PLACE --practice-key-id DIGITS; clinicalc trust card KEYFILE shows the id).{people}",
    )


def _cause(fault: ClinicalcError) -> str:
    """What went wrong and where, without what to do about it: here that is another thing."""
    where = f"{fault.where}: " if fault.where else ""
    return f"{where}{fault.what} {fault.why}".strip()


def _stands_without_approvers(place: Path, fault: ClinicalcError) -> LibraryError:
    return LibraryError(
        "the library was founded and this machine uses it, but its approvers were not listed: nobody may approve yet.",
        where=str(place.absolute()),
        why=_cause(fault),
        do="Do not found it again. When that is put right, appoint each person with: clinicalc library appoint.",
    )


def _check_approvers(practice_key: KeyCard, approvers: Sequence[Approver]) -> None:
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

    Raises KeyRefused where any digit differs, LibraryError where there is no library, FileNotWritten as `pin` does.
    """
    check_settings()
    if not said.strip():
        raise UsageError("no id of a key is given.", do="Have all sixteen groups of four read aloud.")
    founding = read_founding(place)
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

    Only these two settings are written. Raises FileNotWritten, also as `check_settings` does.
    """
    check_settings()
    settings = read_settings().settings
    try:
        change_settings(settings, replace(settings, library=str(place.absolute()), practice_key=practice_key))
    except FileNotWritten as fault:
        raise FileNotWritten(
            "this machine’s settings could not be written, so it does not use the library yet.",
            where=fault.where,
            why=fault.why,
            do="Make room there, or ask who looks after this computer, and then join the library again.",
        ) from None
    begin_memory(Machine(settings_folder(), place.absolute(), practice_key), library, now)


def check_settings() -> None:
    """Nothing where a library may be pinned in this machine's settings.

    Raises FileNotWritten where something in the file cannot be taken: what was meant there would be lost.
    """
    problems = read_settings().problems
    if problems:
        raise FileNotWritten(
            "this machine’s settings hold something that cannot be taken, and nothing is written over it unasked.",
            why=problems[0],
            do="Put that right first, or have Settings (Ctrl+,) in the window write the file anew, which keeps a copy."
            " Nothing was changed.",
        )


def read_founding(place: Path) -> Founding:
    """The founding statement of the library at a place, signed by the very key it names.

    Raises LibraryError and LibraryUnreachable where there is none. Nothing says whose key that is.
    """
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
