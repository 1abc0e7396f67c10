"""Where a model stands in the library, and what is wrong with its records."""

from dataclasses import dataclass
from datetime import date, datetime
from enum import StrEnum

from clinicalc.coefficients.schema import DecisionPoint
from clinicalc.library.records import Approver, Compared, KnownBy, Policy, Record


class Standing(StrEnum):
    """What may be done with a model. Only IN_USE gives a number at the bedside."""

    WAITING = "waiting"
    IN_USE = "in_use"
    REVIEW_OVERDUE = "review_overdue"
    WITHDRAWN = "withdrawn"
    HELD = "held"
    REFUSED = "refused"


class FaultKind(StrEnum):
    """What was found wrong; part of exported records, so a code is never given a second meaning."""

    CHANGED_FILE = "changed_file"
    MISSING_FILE = "missing_file"
    MISNAMED_RECORD = "misnamed_record"
    UNREADABLE_RECORD = "unreadable_record"
    BAD_SIGNATURE = "bad_signature"
    UNKNOWN_SIGNER = "unknown_signer"
    REVOKED_SIGNER = "revoked_signer"
    OTHER_LIBRARY = "other_library"
    MISSING_RECORD = "missing_record"
    NOT_DESCENDED = "not_descended"
    OTHER_PRACTICE_KEY = "other_practice_key"
    FROM_THE_FUTURE = "from_the_future"
    LACKS_WHAT_WAS_SEEN = "lacks_what_was_seen"
    CLOCK_SET_BACK = "clock_set_back"
    OUT_OF_REACH = "out_of_reach"
    """The library cannot be read now; a caution while the verified copy on this machine may serve, then a stop."""
    NOT_A_FILE = "not_a_file"
    STRAY = "stray"
    BY_AUTHOR = "by_author"
    """An approval by the one who made or brought the file, where the practice does not allow that."""
    FORK = "fork"
    """Two records that do not follow each other: lawful, and to be settled by an approval that follows both."""


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that was found. `about` is a model's fingerprint, or `ABOUT_THE_LIBRARY`; `sentence` says what and why.

    `stops` is False for what is only to be said (a stray file, a fork that is settled on the safe side).
    """

    kind: FaultKind
    about: str
    sentence: str
    record: str = ""
    """The digest of the record concerned, "" for none."""
    stops: bool = True


@dataclass(frozen=True, slots=True)
class SealedRecord:
    """A record whose bytes, name and signature agree; whether its signer may say so is another question."""

    digest: str
    content: bytes
    record: Record


@dataclass(frozen=True, slots=True)
class Authority:
    """What the records about the library say, at their newest end; only records that count are kept in it."""

    library: str
    practice: str
    practice_key: str
    """The id of the practice's key."""
    approvers: tuple[Approver, ...]
    policy: Policy
    heads: tuple[str, ...]
    records: tuple[SealedRecord, ...]
    """In an order in which every record stands after those it follows."""
    faults: tuple[Fault, ...]


@dataclass(frozen=True, slots=True)
class Approval:
    """An approval in force."""

    digest: str
    name: str
    role: str
    reason: str
    written: datetime
    review_until: date
    recalibration: str | None
    decision_points: tuple[DecisionPoint, ...]
    compared: tuple[Compared, ...]
    by_author: bool
    known_by: KnownBy | None = None
    """By what the approver knew the file, None where the record does not say."""


@dataclass(frozen=True, slots=True)
class ModelState:
    """Where one model stands, as its chain says; dates only decide whether a review is overdue."""

    fingerprint: str
    id: str
    version: str
    title: str
    standing: Standing
    reason: str
    """Why it is withdrawn, held or refused, or why two approvals give none together; "" otherwise."""
    approval: Approval | None
    heads: tuple[str, ...]
    """The newest records that count; the next record about the model follows them."""
    records: tuple[SealedRecord, ...]
    """All that were found, each after those it follows; the faults name those that do not count."""
    faults: tuple[Fault, ...]
