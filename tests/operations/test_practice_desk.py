"""What only the practice key says: what comes back, and what is told of it."""

from clinicalc.library.cards import read_card_file
from clinicalc.library.records import Policy
from clinicalc.library.standing import Standing
from clinicalc.operations.course import Course
from tests.operations.practice_kit import PEOPLE, Room


def test_a_person_is_appointed_and_may_then_install(room: Room) -> None:
    after = room.desk.appoint(room.card_file("press"), "Locum", room.signer("practice"), Course())
    assert [approver.name for approver in after.view.approvers] == [PEOPLE["ada"], PEOPLE["cleo"], PEOPLE["press"]]
    assert after.says[0] == "Tarnwick Press (Locum) may now install, approve and withdraw models."
    assert room.install(by="press").standing is Standing.WAITING


def test_who_is_dismissed_leaves_what_was_approved(room: Room) -> None:
    row = room.approve(room.install())
    after = room.desk.dismiss(PEOPLE["ada"], room.signer("practice"), Course())
    assert [approver.name for approver in after.view.approvers] == [PEOPLE["cleo"]]
    kept = after.view.row(row.fingerprint)
    assert kept is not None
    assert kept.standing is Standing.IN_USE
    assert any("What Dr Ada Tarn approved stays valid" in said for said in after.says)


def test_a_revoked_key_takes_its_approvals_along_and_they_are_named(room: Room) -> None:
    row = room.approve(room.install())
    ada = read_card_file(room.card_file("ada")).id
    after = room.desk.revoke_key(ada, "lost on the way home", (), room.signer("practice"), Course())
    lost = after.view.row(row.fingerprint)
    assert lost is not None
    assert lost.standing is Standing.WAITING
    assert lost.says == "Not vetted: its approval counts no more"
    assert after.says[-1] == "No longer in use: Tarnwick cardiovascular disease, invented example 1.0.0."


def test_a_revocation_may_leave_an_approval_in_force(room: Room) -> None:
    row = room.approve(room.install())
    ada = read_card_file(room.card_file("ada")).id
    after = room.desk.revoke_key(ada, "lost", (row.fingerprint,), room.signer("practice"), Course())
    kept = after.view.row(row.fingerprint)
    assert kept is not None
    assert kept.standing is Standing.IN_USE
    assert len(after.says) == 1


def test_another_policy(room: Room) -> None:
    wanted = Policy(author_may_approve=True, offline_hours=2)
    after = room.desk.set_policy(wanted, "There are two of us", room.signer("practice"), Course())
    assert after.view.policy == wanted
    assert after.says == (
        "Who made or brought a file may approve it.",
        "Without the library, a machine works on for 2 hours.",
    )
    assert room.approve(room.install(by="cleo"), by="cleo").standing is Standing.IN_USE
