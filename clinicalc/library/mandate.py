"""Who may sign at a point of the library's own chain, what the practice then allows, and which keys were revoked.

A record about a model names the newest records about the library that its writer saw; at these it is judged.

What a revocation takes away. Whoever has a key can write a record with an old date which follows old records, so
neither dates nor the chain tell an owner's approval from a thief's. Therefore, wherever the revocation stands:

- an approval by a revoked key is void, unless every revocation of that key names the approval's digest;
- whatever follows the revocation is void;
- what else the key signed stays: an installation and a remark give no number, and a withdrawal takes one away. A thief
  can stop a model with it, as anybody can who deletes a file, but never bring one into use.

A list of approvers without somebody's name does less than a revocation: it takes nothing away, and the key can still
sign as if the list were not known, where nobody who knew it has written about the model since. To dismiss a person
therefore revokes the key besides, and names every approval by it that counted then (`appointing.dismiss`).
"""

from collections.abc import Iterable
from dataclasses import dataclass

from clinicalc.errors import KeyRefused
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.ordering import Chain, order_records
from clinicalc.library.records import Approved, Approver, Approvers, Founding, KeyRevoked, Policy, PolicyChanged
from clinicalc.library.standing import Authority, SealedRecord


@dataclass(frozen=True, slots=True)
class Mandate:
    """What holds at one point: the approvers by the ids of their keys, the policy, and what was in dispute."""

    approvers: tuple[tuple[str, Approver], ...]
    policy: Policy
    lists: tuple[SealedRecord, ...]
    """The lists of approvers in force: more than one where none follows the others."""
    policies: tuple[SealedRecord, ...]
    """The records of the policy in force, likewise."""

    def find(self, key: str) -> Approver | None:
        """The approver whose key has this id."""
        return dict(self.approvers).get(key)


def read_mandate(chain: Chain, heads: Iterable[str]) -> Mandate:
    """What holds where the records `heads` are the newest ones about the library.

    Of several lists that do not follow each other, those persons count who are on every one; of several policies, each
    exception must be allowed by all, and the shortest time without the library holds. Keys revoked up to here are left
    out, and so are keys that nobody may trust.
    """
    seen = chain.up_to(heads)
    lists = chain.newest(sealed for sealed in seen if isinstance(sealed.record.statement, Approvers))
    policies = chain.newest(sealed for sealed in seen if isinstance(sealed.record.statement, PolicyChanged | Founding))
    revoked = {
        statement.key for statement in (sealed.record.statement for sealed in seen) if isinstance(statement, KeyRevoked)
    }
    by_list = [usable_approvers(sealed) for sealed in lists]
    counted = {
        key: approver
        for key, approver in (by_list[0] if by_list else {}).items()
        if key not in revoked and all(key in others for others in by_list)
    }
    return Mandate(tuple(counted.items()), _strictest(policies), lists, policies)


def usable_approvers(sealed: SealedRecord) -> dict[str, Approver]:
    """The approvers of a list by the ids of their keys, without those whose key is refused (small order)."""
    statement = sealed.record.statement
    found: dict[str, Approver] = {}
    for approver in statement.approvers if isinstance(statement, Approvers) else ():
        try:
            found.setdefault(key_id(decode_public(approver.key)), approver)
        except KeyRefused:
            continue
    return found


def authority_chain(authority: Authority) -> Chain:
    """The chain of the records about the library."""
    return order_records(authority.records, lambda sealed: sealed.record.follows.library)


def revocations_of(chain: Chain, key: str) -> tuple[SealedRecord, ...]:
    """Every record that revokes the key, wherever it stands."""
    return tuple(
        sealed
        for sealed in chain.records
        if isinstance(sealed.record.statement, KeyRevoked) and sealed.record.statement.key == key
    )


def find_revocation(chain: Chain, sealed: SealedRecord) -> SealedRecord | None:
    """The revocation that makes a record about a model void, by the rule at the head of this module; None for none."""
    seen = {known.digest for known in chain.up_to(sealed.record.follows.library)}
    for revocation in revocations_of(chain, sealed.record.by):
        statement = revocation.record.statement
        kept = isinstance(statement, KeyRevoked) and sealed.digest in statement.still_valid
        if revocation.digest in seen or (isinstance(sealed.record.statement, Approved) and not kept):
            return revocation
    return None


def _strictest(policies: tuple[SealedRecord, ...]) -> Policy:
    stated = [
        sealed.record.statement.policy
        for sealed in policies
        if isinstance(sealed.record.statement, PolicyChanged | Founding)
    ]
    return Policy(
        author_may_approve=bool(stated) and all(policy.author_may_approve for policy in stated),
        offline_hours=min((policy.offline_hours for policy in stated), default=0),
    )
