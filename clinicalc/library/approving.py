"""Approving a model until a review date, with the choices that hold at the bedside; and approving it for longer."""

from datetime import date

from msgspec import UNSET, UnsetType
from msgspec.structs import replace

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.reader import ReadFile
from clinicalc.errors import LibraryError, UsageError
from clinicalc.library.appointing import check_text
from clinicalc.library.authorship import is_author
from clinicalc.library.cards import ID_DIGITS, compare_id
from clinicalc.library.choices import Choices, check_points, check_recalibration, check_review, settle_comparisons
from clinicalc.library.file_signatures import FileSignature, Worth, weigh_signatures
from clinicalc.library.installing import installations, installers
from clinicalc.library.keys import KeyCard, SigningKey
from clinicalc.library.records import Approved, KnownBy
from clinicalc.library.standing import Approval, ModelState, SealedRecord, Standing
from clinicalc.library.trust_store import TrustStore
from clinicalc.library.writing import Desk, require_approver, require_sound, sign_as_approver


def approve(
    desk: Desk, state: ModelState, read: ReadFile, key: SigningKey, choices: Choices, trust: TrustStore
) -> SealedRecord:
    """The model may be used until the end of the review date, with these choices; `read` is the library's own file.

    Raises LibraryError or UsageError where the key is nobody's in force, the file is neither signed by a publisher
    trusted here nor named by its whole fingerprint, an unconfirmed figure has nobody who compared it, a recalibration
    is required or not offered, the review date is not ahead, or the approver is the file's author and the policy does
    not allow that.
    """
    statement = settle_by(desk, state, read, key, choices, trust)
    return sign_as_approver(desk, key, statement, state.fingerprint, state.heads)


def settle_by(
    desk: Desk, state: ModelState, read: ReadFile, key: SigningKey | KeyCard, choices: Choices, trust: TrustStore
) -> Approved:
    """What the owner of a key would approve; its card is enough. Raises as `approve` does."""
    require_approver(desk.authority, key)
    settled = settle(desk, state, read, choices, trust)
    return replace(settled, by_author=_settle_author(desk, state, read, key, trust))


def settle(desk: Desk, state: ModelState, read: ReadFile, choices: Choices, trust: TrustStore) -> Approved:
    """What would be approved, checked in everything for which no key is needed. Raises as `approve` does."""
    require_sound(state)
    known_by = _require_known_bytes(state, read, choices.fingerprint, trust)
    content = read.content.model
    return Approved(
        reason=check_text(choices.reason, "reason"),
        review_until=check_review(choices.review_until, desk.now.date()).isoformat(),
        recalibration=check_recalibration(content, choices.recalibration),
        decision_points=check_points(content, choices.decision_points),
        compared=settle_comparisons(content.unconfirmed, choices.compared),
        by_author=False,
        known_by=known_by,
    )


def extend(
    desk: Desk,
    state: ModelState,
    read: ReadFile,
    key: SigningKey,
    trust: TrustStore,
    *,
    reason: str,
    review_until: date,
    typed: str = "",
) -> SealedRecord:
    """The approval in force goes on with the same choices until a later date.

    `typed`: the fingerprint as it was read aloud, which has to agree where it is given. Raises LibraryError where no
    approval is in force, and UsageError for a date that is not later.
    """
    statement = settle_extension(desk, state, read, key, trust, reason=reason, review_until=review_until, typed=typed)
    return sign_as_approver(desk, key, statement, state.fingerprint, state.heads)


def settle_extension(
    desk: Desk,
    state: ModelState,
    read: ReadFile,
    key: SigningKey | KeyCard,
    trust: TrustStore,
    *,
    reason: str,
    review_until: date,
    typed: str = "",
) -> Approved:
    """What the owner of a key would extend; its card is enough. Raises as `extend` does."""
    require_approver(desk.authority, key)
    require_sound(state)
    approval = approval_in_force(state)
    _require_same_bytes(state, typed)
    if review_until <= approval.review_until:
        raise UsageError(
            f"{review_until} is not later than {approval.review_until}, until which it is approved already.",
            do="Give a later date, or approve it anew with other choices.",
        )
    return Approved(
        reason=check_text(reason, "reason"),
        review_until=check_review(review_until, desk.now.date()).isoformat(),
        recalibration=approval.recalibration,
        decision_points=approval.decision_points,
        compared=approval.compared,
        by_author=_settle_author(desk, state, read, key, trust),
        known_by=_known_again(state, read, typed, trust, approval),
    )


def approval_in_force(state: ModelState) -> Approval:
    """The approval under which the model is used, or was until its review date. Raises LibraryError for none."""
    if state.approval is not None and state.standing in (Standing.IN_USE, Standing.REVIEW_OVERDUE, Standing.HELD):
        return state.approval
    raise LibraryError(
        "no approval is in force that could be extended.",
        where=f"{state.id} {state.version}",
        why=state.reason,
        do="Approve it instead: clinicalc library approve.",
    )


def _require_same_bytes(state: ModelState, typed: str) -> None:
    """Nothing where no fingerprint was typed, or the model's own."""
    if typed.strip() and not (found := compare_id(typed, state.fingerprint)).whole:
        raise LibraryError(
            f"the fingerprint that was typed is not that of this file: {found.digits} of its {ID_DIGITS} digits agree,"
            f" counted from the beginning, of {found.typed} typed.",
            where=f"{state.id} {state.version}",
            do="Have all of it read to you again by whoever published the file. If it differs again, this is another"
            " file: do not approve it.",
        )


def _require_known_bytes(state: ModelState, read: ReadFile, typed: str, trust: TrustStore) -> KnownBy:
    _require_same_bytes(state, typed)
    signatures = weigh_signatures(read, trust)
    is_signed = any(signature.worth is Worth.TRUSTED for signature in signatures)
    if typed.strip():
        return "fingerprint_and_signature" if is_signed else "fingerprint"
    if is_signed:
        return "signature"
    raise LibraryError(
        "no publisher trusted on this machine signed this file.",
        where=f"{state.id} {state.version}",
        why=" ".join(say_signature(signature) for signature in signatures) or "It carries no signature.",
        do="Have its whole fingerprint read to you by whoever published it and type it with --fingerprint, or trust"
        " the publisher first: clinicalc trust add.",
    )


def _known_again(
    state: ModelState, read: ReadFile, typed: str, trust: TrustStore, approval: Approval
) -> KnownBy | UnsetType:
    """By what the file was known: anew where its fingerprint was typed, else as in the approval that goes on."""
    if typed.strip():
        return _require_known_bytes(state, read, typed, trust)
    return approval.known_by or UNSET


def say_signature(signature: FileSignature) -> str:
    """What one signature of a file is worth here, as a sentence."""
    key = group_fingerprint(signature.key, 3)
    match signature.worth:
        case Worth.TRUSTED:
            return f"Signed by {signature.name} (key {key}), trusted on this machine."
        case Worth.REVOKED:
            return f"Signed with a key of {signature.name} ({key}) that was revoked on this machine: it does not count."
        case Worth.UNKNOWN:
            return f"Names the key {key}, which this machine does not know, so that nothing could be checked."
    return f"A signature that does not count: {signature.why}"


def _settle_author(desk: Desk, state: ModelState, read: ReadFile, key: SigningKey | KeyCard, trust: TrustStore) -> bool:
    """Whether the approver made the file, or brought one that no trusted publisher signed.

    Raises LibraryError where it is so and the policy forbids it.
    """
    brought = key.id in installers(state)
    signed = any(signature.worth is Worth.TRUSTED for signature in weigh_signatures(read, trust))
    made = is_author(key.id, installations(state), ())
    if not made and (signed or not brought):
        return False
    if desk.authority.policy.author_may_approve:
        return True
    raise LibraryError(
        "this key signed the file itself."
        if made
        else "this key installed the file, and no publisher trusted here signed it.",
        why="The practice’s policy wants a second pair of eyes: who made or brought a file does not approve it.",
        do="Have another approver approve it, or have the policy changed with the practice key:"
        " clinicalc library policy --author-may-approve.",
    )
