"""Where a model stands: the chain decides, never a date."""

from datetime import UTC, date, datetime, timedelta, timezone

import pytest
from msgspec.structs import replace as changed

from clinicalc.coefficients.schema import Signature
from clinicalc.library.authority import replay_authority
from clinicalc.library.jws import MODEL_TYPE, sign
from clinicalc.library.model_chain import replay_model
from clinicalc.library.records import Approved, Follows, Policy, PolicyChanged
from clinicalc.library.sealing import seal
from clinicalc.library.standing import Fault, FaultKind, Standing
from tests.library.keys_at_hand import key_of
from tests.library.records_kit import (
    ADA,
    BEN,
    CLEO,
    MODEL,
    NOW,
    POINT,
    Practice,
    digests,
    edited,
    kinds,
    practice,
    sealed_by_hand,
)


def _installed() -> Practice:
    made = practice()
    made.install()
    return made


def test_an_installed_model_waits() -> None:
    made = _installed()
    state = made.replay()
    assert state.standing is Standing.WAITING
    assert (state.id, state.version, state.title) == ("tarn-score", "1.0.0", "A score for tests")
    assert (state.reason, state.approval, state.faults) == ("", None, ())
    assert state.heads == digests(made.about_model)


def test_an_approved_model_is_in_use_with_what_was_chosen() -> None:
    made = _installed()
    approved = made.approve(ADA, "2027-06-30", recalibration="tarnwick", points=(POINT,))
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert state.approval is not None
    assert state.approval.digest == approved.digest
    assert (state.approval.name, state.approval.role) == (ADA, "general practitioner")
    assert state.approval.review_until == date(2027, 6, 30)
    assert state.approval.written == datetime(2026, 12, 1, 10, 0, tzinfo=UTC)
    assert state.approval.recalibration == "tarnwick"
    assert state.approval.decision_points == (POINT,)
    assert state.faults == ()


def test_an_approver_is_called_what_the_practice_calls_them() -> None:
    made = _installed()
    genuine = made.approve(ADA).record
    made.about_model[-1] = seal(changed(genuine, name="Professor Somebody", role="dean"), key_of(ADA))
    state = made.replay()
    assert state.approval is not None
    assert (state.approval.name, state.approval.role) == (ADA, "general practitioner")


def test_a_withdrawn_model_says_who_and_why_and_can_be_approved_again() -> None:
    made = _installed()
    made.approve()
    made.withdraw(BEN)
    state = made.replay()
    assert state.standing is Standing.WITHDRAWN
    assert state.reason == f"Withdrawn by {BEN} on 1 December 2026: the paper was corrected"
    assert state.approval is None
    made.approve(CLEO)
    assert made.replay().standing is Standing.WITHDRAWN, "Cleo brought the file, and nobody signed it"
    made.approve(ADA)
    assert made.replay().standing is Standing.IN_USE


def test_an_installation_or_a_remark_after_a_withdrawal_changes_nothing() -> None:
    made = _installed()
    made.approve()
    made.withdraw()
    made.install(ADA)
    made.remark()
    assert made.replay().standing is Standing.WITHDRAWN


def test_a_withdrawal_before_any_approval_holds() -> None:
    made = _installed()
    made.withdraw()
    assert made.replay().standing is Standing.WITHDRAWN


def test_the_chain_decides_and_not_the_dates() -> None:
    made = _installed()
    made.withdraw(written="2026-11-30T08:00:00Z")
    made.approve(written="2026-11-01T08:00:00Z")
    assert made.replay().standing is Standing.IN_USE
    made.withdraw(written="2026-10-01T08:00:00Z")
    assert made.replay().standing is Standing.WITHDRAWN


@pytest.mark.parametrize("second", ["withdrawal", "approval"])
def test_beside_an_approval_the_withdrawal_wins_until_an_approval_follows_both(second: str) -> None:
    made = _installed()
    here = made.about_model[:]
    times = ("2026-11-01T08:00:00Z", "2026-11-02T08:00:00Z")
    approved = made.approve(after=here, written=times[second == "approval"])
    made.withdraw(after=here, written=times[second == "withdrawal"])
    state = made.replay()
    assert state.standing is Standing.WITHDRAWN
    assert [(fault.kind, fault.record, fault.stops) for fault in state.faults] == [
        (FaultKind.FORK, approved.digest, False)
    ]
    made.approve(ADA, after=[approved])
    assert made.replay().standing is Standing.WITHDRAWN, "it follows only one of them"
    made.approve(ADA)
    assert made.replay().standing is Standing.IN_USE
    assert made.replay().faults == ()


def test_of_two_approvals_that_chose_alike_the_earlier_review_holds() -> None:
    made = _installed()
    here = made.about_model[:]
    made.approve(ADA, "2028-01-31", after=here)
    earlier = made.approve(BEN, "2027-01-31", after=here)
    state = made.replay()
    assert state.standing is Standing.IN_USE
    assert state.approval is not None
    assert (state.approval.digest, state.approval.review_until) == (earlier.digest, date(2027, 1, 31))
    assert [(fault.kind, fault.record, fault.stops) for fault in state.faults] == [
        (FaultKind.FORK, earlier.digest, False)
    ]
    assert set(state.heads) == set(digests(made.about_model[1:]))
    made.approve(ADA, "2028-01-31")
    assert made.replay().faults == ()


@pytest.mark.parametrize(
    ("first", "second"),
    [
        ({"recalibration": "tarnwick"}, {}),
        ({"recalibration": "tarnwick"}, {"recalibration": "fellside"}),
        ({"points": (POINT,)}, {}),
        ({"points": (POINT,)}, {"points": (changed(POINT, probability=0.2),)}),
    ],
)
def test_of_two_approvals_that_chose_differently_none_gives_a_number(
    first: dict[str, object], second: dict[str, object]
) -> None:
    made = _installed()
    here = made.about_model[:]
    made.approve(ADA, after=here, **first)  # type: ignore[arg-type]
    made.approve(BEN, after=here, **second)  # type: ignore[arg-type]
    state = made.replay()
    assert state.standing is Standing.WAITING
    assert state.approval is None
    assert kinds(state.faults) == [FaultKind.FORK]
    assert state.reason == state.faults[0].sentence
    assert ADA in state.reason
    assert BEN in state.reason
    made.approve(ADA)
    assert made.replay().standing is Standing.IN_USE


def test_the_order_of_decision_points_is_no_difference() -> None:
    made = _installed()
    here = made.about_model[:]
    other = changed(POINT, probability=0.2)
    made.approve(ADA, points=(POINT, other), after=here)
    made.approve(BEN, points=(other, POINT), after=here)
    assert made.replay().standing is Standing.IN_USE


@pytest.mark.parametrize(
    ("now", "standing"),
    [
        (datetime(2027, 6, 30, 23, 59, tzinfo=timezone(timedelta(hours=-5))), Standing.IN_USE),
        (datetime(2027, 7, 1, 0, 0, tzinfo=timezone(timedelta(hours=-5))), Standing.REVIEW_OVERDUE),
        (datetime(2027, 6, 30, 23, 59, tzinfo=timezone(timedelta(hours=12))), Standing.IN_USE),
        (datetime(2027, 7, 1, 0, 0, tzinfo=timezone(timedelta(hours=12))), Standing.REVIEW_OVERDUE),
    ],
)
def test_a_review_is_overdue_from_local_midnight(now: datetime, standing: Standing) -> None:
    made = _installed()
    made.approve(until="2027-06-30")
    state = made.replay(now)
    assert state.standing is standing
    assert state.approval is not None


def test_an_extension_is_a_further_approval() -> None:
    made = _installed()
    made.approve(until="2026-11-30")
    assert made.replay().standing is Standing.REVIEW_OVERDUE
    made.approve(until="2027-11-30")
    assert made.replay().standing is Standing.IN_USE


@pytest.mark.parametrize("what", ["approve", "withdraw", "remark"])
def test_a_model_begins_with_its_installation(what: str) -> None:
    made = practice()
    getattr(made, what)()
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.NOT_DESCENDED]
    assert "installation" in state.reason


def test_an_approval_beside_the_installation_does_not_follow_it() -> None:
    made = _installed()
    made.approve(after=[])
    assert made.replay().standing is Standing.REFUSED


def test_a_model_without_any_record_is_refused() -> None:
    state = practice().replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.NOT_DESCENDED]


def test_what_is_wrong_with_the_file_itself_stops() -> None:
    made = _installed()
    made.approve()
    wrong = Fault(FaultKind.CHANGED_FILE, MODEL, "The file is not what its name says.")
    state = replay_model(MODEL, made.about_model, made.authority(), NOW, wrong)
    assert (state.standing, state.reason, state.approval) == (Standing.REFUSED, wrong.sentence, None)
    assert state.faults == (wrong,)
    assert state.title == "A score for tests"


def test_ten_minutes_between_two_clocks_are_allowed_and_no_second_more() -> None:
    made = _installed()
    made.approve(written="2026-12-01T11:10:00Z")
    assert made.replay().standing is Standing.IN_USE
    made.remark(written="2026-12-01T11:10:01Z")
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.FROM_THE_FUTURE]
    assert made.replay(NOW + timedelta(seconds=1)).standing is Standing.IN_USE


def test_a_record_about_the_library_from_the_future_stops_every_model() -> None:
    made = _installed()
    made.approve()
    made.say(PolicyChanged(Policy(), "as before"), written="2027-01-01T00:00:00Z")
    assert kinds(made.replay().faults) == [FaultKind.FROM_THE_FUTURE]
    assert made.replay().standing is Standing.REFUSED


def test_a_day_that_does_not_exist_is_refused() -> None:
    made = _installed()
    follows = Follows(digests(made.about_library[-1:]), digests(made.about_model))
    approved = Approved("read against its paper", "2027-02-29", None, (), (), by_author=False)
    made.about_model.append(sealed_by_hand(key_of(ADA), approved, made.library, MODEL, follows))
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.UNREADABLE_RECORD]
    assert "review_until is 2027-02-29" in state.reason


def test_who_signs_is_judged_where_the_record_stands() -> None:
    made = _installed()
    made.approve(ADA)
    made.appoint(BEN)
    assert made.replay().standing is Standing.IN_USE, "it was lawful when it was signed"
    made.approve(ADA)
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.UNKNOWN_SIGNER]


def test_a_former_approver_cannot_go_back_behind_what_the_chain_knows() -> None:
    made = _installed()
    made.approve(ADA)
    before = made.about_library[-1]
    made.appoint(BEN)
    made.withdraw(BEN)
    made.approve(ADA, knowing=[before])
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert kinds(state.faults) == [FaultKind.NOT_DESCENDED]


def test_the_practice_key_approves_nothing() -> None:
    made = _installed()
    made.approve("Tarnwick Practice")
    assert kinds(made.replay().faults) == [FaultKind.UNKNOWN_SIGNER]


def test_somebody_on_one_of_two_lists_may_not_sign_for_both() -> None:
    made = _installed()
    first = made.about_library[-1]
    made.appoint(ADA, BEN, after=[first])
    made.appoint(BEN, CLEO, after=[first])
    made.approve(BEN)
    assert made.replay().standing is Standing.IN_USE
    made.approve(ADA)
    assert kinds(made.replay().faults) == [FaultKind.UNKNOWN_SIGNER]


def test_where_the_library_itself_is_not_believed_no_model_is() -> None:
    made = _installed()
    made.approve()
    authority = replay_authority(made.about_library, made.library, key_of(ADA).id)
    state = made.replay(authority=authority)
    assert state.standing is Standing.REFUSED
    assert state.reason == authority.faults[0].sentence
    assert state.faults == ()
    assert state.records == tuple(made.about_model)


def test_an_author_does_not_approve_unless_the_policy_allows_it() -> None:
    made = _installed()
    made.approve(ADA, by_author=True)
    state = made.replay()
    assert state.standing is Standing.WAITING
    assert [(fault.kind, fault.stops) for fault in state.faults] == [(FaultKind.BY_AUTHOR, False)]
    made.allow_authors()
    assert made.replay().standing is Standing.WAITING, "the policy is that of the record's own point"
    made.approve(ADA, by_author=True)
    assert made.replay().standing is Standing.IN_USE


def test_an_author_who_does_not_say_so_is_found_out() -> None:
    made = practice()
    signature = sign(key_of(ADA), b"the model", MODEL_TYPE)
    made.install(CLEO, signatures=(signature,))
    made.approve(ADA)
    assert kinds(made.replay().faults) == [FaultKind.BY_AUTHOR]
    made.approve(CLEO)
    assert made.replay().standing is Standing.IN_USE, "Cleo brought a file that somebody else signed"


def test_who_brings_a_file_that_nobody_signed_does_not_approve_it() -> None:
    made = _installed()
    made.approve(CLEO)
    assert kinds(made.replay().faults) == [FaultKind.BY_AUTHOR]
    made.install(BEN, signatures=(Signature("not", "legible"),))
    made.approve(CLEO)
    assert made.replay().standing is Standing.WAITING, "a signature that names nobody is none"
    made.install(BEN, signatures=(sign(key_of("Publisher"), b"the model", MODEL_TYPE),))
    made.approve(CLEO)
    assert made.replay().standing is Standing.IN_USE


def test_more_records_than_are_read_stop_before_any_work(monkeypatch: pytest.MonkeyPatch) -> None:
    made = _installed()
    made.approve()
    monkeypatch.setattr("clinicalc.library.model_chain.MOST_RECORDS", 1)
    state = made.replay()
    assert state.standing is Standing.REFUSED
    assert state.reason == "There are 2 records about this model, and at most 1 are read."


def test_an_edited_withdrawal_stops_the_model_that_it_withdrew() -> None:
    made = _installed()
    made.approve()
    withdrawn = made.withdraw()
    made.about_model[-1] = edited(withdrawn, written="2026-12-01T10:00:01Z")
    assert made.replay().standing is Standing.REFUSED
