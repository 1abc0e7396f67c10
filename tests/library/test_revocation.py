"""What a revoked key can still do: nothing that gives a number, whatever its holder writes and wherever it stands."""

import itertools

import pytest

from clinicalc.library.records import Installed
from clinicalc.library.standing import FaultKind, SealedRecord, Standing
from tests.library.records_kit import ADA, BEN, CLEO, POINT, Practice, kinds, practice


def _approved_by_ada() -> tuple[Practice, SealedRecord]:
    made = practice()
    made.install()
    return made, made.approve(ADA)


def test_a_revocation_takes_the_approvals_of_the_key_away() -> None:
    made, approved = _approved_by_ada()
    made.revoke(ADA)
    state = made.replay()
    assert state.standing is Standing.WAITING
    assert [(fault.kind, fault.record, fault.stops) for fault in state.faults] == [
        (FaultKind.REVOKED_SIGNER, approved.digest, False)
    ]
    assert approved in state.records
    assert approved.digest not in state.heads


def test_an_approval_that_the_revocation_names_stays() -> None:
    made, approved = _approved_by_ada()
    made.revoke(ADA, approved)
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert state.approval is not None
    assert state.approval.digest == approved.digest
    assert state.faults == ()


def test_every_revocation_of_the_key_must_name_it() -> None:
    made, approved = _approved_by_ada()
    here = made.about_library[-1:]
    made.revoke(ADA, approved, after=here)
    made.revoke(ADA, after=here)
    assert made.replay().standing is Standing.WAITING


def test_an_approval_after_the_revocation_is_void() -> None:
    made, _ = _approved_by_ada()
    made.revoke(ADA)
    made.approve(ADA)
    state = made.replay()
    assert state.standing is Standing.WAITING
    assert kinds(state.faults) == [FaultKind.REVOKED_SIGNER, FaultKind.REVOKED_SIGNER]


def test_a_thief_who_writes_as_if_before_the_revocation_gets_nothing() -> None:
    made, approved = _approved_by_ada()
    before = made.about_library[-1:]
    made.revoke(ADA, approved)
    made.withdraw(BEN, knowing=before)
    made.approve(ADA, knowing=before, written="2026-01-01T00:00:00Z")
    assert made.replay().standing is Standing.WITHDRAWN
    made.approve(ADA, after=[approved], knowing=before, written="2026-01-01T00:00:00Z", points=(POINT,))
    assert made.replay().standing is Standing.WITHDRAWN


@pytest.mark.parametrize("knows", [0, 1, 2])
def test_no_choice_of_what_a_record_follows_lets_a_thief_approve(knows: int) -> None:
    """Every subset of the model's records and each state of the library as what the thief says he knew."""
    made, approved = _approved_by_ada()
    made.revoke(ADA, approved)
    made.withdraw(BEN)
    here = made.about_model[:]
    for count in range(len(here) + 1):
        for after in itertools.combinations(here, count):
            made.about_model = here[:]
            made.approve(ADA, after=after, knowing=made.about_library[knows : knows + 1], points=(POINT,))
            assert made.replay().standing in (Standing.WITHDRAWN, Standing.REFUSED)
            assert made.replay().approval is None


def test_another_approver_may_approve_anew() -> None:
    made, _ = _approved_by_ada()
    made.revoke(ADA)
    made.approve(BEN)
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert state.approval is not None
    assert state.approval.name == BEN


def test_a_void_approval_does_not_hide_the_one_before_it() -> None:
    made = practice()
    made.install()
    made.approve(BEN, "2027-01-31")
    made.approve(ADA, "2031-01-31", points=(POINT,))
    made.revoke(ADA)
    approval = made.replay().approval
    assert approval is not None
    assert (approval.name, approval.decision_points) == (BEN, ())


def test_a_void_approval_does_not_settle_a_withdrawal() -> None:
    made, _ = _approved_by_ada()
    made.withdraw(BEN)
    made.approve(ADA)
    made.remark(BEN)
    assert made.replay().standing is Standing.IN_USE
    made.revoke(ADA)
    assert made.replay().standing is Standing.WITHDRAWN


def test_a_withdrawal_holds_though_its_key_is_revoked() -> None:
    made = practice()
    made.install()
    made.approve(BEN)
    withdrawn = made.withdraw(ADA)
    made.revoke(ADA)
    state = made.replay()
    assert state.standing is Standing.WITHDRAWN
    assert [(fault.kind, fault.record, fault.stops) for fault in state.faults] == [
        (FaultKind.REVOKED_SIGNER, withdrawn.digest, False)
    ]
    made.approve(BEN)
    assert made.replay().standing is Standing.IN_USE


def test_a_withdrawal_after_the_revocation_is_void_and_named() -> None:
    made = practice()
    made.install()
    made.approve(BEN)
    made.revoke(ADA)
    made.withdraw(ADA)
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert kinds(state.faults) == [FaultKind.REVOKED_SIGNER]


def test_an_installation_holds_though_its_key_is_revoked() -> None:
    made = practice()
    made.install(CLEO)
    made.approve(ADA)
    made.revoke(CLEO)
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert state.faults == ()


def test_who_is_only_left_out_of_the_list_can_sign_as_if_before_it_until_revoked() -> None:
    """The limit of a list: nothing in the chain tells this approval from one that was lawful and came late."""
    made = practice()
    made.install()
    before = made.about_library[-1:]
    made.appoint(BEN, CLEO)
    made.approve(ADA, knowing=before)
    assert made.replay().standing is Standing.IN_USE
    made.revoke(ADA)
    assert made.replay().standing is Standing.WAITING


@pytest.mark.parametrize("revoked", [ADA, BEN])
def test_a_model_is_called_what_a_key_in_force_calls_it(revoked: str) -> None:
    made = practice()
    for person in (ADA, BEN):
        made.say_of_model(Installed("tarn-score", "1.0.0", f"As {person} calls it", "by hand"), person, after=[])
    made.revoke(revoked)
    other = BEN if revoked == ADA else ADA
    assert made.replay().title == f"As {other} calls it"


def test_a_revoked_key_that_was_never_an_approvers_is_unknown() -> None:
    made, _ = _approved_by_ada()
    made.revoke("Mallory")
    made.approve("Mallory")
    assert kinds(made.replay().faults) == [FaultKind.UNKNOWN_SIGNER]
