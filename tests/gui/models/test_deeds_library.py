"""History, a day that is past, a library carried as a file, and the people of the practice."""

import csv
import io
from collections.abc import Iterator
from datetime import date, timedelta
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from clinicalc.gui.models.deeds.bundle_deeds import BringInDeed, ExportDeed
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.deeds.history_deed import HistoryDeed
from clinicalc.gui.models.deeds.people_deed import PeopleDeed
from clinicalc.gui.models.deeds.people_forms import AppointForm, DismissForm, PolicyForm, RevokeForm
from clinicalc.library.cards import write_card
from clinicalc.library.history_table import write_history_csv
from clinicalc.library.standing import Standing
from clinicalc.operations.course import Course
from tests.cli.practices import FINGERPRINT, found_practice
from tests.gui.models.deeds_kit import DeedRoom, enter, press, require_no_secret, type_in, type_key
from tests.library.keys_at_hand import PASSPHRASE, key_file


@pytest.fixture
def room(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, qtbot: QtBot) -> Iterator[DeedRoom]:
    """A practice with one approved model."""
    made = DeedRoom(found_practice(tmp_path, monkeypatch), qtbot)
    made.practice.install()
    made.practice.approve("--fingerprint", FINGERPRINT)
    yield made
    made.settle()


def test_the_history_of_the_library_is_told_in_chain_order(room: DeedRoom) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    heads = [entry.head for entry in deed.pane.entries.entries]
    assert [head.partition(".")[0] for head in heads] == ["1", "2", "3", "4"]
    assert "founded the library of Tarnwick Northgate" in heads[0]
    assert "approvers from here on: Dr Ada Tarn (GP partner), Cleo Fell" in heads[1]
    assert "Installed tarnwick-cvd-10y 1.0.0, " in heads[2]
    assert "tarnwick-cvd-10y 1.0.0: approved until" in heads[3]
    last = deed.pane.entries.entries[3]
    assert "because: Agreed" in last.lines
    assert any(line.startswith("by Dr Ada Tarn, GP partner; key ") for line in last.lines)
    assert deed.pane.says.text().startswith("4 records.")


def test_the_history_of_one_model_is_its_own(room: DeedRoom) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed, room.card())
    assert len(deed.pane.entries.entries) == 2
    assert deed.pane.title.text().endswith("invented example 1.0.0")


def test_a_screen_reader_hears_the_whole_of_an_entry_and_arrows_go_on(room: DeedRoom) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    view = deed.pane.entries
    assert view.place == 0
    press(Qt.Key.Key_Down)
    assert view.place == 1
    heard = view.model().data(view.currentIndex(), Qt.ItemDataRole.AccessibleTextRole)
    assert heard == view.entries[1].text
    assert "by Tarnwick Northgate, practice key" in str(heard)


def test_a_fault_stands_with_its_record(room: DeedRoom) -> None:
    model = Path(room.practice.place) / "models" / f"{FINGERPRINT}.json"
    model.write_bytes(model.read_bytes().replace(b"Tarnwick", b"Tarnwock", 1))
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    found = deed.pane.entries.entries[-1]
    assert found.faults
    assert "Fault: " in found.text
    assert "clinicalc library" not in found.text


def test_as_of_answers_which_model_gave_numbers(room: DeedRoom) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    deed.pane.day.edit.setFocus()
    enter(date.today().isoformat())
    room.settle()
    (entry,) = deed.pane.entries.entries
    assert entry.head == "Tarnwick cardiovascular disease, invented example 1.0.0: answered"
    assert "1 of 1 model answered" in deed.pane.says.text()
    assert not deed.pane.csv.isEnabled()
    deed.pane.day.edit.setFocus()
    enter((date.today() - timedelta(days=400)).isoformat())
    room.settle()
    assert "there was no library yet" in deed.pane.says.text()
    deed.pane.show_all.setFocus()
    press(Qt.Key.Key_Return)
    assert len(deed.pane.entries.entries) == 4
    assert not deed.pane.day.edit.text()


@pytest.mark.parametrize(
    ("typed", "said"),
    [("", "No day is given"), ("2026-02-30", "is no day of the calendar"), ("2999-01-01", "is still to come")],
)
def test_a_day_that_cannot_be_looked_back_on_is_refused_at_its_field(room: DeedRoom, typed: str, said: str) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    deed.pane.day.edit.setFocus()
    enter(typed)
    room.settle()
    assert said in deed.pane.refusal.text()
    assert deed.focusWidget() is deed.pane.day.edit
    assert len(deed.pane.entries.entries) == 4


def test_the_history_is_saved_as_csv_and_pdf(room: DeedRoom, tmp_path: Path) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    room.chosen = tmp_path / "history.csv"
    deed.pane.csv.setFocus()
    press(Qt.Key.Key_Return)
    room.settle()
    assert deed.pane.busy.text() == "Saved as history.csv."
    written = (tmp_path / "history.csv").read_bytes()
    assert written == write_history_csv(room.desk.history(None, Course()))
    rows = list(csv.reader(io.StringIO(written.decode("utf-8-sig"))))
    assert len(rows) == 5
    room.chosen = tmp_path / "history.pdf"
    deed.pane.pdf.setFocus()
    press(Qt.Key.Key_Return)
    room.settle()
    assert deed.pane.busy.text() == "Saved as history.pdf."
    assert (tmp_path / "history.pdf").read_bytes().startswith(b"%PDF-")


def test_a_day_is_saved_as_pdf(room: DeedRoom, tmp_path: Path) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    deed.pane.day.edit.setFocus()
    enter(date.today().isoformat())
    room.settle()
    room.chosen = tmp_path / "that-day.pdf"
    deed.pane.pdf.setFocus()
    press(Qt.Key.Key_Return)
    room.settle()
    assert (tmp_path / "that-day.pdf").read_bytes().startswith(b"%PDF-")


def test_a_place_that_cannot_be_written_is_said(room: DeedRoom, tmp_path: Path) -> None:
    deed = room.open(LibraryDeed.HISTORY, HistoryDeed)
    room.chosen = tmp_path / "no-such-folder" / "history.csv"
    deed.pane.csv.setFocus()
    press(Qt.Key.Key_Return)
    room.settle()
    assert "the history could not be written" in deed.pane.refusal.text()
    assert deed.pane.csv.isEnabled()


def test_a_library_is_exported_and_brought_in_elsewhere(room: DeedRoom, tmp_path: Path) -> None:
    bundle = tmp_path / "carried.json"
    export = room.open(LibraryDeed.EXPORT, ExportDeed)
    enter(str(bundle))
    room.settle()
    assert export.said.text() == "1 model and 4 records were written to carried.json."
    export._place.edit.setFocus()
    before = bundle.read_bytes()
    enter(str(bundle))  # typed, not chosen: nobody was asked whether it may be replaced
    room.settle()
    assert "there is a file with this name already" in export.form.refusal.text()
    assert "--" not in export.form.refusal.text()
    assert bundle.read_bytes() == before
    room.chosen = bundle
    export._place.button.setFocus()
    press(Qt.Key.Key_Space)
    enter()
    room.settle()
    assert "were written to carried.json" in export.said.text()

    remark = Path(room.practice.place) / "records"
    for file in remark.glob(f"{FINGERPRINT}-*"):  # this machine's place lacks what the bundle has
        file.unlink()
    bring = room.open(LibraryDeed.BRING_IN, BringInDeed)
    with room.qtbot.waitSignal(bring.written):
        enter(str(bundle))
    room.settle()
    assert bring.said.text() == "New: 0 models and 2 records. The library now holds 1 model and 4 records."


def test_what_is_no_bundle_is_refused_at_its_field(room: DeedRoom, tmp_path: Path) -> None:
    wrong = tmp_path / "wrong.json"
    wrong.write_text("{}", encoding="utf-8")
    bring = room.open(LibraryDeed.BRING_IN, BringInDeed)
    enter(str(wrong))
    room.settle()
    assert "wrong.json" in bring.form.refusal.text()
    assert bring._place.edit.text() == str(wrong)
    assert bring.focusWidget() is bring._place.edit


def test_a_person_is_appointed_and_dismissed(room: DeedRoom, tmp_path: Path) -> None:
    card = tmp_path / "ben-card.json"
    write_card(card, key_file(tmp_path / "ben.key", "Dr Ben Wick"))
    people = room.open(LibraryDeed.PEOPLE, PeopleDeed)
    assert [entry.head for entry in people.listed.entries.entries] == ["Dr Ada Tarn", "Cleo Fell"]
    people.listed.form.deed.setFocus()
    press(Qt.Key.Key_Return)
    form = people.form
    assert isinstance(form, AppointForm)
    enter(str(card))
    enter("GP partner")
    enter()
    with room.qtbot.waitSignal(people.written):
        type_key(room.practice.key("practice"))
    assert "Dr Ben Wick (GP partner) may now install, approve and withdraw" in people.listed.said.text()
    assert len(people.listed.entries.entries) == 3
    assert room.last_key.practice == room.practice.key("practice")
    assert room.last_key.path == ""
    press(Qt.Key.Key_End)
    people.listed.dismiss.setFocus()
    press(Qt.Key.Key_Return)
    dismissal = people.form
    assert isinstance(dismissal, DismissForm)
    assert dismissal.form.title.text() == "Dismiss Dr Ben Wick"
    assert dismissal.key.place.edit.text() == room.practice.key("practice")
    enter()
    with room.qtbot.waitSignal(people.written):
        enter(PASSPHRASE)
    assert [entry.head for entry in people.listed.entries.entries] == ["Dr Ada Tarn", "Cleo Fell"]
    require_no_secret(people)


@pytest.mark.parametrize("stays", [False, True])
def test_a_revoked_keys_approvals_are_void_unless_they_are_named(room: DeedRoom, stays: bool) -> None:
    people = room.open(LibraryDeed.PEOPLE, PeopleDeed)
    people.listed.revoke.setFocus()
    press(Qt.Key.Key_Return)
    form = people.form
    assert isinstance(form, RevokeForm)
    enter("The stick was stolen")
    (answers,) = [answers for _, answers in form._kept]
    assert answers.answer == "void"
    if stays:
        assert QApplication.focusWidget() in answers.segments
        press(Qt.Key.Key_Right)
    enter()
    assert people.focusWidget() is form.key.place.edit
    with room.qtbot.waitSignal(people.written):
        type_key(room.practice.key("practice"))
    assert "counts no more" in people.listed.said.text()
    row = room.card().row
    assert row is not None
    assert (row.standing is Standing.IN_USE) is stays


def test_the_policy_is_changed(room: DeedRoom) -> None:
    people = room.open(LibraryDeed.PEOPLE, PeopleDeed)
    people.listed.policy.setFocus()
    press(Qt.Key.Key_Return)
    form = people.form
    assert isinstance(form, PolicyForm)
    form._hours.edit.setFocus()
    enter("721")
    enter("For the holidays")
    type_key(room.practice.key("practice"))
    assert "“721” is no number of hours between 0 and 720" in form.form.refusal.text()
    assert people.focusWidget() is form._hours.edit
    require_no_secret(people)
    type_in("72")
    form._may.setFocus()
    press(Qt.Key.Key_Right)
    form.key.secret.edit.setFocus()
    with room.qtbot.waitSignal(people.written):
        enter(PASSPHRASE)
    assert "may approve it. Without the library, a machine works on for 72 hours" in people.listed.allowed.text()


def test_only_the_practice_key_changes_people(room: DeedRoom) -> None:
    people = room.open(LibraryDeed.PEOPLE, PeopleDeed)
    people.listed.dismiss.setFocus()
    press(Qt.Key.Key_Return)
    form = people.form
    assert isinstance(form, DismissForm)
    type_key(room.practice.key("ada"))
    room.settle()
    assert "does not speak for Tarnwick Northgate" in form.form.refusal.text()
    assert "Choose the file of the practice key" in form.form.refusal.text()
    assert people.focusWidget() is form.key.place.edit
    require_no_secret(people)
    press(Qt.Key.Key_Escape)
    assert people.form is None
    with room.qtbot.waitSignal(people.left):
        press(Qt.Key.Key_Escape)
