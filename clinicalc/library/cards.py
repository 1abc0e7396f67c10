"""A key's card: what its owner hands out, so that others can check what is signed with the key.

JSON: {"format", "name", "public"}. Nothing in it proves whose it is: that is done by reading its id aloud.
"""

import os
from dataclasses import dataclass
from pathlib import Path
from typing import Final, Literal

import msgspec

from clinicalc.coefficients.file_types import FileStruct, Label
from clinicalc.coefficients.pointers import quoted
from clinicalc.errors import FileNotWritten, KeyRefused
from clinicalc.library.keys import ENCODED_LETTERS, KeyCard, check_name, decode_public, key_id
from clinicalc.library.records import PublicKey
from clinicalc.library.small_files import decode_strictly, read_small
from clinicalc.replacement import READABLE, create_file

ID_DIGITS = 64
GROUP = 4
_FORMAT: Final = "clinicalc.card/1"
_MOST_BYTES = 10_000
_WHAT = "a key's card"


class CardFile(FileStruct, frozen=True):
    """What a card's file holds."""

    format: Literal["clinicalc.card/1"]
    name: Label
    public: PublicKey


@dataclass(frozen=True, slots=True)
class Agreement:
    """How an id that was read aloud and typed agrees with a key's own, counted from the beginning."""

    digits: int
    typed: int
    whole: bool


def make_card(public: str, name: str) -> KeyCard:
    """The card of a public key. Raises KeyRefused where the key may not be trusted or the name cannot be shown."""
    raw = decode_public(public)
    check_name(name)
    return KeyCard(key_id(raw), public, name)


def write_card(path: Path, card: KeyCard) -> None:
    """Put the card's file at `path`, which must be free. Raises KeyRefused where it is not, FileNotWritten."""
    try:
        create_file(path, _spell(card), READABLE)
    except FileExistsError:
        raise KeyRefused(
            "there is a file of this name already; it was left as it is.", where=str(path), do="Choose another name."
        ) from None
    except (OSError, ValueError) as fault:
        said = getattr(fault, "strerror", None) or "its name cannot be a file name"
        raise FileNotWritten(
            "the card could not be written.", where=str(path), why=f"The computer says: {said}.", do="Choose another."
        ) from None


def read_card_file(path: Path) -> KeyCard:
    """The card in a file. Raises KeyRefused for anything else, a private key's file included."""
    held = decode_strictly(read_small(path, _MOST_BYTES, _WHAT), CardFile, str(path), _WHAT)
    return make_card(held.public, held.name)


def find_card(text: str, name: str) -> KeyCard:
    """The card that a person names: its file's path, or the public key itself, which needs a `name` beside it.

    Raises KeyRefused with what is wrong.
    """
    if os.path.lexists(text):
        card = read_card_file(Path(text))
        return card if not name else make_card(card.public, name)
    if len(text) != ENCODED_LETTERS:
        raise KeyRefused(
            f"{quoted(text)} is neither a card's file nor a public key.",
            why=f"There is no such file, and a public key has {ENCODED_LETTERS} letters; these are {len(text)}.",
            do="Check the name and the folder.",
        )
    if not name:
        raise KeyRefused("a public key does not say whose it is.", do='Add the name: --name "...".')
    return make_card(text, name)


def plain_digits(typed: str) -> str:
    """Digits of an id or a fingerprint as they were typed, without spaces and hyphens, in small letters."""
    return "".join(letter for letter in typed.casefold() if not letter.isspace() and letter != "-")


def compare_id(typed: str, id: str) -> Agreement:
    """How far what was typed agrees with the id; spaces, hyphens and capital letters do not matter."""
    letters = plain_digits(typed)
    same = next(
        (place for place, (left, right) in enumerate(zip(letters, id, strict=False)) if left != right),
        min(len(letters), len(id)),
    )
    return Agreement(same, len(letters), letters == id)


def require_same_id(typed: str, id: str) -> None:
    """Raises KeyRefused unless all 64 digits agree, and says how many do; never what the others should be."""
    found = compare_id(typed, id)
    if found.whole:
        return
    where = f" The first difference is in group {found.digits // GROUP + 1}." if found.digits < ID_DIGITS else ""
    raise KeyRefused(
        f"the id does not agree: {found.digits} of its {ID_DIGITS} digits do, counted from the beginning, "
        f"of {found.typed} typed.{where}",
        why="All of them must: a made-up key can share the first ones.",
        do="Have the owner read the id aloud again, from the owner's own screen. Nothing was trusted.",
    )


def _spell(card: KeyCard) -> bytes:
    held = CardFile(_FORMAT, card.name, card.public)
    return msgspec.json.format(msgspec.json.encode(held), indent=2) + b"\n"
