"""A form: tab order, Enter, refusals, passphrases that are forgotten, days and places as typed."""

from datetime import date
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.errors import UsageError
from clinicalc.gui.form import Form


@pytest.fixture
def form(qtbot: QtBot) -> Form:
    made = Form("Approve", "It then gives numbers.", "&Approve")
    qtbot.addWidget(made)
    return made


def _show(qtbot: QtBot, form: Form) -> None:
    form.resize(880, 640)
    form.show()
    qtbot.waitExposed(form)
    form.activateWindow()
    form.focus_first()
    qtbot.waitUntil(lambda: QApplication.focusWidget() is not None)


def _focused() -> QWidget:
    widget = QApplication.focusWidget()
    assert widget is not None
    return widget


def test_enter_goes_from_field_to_field_and_asks_for_the_deed_at_the_end(qtbot: QtBot, form: Form) -> None:
    reason, secret = form.add_text("&Reason"), form.add_secret("&Passphrase")
    asked = []
    form.asked.connect(lambda: asked.append(True))
    _show(qtbot, form)
    assert QApplication.focusWidget() is reason.edit
    QTest.keyClick(reason.edit, Qt.Key.Key_Return)
    assert QApplication.focusWidget() is secret.edit
    QTest.keyClick(secret.edit, Qt.Key.Key_Return)
    assert asked == [True]


def test_the_tab_key_goes_through_the_fields_and_then_to_the_way_out_and_the_deed(qtbot: QtBot, form: Form) -> None:
    first, place, last = form.add_text("&Reason"), form.add_place("&File", lambda _: None), form.add_secret("&Word")
    _show(qtbot, form)
    seen: list[QWidget] = []
    for _ in range(7):
        seen.append(_focused())
        QTest.keyClick(_focused(), Qt.Key.Key_Tab)
    assert seen == [first.edit, place.edit, place.button, last.edit, form.leave, form.deed, first.edit]


def test_escape_leaves(qtbot: QtBot, form: Form) -> None:
    form.add_text("&Reason")
    _show(qtbot, form)
    with qtbot.waitSignal(form.left):
        QTest.keyClick(_focused(), Qt.Key.Key_Escape)


def test_a_refusal_is_said_with_the_focus_at_its_field(qtbot: QtBot, form: Form) -> None:
    form.add_text("&Key")
    reason = form.add_text("&Reason")
    _show(qtbot, form)
    form.refuse(UsageError("no reason is given.", do="Say why."), reason.edit)
    assert form.refusal.text() == "No reason is given. Say why."
    assert form.refusal.isVisible()
    assert QApplication.focusWidget() is reason.edit
    form.wait("Signing")
    assert not form.refusal.isVisible()
    assert not form.deed.isEnabled()
    form.settle()
    assert form.deed.isEnabled()


def test_passphrases_are_hidden_and_forgotten(qtbot: QtBot, form: Form) -> None:
    secret = form.add_secret("&Passphrase")
    secret.edit.setText("  correct horse  ")
    assert secret.secret == "  correct horse  "
    assert secret.edit.displayText() != secret.edit.text()
    form.forget()
    assert all("horse" not in edit.text() for edit in form.findChildren(QLineEdit))
    secret.edit.undo()
    assert secret.secret == ""


@pytest.mark.parametrize("text", ["2027-11-30", "30 November 2027", " 30 november 2027 "])
def test_a_day_is_read_in_figures_and_in_words(qtbot: QtBot, form: Form, text: str) -> None:
    day = form.add_day("&Until")
    day.edit.setText(text)
    assert day.day() == date(2027, 11, 30)
    assert day.read.text() == "30 November 2027"


@pytest.mark.parametrize("text", ["", "30.11.2027", "2027-02-30", "31 November 2027", "20271130", "30 Nov 2027"])
def test_what_is_no_day_is_said(qtbot: QtBot, form: Form, text: str) -> None:
    day = form.add_day("&Until")
    day.edit.setText(text)
    with pytest.raises(UsageError, match="no day"):
        day.day()
    assert day.read.text() == ""


def test_a_place_is_typed_or_chosen(qtbot: QtBot, form: Form, tmp_path: Path) -> None:
    place = form.add_place("&File", lambda _: tmp_path / "model.json")
    with pytest.raises(UsageError, match="no place"):
        place.path()
    place.button.click()
    assert place.path() == tmp_path / "model.json"
    place.edit.setText("~/x.json")
    assert place.path() == Path.home() / "x.json"


def test_every_field_has_its_label_and_what_it_is_for(qtbot: QtBot, form: Form) -> None:
    field = form.add_text("&Reason", says="Everybody who meets the model reads it.")
    assert field.edit.accessibleName() == "Reason"
    assert field.edit.accessibleDescription() == "Everybody who meets the model reads it."
