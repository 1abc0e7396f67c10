"""Ed25519 keys (RFC 8032): how they are named and written, and which public keys are refused.

A public key is 32 raw bytes: y as a little-endian number of 255 bits, and the sign of x in the topmost bit. The library
that verifies signatures takes small-order points, under which one signature can be right for every text; so they are
refused here, at every verification, together with every second spelling of a point.
"""

import hashlib
from collections.abc import Callable
from dataclasses import dataclass, field
from functools import lru_cache

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.pointers import REFUSED_CHARACTERS
from clinicalc.errors import KeyRefused
from clinicalc.library import base64url

RAW_BYTES = 32
ENCODED_LETTERS = 43
LONGEST_NAME = 120
_PRIME = 2**255 - 19
_D = -121665 * pow(121666, -1, _PRIME) % _PRIME
"""The d of the curve -x^2 + y^2 = 1 + d x^2 y^2 (RFC 8032, section 5.1)."""
_ORDER_EIGHT = 2707385501144840649318225287225658788936804267575313519463743609750303402022
_SMALL_ORDER = frozenset({0, 1, _PRIME - 1, _ORDER_EIGHT, _PRIME - _ORDER_EIGHT})
"""y of the eight points whose order divides 8: order 4, 1, 2 and the two of order 8, each with both signs of x."""
_DO = "Ask the owner to send the key again, and compare its id aloud."


@dataclass(frozen=True, slots=True)
class KeyCard:
    """What may be known of a key by everybody. `id` is its name, `public` the raw public key in base64url."""

    id: str
    public: str
    name: str


@dataclass(frozen=True, slots=True)
class SigningKey:
    """An opened private key: `sign` gives the 64 bytes of an Ed25519 signature over what it is given."""

    id: str
    public: str
    """The raw public key in base64url, as records state it; `raw` gives the 32 bytes."""
    name: str
    sign: Callable[[bytes], bytes] = field(repr=False, compare=False)

    @property
    def raw(self) -> bytes:
        """The 32 bytes of the public key."""
        return decode_public(self.public)

    @property
    def card(self) -> KeyCard:
        """What everybody may know of it."""
        return KeyCard(self.id, self.public, self.name)


def key_id(raw: bytes) -> str:
    """The id of a public key: SHA-256 over its 32 raw bytes, 64 lower-case hexadecimal digits."""
    return hashlib.sha256(raw).hexdigest()


def group_key_id(id: str) -> str:
    """A key's id in sixteen groups of four digits, for reading aloud."""
    return group_fingerprint(id)


def encode_public(raw: bytes) -> str:
    """The raw public key in base64url without padding, 43 letters."""
    return base64url.encode(raw)


@lru_cache(maxsize=256)  # a replay asks for the same few keys at every record
def decode_public(text: str) -> bytes:
    """The 32 raw bytes of a public key. Raises KeyRefused where it is misspelt or no key that may be trusted."""
    raw = base64url.decode(text)
    if raw is None or len(raw) != RAW_BYTES:
        raise KeyRefused(
            f"this is not a public key: it is written in {ENCODED_LETTERS} letters of A-Z, a-z, 0-9, - and _, and "
            f"these {len(text)} characters are not that.",
            do="Was it cut in copying? " + _DO,
        )
    check_public(raw)
    return raw


@lru_cache(maxsize=256)
def check_public(raw: bytes) -> None:
    """Raises KeyRefused for a public key that no honest signer has.

    Refused are: another length than 32 bytes; y of p = 2^255 - 19 or more, a second spelling (RFC 8032, section 5.1.3);
    the points of small order; and numbers that belong to no point of the curve.
    """
    if len(raw) != RAW_BYTES:
        raise KeyRefused(f"this public key has {len(raw)} bytes; an Ed25519 key has {RAW_BYTES}.", do=_DO)
    y = int.from_bytes(raw, "little") & (2**255 - 1)
    if y >= _PRIME:
        raise KeyRefused("this public key is refused: it is not spelt in the one way its standard allows.", do=_DO)
    if y in _SMALL_ORDER:
        raise KeyRefused(
            "this public key is refused: it is one of the weak keys under which one signature fits every text.",
            do="No key that was made properly is one of them; somebody made it up. Do not use it.",
        )
    if not _is_square((y * y - 1) * pow(_D * y * y + 1, -1, _PRIME)):
        raise KeyRefused("this public key is refused: no point of the curve belongs to it.", do=_DO)


def _is_square(number: int) -> bool:
    """Whether a number modulo p has a root (Euler's criterion); -1/d is no square, so the divisor was never nought."""
    return pow(number, (_PRIME - 1) // 2, _PRIME) <= 1


def check_name(name: str) -> None:
    """Raises KeyRefused for the name of a key's owner that could not be shown as it stands, or is too long."""
    if not name.strip() or len(name) > LONGEST_NAME:
        raise KeyRefused(
            f"the owner's name has {len(name)} characters; it needs 1 to {LONGEST_NAME}, and not spaces alone.",
            do="Write the name as others shall read it.",
        )
    if found := REFUSED_CHARACTERS.search(name):
        raise KeyRefused(
            f"the owner's name holds U+{ord(found[0]):04X}, which is not seen or makes it look like another.",
            do="Type the name again.",
        )


def make_private() -> bytes:
    """The 32 secret bytes of a new Ed25519 key, from the operating system's random source."""
    from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey

    return Ed25519PrivateKey.generate().private_bytes_raw()


def signing_key(private: bytes, name: str) -> SigningKey:
    """The key made from its 32 secret bytes."""
    from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey

    secret = Ed25519PrivateKey.from_private_bytes(private)
    raw = secret.public_key().public_bytes_raw()
    return SigningKey(key_id(raw), encode_public(raw), name, secret.sign)


def is_signature(signature: bytes, payload: bytes, raw_public: bytes) -> bool:
    """Whether the signature is that key's over exactly this payload. Raises KeyRefused for a key that is refused."""
    from cryptography.exceptions import InvalidSignature
    from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PublicKey

    check_public(raw_public)
    try:
        Ed25519PublicKey.from_public_bytes(raw_public).verify(signature, payload)
    except InvalidSignature:
        return False
    return True
