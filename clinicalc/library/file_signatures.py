"""Signatures on a coefficient file: adding one, and what the ones it has are worth on this machine.

They are over the canonical bytes that the fingerprint is over, so that signing never changes what a file is.
"""

from dataclasses import dataclass
from enum import StrEnum

import msgspec

from clinicalc.assessment.proof import prove_model
from clinicalc.coefficients.reader import ReadFile
from clinicalc.coefficients.schema import CoefficientFile, Signature
from clinicalc.errors import SignatureRefused
from clinicalc.library.jws import MODEL_TYPE, read_key_id, sign, verify
from clinicalc.library.keys import SigningKey
from clinicalc.library.trust_store import TrustStore


class Worth(StrEnum):
    """What a signature is worth on this machine."""

    TRUSTED = "trusted"
    REVOKED = "revoked"
    UNKNOWN = "unknown"
    """The key is not known here, so that nothing could be checked."""
    REFUSED = "refused"


@dataclass(frozen=True, slots=True)
class FileSignature:
    """One signature of a file: `key` is the id it names ("" where it cannot be read), `name` the owner's as known here.

    `why` says why it is refused, "" otherwise.
    """

    key: str
    name: str
    worth: Worth
    why: str = ""


def sign_file(read: ReadFile, key: SigningKey) -> CoefficientFile:
    """The file with the key's signature added; the fingerprint stays.

    Raises CoefficientFileRefused where the file's examples do not come out, SignatureRefused where this key has
    signed it already.
    """
    prove_model(read)
    for signature in read.content.signatures:
        if _is_by(signature, read.canonical, key):
            raise SignatureRefused(
                "this key has signed this file already.", where=read.name, do="Nothing was written; the file is signed."
            )
    added = sign(key, read.canonical, MODEL_TYPE)
    return msgspec.structs.replace(read.content, signatures=(*read.content.signatures, added))


def weigh_signatures(read: ReadFile, trust: TrustStore) -> tuple[FileSignature, ...]:
    """What each signature of the file is worth here, in file order."""
    return tuple(_weigh(signature, read.canonical, trust) for signature in read.content.signatures)


def _weigh(signature: Signature, canonical: bytes, trust: TrustStore) -> FileSignature:
    try:
        kid = read_key_id(signature, MODEL_TYPE)
    except SignatureRefused as fault:
        return FileSignature("", "", Worth.REFUSED, fault.why)
    known = trust.find(kid)
    if known is None:
        return FileSignature(kid, "", Worth.UNKNOWN)
    if known.revoked is not None:
        return FileSignature(kid, known.card.name, Worth.REVOKED)
    try:
        verify(signature, canonical, MODEL_TYPE, trust.find_key)
    except SignatureRefused as fault:
        return FileSignature(kid, known.card.name, Worth.REFUSED, fault.why)
    return FileSignature(kid, known.card.name, Worth.TRUSTED)


def _is_by(signature: Signature, canonical: bytes, key: SigningKey) -> bool:
    try:
        verify(signature, canonical, MODEL_TYPE, lambda kid: key.raw if kid == key.id else None)
    except SignatureRefused:
        return False
    return True
