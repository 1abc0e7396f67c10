"""What can be refused without a key is refused before a passphrase is used: here it is always a wrong one."""

import json
from collections.abc import Callable
from dataclasses import replace
from datetime import date

import pytest

from clinicalc.errors import ClinicalcError, KeyRefused, LibraryError
from clinicalc.library.choices import Choices
from clinicalc.library.records import Compared, Policy
from clinicalc.operations.course import Course
from clinicalc.operations.signing_keys import Signer
from tests.operations.practice_kit import WRONG, Room, choices, shipped

LATER = date(2028, 11, 30)
REGIONAL = "cvd-2021-regional"
"""A shipped file with unconfirmed figures that gives no number without a recalibration."""


def regional_choices(room: Room, **others: object) -> Choices:
    """Choices that nothing is wrong with, for the shipped file with unconfirmed figures."""
    entries = room.look(shipped(REGIONAL)).unconfirmed
    compared = tuple(Compared(entry.at, "Cleo Fell") for entry in entries)
    whole = Choices("Agreed", LATER, "low", (), compared, room.look(shipped(REGIONAL)).fingerprint)
    return replace(whole, **others)  # type: ignore[arg-type]


def approve(room: Room, of: Callable[[Room], Choices], by: str = "ada") -> None:
    """Approve the file with unconfirmed figures, with the wrong passphrase."""
    row = room.desk.read(Course()).rows[0]
    room.desk.approve(row.fingerprint, of(room), room.signer(by, WRONG), Course())


APPROVALS: dict[str, tuple[Callable[[Room], Choices], str, str]] = {
    "no reason": (lambda room: regional_choices(room, reason=" "), "ada", "the reason is empty"),
    "a day that is past": (
        lambda room: regional_choices(room, review_until=date(2026, 12, 1)),
        "ada",
        "is not in the future",
    ),
    "a day too far": (lambda room: regional_choices(room, review_until=date(2032, 1, 1)), "ada", "more than 5 years"),
    "no recalibration": (lambda room: regional_choices(room, recalibration=None), "ada", "gives no number without"),
    "another recalibration": (lambda room: regional_choices(room, recalibration="lunar"), "ada", "is not a recalib"),
    "nobody compared": (lambda room: regional_choices(room, compared=()), "ada", "compared by nobody"),
    "no fingerprint": (lambda room: regional_choices(room, fingerprint=""), "ada", "no publisher trusted"),
    "another fingerprint": (lambda room: regional_choices(room, fingerprint="0" * 64), "ada", "is not that of this"),
    "who brought it": (regional_choices, "cleo", "this key installed the file"),
    "the practice key": (regional_choices, "practice", "the practice key appoints approvers"),
    "nobody's key": (regional_choices, "press", "is not that of an approver"),
}


@pytest.mark.parametrize("case", APPROVALS)
def test_an_approval(room: Room, case: str) -> None:
    of, by, why = APPROVALS[case]
    row = room.install(shipped(REGIONAL))
    before = room.contents()
    with pytest.raises(ClinicalcError, match=why) as refused:
        approve(room, of, by)
    with pytest.raises(ClinicalcError, match=why) as checked:
        room.desk.check_approval(row.fingerprint, of(room), room.key(by))
    assert str(refused.value) == str(checked.value)
    assert room.contents() == before


def test_only_the_passphrase_is_left(room: Room) -> None:
    row = room.install(shipped(REGIONAL))
    room.desk.check_approval(row.fingerprint, regional_choices(room), room.key("ada"))
    with pytest.raises(KeyRefused, match="passphrase does not open"):
        approve(room, regional_choices)


def test_an_extension(room: Room) -> None:
    row = room.install()
    ada = room.signer("ada", WRONG)
    with pytest.raises(LibraryError, match="no approval is in force"):
        room.desk.extend(row.fingerprint, "Reviewed", LATER, ada, Course())
    room.approve(row)
    for reason, until, signer, why in (
        ("", LATER, ada, "the reason is empty"),
        ("Reviewed", date(2027, 11, 30), ada, "is not later than"),
        ("Reviewed", date(2033, 1, 1), ada, "more than 5 years"),
        ("Reviewed", LATER, room.signer("cleo", WRONG), "this key installed the file"),
        ("Reviewed", LATER, room.signer("press", WRONG), "is not that of an approver"),
    ):
        with pytest.raises(ClinicalcError, match=why):
            room.desk.extend(row.fingerprint, reason, until, signer, Course())


def test_an_installation(room: Room) -> None:
    card = room.look()
    for origin, signer, why in (
        (" ", room.signer("cleo", WRONG), "the origin is empty"),
        ("a stick", room.signer("practice", WRONG), "the practice key appoints approvers"),
        ("a stick", Signer(room.folder / "no.key", WRONG), "no.key"),
        ("a stick", Signer(shipped(), WRONG), "not a key file|no key file|a key file"),
    ):
        with pytest.raises(ClinicalcError, match=why):
            room.desk.install(card, signer, origin, Course())
        with pytest.raises(ClinicalcError, match=why):
            room.desk.check_installation(card, origin, signer.key_file)
    assert room.desk.read(Course()).rows == ()


def test_a_withdrawal_and_a_remark(room: Room) -> None:
    row = room.install()
    ada, press = room.signer("ada", WRONG), room.signer("press", WRONG)
    for verb in (room.desk.withdraw, room.desk.comment):
        with pytest.raises(ClinicalcError, match="is empty"):
            verb(row.fingerprint, "\n", ada, Course())
        with pytest.raises(ClinicalcError, match="is not that of an approver"):
            verb(row.fingerprint, "Out of date", press, Course())
        with pytest.raises(LibraryError, match="not in the library"):
            verb("0" * 63 + "1", "Out of date", ada, Course())
    room.desk.withdraw(row.fingerprint, "Out of date", room.signer("ada"), Course())
    with pytest.raises(LibraryError, match="withdrawn already"):
        room.desk.withdraw(row.fingerprint, "Out of date", ada, Course())


def test_what_the_practice_key_says(room: Room) -> None:
    row = room.approve(room.install())
    key, ada = room.signer("practice", WRONG), room.signer("ada", WRONG)
    desk, course = room.desk, Course()
    calls: list[tuple[Callable[[], object], str]] = [
        (lambda: desk.appoint(room.card_file("press"), "Locum", ada, course), "does not speak for"),
        (lambda: desk.appoint(room.card_file("practice"), "Locum", key, course), "is the practice key"),
        (lambda: desk.appoint(room.card_file("ada"), "Locum", key, course), "is that of Dr Ada Tarn"),
        (lambda: desk.appoint(room.card_file("press"), " ", key, course), "the role is empty"),
        (lambda: desk.dismiss("Nobody", key, course), "is no approver in force"),
        (lambda: desk.revoke_key("123", "lost", (), key, course), "names no one key"),
        (lambda: desk.revoke_key(ada_id(room), "", (), key, course), "the reason is empty"),
        (lambda: desk.revoke_key(ada_id(room), "lost", ("0" * 64,), key, course), "is no model of this library"),
        (lambda: desk.set_policy(Policy(), "As before", key, course), "is the policy in force already"),
        (lambda: desk.set_policy(Policy(offline_hours=2), "", key, course), "the reason is empty"),
    ]
    before = room.contents()
    for call, why in calls:
        with pytest.raises(ClinicalcError, match=why):
            call()
    assert room.contents() == before
    with pytest.raises(KeyRefused, match="passphrase does not open"):
        desk.revoke_key(ada_id(room), "lost", (row.fingerprint,), key, course)


def ada_id(room: Room) -> str:
    """The id of Dr Ada Tarn's key."""
    from clinicalc.library.cards import read_card_file

    return read_card_file(room.card_file("ada")).id


def test_a_file_whose_figures_are_all_compared_by_the_place_above(room: Room) -> None:
    """What is said of a place holds for the places below it, and the card names who compared each."""
    row = room.install(shipped(REGIONAL))
    places = {entry["at"] for entry in json.loads(shipped(REGIONAL).read_bytes())["model"]["unconfirmed"]}
    above = tuple(Compared(at, "Cleo Fell") for at in ("/equations/0", "/equations/1"))
    own = tuple(Compared(at, "Dr Ada Tarn") for at in sorted(places) if at.startswith("/recalibrations"))
    chosen = regional_choices(room, compared=(*above, *own))
    room.desk.approve(row.fingerprint, chosen, room.signer("ada"), Course())
    by = {figure.at: figure.compared_by for figure in room.card(row.fingerprint).unconfirmed}
    assert by.keys() == places
    assert by["/equations/0/terms"] == "Cleo Fell"
    assert by["/recalibrations/2"] == "Dr Ada Tarn"


def test_choices_of_the_kit_are_right(room: Room) -> None:
    row = room.install()
    room.desk.check_approval(row.fingerprint, choices(row.fingerprint), room.key("ada"))
