"""Withdrawing a model, which always wins until an approval follows it; and remarks, which change nothing."""

from clinicalc.errors import LibraryError
from clinicalc.library.appointing import check_text
from clinicalc.library.keys import KeyCard, SigningKey
from clinicalc.library.records import Commented, Withdrawn
from clinicalc.library.standing import ModelState, SealedRecord, Standing
from clinicalc.library.writing import Desk, require_approver, sign_as_approver


def withdraw(desk: Desk, state: ModelState, key: SigningKey, reason: str) -> SealedRecord:
    """The model gives no number any more on any machine that sees this record.

    Possible also where something is wrong with the model's records: it is the safe direction. Raises LibraryError for
    a key that is nobody's in force, and where the model is withdrawn already.
    """
    return sign_as_approver(desk, key, settle_withdrawal(desk, state, key, reason), state.fingerprint, state.heads)


def settle_withdrawal(desk: Desk, state: ModelState, key: SigningKey | KeyCard, reason: str) -> Withdrawn:
    """What the owner of a key would say; its card is enough. Raises as `withdraw` does."""
    require_approver(desk.authority, key)
    if state.standing is Standing.WITHDRAWN:
        raise LibraryError("it is withdrawn already.", where=f"{state.id} {state.version}", why=state.reason)
    return Withdrawn(check_text(reason, "reason"))


def comment(desk: Desk, state: ModelState, key: SigningKey, text: str) -> SealedRecord:
    """A remark in the model's history. Raises LibraryError for a key that is nobody's in force."""
    return sign_as_approver(desk, key, settle_comment(desk, key, text), state.fingerprint, state.heads)


def settle_comment(desk: Desk, key: SigningKey | KeyCard, text: str) -> Commented:
    """What the owner of a key would remark; its card is enough. Raises as `comment` does."""
    require_approver(desk.authority, key)
    return Commented(check_text(text, "remark"))
