"""First run and trust for a window: keys are made, a library is founded or joined, publishers are trusted.

Where a passphrase is needed, everything else that can be refused is refused before it is used.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from clinicalc.library import founding, key_files, trust_store
from clinicalc.library.appointing import check_label
from clinicalc.library.cards import read_card_file
from clinicalc.library.keys import KeyCard
from clinicalc.library.records import Approver, Policy
from clinicalc.library.trust_store import Publisher
from clinicalc.operations.library_reading import now
from clinicalc.operations.publishing import read_any_card
from clinicalc.operations.signing_keys import Signer, open_signer


@dataclass(frozen=True, slots=True)
class Founded:
    """A library that was founded and is used on this machine; the key's id is to be read aloud where others join."""

    place: Path
    practice: str
    practice_key: str
    library: str


def make_key(path: Path, name: str, passphrase: str) -> KeyCard:
    """A new key's file at `path`; its card. Raises KeyRefused and FileNotWritten as `key_files.make_key` does."""
    return key_files.make_key(path, name, passphrase)


def look_at_key(path: Path) -> KeyCard:
    """The card of a private key's file or in a card's file; needs no passphrase. Raises KeyRefused."""
    return read_any_card(path)


def change_passphrase(key_file: Path, old: str, new: str) -> KeyCard:
    """The same key sealed under another passphrase; copies keep the old one. Raises KeyRefused, FileNotWritten."""
    return key_files.change_passphrase(key_file, old, new)


def approver_of(card_file: Path, role: str, name: str = "") -> Approver:
    """A person who may approve, by a card; the name is the card's if left out. Raises KeyRefused, UsageError."""
    card = read_card_file(card_file)
    return Approver(check_label(name or card.name, "name"), check_label(role, "role"), card.public)


def check_founding(place: Path, practice: str, key_file: Path, approvers: Sequence[Approver] = ()) -> None:
    """Nothing where `found` needs only the passphrase; raises every other refusal."""
    founding.check_founding(place, practice, key_files.read_card(key_file), approvers)


def found(
    place: Path,
    practice: str,
    practice_signer: Signer,
    approvers: Sequence[Approver] = (),
    policy: Policy | None = None,
    moment: datetime | None = None,
) -> Founded:
    """Make a library in a new or an empty folder and use it on this machine.

    Raises LibraryError, KeyRefused, UsageError, and FileNotWritten; where the library stands all the same, that is
    said.
    """
    check_founding(place, practice, practice_signer.key_file, approvers)
    key = open_signer(practice_signer)
    named = check_label(practice, "practice")
    sealed = founding.found_library(
        place, practice=named, key=key, approvers=approvers, policy=policy, now=moment or now()
    )
    return Founded(place.absolute(), named, key.id, sealed.digest)


def look_at_library(place: Path) -> str:
    """The practice that the library at `place` says it is of. Nothing of its key is told: that is read aloud.

    Raises LibraryError and LibraryUnreachable where there is no library.
    """
    return founding.read_founding(place).practice


def join(place: Path, said: str, moment: datetime | None = None) -> str:
    """Use a library on this machine where its practice key is the one that was read aloud; the practice's name.

    Raises KeyRefused where any digit differs, UsageError where none was typed, LibraryError and FileNotWritten.
    """
    return founding.join_library(place, said, moment or now()).practice


def publishers() -> tuple[Publisher, ...]:
    """Everybody whose signatures count on this machine, and every key revoked here. Raises KeyRefused, UsageError."""
    return trust_store.read_trust().publishers


def trust_publisher(card_file: Path, said: str, *, again: bool = False) -> Publisher:
    """Trust the key of a card from now on, where its id is the one that was read aloud. Raises KeyRefused."""
    return trust_store.trust_publisher(read_card_file(card_file), said, datetime.now(UTC), again=again)


def revoke_publisher(key_id: str) -> Publisher:
    """Trust a publisher's key no longer on this machine. Raises KeyRefused."""
    return trust_store.revoke_publisher(key_id, datetime.now(UTC))
