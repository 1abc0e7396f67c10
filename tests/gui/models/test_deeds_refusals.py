"""What can go wrong between a filled form and a signature: one sentence over the buttons, nothing typed is lost."""

import os
from collections.abc import Iterator
from datetime import date, timedelta
from pathlib import Path
from typing import Any

import pytest
from PySide6.QtCore import Qt
from pytestqt.qtbot import QtBot

from clinicalc.errors import LibraryError, UsageError
from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.models.deeds.approve_deed import ApproveDeed, say_what_is_known
from clinicalc.gui.models.deeds.given import Given
from clinicalc.gui.models.deeds.review_deeds import CommentDeed, ExtendDeed, WithdrawDeed
from clinicalc.gui.window_words import replace_commands, say_in_window
from clinicalc.library.records import Compared
from clinicalc.library.standing import Standing
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import Deed, ModelCard
from tests.cli.calling import example
from tests.cli.practices import FINGERPRINT, found_practice
from tests.gui.models.deeds_kit import DeedRoom, enter, press, require_no_secret, type_key
from tests.library.keys_at_hand import PASSPHRASE, key_file

REGIONAL = "cvd-2021-regional"
TYPED = Given(typed_fingerprint=FINGERPRINT)


@pytest.fixture
def room(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, qtbot: QtBot) -> Iterator[DeedRoom]:
    """A practice with one model that waits for its approval."""
    made = DeedRoom(found_practice(tmp_path, monkeypatch), qtbot)
    made.practice.install()
    yield made
    made.settle()


def _remark(room: DeedRoom, key: str, passphrase: str = PASSPHRASE) -> CommentDeed:
    deed = room.open(Deed.COMMENT, CommentDeed, room.card())
    enter("Ask for the second table")
    type_key(key, passphrase)
    room.settle()
    return deed


def _records(room: DeedRoom) -> int:
    state = room.card().state
    assert state is not None
    return len(state.records)


def _require_kept(deed: CommentDeed, key: str) -> None:
    assert deed._text.text == "Ask for the second table"
    assert deed.key.place.edit.text() == key
    assert deed.form.deed.isEnabled()
    require_no_secret(deed)


def test_a_wrong_passphrase_is_said_and_gone(room: DeedRoom) -> None:
    key = room.practice.key("ada")
    deed = _remark(room, key, "not the four words")
    assert "the passphrase does not open this key" in deed.form.refusal.text()
    assert deed.focusWidget() is deed.key.secret.edit
    _require_kept(deed, key)
    require_no_secret(deed, "not the four words")
    room.done(deed, lambda: enter(PASSPHRASE))
    assert _records(room) == 2


def test_a_key_of_nobody_is_refused_at_its_field(room: DeedRoom, tmp_path: Path) -> None:
    key = os.fspath(tmp_path / "stranger.key")
    key_file(Path(key), "A. Stranger")
    deed = _remark(room, key)
    assert "(A. Stranger) is not that of an approver of Tarnwick Northgate" in deed.form.refusal.text()
    assert "under “Library…”, “People of the practice…”" in deed.form.refusal.text()
    assert deed.focusWidget() is deed.key.place.edit
    _require_kept(deed, key)


def test_the_practice_key_does_not_approve(room: DeedRoom) -> None:
    deed = _remark(room, room.practice.key("practice"))
    assert "The practice key appoints approvers" in deed.form.refusal.text()
    assert deed.focusWidget() is deed.key.place.edit


def test_a_key_inside_the_library_is_not_used(room: DeedRoom) -> None:
    inside = os.path.join(room.practice.place, "ada.key")
    Path(inside).write_bytes(Path(room.practice.key("ada")).read_bytes())
    deed = _remark(room, inside)
    assert "lies inside a library's folder" in deed.form.refusal.text()
    assert deed.focusWidget() is deed.key.place.edit
    _require_kept(deed, inside)
    assert _records(room) == 1


@pytest.mark.parametrize("name", ["nothing-here.key", "ada-card.json"])
def test_what_is_no_key_file_is_refused_at_its_field(room: DeedRoom, name: str) -> None:
    path = os.fspath(room.practice.folder / name)
    deed = _remark(room, path)
    assert name in deed.form.refusal.text()
    assert deed.focusWidget() is deed.key.place.edit
    _require_kept(deed, path)


def test_without_a_passphrase_nothing_is_tried(room: DeedRoom) -> None:
    deed = room.open(Deed.COMMENT, CommentDeed, room.card())
    enter("A remark")
    enter(room.practice.key("ada"))
    enter()
    assert "The passphrase of the key is missing" in deed.form.refusal.text()
    assert not room.errands.is_busy


def test_a_library_out_of_reach_keeps_what_was_typed(room: DeedRoom) -> None:
    card = room.card()
    deed = room.open(Deed.COMMENT, CommentDeed, card)
    library = Path(room.practice.place)
    library.rename(room.practice.folder / "elsewhere")
    enter("Ask for the second table")
    type_key(room.practice.key("ada"))
    room.settle()
    assert "nothing can be written, because the library cannot be reached" in deed.form.refusal.text().casefold()
    _require_kept(deed, room.practice.key("ada"))
    (room.practice.folder / "elsewhere").rename(library)
    deed.key.secret.edit.setFocus()
    room.done(deed, lambda: enter(PASSPHRASE))
    assert _records(room) == 2


@pytest.mark.skipif(not hasattr(os, "geteuid"), reason="needs a system with users")
def test_a_full_disk_leaves_no_half_and_keeps_what_was_typed(room: DeedRoom, monkeypatch: pytest.MonkeyPatch) -> None:
    deed = room.open(Deed.COMMENT, CommentDeed, room.card())
    real = os.write

    def full(handle: int, data: Any) -> int:
        raise OSError(28, "No space left on device")

    enter("Ask for the second table")
    enter(room.practice.key("ada"))
    monkeypatch.setattr(os, "write", full)
    enter(PASSPHRASE)
    room.settle()
    monkeypatch.setattr(os, "write", real)
    assert "No space left on device" in deed.form.refusal.text() or "full" in deed.form.refusal.text(), (
        deed.form.refusal.text()
    )
    _require_kept(deed, room.practice.key("ada"))
    assert _records(room) == 1


def test_an_approval_does_not_undo_a_withdrawal_that_nobody_saw(room: DeedRoom) -> None:
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    room.practice.approve("--fingerprint", FINGERPRINT)
    ended = room.practice.library(
        "withdraw", FINGERPRINT, "--key", room.practice.key("cleo"), "--reason", "The paper was corrected."
    )
    assert ended.status == 0, ended.err
    enter("Agreed")
    deed._key.place.edit.setFocus()
    type_key(room.practice.key("ada"))
    room.settle()
    said = deed.form.refusal.text()
    assert "meanwhile Cleo Fell wrote about this model: withdrawn (The paper was corrected)" in said
    assert deed._reason.text == "Agreed"
    assert room.card().row is not None
    row = room.card().row
    assert row is not None
    assert row.standing is Standing.WITHDRAWN
    require_no_secret(deed)


def test_an_extension_does_not_go_past_what_nobody_saw_or_another_fingerprint(room: DeedRoom) -> None:
    room.practice.approve("--fingerprint", FINGERPRINT, until=(date.today() + timedelta(days=30)).isoformat())
    other = Given(typed_fingerprint=FINGERPRINT[::-1])
    deed = room.open(Deed.EXTEND, ExtendDeed, room.card(), other)
    enter("Reviewed")
    enter()
    type_key(room.practice.key("ada"))
    room.settle()
    assert "the fingerprint that was typed is not that of this file" in deed.form.refusal.text()
    deed.close()
    deed = room.open(Deed.EXTEND, ExtendDeed, room.card())
    ended = room.practice.library("comment", FINGERPRINT, "Wait for me.", "--key", room.practice.key("cleo"))
    assert ended.status == 0, ended.err
    enter("Reviewed")
    enter()
    type_key(room.practice.key("ada"))
    room.settle()
    assert "meanwhile Cleo Fell wrote about this model: remarked: Wait for me" in deed.form.refusal.text()
    require_no_secret(deed)


def test_a_withdrawal_goes_through_whatever_was_written_meanwhile(room: DeedRoom) -> None:
    deed = room.open(Deed.WITHDRAW, WithdrawDeed, room.card())
    room.practice.approve("--fingerprint", FINGERPRINT)
    enter("The paper was corrected")
    room.done(deed, lambda: type_key(room.practice.key("cleo")))
    row = room.card().row
    assert row is not None
    assert row.standing is Standing.WITHDRAWN


def test_while_it_works_escape_stops_and_the_form_stays(room: DeedRoom) -> None:
    deed = room.open(Deed.COMMENT, CommentDeed, room.card())
    left: list[bool] = []
    deed.left.connect(lambda: left.append(True))
    enter("Ask for the second table")
    enter(room.practice.key("ada"))
    enter(PASSPHRASE)
    assert room.errands.is_busy
    assert not deed.form.deed.isEnabled()
    press(Qt.Key.Key_Escape)
    assert not left
    room.settle()
    assert not deed.form.refusal.text() or "stopped" in deed.form.refusal.text().casefold()
    require_no_secret(deed)


def test_a_required_recalibration_has_no_entry_for_none(room: DeedRoom) -> None:
    card = _regional(room)
    assert card.recalibration_required
    deed = room.open(Deed.APPROVE, ApproveDeed, card, Given(typed_fingerprint=card.fingerprint))
    field = deed._recalibration
    assert isinstance(field, FramedChooser)
    entries = [field.chooser.itemData(place) for place in range(field.chooser.count())]
    assert entries == [id for id, _ in card.recalibrations]
    enter("Agreed")
    deed._key.place.edit.setFocus()
    type_key(room.practice.key("ada"))
    assert "No recalibration is chosen" in deed.form.refusal.text()
    assert deed.focusWidget() is field.chooser
    require_no_secret(deed)


def test_recalibration_and_who_compared_go_into_the_approval(room: DeedRoom) -> None:
    card = _regional(room)
    compared = tuple(Compared(figure.at, "B. Wick") for figure in card.unconfirmed)
    given = Given(card.fingerprint, compared)
    deed = room.open(Deed.APPROVE, ApproveDeed, card, given)
    assert f"it is said of {len(compared)} who compared them" in say_what_is_known(card, given)
    enter("Agreed")
    field = deed._recalibration
    assert field is not None
    field.chooser.setFocus()
    press(Qt.Key.Key_Down)
    enter()  # past the buttons for decision points
    assert deed.focusWidget() is deed._key.place.edit
    room.done(deed, lambda: type_key(room.practice.key("ada")))
    approval = room.card(card.fingerprint).approval
    assert approval is not None
    assert approval.recalibration == card.recalibrations[0][0]
    assert {one.by for one in approval.compared} == {"B. Wick"}


def test_figures_that_nobody_compared_are_refused_without_a_key(room: DeedRoom) -> None:
    card = _regional(room)
    deed = room.open(Deed.APPROVE, ApproveDeed, card, Given(typed_fingerprint=card.fingerprint))
    enter("Agreed")
    field = deed._recalibration
    assert field is not None
    field.chooser.setFocus()
    press(Qt.Key.Key_Down)
    deed._key.place.edit.setFocus()
    type_key(room.practice.key("ada"), "")
    room.settle()
    assert "were compared by nobody" in deed.form.refusal.text()
    assert "write on the model’s card who did" in deed.form.refusal.text()
    assert "--" not in deed.form.refusal.text()


def test_every_command_in_a_refusal_has_words_of_the_window() -> None:
    """Every sentence of the rooms below that names a command or an option, as it stands in their source."""
    import ast

    import clinicalc.library

    rest: list[str] = []
    for path in Path(clinicalc.library.__path__[0]).glob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.keyword) and node.arg in ("do", "why"):
                constants = [n.value for n in ast.walk(node.value) if isinstance(n, ast.Constant)]
                text = "".join(part for part in constants if isinstance(part, str))
                said = say_in_window(LibraryError("it", do=text)).do
                if "clinicalc " in said or "--" in said:
                    rest.append(f"{path.name}: {said}")
    assert not [text for text in rest if not text.startswith("cards.py: Add the name: --name")], rest  # commands only


def test_words_without_a_command_stay() -> None:
    assert replace_commands("Give a later date.") == "Give a later date."
    error = UsageError("the reason is empty.", where="here", why="so", do="Say it.")
    assert str(say_in_window(error)) == str(error)


def _regional(room: DeedRoom) -> ModelCard:
    """A shipped model with required recalibrations and unconfirmed figures, installed."""
    ended = room.practice.install(example(REGIONAL))
    assert ended.status == 0, ended.err
    view = room.desk.read(Course())
    (row,) = [row for row in view.rows if row.fingerprint != FINGERPRINT]
    return room.desk.card(view, row.fingerprint, Course())
