"""Writing into a library: every record is signed by a key in force and follows the newest ones that the writer saw."""

from dataclasses import dataclass
from datetime import UTC, datetime

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.gathering import Source
from clinicalc.library.keys import KeyCard, SigningKey, decode_public, key_id
from clinicalc.library.leftovers import remove_leftovers
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    RECORD_FORMAT,
    Approver,
    Follows,
    Record,
    Statement,
)
from clinicalc.library.sealing import seal
from clinicalc.library.standing import Authority, Fault, ModelState, SealedRecord

PRACTICE_ROLE = "practice key"
"""The role under which the practice's own key signs."""


@dataclass(frozen=True, slots=True)
class Desk:
    """A library as it stood when somebody sat down to write in it, and the time."""

    folder: LibraryFolder
    source: Source
    authority: Authority
    models: tuple[ModelState, ...]
    now: datetime


def sit_down(opened: OpenedLibrary) -> Desk:
    """The library opened for writing. Raises LibraryError where it is out of reach or something is wrong with it.

    What dead writers left long ago is taken away. Faults of one model do not stop the others; they stand in that
    model's own state.
    """
    if not opened.reachable:
        raise LibraryUnreachable(
            "nothing can be written, because the library cannot be reached.",
            where=str(opened.place),
            do="Connect to it first. Until then the verified copy on this machine serves for reading only.",
        )
    stops = [fault for fault in (*opened.faults, *opened.authority.faults) if fault.stops]
    if stops:
        raise _faulty(str(opened.place), stops[0])
    folder = LibraryFolder(opened.place)
    remove_leftovers(folder.path)
    return Desk(folder, opened.source, opened.authority, opened.models, opened.opened_at)


def approvers_by_key(authority: Authority) -> dict[str, Approver]:
    """The approvers in force by the ids of their keys."""
    return {key_id(decode_public(approver.key)): approver for approver in authority.approvers}


def sign_as_practice(desk: Desk, key: SigningKey, statement: Statement) -> SealedRecord:
    """A record about the library itself, put in place. Raises LibraryError for any key but the practice's."""
    authority = desk.authority
    require_practice_key(authority, key)
    record = _record(
        desk, key, statement, ABOUT_THE_LIBRARY, Follows(authority.heads, ()), authority.practice, PRACTICE_ROLE
    )
    return _put(desk, record, key)


def sign_as_approver(
    desk: Desk, key: SigningKey, statement: Statement, fingerprint: str, heads: tuple[str, ...]
) -> SealedRecord:
    """A record about a model, put in place; `heads` are the newest ones about it.

    Raises LibraryError for a key that is none of an approver in force.
    """
    approver = require_approver(desk.authority, key)
    follows = Follows(desk.authority.heads, heads)
    record = _record(desk, key, statement, fingerprint, follows, approver.name, approver.role)
    return _put(desk, record, key)


def require_practice_key(authority: Authority, key: SigningKey | KeyCard) -> None:
    """Nothing for the key that speaks for the practice. Raises LibraryError for any other."""
    if key.id != authority.practice_key:
        raise LibraryError(
            f"the key {group_fingerprint(key.id, 3)} ({key.name}) does not speak for {authority.practice}.",
            why=f"The practice key is {group_fingerprint(authority.practice_key, 3)}.",
            do="Give the file of the practice key with --practice-key.",
        )


def require_approver(authority: Authority, key: SigningKey | KeyCard) -> Approver:
    """The approver whose key this is. Raises LibraryError where it is nobody's in force."""
    approvers = approvers_by_key(authority)
    if key.id in approvers:
        return approvers[key.id]
    names = ", ".join(f"{a.name} ({a.role})" for a in approvers.values()) or "nobody"
    if key.id == authority.practice_key:
        raise LibraryError(
            "the practice key appoints approvers, and does not install, approve or withdraw models itself.",
            why=f"Approvers in force: {names}.",
            do="Use the key of a person, appointed with: clinicalc library appoint.",
        )
    raise LibraryError(
        f"the key {group_fingerprint(key.id, 3)} ({key.name}) is not that of an approver of {authority.practice}.",
        why=f"Approvers in force: {names}.",
        do="Use the key of one of them, or have this one appointed with: clinicalc library appoint.",
    )


def require_sound(state: ModelState) -> None:
    """Nothing where nothing is wrong with a model's records. Raises LibraryError with the first fault that stops."""
    stops = [fault for fault in state.faults if fault.stops]
    if stops:
        raise _faulty(f"{state.id} {state.version}" if state.id else group_fingerprint(state.fingerprint, 3), stops[0])


def moment_of(now: datetime) -> str:
    """A time as records state it: UTC to the second."""
    return f"{now.astimezone(UTC):%Y-%m-%dT%H:%M:%SZ}"


def _record(
    desk: Desk, key: SigningKey, statement: Statement, about: str, follows: Follows, name: str, role: str
) -> Record:
    return Record(
        format=RECORD_FORMAT,
        library=desk.authority.library,
        about=about,
        follows=follows,
        written=moment_of(desk.now),
        by=key.id,
        name=name,
        role=role,
        statement=statement,
    )


def _put(desk: Desk, record: Record, key: SigningKey) -> SealedRecord:
    sealed = seal(record, key)
    desk.folder.put_record(sealed)
    return sealed


def _faulty(where: str, fault: Fault) -> LibraryError:
    return LibraryError(
        "nothing can be written while something is wrong here.",
        where=where,
        why=fault.sentence,
        do="Run clinicalc library verify and settle what it names first.",
    )
