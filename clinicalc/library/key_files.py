"""Private keys on disk: one small file each, sealed by a passphrase at a real cost, and never replaced by another key.

The file is JSON: {"format", "name", "public", "derivation", "cipher", "sealed"}. scrypt (RFC 7914) derives 32 bytes
from the passphrase; AES-256-GCM (NIST SP 800-38D) seals the 32 secret bytes under them, with everything else in the
file as associated data, so that neither name nor public key can be exchanged. A backup is a copy of the file.
"""

import os
from pathlib import Path
from typing import Annotated, Final, Literal

import msgspec
from msgspec import Meta

from clinicalc.coefficients.file_types import FileStruct, Label
from clinicalc.errors import FileNotWritten, KeyRefused
from clinicalc.library import base64url
from clinicalc.library.keys import KeyCard, SigningKey, check_name, decode_public, key_id, make_private, signing_key
from clinicalc.library.passphrases import check_passphrase, passphrase_bytes
from clinicalc.library.places import FOUNDING_FILE
from clinicalc.library.records import PublicKey
from clinicalc.library.small_files import decode_strictly, read_small
from clinicalc.replacement import create_file, replace_file

COST = 2**17
"""scrypt's n: with r = 8 each guess takes 128 MB and a quarter of a second to half a second."""
BEFORE_MAKING = (
    "This passphrase cannot be recovered: not by you, not by us, not by anybody. If it is forgotten, or the file is "
    "lost without a copy, nothing can be signed with this key again, and another must be appointed in its place. "
    "Keep a copy of the file, and write the passphrase down where you keep what must not be lost."
)
"""To be said before a key is made."""
_FORMAT: Final = "clinicalc.key/1"
_BLOCK = 8
_LANES = 1
_MOST_WORK = 2**22
"""The largest n * r * p that a file may ask for, four times the usual: more would only hold the program up."""
_MOST_BYTES = 10_000
_WHAT = "a key file"


class Derivation(FileStruct, frozen=True):
    """How the passphrase becomes the sealing key."""

    name: Literal["scrypt"]
    n: Annotated[int, Meta(ge=2, le=2**21)]
    r: Annotated[int, Meta(ge=1, le=32)]
    p: Annotated[int, Meta(ge=1, le=16)]
    salt: Annotated[str, Meta(pattern=r"^[A-Za-z0-9_-]{22}$")]


class Cipher(FileStruct, frozen=True):
    """How the secret bytes are sealed."""

    name: Literal["aes-256-gcm"]
    nonce: Annotated[str, Meta(pattern=r"^[A-Za-z0-9_-]{16}$")]


class KeyFile(FileStruct, frozen=True):
    """What a key file holds."""

    format: Literal["clinicalc.key/1"]
    name: Label
    public: PublicKey
    derivation: Derivation
    cipher: Cipher
    sealed: Annotated[str, Meta(pattern=r"^[A-Za-z0-9_-]{64}$")]


def make_key(path: Path, name: str, passphrase: str, *, cost: int = COST) -> KeyCard:
    """Make a new key and put its file at `path`, readable by its owner only; its card.

    `cost` is scrypt's n. Raises KeyRefused for a passphrase or a name that will not do, for a file that is there
    already, and for a place inside a library's folder; FileNotWritten where it cannot be written.
    """
    check_passphrase(passphrase)
    check_name(name)
    check_place(path)
    private = make_private()
    key = signing_key(private, name)
    data = _seal(private, key, passphrase, cost)
    try:
        create_file(path, data)
    except FileExistsError:
        raise _taken(path) from None
    except (OSError, ValueError) as fault:
        raise _not_written(path, fault) from None
    return key.card


def open_key(path: Path, passphrase: str) -> SigningKey:
    """The key in the file at `path`, ready to sign. Takes as long as its cost says, up to half a second.

    Raises KeyRefused for a wrong passphrase, and for a file that is missing, damaged or no key file.
    """
    _, key = _open(path, passphrase)
    return key


def read_card(path: Path) -> KeyCard:
    """What a key file says openly. No passphrase is asked, so nothing proves that the file can be opened."""
    return _card(_read(path), path)


def change_passphrase(path: Path, old: str, new: str, *, cost: int = COST) -> KeyCard:
    """Seal the same key under another passphrase, in place, whole or not at all; copies keep the old passphrase.

    Raises KeyRefused as `open_key` and `make_key` do, FileNotWritten where the file cannot be written.
    """
    check_passphrase(new)
    private, key = _open(path, old)
    try:
        replace_file(path.resolve(), _seal(private, key, new, cost))  # where it is a link, the link stays
    except (OSError, ValueError) as fault:
        raise _not_written(path, fault) from None
    return key.card


def check_place(path: Path) -> None:
    """Raises KeyRefused where no new key may be put: on a file, or in a library's folder or below it."""
    if os.path.lexists(path):
        raise _taken(path)
    try:
        library = _library_round(path.absolute().parent)
    except ValueError as fault:
        raise _not_written(path, fault) from None
    if library is not None:
        raise KeyRefused(
            "a private key is never kept inside a library's folder.",
            where=str(path),
            why=f"{library} holds {FOUNDING_FILE}, and a library is copied and shared.",
            do="Choose a folder of your own, such as one on a stick that you carry. No key was made.",
        )


def require_outside_library(path: Path) -> None:
    """Nothing where the key file is in no library's folder. Raises KeyRefused: whoever reads the library has a copy."""
    try:
        library = _library_round(Path(os.path.realpath(path)).parent)
    except ValueError:
        return  # no file has such a name, which reading it says
    if library is not None:
        raise KeyRefused(
            "this private key lies inside a library's folder, and is not used from there.",
            where=str(path),
            why="A library is copied and shared, so that others may have a copy of the key.",
            do="Move it to a folder of your own; where others may have a copy, have it revoked.",
        )


def _library_round(folder: Path) -> Path | None:
    """The library in whose folder this one lies, or which it is; None where there is none."""
    place = Path(os.path.realpath(folder))
    return next((one for one in (place, *place.parents) if os.path.lexists(one / FOUNDING_FILE)), None)


def _open(path: Path, passphrase: str) -> tuple[bytes, SigningKey]:
    from cryptography.exceptions import InvalidTag
    from cryptography.hazmat.primitives.ciphers.aead import AESGCM

    held = _read(path)
    card = _card(held, path)
    derived = _derive(held.derivation, passphrase, path)
    nonce, sealed = base64url.decode(held.cipher.nonce), base64url.decode(held.sealed)
    if nonce is None or sealed is None:
        raise _damaged(path)
    try:
        private = AESGCM(derived).decrypt(nonce, sealed, _associated(held))
    except InvalidTag:
        raise KeyRefused(
            "the passphrase does not open this key.",
            where=str(path),
            why="Or the file was changed after it was made: the two cannot be told apart.",
            do="Type it again; mind capital letters and the keyboard's language. A forgotten passphrase is final.",
        ) from None
    key = signing_key(private, held.name)
    if key.id != card.id:
        raise _damaged(path)
    return private, key


def _seal(private: bytes, key: SigningKey, passphrase: str, cost: int) -> bytes:
    from cryptography.hazmat.primitives.ciphers.aead import AESGCM

    derivation = Derivation("scrypt", cost, _BLOCK, _LANES, base64url.encode(os.urandom(16)))
    nonce = os.urandom(12)
    held = KeyFile(_FORMAT, key.name, key.public, derivation, Cipher("aes-256-gcm", base64url.encode(nonce)), "")
    derived = _derive(derivation, passphrase, None)
    sealed = AESGCM(derived).encrypt(nonce, private, _associated(held))
    whole = msgspec.structs.replace(held, sealed=base64url.encode(sealed))
    return msgspec.json.format(msgspec.json.encode(whole), indent=2) + b"\n"


def _associated(held: KeyFile) -> bytes:
    """Everything in the file but what is sealed, in canonical bytes."""
    import rfc8785

    open_part = msgspec.to_builtins(held)
    del open_part["sealed"]
    return rfc8785.dumps(open_part)


def _derive(derivation: Derivation, passphrase: str, path: Path | None) -> bytes:
    from cryptography.hazmat.primitives.kdf.scrypt import Scrypt

    n, r, p = derivation.n, derivation.r, derivation.p
    salt = base64url.decode(derivation.salt)
    if salt is None or n & (n - 1) or n * r * p > _MOST_WORK:
        raise KeyRefused(
            f"its derivation (n {n}, r {r}, p {p}) cannot be followed.",
            where="" if path is None else str(path),
            why="n must be a power of 2, and n × r × p at most 4194304.",
            do="Take the key from its backup.",
        )
    try:
        return Scrypt(salt=salt, length=32, n=n, r=r, p=p).derive(passphrase_bytes(passphrase))
    except MemoryError:
        raise KeyRefused(
            f"there is not enough memory to open a key: it takes {128 * n * r // 2**20} MB.",
            do="Close other programs and try again.",
        ) from None


def _read(path: Path) -> KeyFile:
    return decode_strictly(read_small(path, _MOST_BYTES, _WHAT), KeyFile, str(path), _WHAT)


def _card(held: KeyFile, path: Path) -> KeyCard:
    try:
        return KeyCard(key_id(decode_public(held.public)), held.public, held.name)
    except KeyRefused as fault:
        raise KeyRefused(fault.what, where=str(path), do="Take the key from its backup.") from None


def _taken(path: Path) -> KeyRefused:
    return KeyRefused(
        "there is a file of this name already, and a key is never put over another file.",
        where=str(path),
        do="Choose another name. No key was made.",
    )


def _damaged(path: Path) -> KeyRefused:
    return KeyRefused("this key file is damaged.", where=str(path), do="Take the key from its backup.")


def _not_written(path: Path, fault: OSError | ValueError) -> FileNotWritten:
    said = getattr(fault, "strerror", None) or "its name cannot be a file name"
    return FileNotWritten(
        "the key file could not be written.",
        where=str(path),
        why=f"The computer says: {said}.",
        do="Choose another folder, or make room on this one. Nothing was left behind.",
    )
