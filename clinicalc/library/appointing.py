"""What the practice key says about the library: who may approve, which key counts no more, what is allowed."""

import re
from collections.abc import Iterable
from dataclasses import dataclass, replace

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.pointers import REFUSED_CHARACTERS
from clinicalc.errors import LibraryError, UsageError
from clinicalc.library.keys import KeyCard, SigningKey, decode_public, key_id
from clinicalc.library.records import Approved, Approver, Approvers, KeyRevoked, Policy, PolicyChanged
from clinicalc.library.standing import Authority, FaultKind, ModelState, SealedRecord
from clinicalc.library.writing import Desk, approvers_by_key, sign_as_practice
from clinicalc.units.quoting import quote

LONGEST_NAME = 120
LONGEST_TEXT = 4000
LEAST_DIGITS = 12
"""Of an id, so that nobody else is meant by accident."""


def appoint(desk: Desk, key: SigningKey, name: str, role: str, card: KeyCard) -> SealedRecord:
    """A person may install, approve and withdraw from here on, with the key of the card.

    Raises LibraryError for the practice's own key, one that was revoked, and one that is somebody's already.
    """
    return sign_as_practice(desk, key, settle_appointment(desk.authority, name, role, card))


def settle_appointment(authority: Authority, name: str, role: str, card: KeyCard) -> Approvers:
    """The list with one person more. Raises as `appoint` does."""
    grouped = group_fingerprint(card.id, 3)
    if card.id == authority.practice_key:
        raise LibraryError(
            f"{grouped} is the practice key, and keys of approvers belong to persons.",
            do="Let the person make a key with: clinicalc trust make-key.",
        )
    if card.id in revoked_keys(authority):
        raise LibraryError(f"the key {grouped} was revoked.", do="Let the person make another one.")
    holder = approvers_by_key(authority).get(card.id)
    if holder is not None:
        raise LibraryError(
            f"the key {grouped} is that of {holder.name} ({holder.role}) already.",
            do="Appoint a person with a key of their own, or dismiss that one first.",
        )
    approver = Approver(check_label(name, "name"), check_label(role, "role"), card.public)
    return Approvers((*authority.approvers, approver))


@dataclass(frozen=True, slots=True)
class Dismissal:
    """Who may approve no longer, the record that ends the key, the list without it, and the approvals that stay."""

    approver: Approver
    revocation: SealedRecord
    listed: SealedRecord
    still_valid: tuple[str, ...]
    """The digests of the approvals by this key that stay in force."""


def dismiss(desk: Desk, key: SigningKey, who: str) -> Dismissal:
    """The approver with this name, or this id of a key (12 digits at least), may approve no longer.

    What was approved stays valid: it was lawful. Two records are written, the second after the first: the key's
    revocation, which names every approval by it that counts now, and the list without the person. The list alone would
    not do: a former approver could still write as if it were not known (see `mandate.py`). Should the second not be
    written, the key counts no more all the same. Raises LibraryError where nobody or more than one is meant.
    """
    authority = desk.authority
    approver = find_approver(authority, who)
    id = key_id(decode_public(approver.key))
    kept = counting_approvals(desk.models, id)
    reason = f"{approver.name} is no approver of the practice any more."
    revocation = sign_as_practice(desk, key, KeyRevoked(id, reason, kept))
    others = tuple(other for other in authority.approvers if other != approver)
    after = replace(desk, authority=replace(authority, heads=(revocation.digest,)))
    return Dismissal(approver, revocation, sign_as_practice(after, key, Approvers(others)), kept)


def counting_approvals(models: Iterable[ModelState], key: str) -> tuple[str, ...]:
    """The digests of the approvals by the key with this id that count, in force or since replaced by another."""
    found: list[str] = []
    for state in models:
        # a fork is named by a record that counts; every other fault by one that does not
        void = {fault.record for fault in state.faults if fault.kind is not FaultKind.FORK}
        found += [
            sealed.digest
            for sealed in state.records
            if sealed.record.by == key and isinstance(sealed.record.statement, Approved) and sealed.digest not in void
        ]
    return tuple(sorted(found))


def revoke_key(
    desk: Desk, key: SigningKey, id: str, reason: str, still_valid: tuple[str, ...] = ()
) -> tuple[str, SealedRecord]:
    """The key whose id begins so (12 digits at least) counts no more; its whole id, and the record.

    Its approvals are void but for those whose digests are in `still_valid`. The practice's own key may be revoked with
    its whole id; the library then gives nothing any more. Raises LibraryError where no one key of this library is
    meant, or one that was revoked already.
    """
    statement = settle_revocation(desk.authority, id, reason, still_valid)
    return statement.key, sign_as_practice(desk, key, statement)


def settle_revocation(authority: Authority, id: str, reason: str, still_valid: tuple[str, ...] = ()) -> KeyRevoked:
    """What would be revoked, by its whole id. Raises as `revoke_key` does."""
    known = {*_ever_approvers(authority), authority.practice_key}
    told = "".join(id.split()).lower()
    found = sorted(other for other in known if len(told) >= LEAST_DIGITS and other.startswith(told))
    if len(found) != 1:
        raise LibraryError(
            f"{quote(id)} names no one key of this library.",
            do=f"Give its id, or at least its first {LEAST_DIGITS} digits; clinicalc library list shows the approvers.",
        )
    if found[0] == authority.practice_key and told != found[0]:
        raise LibraryError(
            "that is the practice key, and after its revocation the library gives nothing on any machine.",
            do="Give its whole id to do that. Then found another library with a new key, which every machine joins.",
        )
    if found[0] in revoked_keys(authority):
        raise LibraryError(f"the key {group_fingerprint(found[0], 3)} was revoked already.")
    return KeyRevoked(found[0], check_text(reason, "reason"), still_valid)


def change_policy(desk: Desk, key: SigningKey, policy: Policy, reason: str) -> SealedRecord:
    """Another policy from here on. Raises LibraryError where it is the one in force, UsageError for what cannot be."""
    return sign_as_practice(desk, key, settle_policy(desk.authority, policy, reason))


def settle_policy(authority: Authority, policy: Policy, reason: str) -> PolicyChanged:
    """What would be changed. Raises as `change_policy` does."""
    if policy == authority.policy:
        raise LibraryError("that is the policy in force already; nothing was written.")
    if not 0 <= policy.offline_hours <= 720:
        raise UsageError(
            f"{policy.offline_hours} hours is not possible; a copy serves for 0 to 720 hours.",
            do="Give the hours for which a machine may work without the library.",
        )
    return PolicyChanged(policy, check_text(reason, "reason"))


def revoked_keys(authority: Authority) -> frozenset[str]:
    """The ids of the keys that the library's records revoke."""
    statements = (sealed.record.statement for sealed in authority.records)
    return frozenset(statement.key for statement in statements if isinstance(statement, KeyRevoked))


def check_label(text: str, what: str) -> str:
    """The text without white space at its ends. Raises UsageError where nothing or too much is left."""
    return _check(text, what, LONGEST_NAME)


def check_text(text: str, what: str) -> str:
    """The same for what may be longer."""
    return _check(text, what, LONGEST_TEXT)


def _check(text: str, what: str, longest: int) -> str:
    kept = text.strip()
    if not kept:
        raise UsageError(f"the {what} is empty.", do="Say it in a few words.")
    if len(kept) > longest:
        raise UsageError(f"the {what} has {len(kept)} characters, and at most {longest} are kept.")
    if unseen := REFUSED_CHARACTERS.search(kept):
        raise UsageError(f"the {what} holds U+{ord(unseen[0]):04X}, which is not seen.", do="Type it again.")
    return kept


def _ever_approvers(authority: Authority) -> frozenset[str]:
    lists = (sealed.record.statement for sealed in authority.records)
    return frozenset(
        key_id(decode_public(approver.key))
        for each in lists
        if isinstance(each, Approvers)
        for approver in each.approvers
    )


def find_approver(authority: Authority, who: str) -> Approver:
    """The approver in force with this name, or with a key whose id begins so. Raises LibraryError for none, or more."""
    told = "".join(who.split()).lower()
    as_id = re.fullmatch("[0-9a-f]{12,64}", told) is not None
    found = [
        approver
        for id, approver in approvers_by_key(authority).items()
        if (as_id and id.startswith(told)) or approver.name.casefold() == who.strip().casefold()
    ]
    if len(found) == 1:
        return found[0]
    names = ", ".join(approver.name for approver in authority.approvers) or "nobody"
    if found:
        raise LibraryError(f"{len(found)} approvers are called {who.strip()}.", do="Give the id of the key instead.")
    raise LibraryError(f"{quote(who)} is no approver in force.", why=f"Approvers in force: {names}.")
