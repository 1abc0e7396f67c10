"""What was in use on a day that is past: the chain cut at that day, by the dates its writers stated."""

from datetime import date

import pytest

from clinicalc.library.as_of import AsOf, look_back
from clinicalc.library.standing import Fault, FaultKind, Standing
from tests.library.records_kit import ADA, BEN, Practice, practice


@pytest.fixture
def made() -> Practice:
    """Installed on 2 December, approved on the 4th until the 20th, withdrawn on the 10th; founded on the 1st."""
    made = practice()
    made.install(written="2026-12-02T10:00:00Z")
    made.approve(until="2026-12-20", written="2026-12-04T12:00:00Z")
    made.withdraw(written="2026-12-10T12:00:00Z")
    return made


def _look(made: Practice, day: str, faults: tuple[Fault, ...] = ()) -> AsOf:
    records = [*made.about_model, *made.about_library]
    return look_back(records, made.library, made.key.id, date.fromisoformat(day), faults)


def _standing(made: Practice, day: str) -> Standing:
    (one,) = _look(made, day).models
    return one.state.standing


def test_before_the_founding_there_was_nothing(made: Practice) -> None:
    found = _look(made, "2026-11-29")
    assert (found.founded, found.models) == (False, ())


def test_between_founding_and_installation_there_was_no_model(made: Practice) -> None:
    found = _look(made, "2026-12-01")
    assert (found.founded, found.models) == (True, ())


@pytest.mark.parametrize(
    ("day", "standing"),
    [
        ("2026-12-03", Standing.WAITING),
        ("2026-12-04", Standing.IN_USE),
        ("2026-12-09", Standing.IN_USE),
        ("2026-12-10", Standing.WITHDRAWN),
        ("2026-12-25", Standing.WITHDRAWN),
    ],
)
def test_the_state_at_the_end_of_each_day(made: Practice, day: str, standing: Standing) -> None:
    assert _standing(made, day) is standing


def test_who_approved_and_what_was_said_that_day(made: Practice) -> None:
    (one,) = _look(made, "2026-12-04").models
    assert one.answered
    assert one.state.approval is not None
    assert (one.state.id, one.state.version, one.state.approval.name) == ("tarn-score", "1.0.0", ADA)
    assert [words for _, words in one.during] == [f"{ADA}: approved until 20 December 2026"]
    (later,) = _look(made, "2026-12-10").models
    assert [words for _, words in later.during] == [f"{BEN}: withdrawn"]


def test_a_review_that_was_overdue_gave_no_number() -> None:
    made = practice()
    made.install(written="2026-12-02T10:00:00Z")
    made.approve(until="2026-12-05", written="2026-12-04T12:00:00Z")
    assert _standing(made, "2026-12-05") is Standing.IN_USE
    assert _standing(made, "2026-12-06") is Standing.REVIEW_OVERDUE


def test_a_record_with_an_early_date_does_not_stand_before_what_it_follows() -> None:
    made = practice()
    made.install(written="2026-12-08T10:00:00Z")
    made.approve(written="2026-12-03T10:00:00Z")  # says it is older than the installation that it follows
    assert _look(made, "2026-12-05").models == ()
    assert _standing(made, "2026-12-08") is Standing.IN_USE


def test_what_was_found_since_is_said(made: Practice) -> None:
    approval = made.about_model[1]
    later = Fault(FaultKind.REVOKED_SIGNER, made.model, "its key is revoked.", approval.digest)
    known = Fault(FaultKind.STRAY, made.model, "a stray file.", "", stops=False)
    (one,) = _look(made, "2026-12-09", (later, known)).models
    assert one.answered
    assert one.since == (later,)
    (before,) = _look(made, "2026-12-03", (later, known)).models
    assert before.since == ()


def test_a_key_that_was_revoked_later_counted_then(made: Practice) -> None:
    from clinicalc.library.records import KeyRevoked
    from tests.library.keys_at_hand import key_of

    made.say(KeyRevoked(key_of(ADA).id, "stolen"), written="2026-12-15T10:00:00Z")
    assert _standing(made, "2026-12-09") is Standing.IN_USE
