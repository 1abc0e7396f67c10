"""Whether one record about a model counts, looked at by itself: its signer, at the point of the library it names."""

from dataclasses import dataclass, field
from functools import lru_cache

from clinicalc.library.keys import decode_public
from clinicalc.library.mandate import (
    Mandate,
    authority_chain,
    find_revocation,
    read_mandate,
    revocations_of,
    usable_approvers,
)
from clinicalc.library.moments import find_impossible
from clinicalc.library.ordering import Chain, named
from clinicalc.library.records import Approved, Approver, Commented, Installed, Withdrawn
from clinicalc.library.sealing import is_signed_by
from clinicalc.library.standing import Authority, Fault, FaultKind, SealedRecord
from clinicalc.units.days import stated_day

REMOVE = "Find out who put this file there, and take it out of the library’s folder."
RESTORE = (
    "Look in another copy of the library for the record as it was, a withdrawal perhaps, before you take this file out."
)
MODEL_STATEMENTS = (Installed, Approved, Withdrawn, Commented)


@dataclass(frozen=True, slots=True)
class Registrar:
    """Admits records about models by what the library's own records say. Made once for a replay."""

    library: str
    chain: Chain
    _keys: dict[str, Approver]
    """Everybody who was ever an approver, by key."""
    _mandates: dict[frozenset[str], Mandate]
    _seen: dict[tuple[str, ...], frozenset[str]] = field(default_factory=dict)

    def mandate(self, sealed: SealedRecord) -> Mandate:
        """What held at the point of the library that the record names."""
        heads = frozenset(sealed.record.follows.library)
        if heads not in self._mandates:
            self._mandates[heads] = read_mandate(self.chain, heads)
        return self._mandates[heads]

    def signer(self, sealed: SealedRecord) -> Approver | None:
        """The approver whose key signed the record, as the list in force at its point names that person."""
        return self.mandate(sealed).find(sealed.record.by)

    def is_revoked(self, sealed: SealedRecord) -> bool:
        """Whether the key that signed the record was revoked anywhere, even where the record itself still counts."""
        return bool(revocations_of(self.chain, sealed.record.by))

    def seen_by(self, sealed: SealedRecord) -> frozenset[str]:
        """The digests of every record about the library that the record follows."""
        heads = sealed.record.follows.library
        if heads not in self._seen:
            self._seen[heads] = frozenset(each.digest for each in self.chain.up_to(heads))
        return self._seen[heads]

    def find_fault(self, sealed: SealedRecord, fingerprint: str) -> Fault | None:
        """Why the record does not count by itself; None where it does so far."""
        return (
            self._misplaced(sealed, fingerprint)
            or find_impossible(sealed)
            or self._ahead(sealed)
            or self._unsigned(sealed)
            or self._revoked(sealed)
            or self._unappointed(sealed)
        )

    def _misplaced(self, sealed: SealedRecord, fingerprint: str) -> Fault | None:
        record = sealed.record
        if record.about != fingerprint:
            rest = f"is about another file ({record.about[:12]}…) than the one it lies with. {REMOVE}"
            return void(FaultKind.MISNAMED_RECORD, fingerprint, sealed, rest)
        if record.library != self.library:
            return void(FaultKind.OTHER_LIBRARY, fingerprint, sealed, f"belongs to another library. {REMOVE}")
        if not isinstance(record.statement, MODEL_STATEMENTS):
            rest = f"says about a model what can only be said of the library. {REMOVE}"
            return void(FaultKind.MISNAMED_RECORD, fingerprint, sealed, rest)
        return None

    def _ahead(self, sealed: SealedRecord) -> Fault | None:
        """A record that names a point of the library which is not there."""
        about, heads = sealed.record.about, sealed.record.follows.library
        if not heads:
            rest = f"does not say which records of the library it follows. {REMOVE}"
            return void(FaultKind.NOT_DESCENDED, about, sealed, rest)
        absent = next((digest for digest in heads if digest not in self.chain), None)
        if absent is None:
            return None
        sentence = (
            f"Record missing: {absent}. It is about the library and says who may approve. {named(sealed)} follows it. "
            "Fetch the file whose name ends in these digits from another copy of the library."
        )
        return Fault(FaultKind.MISSING_RECORD, about, sentence, absent)

    def _unsigned(self, sealed: SealedRecord) -> Fault | None:
        about, approver = sealed.record.about, self._keys.get(sealed.record.by)
        if approver is None:
            rest = f"was signed with a key that was never an approver’s ({sealed.record.by[:12]}…). {REMOVE}"
            return void(FaultKind.UNKNOWN_SIGNER, about, sealed, rest)
        if not is_signed_by(sealed, decode_public(approver.key)):
            rest = f"is not as {approver.name} signed it: it was changed or made up. {RESTORE}"
            return void(FaultKind.BAD_SIGNATURE, about, sealed, rest)
        return None

    def _revoked(self, sealed: SealedRecord) -> Fault | None:
        revocation = find_revocation(self.chain, sealed)
        if revocation is None:
            return None
        rest = (
            f"does not count: its key was revoked on {stated_day(revocation.record.written)} "
            f"({revocation.digest[:12]}…), and the revocation does not name it as still valid. "
            "If it is right, another approver approves it anew."
        )
        return void(FaultKind.REVOKED_SIGNER, sealed.record.about, sealed, rest, stops=False)

    def _unappointed(self, sealed: SealedRecord) -> Fault | None:
        if self.signer(sealed):
            return None
        rest = f"was signed by somebody who was no approver at the point of the library it follows. {REMOVE}"
        return void(FaultKind.UNKNOWN_SIGNER, sealed.record.about, sealed, rest)


@lru_cache(maxsize=2)  # one opening asks for it at every model
def make_registrar(authority: Authority) -> Registrar:
    """The registrar of a library."""
    chain = authority_chain(authority)
    keys: dict[str, Approver] = {}
    for sealed in chain.records:
        keys |= usable_approvers(sealed)
    return Registrar(authority.library, chain, keys, {})


def void(kind: FaultKind, about: str, sealed: SealedRecord, rest: str, *, stops: bool = True) -> Fault:
    """The fault of a record that does not count: the record named, then `rest`."""
    return Fault(kind, about, f"{named(sealed)} {rest}", sealed.digest, stops)
