"""The nouns of a library record: what is stated about a model or about the library, by whom, after what.

A record file is the canonical JSON (RFC 8785) of {"record", "signatures"}; its digest, SHA-256 over those bytes, is
part of its name. The signatures cover the canonical bytes of the "record" object alone.
"""

from typing import Annotated, Final, Literal

from msgspec import UNSET, Meta, UnsetType

from clinicalc.coefficients.file_types import Day, FileStruct, Id, Label, ModelId, Text, Version
from clinicalc.coefficients.schema import DecisionPoint, Signature

RECORD_FORMAT: Final = "clinicalc.record/1"
ABOUT_THE_LIBRARY = "0" * 64
"""What the records about the library itself are about: founding, approvers, revocations, policy."""

Digest = Annotated[str, Meta(pattern=r"^[0-9a-f]{64}$")]
"""64 lower-case hexadecimal digits: a fingerprint, a record's digest, or a key's id."""
DigestOrNone = Annotated[str, Meta(pattern=r"^([0-9a-f]{64})?$")]
"""A digest, or "" for none. One pattern: msgspec reads a union of two kinds of text by the pattern of one."""
PublicKey = Annotated[str, Meta(pattern=r"^[A-Za-z0-9_-]{43}$")]
"""A raw Ed25519 public key, base64url without padding."""
Moment = Annotated[str, Meta(pattern=r"^[0-9]{4}-[0-9]{2}-[0-9]{2}T[0-9]{2}:[0-9]{2}:[0-9]{2}Z$")]
KnownBy = Literal["fingerprint", "signature", "fingerprint_and_signature"]
"""By what an approver knew a file: its whole fingerprint typed, the signature of a publisher trusted there, or both."""
Place = Annotated[str, Meta(max_length=400)]
"""A JSON Pointer; "" is the whole model."""


class Policy(FileStruct, frozen=True):
    """What the practice allows by way of exception."""

    author_may_approve: bool = False
    offline_hours: Annotated[int, Meta(ge=0, le=720)] = 24


class Approver(FileStruct, frozen=True):
    """A person who may install, approve and withdraw, and that person's key."""

    name: Label
    role: Label
    key: PublicKey


class Founding(FileStruct, frozen=True, tag_field="kind", tag="founding"):
    """The first record of a library. `key` is the practice's own."""

    practice: Label
    key: PublicKey
    policy: Policy


class Approvers(FileStruct, frozen=True, tag_field="kind", tag="approvers"):
    """Everybody who may approve from here on; takes the place of the list before it."""

    approvers: tuple[Approver, ...]


class PolicyChanged(FileStruct, frozen=True, tag_field="kind", tag="policy"):
    """Another policy from here on."""

    policy: Policy
    reason: Text


class KeyRevoked(FileStruct, frozen=True, tag_field="kind", tag="key_revoked"):
    """A key that gives no number any more: its approvals are void, but for those that are named here.

    The names are digests, because nothing else separates what an owner signed from what a thief signs later: whoever
    has the key can write a record with an old date that follows old records. What the key said in the safe direction
    stays (see `mandate.py`).
    """

    key: Digest
    reason: Text
    still_valid: tuple[Digest, ...] = ()
    """The digests of the approvals that stay in force."""


class Installed(FileStruct, frozen=True, tag_field="kind", tag="installed"):
    """A coefficient file came into the library. Its own signatures are kept here, since its name is its content."""

    id: ModelId
    version: Version
    title: Label
    came_from: Text
    signatures: tuple[Signature, ...] = ()


class Compared(FileStruct, frozen=True):
    """Who compared one unconfirmed figure (a JSON Pointer into the file's model) with its source."""

    at: Place
    by: Label


class Approved(FileStruct, frozen=True, tag_field="kind", tag="approved"):
    """The model may be used at the bedside until the end of `review_until`, with these choices.

    `by_author`: the approver's key had signed the file, or had installed a file nobody signed. `known_by` is left out
    in records of before it was stated.
    """

    reason: Text
    review_until: Day
    recalibration: Id | None
    decision_points: tuple[DecisionPoint, ...]
    compared: tuple[Compared, ...]
    by_author: bool
    known_by: KnownBy | UnsetType = UNSET


class Withdrawn(FileStruct, frozen=True, tag_field="kind", tag="withdrawn"):
    """The model may no longer be used."""

    reason: Text


class Commented(FileStruct, frozen=True, tag_field="kind", tag="commented"):
    """A remark that changes nothing."""

    text: Text


Statement = Founding | Approvers | PolicyChanged | KeyRevoked | Installed | Approved | Withdrawn | Commented


class Follows(FileStruct, frozen=True):
    """The newest records that the writer had before him: about the library, and about the same model."""

    library: tuple[Digest, ...]
    model: tuple[Digest, ...]


class Record(FileStruct, frozen=True):
    """One signed statement. `library` is the digest of the founding record, "" in that record itself."""

    format: Literal["clinicalc.record/1"]
    library: DigestOrNone
    about: Digest
    follows: Follows
    written: Moment
    by: Digest
    """The id of the key that signs: SHA-256 over the raw public key."""
    name: Label
    role: Label
    statement: Statement


class RecordFile(FileStruct, frozen=True):
    """What a record file holds."""

    record: Record
    signatures: Annotated[tuple[Signature, ...], Meta(min_length=1, max_length=1)]
