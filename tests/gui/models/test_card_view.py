"""One card on screen: what stands on it in each standing, what stays, where the keys lead, how it fits."""

from dataclasses import replace

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QAccessible
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.findings import Grade
from clinicalc.gui.models.card_sheet import CardSheet
from clinicalc.gui.models.card_view import CardView
from clinicalc.gui.models.change_table import ChangeTable
from clinicalc.gui.models.difference_view import WAITING, DifferenceView
from clinicalc.gui.models.effect_view import EffectView
from clinicalc.library.records import Compared
from clinicalc.operations.model_card import ModelCard
from clinicalc.report.shapes import Figure
from tests.gui.models.card_shelf import CardShelf
from tests.gui.walking import settle

EVERY = ("waiting", "in use", "withdrawn", "unconfirmed", "candidate", "held", "refused", "overdue")
SIZES = ((880, 702), (640, 540), (430, 300))
"""Of the right side at 1280 x 800, at 1024 x 640, and of one column at 200 % text."""


@pytest.fixture
def view(qtbot: QtBot) -> CardView:
    shown = CardView()
    qtbot.addWidget(shown)
    shown.resize(880, 702)
    with qtbot.waitExposed(shown):
        shown.show()
    shown.activateWindow()
    return shown


def sheet_of(view: CardView) -> CardSheet:
    assert view.sheet is not None
    return view.sheet


def difference_of(view: CardView) -> DifferenceView:
    difference = sheet_of(view).difference
    assert difference is not None
    return difference


def table_of(view: CardView) -> ChangeTable:
    table = difference_of(view).table
    assert table is not None
    return table


def effect_of(view: CardView) -> EffectView:
    effect = difference_of(view).effect
    assert effect is not None
    return effect


def words_on(view: CardView) -> list[str]:
    return [label.text() for label in view.findChildren(QLabel) if label.isVisibleTo(view) and label.text()]


@pytest.mark.parametrize("which", EVERY)
def test_every_standing_shows_its_card(view: CardView, card_shelf: CardShelf, which: str) -> None:
    card = card_shelf.cards[which]
    view.show_card(card)
    settle()
    words = words_on(view)
    assert card.title in words
    assert card.version in words
    assert (view.strip.label.text() in words) == (which != "in use")
    for said in (*(check.name for check in card.checks), *card.cautions, *(text for _, text in card.documentation)):
        assert said in words
    assert all(line in "\n".join(words) for line in card.history)
    plate = sheet_of(view).plate
    assert plate is not None
    assert plate.height() > 90
    assert plate.visibleRegion().boundingRect().height() == plate.height()
    assert view.grab().width() == 880  # it can be painted


def test_a_refused_file_has_its_stop_before_everything_else(view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["refused"])
    settle()
    sheet = sheet_of(view)
    (stop,) = sheet.faults
    assert stop.grade is Grade.STOP
    assert stop.word.text() == "Stop"
    assert "copy" in stop.message.text()  # what to do
    assert sheet.plate is not None
    assert stop.mapTo(sheet, QPoint(0, 0)).y() < sheet.plate.mapTo(sheet, QPoint(0, 0)).y()
    assert sheet.checks.rows == []
    assert sheet.difference is None  # there is nothing to be compared with


def test_the_plate_has_sixteen_groups_and_the_first_three_in_semibold(view: CardView, card_shelf: CardShelf) -> None:
    card = card_shelf.cards["waiting"]
    view.show_card(card)
    plate = sheet_of(view).plate
    assert plate is not None
    parts = [label for label in plate.findChildren(QLabel) if label.font().pixelSize() == 16]
    digits = "".join(part.text() for part in parts).replace(" ", "")
    assert sorted(digits) == sorted(card.fingerprint)
    (strong,) = [part for part in parts if part.font().weight() > 400]
    assert strong.text().replace(" ", "") == card.fingerprint[:12]
    assert "The first three groups stand on every print." in words_on(view)
    assert card.fingerprint[:4] + " " + card.fingerprint[4:8] in plate.accessibleName()


def test_a_failed_check_is_in_semibold_with_a_word(view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["waiting"])
    rows = {name.text(): says for name, says in sheet_of(view).checks.rows}
    assert rows["Signature"].text() == "Caution: nobody signed it; who approves needs the whole fingerprint"
    assert rows["Signature"].font().weight() > 400
    assert rows["Worked examples"].font().weight() == 400


def test_a_waiting_file_asks_for_its_difference_by_itself(qtbot: QtBot, view: CardView, card_shelf: CardShelf) -> None:
    in_use = card_shelf.difference.old.fingerprint
    for which in ("waiting", "candidate"):
        with qtbot.waitSignal(view.difference_asked) as asked:
            view.show_card(card_shelf.cards[which])
        assert asked.args == [in_use]
        assert WAITING in words_on(view)
    for which in ("in use", "withdrawn", "held", "unconfirmed", "refused"):
        with qtbot.assertNotEmitted(view.difference_asked):
            view.show_card(card_shelf.cards[which])


def test_another_version_is_asked_for_with_the_chooser(qtbot: QtBot, view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    difference = difference_of(view)
    assert difference.heading.label.text() == "Difference from 1.2.0, in use"
    chooser = difference.chooser.chooser
    assert [chooser.itemText(at) for at in range(chooser.count())] == ["1.2.0, in use", "1.0.0, withdrawn"]
    chooser.setFocus()
    with qtbot.waitSignal(view.difference_asked) as asked:
        QTest.keyClick(chooser, Qt.Key.Key_Down)
        chooser.activated.emit(chooser.currentIndex())
    assert asked.args == [card_shelf.cards["withdrawn"].fingerprint]
    assert difference.heading.label.text() == "Difference from 1.0.0, withdrawn"
    assert difference.table is None  # nothing of the other one stays under this heading
    view.show_difference(card_shelf.difference)  # comes too late
    assert difference.table is None


def test_a_difference_that_fails_says_why_and_can_be_asked_again(
    qtbot: QtBot, view: CardView, card_shelf: CardShelf
) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference_fault("The library is out of reach.")
    assert "The library is out of reach." in words_on(view)
    with qtbot.waitSignal(view.difference_asked):
        QTest.keyClick(difference_of(view).button, Qt.Key.Key_Return)


def test_a_difference_of_another_file_is_let_go(view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["candidate"])
    view.show_difference(card_shelf.difference)
    assert difference_of(view).table is None


def test_the_difference_is_a_table_with_what_is_the_same_under_it(view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    settle()
    found = card_shelf.difference.difference
    table = table_of(view)
    rows = table.model()
    assert isinstance(rows.data(rows.index(0, 1)), str)
    said = [[rows.data(rows.index(row, column)) for column in range(3)] for row in range(rows.rowCount())]
    assert said[0] == ["", "1.2.0", "1.3.0"]
    kinds = {change.aspect for change in found.changes}
    assert len(said) == 1 + len(found.changes) + len(kinds)
    assert any(row[1].startswith("−") and row[2].startswith("−") for row in said)  # a coefficient below nought
    assert any(row[1] == "not stated" and "Second look" in "".join(row) + row[2] for row in said)
    assert found.say_same() in words_on(view)
    heights = sum(table.rowHeight(row) for row in range(rows.rowCount()))
    assert table.height() == heights > 26 * len(said)  # all of it, without a scroll bar of its own


def test_a_screen_reader_hears_which_version_says_what(view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    settle()
    table = table_of(view)
    rows = table.model()
    spoken = Qt.ItemDataRole.AccessibleTextRole
    at = next(r for r in range(rows.rowCount()) if str(rows.data(rows.index(r, 0))).endswith("coefficient age"))
    assert rows.data(rows.index(at, 1), spoken).startswith("1.2.0: ")
    assert rows.data(rows.index(at, 2), spoken).startswith("1.3.0: ")
    # the row under it shows only what is other, and says all
    assert rows.data(rows.index(at + 1, 0)).startswith("\u2003coefficient")
    assert rows.data(rows.index(at + 1, 0), spoken).startswith("equation all: coefficient")
    interface = QAccessible.queryAccessibleInterface(table)
    assert interface.role() == QAccessible.Role.Table
    assert interface.text(QAccessible.Text.Name) == "Difference from 1.2.0, in use"
    heard = [interface.child(at).text(QAccessible.Text.Name) for at in range(interface.childCount())]
    assert heard.count("1.2.0: 1.2.0") == 1
    assert set(heard) >= {rows.data(rows.index(at, column), spoken) for column in range(3)}


def test_arrow_keys_read_the_table_and_the_sheet_follows(qtbot: QtBot, view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    settle()
    table = table_of(view)
    table.setFocus()
    last = table.model().rowCount() - 1
    for _ in range(last + 3):
        QTest.keyClick(table, Qt.Key.Key_Down)
    assert table.currentIndex().row() == last
    top = table.viewport().mapTo(view.scroller.viewport(), QPoint(0, table.rowViewportPosition(last))).y()
    assert 0 <= top <= view.scroller.viewport().height() - table.rowHeight(last)
    QTest.keyClick(table, Qt.Key.Key_Right)
    QTest.keyClick(table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert QApplication.clipboard().text().count("\t") == 2
    QTest.keyClick(table, Qt.Key.Key_Tab)
    assert QApplication.focusWidget() is effect_of(view).figure.as_text


def test_nothing_is_painted_over_anything_else_when_a_difference_comes(view: CardView, card_shelf: CardShelf) -> None:
    """Without a turn of the event loop, as between two paints."""
    settle()
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    table, effect, difference = table_of(view), effect_of(view), difference_of(view)
    assert effect.mapTo(difference, QPoint(0, 0)).y() > table.mapTo(difference, QPoint(0, 0)).y() + table.height()
    assert difference.mapTo(sheet_of(view), QPoint(0, 0)).y() + difference.height() <= sheet_of(view).height()
    assert effect.figure.view.height() >= (effect.figure.view.figure_shown or figure_missing()).height


def figure_missing() -> Figure:
    raise AssertionError("no figure is shown")


def test_the_effect_stands_on_the_ruler_with_its_text_behind_it(
    qtbot: QtBot, view: CardView, card_shelf: CardShelf
) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    settle()
    effect = effect_of(view)
    figure = effect.figure.view.figure_shown
    assert figure is not None
    assert "open dots 1.2.0, filled dots 1.3.0" in figure.sentence
    assert len(figure.table) == 9  # a heading, and the eight patients that both versions have as examples
    assert effect.figure.view.accessibleName() == figure.sentence
    assert effect.figure.height() >= figure.height
    said = "\n".join(words_on(view))
    for words in ("Largest rise: ", "Largest fall: ", "Decision point 20.0\u202f% (Second look, only in the new"):
        assert words in said
    QTest.keyClick(effect.figure.as_text, Qt.Key.Key_Return)
    assert "age 61" in effect.figure.text.toPlainText()
    assert effect.figure.text.toPlainText().count("\n") == 8


def test_what_was_typed_stays_with_its_file_and_goes_with_it(view: CardView, card_shelf: CardShelf) -> None:
    card, other = card_shelf.cards["unconfirmed"], card_shelf.cards["waiting"]
    view.show_card(card)
    sheet = sheet_of(view)
    assert sheet.given is not None
    assert sheet.unconfirmed is not None
    sheet.given.edit.setText("de69 83")
    edit = sheet.unconfirmed.rows[1].edit
    assert edit is not None
    edit.setText("R. Osei")
    settle()
    view.scroller.verticalScrollBar().setValue(120)
    view.show_card(replace(card, history=(*card.history, "a remark")))
    settle()
    assert view.typed_fingerprint == "de69 83"
    assert list(view.compared) == [Compared(card.unconfirmed[1].at, "R. Osei")]
    assert view.scroller.verticalScrollBar().value() == 120
    view.show_card(other)
    assert not view.typed_fingerprint
    assert not view.compared
    view.show_card(card)
    assert not view.typed_fingerprint
    assert not view.compared
    view.clear()
    settle()
    assert view.card is None
    assert not view.typed_fingerprint
    assert not view.compared
    assert words_on(view) == []


def test_the_difference_stays_when_the_same_file_is_read_again(
    qtbot: QtBot, view: CardView, card_shelf: CardShelf
) -> None:
    view.show_card(card_shelf.cards["waiting"])
    view.show_difference(card_shelf.difference)
    with qtbot.assertNotEmitted(view.difference_asked):
        view.show_card(replace(card_shelf.cards["waiting"]))
    assert difference_of(view).difference is card_shelf.difference


def test_whoever_listens_hears_of_every_key(qtbot: QtBot, view: CardView, card_shelf: CardShelf) -> None:
    view.show_card(card_shelf.cards["unconfirmed"])
    sheet = sheet_of(view)
    assert sheet.given is not None
    assert sheet.unconfirmed is not None
    with qtbot.waitSignal(view.given_changed):
        QTest.keyClicks(sheet.given.edit, "d")
    edit = sheet.unconfirmed.rows[0].edit
    assert edit is not None
    with qtbot.waitSignal(view.given_changed):
        QTest.keyClicks(edit, "R")
    view.focus_given()
    assert QApplication.focusWidget() is sheet.given.edit
    view.focus_open_figure()
    following = sheet.unconfirmed.rows[1].edit
    assert QApplication.focusWidget() is following


def test_tab_goes_from_top_to_bottom_also_to_what_came_later(
    qtbot: QtBot, view: CardView, card_shelf: CardShelf
) -> None:
    view.show_card(card_with_everything(card_shelf))
    view.show_difference(card_shelf.difference)
    settle()
    view.scroller.setFocus()
    places, seen = [], []
    for _ in range(40):
        focused = QApplication.focusWidget()
        assert focused is not None
        if focused in seen:
            break
        seen.append(focused)
        if focused is not view.scroller:
            places.append(focused.mapTo(sheet_of(view), QPoint(0, focused.height())).y())
        QTest.keyClick(focused, Qt.Key.Key_Tab)
    wanted = [stop for stop in view.tab_stops() if stop.isVisibleTo(view) and stop.isEnabled()]
    assert seen == wanted
    assert len(seen) > 12
    assert places == sorted(places)


def card_with_everything(shelf: CardShelf) -> ModelCard:
    """The waiting card with the unconfirmed figures of another file."""
    return replace(shelf.cards["waiting"], unconfirmed=shelf.cards["unconfirmed"].unconfirmed)


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("which", EVERY)
def test_nothing_is_cut_off_at_any_size(
    view: CardView, card_shelf: CardShelf, which: str, size: tuple[int, int]
) -> None:
    card = card_with_everything(card_shelf) if which == "waiting" else card_shelf.cards[which]
    view.resize(*size)
    view.show_card(replace(card, title=f"{card.title}, with a name that goes on for longer than one line has room"))
    if which == "waiting":
        view.show_difference(card_shelf.difference)
    settle()
    sheet = sheet_of(view)
    assert sheet.width() <= view.scroller.viewport().width()
    for part in sheet.findChildren(QWidget):
        if not part.isVisibleTo(sheet) or isinstance(part.parentWidget(), ChangeTable):
            continue
        left = part.mapTo(sheet, QPoint(0, 0)).x()
        assert left >= 0, part
        assert left + part.width() <= sheet.width(), (part, part.parentWidget())
        if isinstance(part, QLabel) and part.wordWrap():
            assert part.height() >= part.heightForWidth(part.width()) - 1, part.text()
        elif isinstance(part, QLabel):
            assert part.width() >= part.sizeHint().width() - 1, part.text()


def test_texts_of_files_are_shown_letter_for_letter(view: CardView, card_shelf: CardShelf) -> None:
    nasty = "<b>bold</b> &amp; <img src=x>"
    card = card_shelf.cards["unconfirmed"]
    figure = replace(card.unconfirmed[0], what=nasty, why=nasty, check_against=nasty)
    changed = replace(card, title=nasty, outcome=nasty, cautions=(nasty,), unconfirmed=(figure,), history=(nasty,))
    view.show_card(changed)
    assert all(label.textFormat() is Qt.TextFormat.PlainText for label in view.findChildren(QLabel))
    assert words_on(view).count(nasty) >= 3
