"""Install, approve, extend, withdraw, remark, hold, release: by keyboard, on a real library with real keys."""

from collections.abc import Iterator
from datetime import date, timedelta
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLabel
from pytestqt.qtbot import QtBot

from clinicalc.gui.models.deeds.approve_deed import ApproveDeed, say_where_it_stands
from clinicalc.gui.models.deeds.given import Given
from clinicalc.gui.models.deeds.hold_deeds import HoldDeed, ReleaseDeed
from clinicalc.gui.models.deeds.install_deeds import InstallDeed, LookDeed
from clinicalc.gui.models.deeds.review_dates import a_year_after
from clinicalc.gui.models.deeds.review_deeds import CommentDeed, ExtendDeed, WithdrawDeed
from clinicalc.library.records import Commented, Installed
from clinicalc.library.standing import Standing
from clinicalc.operations.course import Course
from clinicalc.operations.library_view import ModelRow
from clinicalc.operations.model_card import Deed, ModelCard
from tests.cli.calling import example
from tests.cli.practices import FINGERPRINT, TARNWICK, found_practice
from tests.gui.models.deeds_kit import DeedRoom, enter, press, require_no_secret, type_in, type_key
from tests.library.keys_at_hand import PASSPHRASE, key_file
from tests.library.versions import changed

TYPED = Given(typed_fingerprint=FINGERPRINT)


@pytest.fixture
def room(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, qtbot: QtBot) -> Iterator[DeedRoom]:
    """A practice with an empty library."""
    made = DeedRoom(found_practice(tmp_path, monkeypatch), qtbot)
    yield made
    made.settle()


def test_a_file_is_looked_at_and_the_very_bytes_are_installed(room: DeedRoom, tmp_path: Path) -> None:
    file = tmp_path / "handed-over.json"
    file.write_bytes(Path(example(TARNWICK)).read_bytes())
    look = room.open(Deed.INSTALL, LookDeed)
    with room.qtbot.waitSignal(look.card_ready) as told:
        enter(str(file))
    card = told.args[0] if told.args else None
    assert isinstance(card, ModelCard)
    assert card.fingerprint == FINGERPRINT
    file.write_text("{}", encoding="utf-8")  # what was looked at is what counts
    install = room.open(Deed.INSTALL, InstallDeed, card)
    enter("handed over on a stick by Tarnwick Press")
    row = room.done(install, lambda: type_key(room.practice.key("cleo")))
    assert isinstance(row, ModelRow)
    assert (row.fingerprint, row.standing) == (FINGERPRINT, Standing.WAITING)
    state = room.card().state
    assert state is not None
    statement = state.records[0].record.statement
    assert isinstance(statement, Installed)
    assert statement.came_from == "handed over on a stick by Tarnwick Press"
    require_no_secret(install)


def test_a_file_that_is_refused_is_said_at_its_field(room: DeedRoom, tmp_path: Path) -> None:
    file = tmp_path / "not-one.json"
    file.write_text("{}", encoding="utf-8")
    look = room.open(Deed.INSTALL, LookDeed)
    enter(str(file))
    room.settle()
    assert "not-one.json: this coefficient file is refused" in look.form.refusal.text()
    assert "format" in look.problems.text()
    assert look.focusWidget() is look._place.edit
    assert look._place.edit.text() == str(file)


def test_the_file_can_be_chosen(room: DeedRoom) -> None:
    look = room.open(Deed.INSTALL, LookDeed)
    room.chosen = Path(example(TARNWICK))
    press(Qt.Key.Key_Tab)
    press(Qt.Key.Key_Space)
    assert look._place.edit.text() == example(TARNWICK)


def test_without_its_origin_nothing_is_installed(room: DeedRoom) -> None:
    card = _look_at(room)
    install = room.open(Deed.INSTALL, InstallDeed, card)
    enter()
    type_key(room.practice.key("cleo"))
    assert "where the file came from" in install.form.refusal.text()
    assert install.focusWidget() is install._came_from.edit
    assert not room.desk.read(Course()).rows
    require_no_secret(install)


def test_whose_key_it_is_is_said_before_a_passphrase_is_typed(room: DeedRoom, tmp_path: Path) -> None:
    key_file(tmp_path / "stranger.key", "A. Stranger")
    install = room.open(Deed.INSTALL, InstallDeed, _look_at(room))
    enter("handed over on a stick")
    type_key(str(tmp_path / "stranger.key"), "")
    room.settle()
    assert "is not that of an approver" in install.form.refusal.text()
    assert install.focusWidget() is install._key.place.edit
    type_key(room.practice.key("cleo"), "")
    room.settle()
    assert "what is missing is the passphrase" in install.form.refusal.text()
    assert install._came_from.text == "handed over on a stick"
    room.done(install, lambda: enter(PASSPHRASE))


def test_a_newer_version_points_to_what_changed(room: DeedRoom, tmp_path: Path) -> None:
    room.practice.install()
    file = tmp_path / "newer.json"
    file.write_bytes(changed(TARNWICK, lambda model: model.update(version="1.1.0")))
    install = room.open(Deed.INSTALL, InstallDeed, room.desk.look_at(file, Course()))
    said = [label.text() for label in install.findChildren(QLabel)]
    assert any("The library holds version 1.0.0 of this model: Not vetted" in text for text in said), said


def test_a_model_is_approved_by_keyboard(room: DeedRoom) -> None:
    room.practice.install()
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    assert deed._until.day() == a_year_after(date.today())
    enter("Agreed at the meeting of May")
    row = room.done(deed, lambda: _go_to_key_and_sign(deed, room.practice.key("ada")))
    assert isinstance(row, ModelRow)
    assert row.standing is Standing.IN_USE
    approval = room.card().approval
    assert approval is not None
    assert (approval.name, approval.reason) == ("Dr Ada Tarn", "Agreed at the meeting of May")
    assert approval.review_until == a_year_after(date.today())
    assert approval.recalibration is None
    assert room.last_key.path == room.practice.key("ada")
    assert PASSPHRASE not in repr(room.last_key)
    require_no_secret(deed)


def test_what_needs_no_key_is_refused_before_a_passphrase_is_typed(room: DeedRoom) -> None:
    room.practice.install()
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card())
    enter("Agreed")
    _go_to_key_and_sign(deed, room.practice.key("ada"), "")
    room.settle()
    assert "no publisher trusted on this machine signed this file" in deed.form.refusal.text()
    assert "--" not in deed.form.refusal.text()
    assert "clinicalc" not in deed.form.refusal.text()
    deed.close()
    again = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    enter("Agreed")
    _go_to_key_and_sign(again, room.practice.key("ada"), "")
    room.settle()
    assert "what is missing is the passphrase" in again.form.refusal.text()
    assert again.focusWidget() is again._key.secret.edit


def test_a_review_day_that_has_passed_is_refused_at_its_field(room: DeedRoom) -> None:
    room.practice.install()
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    enter("Agreed")
    type_in("2020-01-01")
    _go_to_key_and_sign(deed, room.practice.key("ada"))
    room.settle()
    assert "is not in the future" in deed.form.refusal.text()
    assert deed.focusWidget() is deed._until.edit
    assert deed._reason.text == "Agreed"
    require_no_secret(deed)


def test_decision_points_are_added_and_taken_away_by_keyboard(room: DeedRoom) -> None:
    room.practice.install()
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    enter("Agreed")
    deed._points.add.setFocus()
    for risk, label in (("7,5", "Talk about tablets"), ("20", "Refer"), ("0.5", "A slip")):
        deed._points.add.setFocus()
        press(Qt.Key.Key_Space)
        enter(risk)
        enter(label)
        enter("Practice meeting of May")
    assert deed._points.rows[2].said.text() == "0.5\u202f% is 1 in 200."
    deed._points.rows[2].remove.setFocus()
    press(Qt.Key.Key_Return)
    assert deed.focusWidget() is deed._points.rows[1].remove
    room.done(deed, lambda: _go_to_key_and_sign(deed, room.practice.key("ada")))
    approval = room.card().approval
    assert approval is not None
    said = [(point.probability, point.label, point.source) for point in approval.decision_points]
    assert said == [
        (0.075, "Talk about tablets", "Practice meeting of May"),
        (0.2, "Refer", "Practice meeting of May"),
    ]


@pytest.mark.parametrize(
    ("risk", "said"),
    [
        ("150", "a decision point at 150\u202f% is not possible; a risk lies between 0 and 100\u202f%"),
        ("0", "a decision point at 0\u202f% is not possible"),
        ("ten", "is no risk in per cent"),
        ("10 mmol/L", "is no risk in per cent"),
        ("", "a decision point has no risk"),
    ],
)
def test_a_risk_that_cannot_be_is_refused_at_its_field(room: DeedRoom, risk: str, said: str) -> None:
    room.practice.install()
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    enter("Agreed")
    deed._points.add.setFocus()
    press(Qt.Key.Key_Space)
    enter(risk)
    enter("Refer")
    enter("Practice meeting")
    _go_to_key_and_sign(deed, room.practice.key("ada"))
    assert said in deed.form.refusal.text().replace("A decision", "a decision")
    assert deed.focusWidget() is deed._points.rows[0].risk.edit
    assert room.card().approval is None


def test_the_files_own_points_are_taken_over_once(room: DeedRoom) -> None:
    room.practice.install()
    card = room.card()
    assert card.candidate is not None
    own = card.candidate.model.content.decision_points
    deed = room.open(Deed.APPROVE, ApproveDeed, card, TYPED)
    for _ in range(2):
        deed._points.take_over.setFocus()
        press(Qt.Key.Key_Space)
    assert deed._points.points() == own


def test_a_model_is_approved_for_longer(room: DeedRoom) -> None:
    room.practice.install()
    room.practice.approve("--fingerprint", FINGERPRINT, until=(date.today() + timedelta(days=30)).isoformat())
    deed = room.open(Deed.EXTEND, ExtendDeed, room.card())
    assert deed._until.day() == a_year_after(date.today() + timedelta(days=30))
    enter("Reviewed, nothing new")
    enter()
    row = room.done(deed, lambda: type_key(room.practice.key("ada")))
    assert isinstance(row, ModelRow)
    approval = room.card().approval
    assert approval is not None
    assert approval.review_until == a_year_after(date.today() + timedelta(days=30))


def test_a_model_is_withdrawn(room: DeedRoom) -> None:
    room.practice.install()
    room.practice.approve("--fingerprint", FINGERPRINT)
    deed = room.open(Deed.WITHDRAW, WithdrawDeed, room.card())
    assert "within a minute" in deed.form.says.text()
    enter("The paper was corrected")
    row = room.done(deed, lambda: type_key(room.practice.key("cleo")))
    assert isinstance(row, ModelRow)
    assert row.standing is Standing.WITHDRAWN
    assert "The paper was corrected" in row.reason
    require_no_secret(deed)


def test_who_approves_a_withdrawn_model_is_told_of_the_withdrawal(room: DeedRoom) -> None:
    room.practice.install()
    assert say_where_it_stands(room.card()) == ""
    room.practice.approve("--fingerprint", FINGERPRINT)
    assert say_where_it_stands(room.card()).endswith("This approval takes the place of that one.")
    ended = room.practice.library(
        "withdraw", FINGERPRINT, "--key", room.practice.key("cleo"), "--reason", "The paper was corrected"
    )
    assert ended.status == 0, ended.err
    deed = room.open(Deed.APPROVE, ApproveDeed, room.card(), TYPED)
    said = [label.text() for label in deed.findChildren(QLabel)]
    (stands,) = [text for text in said if text.endswith("An approval brings it back into use.")]
    assert "The paper was corrected" in stands
    assert "Cleo Fell" in stands


def test_a_remark_is_left(room: DeedRoom) -> None:
    room.practice.install()
    deed = room.open(Deed.COMMENT, CommentDeed, room.card())
    enter("Ask for the second table")
    room.done(deed, lambda: type_key(room.practice.key("ada")))
    state = room.card().state
    assert state is not None
    statement = state.records[-1].record.statement
    assert isinstance(statement, Commented)
    assert statement.text == "Ask for the second table"


def test_a_hold_needs_no_key_and_is_released(room: DeedRoom) -> None:
    room.practice.install()
    room.practice.approve("--fingerprint", FINGERPRINT)
    hold = room.open(Deed.HOLD, HoldDeed, room.card())
    row = room.done(hold, lambda: enter("The numbers look odd"))
    assert isinstance(row, ModelRow)
    assert row.standing is Standing.HELD
    assert "The numbers look odd" in row.reason
    release = room.open(Deed.RELEASE, ReleaseDeed, room.card())
    back = room.done(release, lambda: press(Qt.Key.Key_Return))
    assert isinstance(back, ModelRow)
    assert back.standing is Standing.IN_USE


def test_escape_leaves_and_forgets(room: DeedRoom) -> None:
    room.practice.install()
    deed = room.open(Deed.COMMENT, CommentDeed, room.card())
    enter("A remark")
    enter(room.practice.key("ada"))
    type_in(PASSPHRASE)
    with room.qtbot.waitSignal(deed.left):
        press(Qt.Key.Key_Escape)
    require_no_secret(deed)


def _look_at(room: DeedRoom) -> ModelCard:
    return room.desk.look_at(Path(example(TARNWICK)), Course())


def _go_to_key_and_sign(deed: ApproveDeed, key: str, passphrase: str = PASSPHRASE) -> None:
    """From wherever the focus is to the fields of the key, and on with Enter."""
    deed._key.place.edit.setFocus()
    type_key(key, passphrase)
