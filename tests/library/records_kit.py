"""Chains of records for tests: an invented practice that founds, appoints, installs, approves and withdraws.

Every record is sealed with real keys made from names. What a record follows is, unless said, whatever nobody follows
yet; that is worked out here by itself, not by the code under test.
"""

import hashlib
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace
from datetime import datetime, timedelta, timezone
from typing import TypedDict, Unpack

import msgspec
import rfc8785

from clinicalc.coefficients.schema import DecisionPoint, Signature
from clinicalc.library.authority import replay_authority
from clinicalc.library.jws import RECORD_TYPE, sign
from clinicalc.library.keys import SigningKey
from clinicalc.library.model_chain import replay_model
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    RECORD_FORMAT,
    Approved,
    Approver,
    Approvers,
    Commented,
    Follows,
    Founding,
    Installed,
    KeyRevoked,
    Policy,
    PolicyChanged,
    Record,
    RecordFile,
    Statement,
    Withdrawn,
)
from clinicalc.library.sealing import seal, unseal
from clinicalc.library.standing import Authority, Fault, FaultKind, ModelState, SealedRecord
from tests.library.keys_at_hand import key_of

NOW = datetime(2026, 12, 1, 12, 0, tzinfo=timezone(timedelta(hours=1)))
WRITTEN = "2026-12-01T10:00:00Z"
MODEL = hashlib.sha256(b"one model").hexdigest()
OTHER_MODEL = hashlib.sha256(b"another model").hexdigest()
ADA, BEN, CLEO = "Dr Ada Tarn", "Dr Ben Wick", "Cleo Fell"
POINT = DecisionPoint(probability=0.1, label="offer treatment", source="the practice’s meeting of 3 November")


class Placing(TypedDict, total=False):
    """Where a record about a model stands: what it follows, which records about the library it knows, its time."""

    after: Sequence[SealedRecord]
    knowing: Sequence[SealedRecord]
    written: str


@dataclass
class Practice:
    """A practice with its records in the order in which they were written, all about one model or the library."""

    key: SigningKey
    about_library: list[SealedRecord] = field(default_factory=list)
    about_model: list[SealedRecord] = field(default_factory=list)
    model: str = MODEL
    named: tuple[str, str, str] = ("tarn-score", "1.0.0", "A score for tests")
    """Id, version and title, as the installation records state them."""

    @property
    def library(self) -> str:
        """The library's id."""
        return self.about_library[0].digest

    def say(
        self,
        statement: Statement,
        *,
        key: SigningKey | None = None,
        after: Sequence[SealedRecord] | None = None,
        written: str = WRITTEN,
    ) -> SealedRecord:
        """A record about the library by the practice key, unless another is given; `after` are those it follows."""
        heads = tips(self.about_library) if after is None else after
        library = self.library if self.about_library else ""
        follows = Follows(digests(heads), ())
        sealed = record(key or self.key, statement, library, ABOUT_THE_LIBRARY, follows, written)
        self.about_library.append(sealed)
        return sealed

    def appoint(self, *names: str, after: Sequence[SealedRecord] | None = None) -> SealedRecord:
        """These persons, and nobody else, are approvers."""
        people = tuple(Approver(name, "general practitioner", key_of(name).public) for name in names)
        return self.say(Approvers(people), after=after)

    def revoke(
        self, name: str, *still_valid: SealedRecord, after: Sequence[SealedRecord] | None = None
    ) -> SealedRecord:
        """The key of this name counts no more."""
        return self.say(KeyRevoked(key_of(name).id, "lost on the way home", digests(still_valid)), after=after)

    def allow_authors(self, allowed: bool = True, after: Sequence[SealedRecord] | None = None) -> SealedRecord:
        """Whether an author may approve."""
        return self.say(PolicyChanged(Policy(author_may_approve=allowed), "there are two of us"), after=after)

    def say_of_model(self, statement: Statement, by: str, **place: Unpack[Placing]) -> SealedRecord:
        """A record about the model by a person, after and knowing everything unless said."""
        follows = Follows(
            digests(place.get("knowing", tips(self.about_library))), digests(place.get("after", tips(self.about_model)))
        )
        written = place.get("written", WRITTEN)
        sealed = record(key_of(by), statement, self.library, self.model, follows, written)
        self.about_model.append(sealed)
        return sealed

    def install(
        self, by: str = CLEO, *, signatures: tuple[Signature, ...] = (), **place: Unpack[Placing]
    ) -> SealedRecord:
        """The model came into the library."""
        statement = Installed(*self.named, "handed over on paper", signatures)
        return self.say_of_model(statement, by, **place)

    def approve(
        self,
        by: str = ADA,
        until: str = "2027-06-30",
        *,
        recalibration: str | None = None,
        points: tuple[DecisionPoint, ...] = (),
        by_author: bool = False,
        **place: Unpack[Placing],
    ) -> SealedRecord:
        """The model may be used."""
        statement = Approved("read against its paper", until, recalibration, points, (), by_author)
        return self.say_of_model(statement, by, **place)

    def withdraw(self, by: str = BEN, **place: Unpack[Placing]) -> SealedRecord:
        """The model may not be used."""
        return self.say_of_model(Withdrawn("the paper was corrected"), by, **place)

    def remark(self, by: str = BEN, **place: Unpack[Placing]) -> SealedRecord:
        """Something is said."""
        return self.say_of_model(Commented("seen"), by, **place)

    def authority(self) -> Authority:
        """The replayed authority, with the practice key pinned."""
        return replay_authority(self.about_library, self.library, self.key.id)

    def replay(self, now: datetime = NOW, *, authority: Authority | None = None, model: str = MODEL) -> ModelState:
        """The replayed state of the model."""
        return replay_model(model, self.about_model, authority or self.authority(), now)


def practice(*names: str, policy: Policy | None = None, key: str = "Tarnwick Practice") -> Practice:
    """A practice with these approvers; ADA, BEN and CLEO unless said."""
    made = Practice(key_of(key))
    made.say(Founding("Tarnwick Practice", made.key.public, policy or Policy()))
    made.appoint(*(names or (ADA, BEN, CLEO)))
    return made


def record(
    key: SigningKey, statement: Statement, library: str, about: str, follows: Follows, written: str = WRITTEN
) -> SealedRecord:
    """One sealed record."""
    body = Record(RECORD_FORMAT, library, about, follows, written, key.id, key.name, "signer", statement)
    return seal(body, key)


def edited(sealed: SealedRecord, **changes: object) -> SealedRecord:
    """The record with other fields, well-formed and under its own new digest, and with the old signature."""
    file = msgspec.json.decode(sealed.content, type=RecordFile)
    changed = RecordFile(msgspec.structs.replace(file.record, **changes), file.signatures)
    return unseal(rfc8785.dumps(msgspec.to_builtins(changed)), "edited")


def sealed_by_hand(
    key: SigningKey,
    statement: Statement,
    library: str,
    about: str,
    follows: Follows,
    written: str = WRITTEN,
) -> SealedRecord:
    """A record that was signed without any of the checks that `seal` and `unseal` make."""
    body = Record(RECORD_FORMAT, library, about, follows, written, key.id, key.name, "signer", statement)
    signature = sign(key, rfc8785.dumps(msgspec.to_builtins(body)), RECORD_TYPE)
    content = rfc8785.dumps(msgspec.to_builtins(RecordFile(body, (signature,))))
    return SealedRecord(hashlib.sha256(content).hexdigest(), content, body)


def pretending(thief: SigningKey, owner: str) -> SigningKey:
    """A key that says it is the owner's and signs with the thief's."""
    return replace(key_of(owner), sign=thief.sign)


def tips(records: Iterable[SealedRecord]) -> list[SealedRecord]:
    """Those that no other of them follows."""
    given = list(records)
    followed = {digest for each in given for digest in (*each.record.follows.library, *each.record.follows.model)}
    return [each for each in given if each.digest not in followed]


def digests(records: Iterable[SealedRecord]) -> tuple[str, ...]:
    """The digests of the records."""
    return tuple(each.digest for each in records)


def kinds(faults: Iterable[Fault]) -> list[FaultKind]:
    """What kinds of faults there are, in order."""
    return [fault.kind for fault in faults]
