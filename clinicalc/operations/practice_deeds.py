"""What only the practice key says, with the sentences that tell what it did: people, keys, policy."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from pathlib import Path

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library import appointing
from clinicalc.library.approving import approval_in_force
from clinicalc.library.cards import read_card_file
from clinicalc.library.finding import find_state
from clinicalc.library.keys import SigningKey
from clinicalc.library.records import Policy
from clinicalc.library.standing import ModelState, SealedRecord, Standing
from clinicalc.library.writing import Desk
from clinicalc.report.phrases import count_words
from clinicalc.units.days import day_words


@dataclass(frozen=True, slots=True)
class PracticeDeed:
    """What was written, and the sentences that say what it did.

    `still_valid` are digests of approvals; `key` is the id of a key that counts no more, "" where none does.
    """

    record: SealedRecord
    says: tuple[str, ...]
    still_valid: tuple[str, ...] = ()
    revocation: str = ""
    key: str = ""


def appoint(desk: Desk, key: SigningKey, card_file: Path, role: str, name: str = "") -> PracticeDeed:
    """A person may install, approve and withdraw; the name is that of the card where none is given."""
    card = read_card_file(card_file)
    named = name or card.name
    record = appointing.appoint(desk, key, named, role, card)
    said = f"{named} ({role}) may now install, approve and withdraw models."
    return PracticeDeed(record, (said, f"Key {group_fingerprint(card.id)}"))


def check_appointment(desk: Desk, card_file: Path, role: str, name: str = "") -> None:
    """Nothing where the person may be appointed. Raises what `appoint` raises before any key is needed."""
    card = read_card_file(card_file)
    appointing.settle_appointment(desk.authority, name or card.name, role, card)


def dismiss(desk: Desk, key: SigningKey, who: str) -> PracticeDeed:
    """A person may approve no longer; what that person approved stays valid, and is named."""
    done = appointing.dismiss(desk, key, who)
    gone = done.approver
    said = (
        f"{gone.name} ({gone.role}) may no longer install, approve or withdraw, and that key counts no more for"
        " anything new. To come back, the person makes another key."
    )
    kept = say_kept(desk.models, done.still_valid, gone.name)
    return PracticeDeed(done.listed, (said, *kept), done.still_valid, done.revocation.digest)


def revoke_key(desk: Desk, key: SigningKey, id: str, reason: str, still_valid: Iterable[str]) -> PracticeDeed:
    """A key counts no more; the approvals of the models in `still_valid` (ids or fingerprints) stay in force."""
    whole, record = appointing.revoke_key(desk, key, id, reason, approvals_of(desk, still_valid))
    return PracticeDeed(record, (f"The key {group_fingerprint(whole, 3)} counts no more.",), key=whole)


def check_revocation(desk: Desk, id: str, reason: str, still_valid: Iterable[str]) -> None:
    """Nothing where the key may be revoked so. Raises what `revoke_key` raises before any key is needed."""
    appointing.settle_revocation(desk.authority, id, reason, approvals_of(desk, still_valid))


def set_policy(desk: Desk, key: SigningKey, policy: Policy, reason: str) -> PracticeDeed:
    """The policy from here on."""
    record = appointing.change_policy(desk, key, policy, reason)
    may = "may" if policy.author_may_approve else "may not"
    return PracticeDeed(
        record,
        (
            f"Who made or brought a file {may} approve it.",
            f"Without the library, a machine works on for {policy.offline_hours} hours.",
        ),
    )


def approvals_of(desk: Desk, words: Iterable[str]) -> tuple[str, ...]:
    """The digests of the approvals in force of these models. Raises LibraryError where one has none."""
    return tuple(approval_in_force(find_state(desk.models, each)).digest for each in words)


def say_kept(models: Iterable[ModelState], digests: tuple[str, ...], name: str) -> tuple[str, ...]:
    """The models of which these approvals, by one person, stay valid; those approvals in force are set apart."""
    if not digests:
        return (f"{name} had approved nothing that counts now.",)
    in_force, replaced = list[str](), 0
    for state in models:
        of_model = [sealed for sealed in state.records if sealed.digest in digests]
        current = [one for one in of_model if state.approval is not None and one.digest == state.approval.digest]
        if current and state.approval is not None:
            in_force.append(f"{state.title} {state.version} (until {day_words(state.approval.review_until)})")
        replaced += len(of_model) - len(current)
    said = "; ".join(in_force) or "none that is in force now"
    earlier = f" So do {count_words(replaced, 'approval')} of former days, for the history." if replaced else ""
    return (f"What {name} approved stays valid: {said}.{earlier}",)


def say_lost(before: Iterable[ModelState], after: Iterable[ModelState]) -> tuple[str, ...]:
    """The models that gave numbers before and no longer do, in a sentence; nothing where there are none."""
    lost = tuple(_lost(before, after))
    return (f"No longer in use: {'; '.join(lost)}.",) if lost else ()


def _lost(before: Iterable[ModelState], after: Iterable[ModelState]) -> Iterator[str]:
    gave = {state.fingerprint for state in before if state.standing is Standing.IN_USE}
    for state in sorted(after, key=lambda one: one.fingerprint):
        if state.fingerprint in gave and state.standing is not Standing.IN_USE:
            yield f"{state.title} {state.version}"
