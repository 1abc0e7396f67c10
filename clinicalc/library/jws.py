"""JSON Web Signatures (RFC 7515) in the general JSON shape, with the payload detached and one algorithm, Ed25519.

Nothing in a signature's header is believed: the algorithm is fixed (RFC 9864 names it), the key is looked up by its id
among the keys this program was told of, and every name beyond the three that belong there is refused.
"""

import functools
import re
from collections.abc import Callable

import rfc8785

from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.schema import Signature
from clinicalc.coefficients.strict_json import parse
from clinicalc.errors import KeyRefused, SignatureRefused
from clinicalc.library import base64url
from clinicalc.library.keys import SigningKey, is_signature, key_id

MODEL_TYPE = "clinicalc-model+1"
RECORD_TYPE = "clinicalc-record+1"
ALGORITHM = "Ed25519"
SIGNATURE_BYTES = 64
LONGEST_HEADER = 1000
_NAMES = ("alg", "kid", "typ")
_DO = "Do not rely on it. Ask the signer to sign again with this program."


def sign(key: SigningKey, payload: bytes, typ: str) -> Signature:
    """The key's signature over the payload, which itself stays outside.

    The signing input is ASCII(protected) || "." || base64url(payload) (RFC 7515, section 5.1).
    """
    header = rfc8785.dumps({"alg": ALGORITHM, "kid": key.id, "typ": typ})
    protected = base64url.encode(header)
    return Signature(protected, base64url.encode(key.sign(signing_input(protected, payload))))


def verify(signature: Signature, payload: bytes, typ: str, find_key: Callable[[str], bytes | None]) -> str:
    """The id of the key whose signature over the payload this is.

    `find_key` gives the raw public key of an id, or None; whether it may be trusted is its affair. Raises
    SignatureRefused with the reason, and never believes a key that the signature brings along.
    """
    kid = read_key_id(signature, typ)
    raw = find_key(kid)
    if raw is None:
        raise _refused(f"the key {kid[:16]}… that signed it is not known here.", "Ask who signed it for the key's id.")
    if key_id(raw) != kid:
        raise _refused(f"another key was found under the id {kid[:16]}… than the one that has it.")
    octets = _signature_bytes(signature)
    try:
        genuine = is_signature(octets, signing_input(signature.protected, payload), raw)
    except KeyRefused as fault:
        raise _refused(fault.what, fault.do) from None
    if not genuine:
        raise _refused("the signature does not fit: what was signed was changed, or another key signed it.")
    return kid


def read_key_id(signature: Signature, typ: str) -> str:
    """The id of the key that the signature names, where its form is the one this program writes; nothing is verified.

    Raises SignatureRefused for another algorithm, another type, or any header but exactly alg, kid and typ.
    """
    kid = _kid_of(signature.protected, typ)
    _signature_bytes(signature)
    return kid


def signing_input(protected: str, payload: bytes) -> bytes:
    """What is signed (RFC 7515, section 5.1)."""
    return f"{protected}.{base64url.encode(payload)}".encode("ascii")


@functools.lru_cache(maxsize=256)  # a key writes the same header every time; a refusal is not remembered
def _kid_of(protected: str, typ: str) -> str:
    header = _read_header(protected)
    extra = [name for name in header if name not in _NAMES]
    if extra:
        raise _refused(f"its header holds {quoted(extra[0])}; only alg, kid and typ are read.")
    absent = [name for name in _NAMES if name not in header]
    if absent:
        raise _refused(f"its header lacks {quoted(absent[0])}.")
    if header["alg"] != ALGORITHM:
        raise _refused(f"its algorithm is {quoted(header['alg'])}; only {quoted(ALGORITHM)} is taken.")
    if header["typ"] != typ:
        raise _refused(f"it is of the type {quoted(header['typ'])}; here {quoted(typ)} must stand.")
    kid = header["kid"]
    if not isinstance(kid, str) or not re.fullmatch("[0-9a-f]{64}", kid):
        raise _refused(f"its key id {quoted(kid)} is not 64 digits of 0-9 and a-f.")
    if rfc8785.dumps({"alg": ALGORITHM, "kid": kid, "typ": typ}) != base64url.decode(protected):
        raise _refused("its header is not written in the one canonical form (RFC 8785).")
    return kid


def _read_header(protected: str) -> dict[str, object]:
    data = base64url.decode(protected) if len(protected) <= LONGEST_HEADER else None
    if data is None:
        raise _refused("its header is not base64url without padding, or is too long.")
    parsed = parse(data)
    if parsed.problems:
        raise _refused(f"its header cannot be read: {parsed.problems[0]}")
    if not isinstance(parsed.value, dict):
        raise _refused("its header is no JSON object.")
    return parsed.value


def _signature_bytes(signature: Signature) -> bytes:
    octets = base64url.decode(signature.signature)
    if octets is None or len(octets) != SIGNATURE_BYTES:
        raise _refused(f"it is not {SIGNATURE_BYTES} bytes in base64url without padding.")
    return octets


def _refused(why: str, do: str = _DO) -> SignatureRefused:
    return SignatureRefused("this signature does not count:", why=why, do=do)
