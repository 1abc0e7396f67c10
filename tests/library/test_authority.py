"""What the records about the library say, and every way in which they cannot be believed."""

import pytest
from msgspec.structs import replace as changed

from clinicalc.library.authority import replay_authority
from clinicalc.library.keys import encode_public, key_id
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    Approver,
    Approvers,
    Follows,
    Founding,
    KeyRevoked,
    Policy,
    PolicyChanged,
    Withdrawn,
)
from clinicalc.library.sealing import seal
from clinicalc.library.standing import Authority, FaultKind, Standing
from tests.library.keys_at_hand import key_of
from tests.library.records_kit import (
    ADA,
    BEN,
    CLEO,
    MODEL,
    Practice,
    edited,
    kinds,
    practice,
    pretending,
    record,
    sealed_by_hand,
)

SMALL_ORDER = (1).to_bytes(32, "little")
"""y = 1, the neutral point (RFC 8032, section 5.1): under it one fixed signature fits every text."""


def _names(authority: Authority) -> list[str]:
    return [approver.name for approver in authority.approvers]


def test_a_founding_and_a_list_say_who_may_approve() -> None:
    made = practice()
    authority = made.authority()
    assert authority.practice == "Tarnwick Practice"
    assert authority.practice_key == made.key.id
    assert authority.library == made.about_library[0].digest
    assert _names(authority) == [ADA, BEN, CLEO]
    assert authority.heads == (made.about_library[1].digest,)
    assert authority.records == tuple(made.about_library)
    assert authority.faults == ()


def test_the_newest_list_takes_the_place_of_the_one_before() -> None:
    made = practice()
    made.appoint(BEN)
    assert _names(made.authority()) == [BEN]


def test_a_policy_holds_until_the_next() -> None:
    made = practice(policy=Policy(author_may_approve=True, offline_hours=72))
    assert made.authority().policy == Policy(author_may_approve=True, offline_hours=72)
    made.allow_authors(False)
    assert made.authority().policy == Policy(author_may_approve=False, offline_hours=24)


def test_another_practice_key_than_the_pinned_one_is_refused() -> None:
    made = practice()
    other = practice(key="Another practice")
    for authority in (
        replay_authority(other.about_library, other.library, made.key.id),
        replay_authority(made.about_library, made.library, key_of(ADA).id),
    ):
        assert kinds(authority.faults) == [FaultKind.OTHER_PRACTICE_KEY]
        assert "the practice key is not the one this machine was told to trust" in authority.faults[0].sentence.lower()
        assert (authority.approvers, authority.records, authority.heads) == ((), (), ())


def test_a_founding_that_is_not_there_is_named() -> None:
    made = practice()
    authority = replay_authority(made.about_library[1:], made.library, made.key.id)
    assert kinds(authority.faults) == [FaultKind.MISSING_RECORD]
    assert authority.faults[0].record == made.library


def test_a_library_named_by_a_record_that_founds_nothing_is_refused() -> None:
    made = practice()
    authority = replay_authority(made.about_library, made.about_library[1].digest, made.key.id)
    assert kinds(authority.faults) == [FaultKind.NOT_DESCENDED]
    assert authority.records == ()


def test_a_founding_that_another_key_signed_is_refused() -> None:
    thief, owner = key_of("thief"), key_of("Tarnwick Practice")
    founding = Founding("Tarnwick Practice", owner.public, Policy())
    forged = record(pretending(thief, "Tarnwick Practice"), founding, "", ABOUT_THE_LIBRARY, Follows((), ()))
    authority = replay_authority([forged], forged.digest, owner.id)
    assert kinds(authority.faults) == [FaultKind.BAD_SIGNATURE]
    assert authority.records == ()


def test_a_weak_practice_key_is_refused_even_where_its_id_is_pinned() -> None:
    founding = Founding("Tarnwick Practice", encode_public(SMALL_ORDER), Policy())
    sealed = sealed_by_hand(key_of(ADA), founding, "", ABOUT_THE_LIBRARY, Follows((), ()))
    authority = replay_authority([sealed], sealed.digest, key_id(SMALL_ORDER))
    assert kinds(authority.faults) == [FaultKind.OTHER_PRACTICE_KEY]
    assert authority.records == ()


def test_a_list_signed_by_an_approver_does_not_count() -> None:
    made = practice()
    made.say(Approvers((Approver("Mallory", "nobody", key_of("Mallory").public),)), key=key_of(ADA))
    authority = made.authority()
    assert _names(authority) == [ADA, BEN, CLEO]
    assert [(fault.kind, fault.stops) for fault in authority.faults] == [(FaultKind.UNKNOWN_SIGNER, True)]


def test_a_list_signed_in_the_name_of_the_practice_key_does_not_count() -> None:
    made = practice()
    made.say(Approvers(()), key=pretending(key_of("thief"), "Tarnwick Practice"))
    assert _names(made.authority()) == [ADA, BEN, CLEO]
    assert kinds(made.authority().faults) == [FaultKind.BAD_SIGNATURE]


def test_an_edited_list_does_not_count() -> None:
    made = practice()
    made.about_library.append(edited(made.about_library[1], written="2026-12-01T11:00:00Z"))
    assert kinds(made.authority().faults) == [FaultKind.BAD_SIGNATURE]
    assert len(made.authority().records) == 2


def test_two_histories_in_one_folder_are_told_apart() -> None:
    made, other = practice(), practice(key="Another practice")
    made.about_library += other.about_library
    authority = made.authority()
    assert kinds(authority.faults) == [FaultKind.OTHER_LIBRARY, FaultKind.OTHER_LIBRARY]
    assert all(fault.stops for fault in authority.faults)
    assert len(authority.records) == 2


def test_two_libraries_of_one_practice_are_told_apart() -> None:
    made = practice()
    second = Practice(made.key)
    second.say(Founding("Tarnwick Practice", made.key.public, Policy(offline_hours=1)))
    second.appoint(ADA)
    made.about_library += second.about_library
    assert kinds(made.authority().faults) == [FaultKind.OTHER_LIBRARY, FaultKind.OTHER_LIBRARY]


def test_a_missing_record_in_the_middle_is_named() -> None:
    made = practice()
    gone = made.revoke(BEN)
    made.appoint(ADA, CLEO)
    made.about_library.remove(gone)
    authority = made.authority()
    assert kinds(authority.faults) == [FaultKind.MISSING_RECORD]
    assert authority.faults[0].record == gone.digest
    assert made.replay().standing is Standing.REFUSED


def test_what_follows_nothing_does_not_descend_from_the_founding() -> None:
    made = practice()
    made.appoint(ADA, after=[])
    assert kinds(made.authority().faults) == [FaultKind.NOT_DESCENDED]
    assert _names(made.authority()) == [ADA, BEN, CLEO]


def test_what_follows_only_a_void_record_does_not_descend_from_the_founding() -> None:
    made = practice()
    rootless = made.appoint(BEN, after=[])
    made.appoint(ADA, after=[rootless])
    assert kinds(made.authority().faults) == [FaultKind.NOT_DESCENDED, FaultKind.NOT_DESCENDED]
    assert _names(made.authority()) == [ADA, BEN, CLEO]


def test_what_can_only_be_said_of_a_model_is_not_said_of_the_library() -> None:
    made = practice()
    made.say(Withdrawn("everything"))
    assert kinds(made.authority().faults) == [FaultKind.MISNAMED_RECORD]


def test_a_record_about_a_model_does_not_lie_with_those_about_the_library() -> None:
    made = practice()
    follows = Follows((made.library,), ())
    made.about_library.append(record(made.key, Approvers(()), made.library, MODEL, follows))
    assert kinds(made.authority().faults) == [FaultKind.MISNAMED_RECORD]


def test_a_record_about_the_library_follows_none_about_a_model() -> None:
    made = practice()
    follows = Follows((made.library,), (made.install().digest,))
    made.about_library.append(record(made.key, Approvers(()), made.library, ABOUT_THE_LIBRARY, follows))
    assert kinds(made.authority().faults) == [FaultKind.NOT_DESCENDED]
    assert _names(made.authority()) == [ADA, BEN, CLEO]


@pytest.mark.parametrize("odd", [{"library": "a" * 64}, {"follows": Follows(("a" * 64,), ())}, {"about": MODEL}])
def test_a_founding_that_is_not_the_first_record_founds_nothing(odd: dict[str, object]) -> None:
    key = key_of("Tarnwick Practice")
    genuine = practice().about_library[0].record
    sealed = seal(changed(genuine, **odd), key)
    authority = replay_authority([sealed], sealed.digest, key.id)
    assert authority.records == ()
    assert [fault.stops for fault in authority.faults] == [True]


def test_more_records_than_are_read_stop_before_any_work(monkeypatch: pytest.MonkeyPatch) -> None:
    made = practice()
    monkeypatch.setattr("clinicalc.library.authority.MOST_RECORDS", 1)
    assert kinds(made.authority().faults) == [FaultKind.UNREADABLE_RECORD]
    assert made.authority().records == ()


def test_a_moment_that_does_not_exist_is_named() -> None:
    made = practice()
    follows = Follows((made.about_library[-1].digest,), ())
    written = "2026-02-30T10:00:00Z"
    made.about_library.append(
        sealed_by_hand(made.key, Approvers(()), made.library, ABOUT_THE_LIBRARY, follows, written)
    )
    assert kinds(made.authority().faults) == [FaultKind.UNREADABLE_RECORD]
    assert "written is 2026-02-30T10:00:00Z" in made.authority().faults[0].sentence


def test_of_two_lists_side_by_side_only_those_on_both_count_until_one_follows_both() -> None:
    made = practice()
    first = made.about_library[-1]
    made.appoint(ADA, BEN, after=[first])
    made.appoint(BEN, CLEO, after=[first])
    authority = made.authority()
    assert _names(authority) == [BEN]
    assert [(fault.kind, fault.stops) for fault in authority.faults] == [(FaultKind.FORK, False)]
    assert len(authority.heads) == 2
    made.appoint(ADA, CLEO)
    assert _names(made.authority()) == [ADA, CLEO]
    assert made.authority().faults == ()


def test_two_lists_that_say_the_same_are_no_dispute() -> None:
    made = practice()
    first = made.about_library[-1]
    made.appoint(ADA, BEN, after=[first])
    made.appoint(BEN, ADA, after=[first])
    assert {*_names(made.authority())} == {ADA, BEN}
    assert made.authority().faults == ()


def test_of_two_policies_side_by_side_the_strictest_of_each_point_holds() -> None:
    made = practice(policy=Policy(author_may_approve=True, offline_hours=12))
    first = made.about_library[-1]
    made.say(PolicyChanged(Policy(author_may_approve=True, offline_hours=24), "nights"), after=[first])
    made.say(PolicyChanged(Policy(author_may_approve=False, offline_hours=48), "weekends"), after=[first])
    authority = made.authority()
    assert authority.policy == Policy(author_may_approve=False, offline_hours=24)
    assert [(fault.kind, fault.stops) for fault in authority.faults] == [(FaultKind.FORK, False)]


def test_a_revocation_counts_on_every_branch() -> None:
    made = practice()
    first = made.about_library[-1]
    made.revoke(BEN, after=[first])
    made.appoint(ADA, BEN, after=[first])
    assert _names(made.authority()) == [ADA]


def test_a_revoked_key_stays_revoked_where_a_later_list_names_it() -> None:
    made = practice()
    made.revoke(BEN)
    made.appoint(ADA, BEN)
    assert _names(made.authority()) == [ADA]


def test_after_the_practice_key_is_revoked_the_library_gives_nothing() -> None:
    made = practice()
    made.install()
    made.approve()
    made.say(KeyRevoked(made.key.id, "the safe was opened"))
    (fault,) = made.authority().faults
    assert fault.kind is FaultKind.REVOKED_SIGNER
    assert fault.stops
    assert "gives nothing more" in fault.sentence
    assert made.replay().standing is Standing.REFUSED


def test_an_approver_with_a_weak_key_does_not_count_and_is_named() -> None:
    made = practice()
    weak = Approver("Mallory", "nobody", encode_public(SMALL_ORDER))
    people = Approvers((Approver(ADA, "general practitioner", key_of(ADA).public), weak))
    follows = Follows((made.about_library[-1].digest,), ())
    made.about_library.append(sealed_by_hand(made.key, people, made.library, ABOUT_THE_LIBRARY, follows))
    authority = made.authority()
    assert _names(authority) == [ADA]
    assert [(fault.kind, fault.stops) for fault in authority.faults] == [(FaultKind.BAD_SIGNATURE, False)]
    assert "Mallory" in authority.faults[0].sentence
