"""What a passphrase must be, and the one form in which it is used."""

import unicodedata

from clinicalc.errors import KeyRefused

SHORTEST = 12
LONGEST = 1000
_DO = "Four or five words that nobody would guess do well."
ASKED = f"At least {SHORTEST} characters. {_DO}"
"""What is said beside the field of a new passphrase."""


def check_passphrase(passphrase: str) -> None:
    """Raises KeyRefused for a passphrase under which no key may be kept, and says why."""
    plain = _plain(passphrase)
    if len(plain) < SHORTEST:
        raise KeyRefused(f"the passphrase has {len(plain)} characters; it needs at least {SHORTEST}.", do=_DO)
    if len(plain) > LONGEST:
        raise KeyRefused(f"the passphrase has {len(plain)} characters; at most {LONGEST} are taken.", do=_DO)
    if not plain.strip():
        raise KeyRefused("the passphrase is nothing but spaces.", do=_DO)
    if len(set(plain)) == 1:
        raise KeyRefused("the passphrase is one character over and over.", do=_DO)
    for character in plain:
        if unicodedata.category(character) in ("Cc", "Cs"):
            raise KeyRefused(
                f"the passphrase holds U+{ord(character):04X}, a character that no keyboard types alike everywhere.",
                do="Leave it out. " + _DO,
            )


def passphrase_bytes(passphrase: str) -> bytes:
    """The bytes from which a key is derived: as RFC 8265, section 4.2.2 has it, every wide or odd space a plain one,
    accents composed (NFC), then UTF-8, so that two keyboards which spell "é" differently give the same."""
    return _plain(passphrase).encode("utf-8", "surrogatepass")


def _plain(passphrase: str) -> str:
    spaced = "".join(" " if unicodedata.category(character) == "Zs" else character for character in passphrase)
    return unicodedata.normalize("NFC", spaced)
