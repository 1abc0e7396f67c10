"""The verbs of vetting: what they bring about, what comes back, and that nothing is half done."""

import json
from datetime import date
from pathlib import Path

import pytest

from clinicalc.assessment.proof import load_model
from clinicalc.errors import (
    CoefficientFileRefused,
    KeyRefused,
    LibraryError,
    LibraryUnreachable,
    Stopped,
    UsageError,
)
from clinicalc.library.key_files import open_key
from clinicalc.library.machine import Machine, this_machine
from clinicalc.library.standing import Standing
from clinicalc.operations import practice_founding
from clinicalc.operations.course import Course, Progress
from clinicalc.operations.library_words import Shelf
from clinicalc.operations.model_card import Deed
from clinicalc.operations.publishing import prepare_signing, write_signed
from clinicalc.operations.vetting_desk import VettingDesk
from tests.library.keys_at_hand import PASSPHRASE
from tests.operations.practice_kit import PEOPLE, WRONG, Room, choices, shipped


def other_version(room: Room, version: str = "1.1.0") -> Path:
    """The shipped invented file under another version."""
    tree = json.loads(shipped().read_bytes())
    tree["model"]["version"] = version
    file = room.folder / f"version-{version}.json"
    file.write_text(json.dumps(tree), encoding="utf-8")
    return file


def signed_by_press(room: Room) -> Path:
    """The shipped invented file with the press's signature."""
    file = room.folder / "signed.json"
    write_signed(prepare_signing(shipped(), file), open_key(room.key("press"), PASSPHRASE), file)
    return file


def trust_press(room: Room) -> None:
    """The press is trusted on this machine."""
    card = practice_founding.look_at_key(room.card_file("press"))
    practice_founding.trust_publisher(room.card_file("press"), card.id)


def test_from_a_file_to_a_number_and_out_of_use_again(room: Room) -> None:
    installed = room.install()
    assert (installed.standing, installed.shelf) == (Standing.WAITING, Shelf.WAITING)
    assert installed.says == "Not vetted, installed 1 December 2026"
    approved = room.approve(installed)
    assert (approved.standing, approved.shelf) == (Standing.IN_USE, Shelf.IN_USE)
    assert approved.says == "Approved until 30 November 2027"
    until = date(2028, 11, 30)
    longer = room.desk.extend(installed.fingerprint, "Reviewed", until, room.signer("ada"), Course())
    assert longer.says == "Approved until 30 November 2028"
    withdrawn = room.desk.withdraw(installed.fingerprint, "A new version is out", room.signer("cleo"), Course())
    assert (withdrawn.standing, withdrawn.shelf) == (Standing.WITHDRAWN, Shelf.OUT_OF_USE)
    assert withdrawn.says == "Withdrawn 1 December 2026, Cleo Fell"
    assert "A new version is out" in withdrawn.reason


def test_a_review_that_is_overdue_gives_no_number_and_can_be_extended(room: Room) -> None:
    row = room.approve(room.install())
    room.clock.go_on(400)
    overdue = room.desk.read(Course()).rows[0]
    assert (overdue.standing, overdue.shelf) == (Standing.REVIEW_OVERDUE, Shelf.OUT_OF_USE)
    assert overdue.says == "Review overdue since 1 December 2027"  # the day after the last one of its approval
    assert Deed.EXTEND in room.card(row.fingerprint).may
    assert Deed.HOLD not in room.card(row.fingerprint).may


def test_a_hold_takes_a_model_away_here_and_a_release_gives_it_back(room: Room) -> None:
    row = room.approve(room.install())
    held = room.desk.hold(row.fingerprint, "It said 40 % for everybody today")
    assert held.standing is Standing.HELD
    assert held.says == "Held here since 1 December 2026"
    assert "It said 40 % for everybody today" in held.reason
    assert room.card(row.fingerprint).may == {Deed.APPROVE, Deed.EXTEND, Deed.WITHDRAW, Deed.COMMENT, Deed.RELEASE}
    assert room.desk.release(row.fingerprint).standing is Standing.IN_USE
    with pytest.raises(LibraryError, match="not held on this machine"):
        room.desk.release(row.fingerprint)


def test_a_remark_changes_nothing_but_the_history(room: Room) -> None:
    row = room.approve(room.install())
    again = room.desk.comment(row.fingerprint, "Asked the authors about table 2", room.signer("cleo"), Course())
    assert again == row
    assert room.card(row.fingerprint).history[-1] == (
        "1 December 2026, Cleo Fell (Practice manager): remark: Asked the authors about table 2"
    )


def test_a_changed_file_is_refused_in_words_and_its_card_still_tells_its_history(room: Room) -> None:
    row = room.approve(room.install())
    file = room.place / "models" / f"{row.fingerprint}.json"
    file.write_bytes(file.read_bytes().replace(b"0.", b"1.", 1))
    view = room.desk.read(Course())
    assert view.rows[0].says == "Refused: changed after approval"
    assert view.rows[0].shelf is Shelf.OUT_OF_USE
    card = room.desk.card(view, row.fingerprint, Course())
    assert card.candidate is None
    assert card.file_fault
    assert card.checks == ()
    assert len(card.history) > 2
    assert card.may == {Deed.WITHDRAW, Deed.COMMENT}
    withdrawn = room.desk.withdraw(row.fingerprint, "Its file was changed", room.signer("ada"), Course())
    assert withdrawn.standing is Standing.WITHDRAWN


def test_what_was_shown_is_what_is_installed_though_the_file_changed_meanwhile(room: Room) -> None:
    file = other_version(room)
    card = room.look(file)
    file.write_bytes(shipped().read_bytes())
    row = room.desk.install(card, room.signer("cleo"), "a stick", Course())
    assert (row.fingerprint, row.version) == (card.fingerprint, "1.1.0")
    kept = (room.place / "models" / f"{row.fingerprint}.json").read_bytes()
    assert card.candidate is not None
    assert kept == card.candidate.read.canonical


def test_a_file_that_is_there_already_may_come_again_only_with_a_new_trusted_signature(room: Room) -> None:
    assert room.look().may == {Deed.INSTALL}
    row = room.install()
    again = room.look()
    assert again.row == row
    assert Deed.INSTALL not in again.may
    with pytest.raises(LibraryError, match="in the library already"):
        room.desk.install(again, room.signer("cleo", WRONG), "a stick", Course())
    trust_press(room)
    signed = room.look(signed_by_press(room))
    assert signed.is_trusted
    assert Deed.INSTALL in signed.may
    assert room.desk.install(signed, room.signer("cleo"), "the press", Course()).standing is Standing.WAITING
    # no fingerprint has to be typed now
    approved = room.desk.approve(row.fingerprint, choices(), room.signer("ada"), Course())
    assert approved.standing is Standing.IN_USE


def test_other_versions_stand_on_a_card_the_one_in_use_first(room: Room) -> None:
    first = room.approve(room.install())
    second = room.install(other_version(room, "1.9.0"))
    third = room.look(other_version(room, "1.10.0"))
    assert [row.fingerprint for row in third.others] == [first.fingerprint, second.fingerprint]
    rows = room.desk.read(Course()).rows
    assert [row.version for row in rows] == ["1.0.0", "1.9.0"]
    room.install(other_version(room, "1.10.0"))
    assert [row.version for row in room.desk.read(Course()).rows] == ["1.0.0", "1.9.0", "1.10.0"]


def test_two_versions_side_by_side_installed_or_not(room: Room) -> None:
    old = room.install()
    new = room.look(other_version(room))
    view = room.desk.read(Course())
    found = room.desk.difference(view, old.fingerprint, new, Course())
    assert (found.old, found.new_version, found.new_fingerprint) == (old, "1.1.0", new.fingerprint)
    assert [(change.what, change.old, change.new) for change in found.difference.changes] == [
        ("version", "1.0.0", "1.1.0")
    ]
    assert all(grid.unchanged == grid.both for grid in found.effect.grids)
    same = room.desk.difference(view, old.fingerprint, old.fingerprint, Course())
    assert same.old.fingerprint == same.new_fingerprint
    assert same.difference.changes == ()


def test_an_unreadable_candidate_is_refused_with_its_problems(room: Room) -> None:
    file = room.folder / "bad.json"
    file.write_bytes(shipped().read_bytes()[:-200])
    with pytest.raises(CoefficientFileRefused):
        room.look(file)


def test_a_typed_fingerprint_has_to_agree_when_an_approval_is_extended(room: Room) -> None:
    row = room.approve(room.install())
    before, until = room.contents(), date(2028, 11, 30)
    wrong = row.fingerprint[:-1] + ("0" if row.fingerprint[-1] != "0" else "1")
    with pytest.raises(LibraryError, match="63 of its 64 digits agree"):
        room.desk.extend(row.fingerprint, "Reviewed", until, room.signer("ada", WRONG), Course(), wrong)
    assert room.contents() == before
    longer = room.desk.extend(row.fingerprint, "Reviewed", until, room.signer("ada"), Course(), row.fingerprint)
    assert longer.says == "Approved until 30 November 2028"


def test_without_the_library_only_a_hold_is_left(room: Room) -> None:
    row = room.approve(room.install())
    room.place.rename(room.folder / "away")
    view = room.desk.read(Course())
    assert not view.reachable
    assert view.caution
    assert view.caution not in view.faults
    assert room.desk.card(view, row.fingerprint, Course()).may == {Deed.HOLD}
    with pytest.raises(LibraryUnreachable):
        room.desk.withdraw(row.fingerprint, "Out of date", room.signer("ada", WRONG), Course())
    assert room.desk.hold(row.fingerprint, "Out of date").standing is Standing.HELD


def test_a_machine_that_has_not_joined_says_how(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path / "settings"))
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    with pytest.raises(LibraryError, match="this machine uses no model library"):
        VettingDesk().read(Course())


def test_what_was_written_but_not_read_again_is_said_so(room: Room) -> None:
    row = room.install()
    places = iter((this_machine(), Machine(room.folder / "settings", room.folder / "elsewhere", "0" * 64)))
    desk = VettingDesk(machine=lambda: next(places), clock=room.clock)
    with pytest.raises(LibraryError, match="it was written, but the library could not be read again"):
        desk.approve(row.fingerprint, choices(row.fingerprint), room.signer("ada"), Course())
    assert room.desk.read(Course()).rows[0].standing is Standing.IN_USE


def test_history_of_one_model_and_of_everything(room: Room) -> None:
    row = room.approve(room.install())
    own = room.desk.history(row.fingerprint, Course())
    assert [line.kind for line in own.rows] == ["installed", "approved"]
    everything = room.desk.history(None, Course())
    assert [line.kind for line in everything.rows] == ["founding", "approvers", "installed", "approved"]
    with pytest.raises(LibraryError, match="not in the library"):
        room.desk.history("0" * 63 + "1", Course())


def test_what_was_in_use_on_a_day_that_is_past_and_no_day_to_come(room: Room) -> None:
    row = room.approve(room.install())
    room.clock.go_on(10)
    found = room.desk.as_of(date(2026, 12, 2), Course())
    assert [(one.state.fingerprint, one.answered) for one in found.models] == [(row.fingerprint, True)]
    assert not room.desk.as_of(date(2026, 11, 30), Course()).founded
    with pytest.raises(UsageError, match="still to come"):
        room.desk.as_of(date(2026, 12, 12), Course())


def test_a_library_carried_as_one_file_and_brought_back(room: Room) -> None:
    row = room.approve(room.install())
    bundle = room.desk.export(room.folder / "all.json", Course())
    assert [fingerprint for fingerprint, _ in bundle.models] == [row.fingerprint]
    room.desk.withdraw(row.fingerprint, "Out of date", room.signer("ada"), Course())
    brought = room.desk.bring_in(room.folder / "all.json", Course())
    assert brought.known
    assert brought.carried.new_records == 0
    assert room.desk.read(Course()).rows[0].standing is Standing.WITHDRAWN  # an old file brings nothing back


def test_an_installed_model_is_proved_as_the_file_was(room: Room) -> None:
    row = room.install()
    card = room.card(row.fingerprint)
    assert card.candidate is not None
    assert card.candidate.model.content == load_model(shipped()).content


@pytest.mark.parametrize("stopped_at", range(1, 8))
def test_work_that_is_stopped_leaves_nothing_half_done(room: Room, stopped_at: int) -> None:
    row = room.install()
    before = room.contents()
    said: list[Progress] = []

    def tell(progress: Progress) -> None:
        said.append(progress)
        if len(said) == stopped_at:
            course.stop()

    course = Course(tell)
    try:
        room.desk.approve(row.fingerprint, choices(row.fingerprint), room.signer("ada"), course)
    except Stopped:
        assert room.contents() == before
        assert room.desk.read(Course()).rows[0].standing is Standing.WAITING
    else:
        # nobody asked before the record was written, and what was written is told as written
        assert len(said) <= stopped_at
        assert room.desk.read(Course()).rows[0].standing is Standing.IN_USE


def test_a_reading_tells_how_many_models_are_done(room: Room) -> None:
    room.install()
    room.install(other_version(room))
    said: list[Progress] = []
    room.desk.read(Course(said.append))
    assert Progress("Reading the library’s models", 2, 2) in said


@pytest.mark.parametrize("verb", ["install", "approve", "extend", "withdraw", "comment"])
def test_a_wrong_passphrase_writes_nothing_and_is_not_repeated(room: Room, verb: str) -> None:
    row = room.approve(room.install())
    new, signer = room.look(other_version(room)), room.signer("ada", WRONG)
    before = room.contents()
    verbs = {
        "install": lambda: room.desk.install(new, signer, "a stick", Course()),
        "approve": lambda: room.desk.approve(row.fingerprint, choices(row.fingerprint), signer, Course()),
        "extend": lambda: room.desk.extend(row.fingerprint, "Reviewed", date(2028, 1, 1), signer, Course()),
        "withdraw": lambda: room.desk.withdraw(row.fingerprint, "Old", signer, Course()),
        "comment": lambda: room.desk.comment(row.fingerprint, "A remark", signer, Course()),
    }
    with pytest.raises(KeyRefused, match="passphrase does not open") as refused:
        verbs[verb]()
    assert WRONG not in f"{refused.value} {signer!r} {refused.value.__context__!r}"
    assert room.contents() == before


def test_a_library_that_holds_nothing_yet(room: Room) -> None:
    view = room.desk.read(Course())
    assert view.practice == PEOPLE["practice"]
    assert [approver.name for approver in view.approvers] == [PEOPLE["ada"], PEOPLE["cleo"]]
    assert view.rows == ()
    assert view.faults == ()


def test_what_somebody_wrote_meanwhile_is_never_overruled_unseen(room: Room) -> None:
    row = room.approve(room.install())
    seen, until = room.card(row.fingerprint), date(2028, 11, 30)
    room.desk.withdraw(row.fingerprint, "A misprint in table 2", room.signer("cleo"), Course())
    before = room.contents()
    ada, chosen = room.signer("ada", WRONG), choices(row.fingerprint)
    for verb in (
        lambda: room.desk.approve(row.fingerprint, chosen, ada, Course(), seen),
        lambda: room.desk.check_approval(row.fingerprint, chosen, ada.key_file, seen=seen),
        lambda: room.desk.extend(row.fingerprint, "Reviewed", until, ada, Course(), seen=seen),
    ):
        with pytest.raises(LibraryError, match="meanwhile Cleo Fell wrote about this model: withdrawn") as refused:
            verb()
        assert "A misprint in table 2" in str(refused.value)
    assert room.contents() == before
    again = room.card(row.fingerprint)
    approved = room.desk.approve(row.fingerprint, chosen, room.signer("ada"), Course(), again)
    assert approved.standing is Standing.IN_USE
