"""Whose key signs: looked at before anybody types a passphrase, opened with it, and not kept."""

from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

from clinicalc.library.key_files import open_key, read_card
from clinicalc.library.keys import KeyCard, SigningKey
from clinicalc.library.standing import Authority
from clinicalc.library.writing import require_approver, require_practice_key


@dataclass(frozen=True, slots=True)
class Signer:
    """The file of a private key, and the passphrase that was typed for it, which no repr shows."""

    key_file: Path
    passphrase: str = field(repr=False)


def look_at_approver(authority: Authority, key_file: Path) -> KeyCard:
    """The card of a key of an approver in force; needs no passphrase.

    Raises KeyRefused for what is no key file, and LibraryError for a key that is nobody's in force.
    """
    card = read_card(key_file)
    require_approver(authority, card)
    return card


def look_at_practice_key(authority: Authority, key_file: Path) -> KeyCard:
    """The same for the key that speaks for the practice."""
    card = read_card(key_file)
    require_practice_key(authority, card)
    return card


def take_key(key_file: Path, ask: Callable[[KeyCard], str]) -> SigningKey:
    """The opened key; `ask` gives the passphrase once it is sure that the file is one of a key. Raises KeyRefused."""
    return open_key(key_file, ask(read_card(key_file)))


def open_signer(signer: Signer) -> SigningKey:
    """The opened key. Takes about half a second. Raises KeyRefused for a wrong passphrase or a damaged file."""
    return open_key(signer.key_file, signer.passphrase)
