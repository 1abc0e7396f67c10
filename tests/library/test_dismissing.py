"""Taking a person off the list of approvers ends the key, and keeps what it had lawfully approved."""

from datetime import timedelta
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.appointing import counting_approvals, dismiss
from clinicalc.library.machine import Machine
from clinicalc.library.records import Approvers, KeyRevoked
from clinicalc.library.standing import FaultKind, Standing
from clinicalc.library.writing import sit_down
from tests.library.keys_at_hand import key_of
from tests.library.machines import Shelf, look, machine_for, make_shelf, only_state, standing
from tests.library.records_kit import ADA, BEN, CLEO

HOUR = timedelta(hours=1)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use, approved by Dr Ada Tarn."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def machine(shelf: Shelf, tmp_path: Path) -> Machine:
    """A machine that uses it."""
    return machine_for(shelf, tmp_path / "machine")


def test_what_was_approved_stays_valid_and_is_named_by_the_revocation(machine: Machine, shelf: Shelf) -> None:
    approval = shelf.practice.about_model[-1]
    done = dismiss(sit_down(look(machine)), shelf.practice.key, ADA)
    revoked, listed = done.revocation.record.statement, done.listed.record.statement
    assert isinstance(revoked, KeyRevoked)
    assert isinstance(listed, Approvers)
    assert (revoked.key, revoked.still_valid, done.still_valid) == (
        key_of(ADA).id,
        (approval.digest,),
        (approval.digest,),
    )
    assert done.listed.record.follows.library == (done.revocation.digest,)
    assert [approver.name for approver in listed.approvers] == [BEN, CLEO]
    opened = look(machine, HOUR)
    assert standing(opened) is Standing.IN_USE
    assert [approver.name for approver in opened.authority.approvers] == [BEN, CLEO]
    assert opened.authority.faults == ()


def test_a_dismissed_key_cannot_approve_as_if_the_list_were_not_known(machine: Machine, shelf: Shelf) -> None:
    """By the list alone it could: nobody who knew the new list has written about the model since."""
    known = tuple(shelf.practice.about_library)
    done = dismiss(sit_down(look(machine)), shelf.practice.key, ADA)
    behind = shelf.practice.approve(ADA, "2099-06-30", knowing=known[-1:])
    shelf.put()
    opened = look(machine, HOUR)
    (fault,) = [fault for fault in only_state(opened).faults if fault.record == behind.digest]
    assert (fault.kind, fault.stops) == (FaultKind.REVOKED_SIGNER, False)
    approval = only_state(opened).approval
    assert approval is not None
    assert approval.digest in done.still_valid
    assert approval.review_until.year == 2027


def test_the_list_alone_is_not_enough(shelf: Shelf) -> None:
    """What dismissing would be without the revocation; the reason for it."""
    known = tuple(shelf.practice.about_library)
    shelf.practice.appoint(BEN, CLEO)
    behind = shelf.practice.approve(ADA, "2099-06-30", knowing=known[-1:])
    approval = shelf.practice.replay(model=shelf.fingerprint).approval
    assert approval is not None
    assert approval.digest == behind.digest


def test_only_what_counts_is_kept(machine: Machine, shelf: Shelf) -> None:
    """A former approval counts, an approval of the own file that the policy forbids does not, nor another person's."""
    first = shelf.practice.about_model[-1]
    second = shelf.practice.approve(until="2027-09-30")
    by_author = shelf.practice.approve(by_author=True)
    by_other = shelf.practice.approve(BEN)
    shelf.put()
    models = look(machine).models
    assert counting_approvals(models, key_of(ADA).id) == tuple(sorted((first.digest, second.digest)))
    assert counting_approvals(models, key_of(BEN).id) == (by_other.digest,)
    assert by_author.digest not in counting_approvals(models, key_of(ADA).id)


def test_of_approvals_side_by_side_both_are_kept(machine: Machine, shelf: Shelf) -> None:
    first = shelf.practice.about_model[-1]
    beside = shelf.practice.approve(until="2027-05-31", after=shelf.practice.about_model[:1])
    shelf.put()
    done = dismiss(sit_down(look(machine)), shelf.practice.key, ADA)
    assert done.still_valid == tuple(sorted((first.digest, beside.digest)))
    assert standing(look(machine, HOUR)) is Standing.IN_USE


def test_nobody_is_dismissed_who_is_no_approver(machine: Machine, shelf: Shelf) -> None:
    desk = sit_down(look(machine))
    with pytest.raises(LibraryError, match="is no approver in force"):
        dismiss(desk, shelf.practice.key, "Dr Eve Fell")
    with pytest.raises(LibraryError, match="does not speak for"):
        dismiss(desk, key_of(ADA), BEN)
    assert look(machine, HOUR).authority.heads == desk.authority.heads
