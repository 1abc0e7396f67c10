"""Withdrawing a model, which always wins until an approval follows it; and remarks, which change nothing."""

from clinicalc.errors import LibraryError
from clinicalc.library.appointing import check_text
from clinicalc.library.keys import SigningKey
from clinicalc.library.records import Commented, Withdrawn
from clinicalc.library.standing import ModelState, SealedRecord, Standing
from clinicalc.library.writing import Desk, sign_as_approver


def withdraw(desk: Desk, state: ModelState, key: SigningKey, reason: str) -> SealedRecord:
    """The model gives no number any more on any machine that sees this record.

    Possible also where something is wrong with the model's records: it is the safe direction. Raises LibraryError for
    a key that is nobody's in force, and where the model is withdrawn already.
    """
    if state.standing is Standing.WITHDRAWN:
        raise LibraryError("it is withdrawn already.", where=f"{state.id} {state.version}", why=state.reason)
    return sign_as_approver(desk, key, Withdrawn(check_text(reason, "reason")), state.fingerprint, state.heads)


def comment(desk: Desk, state: ModelState, key: SigningKey, text: str) -> SealedRecord:
    """A remark in the model's history. Raises LibraryError for a key that is nobody's in force."""
    return sign_as_approver(desk, key, Commented(check_text(text, "remark")), state.fingerprint, state.heads)
