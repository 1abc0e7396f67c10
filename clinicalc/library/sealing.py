"""Sealing a record and opening a sealed one: bytes, digest and signature block; trust is decided elsewhere."""

import hashlib
from collections.abc import Iterable
from datetime import date, datetime
from itertools import islice

import msgspec
import rfc8785

from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.schema import Signature
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.strict_json import parse
from clinicalc.errors import KeyRefused, LibraryError, SignatureRefused
from clinicalc.library.jws import RECORD_TYPE, read_key_id, sign, verify
from clinicalc.library.keys import SigningKey, decode_public, key_id
from clinicalc.library.records import Approved, Approvers, Founding, Record, RecordFile
from clinicalc.library.standing import SealedRecord

MOST_BYTES = 256 * 1024
_MOST_PROBLEMS = 5
_PROVED: dict[tuple[str, str], SealedRecord] = {}
"""Records by their digests and the ids of the keys that were found to have signed them."""
_DO = "It counts for nothing. Fetch the record again from where it came from; do not mend it by hand."


def seal(record: Record, key: SigningKey) -> SealedRecord:
    """The record, signed by the key and in its canonical bytes, as its file will hold it.

    It is opened again before it is given back, so that nothing is sealed which could not be read. Raises
    SignatureRefused where the record names another key than this one as its signer, LibraryError where something in
    the record cannot stand there.
    """
    if record.by != key.id:
        raise SignatureRefused(
            f"the record says that the key {record.by[:16]}… signs it, and the key at hand is {key.id[:16]}….",
            do="Nothing was signed. Open the key of the person who is named.",
        )
    content = _canonical(RecordFile(record, (sign(key, _canonical(record), RECORD_TYPE),)))
    return unseal(content, "this record")


def unseal(content: bytes, name: str) -> SealedRecord:
    """The record in a file's bytes; `name` is for sentences. No key is asked and no trust is decided.

    Raises LibraryError where the bytes are too many, no strict JSON, not of a record's shape, or not exactly the
    canonical ones (RFC 8785), or where a day or a key in it cannot be one; SignatureRefused where the signature block
    is not of the form this program writes, or names another signer than the record.
    """
    if len(content) > MOST_BYTES:
        raise _refused(name, f"it is larger than 256 KB ({MOST_BYTES} bytes), the limit for a record.")
    parsed = parse(content)
    problems = [str(problem) for problem in parsed.problems]
    if parsed.readable and not problems:
        problems = [str(problem) for problem in islice(find_shape_problems(parsed.value, RecordFile), _MOST_PROBLEMS)]
    if problems:
        raise _refused(name, " ".join(problems[:_MOST_PROBLEMS]))
    opened = _decode(content, name)
    if _canonical(opened) != content:
        raise _refused(name, "its bytes are not exactly the canonical ones (RFC 8785), so it is not as it was sealed.")
    fault = _fault_of(opened.record)
    if fault:
        raise _refused(name, fault)
    try:
        kid = read_key_id(opened.signatures[0], RECORD_TYPE)
    except SignatureRefused as refused:
        raise SignatureRefused(refused.what, where=name, why=refused.why, do=_DO) from None
    if kid != opened.record.by:
        raise SignatureRefused(
            f"the record says that the key {opened.record.by[:16]}… signed it, its signature says {kid[:16]}….",
            where=name,
            do=_DO,
        )
    return SealedRecord(_digest(content), content, opened.record)


def signature_of(sealed: SealedRecord) -> Signature:
    """The record's one signature."""
    return _decode(sealed.content, sealed.digest).signatures[0]


def is_signed_by(sealed: SealedRecord, raw_public: bytes) -> bool:
    """Whether the key of these 32 bytes signed exactly this record.

    The bytes are looked at again, so that a record which was put together otherwise than by `seal` and `unseal`
    cannot pass, nor one in other bytes than the canonical ones; a key that is refused has signed nothing. Only where
    this very process found the same bytes and record signed are they not looked at again.
    """
    id = key_id(raw_public)
    proved = _PROVED.get((sealed.digest, id))
    if proved is not None and proved.content == sealed.content and proved.record == sealed.record:
        return True
    opened = _decode(sealed.content, sealed.digest)
    if opened.record != sealed.record or opened.record.by != id or _digest(sealed.content) != sealed.digest:
        return False
    payload = _canonical(opened.record)
    if sealed.content != b'{"record":%s,"signatures":%s}' % (payload, _canonical(opened.signatures)):
        return False
    try:
        verify(
            opened.signatures[0],
            payload,
            RECORD_TYPE,
            lambda kid: raw_public if kid == id else None,
        )
    except SignatureRefused:
        return False
    _PROVED[sealed.digest, id] = sealed
    return True


def is_proved(sealed: SealedRecord) -> bool:
    """Whether the record's signature has been found good, under the key that it names."""
    return _PROVED.get((sealed.digest, sealed.record.by)) == sealed


def _fault_of(record: Record) -> str:
    """A day or time that never was, or a key that nobody may trust, as a clause; "" for none.

    What the shape cannot say, so that whoever reads a record may take its days and keys as they stand.
    """
    try:
        datetime.strptime(record.written, "%Y-%m-%dT%H:%M:%SZ")
    except ValueError:
        return f"{quoted(record.written)}, when it was written, is no moment there is."
    match record.statement:
        case Approved(review_until=day):
            try:
                date.fromisoformat(day)
            except ValueError:
                return f"{quoted(day)}, the end of its approval, is no day there is."
        case Founding(key=key):
            return _fault_of_keys((key,))
        case Approvers(approvers=approvers):
            return _fault_of_keys(approver.key for approver in approvers)
    return ""


def _fault_of_keys(keys: Iterable[str]) -> str:
    try:
        for key in keys:
            decode_public(key)
    except KeyRefused as fault:
        return f"a key in it cannot be trusted: {fault.what.removeprefix('this public key is refused: ')}"
    return ""


def _decode(content: bytes, name: str) -> RecordFile:
    try:
        return msgspec.json.decode(content, type=RecordFile)
    except (msgspec.MsgspecError, RecursionError) as fault:
        raise _refused(name, f"it has not the shape of a record ({fault}).") from None


def _canonical(content: Record | RecordFile | tuple[Signature, ...]) -> bytes:
    try:
        return rfc8785.dumps(msgspec.to_builtins(content))
    except rfc8785.CanonicalizationError as fault:
        raise _refused("this record", f"it holds what JSON cannot carry exactly ({fault}).") from None


def _digest(content: bytes) -> str:
    return hashlib.sha256(content).hexdigest()


def _refused(name: str, why: str) -> LibraryError:
    return LibraryError("this record is refused:", where=name, why=why, do=_DO)
