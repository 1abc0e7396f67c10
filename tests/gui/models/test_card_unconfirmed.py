"""Unconfirmed figures: a name is the tick, the offer comes after the first one, and hundreds do not freeze anything."""

from dataclasses import replace

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit
from pytestqt.qtbot import QtBot

from clinicalc.gui.models.unconfirmed_list import UnconfirmedList
from clinicalc.library.choices import settle_comparisons
from clinicalc.library.records import Compared
from clinicalc.operations.open_figures import OpenFigure
from tests.gui.models.card_shelf import CardShelf


def figures(count: int) -> tuple[OpenFigure, ...]:
    return tuple(
        OpenFigure(f"/equations/0/terms/{n}", f"coefficient {n}", f"-0.{n + 1}", "Typed.", "Table 3", "")
        for n in range(count)
    )


def listed(qtbot: QtBot, entries: tuple[OpenFigure, ...], *, asks: bool = True) -> UnconfirmedList:
    shown = UnconfirmedList(entries, asks=asks)
    qtbot.addWidget(shown)
    shown.resize(800, 600)
    with qtbot.waitExposed(shown):
        shown.show()
    shown.activateWindow()
    return shown


def field(shown: UnconfirmedList, place: int) -> QLineEdit:
    edit = shown.rows[place].edit
    assert edit is not None
    return edit


def test_every_figure_has_its_digits_why_and_what_to_compare_it_with(qtbot: QtBot, card_shelf: CardShelf) -> None:
    card = card_shelf.cards["unconfirmed"]
    shown = listed(qtbot, card.unconfirmed)
    assert len(shown.rows) == len(card.unconfirmed) == 8
    words = [(row.what.text(), row.why.text(), row.against.text()) for row in shown.rows]
    for (what, why, against), entry in zip(words, card.unconfirmed, strict=True):
        assert why == entry.why
        assert against == f"Compare with {entry.check_against}"
        assert what.startswith(f"{entry.what}: ")
    # the file's figures; minus as people write it
    assert words[1][0].endswith("baseline survival 0.9665; mean of the linear predictor −29.18")
    assert words[5][0].endswith("1.957")


def test_figures_behind_one_entry_can_all_be_seen(qtbot: QtBot, card_shelf: CardShelf) -> None:
    shown = listed(qtbot, card_shelf.cards["unconfirmed"].unconfirmed)
    first = shown.rows[0]
    assert first.parts is not None
    assert first.parts.text() == f"Show the {len(first.figure.parts)} figures"
    QTest.keyClick(first.parts, Qt.Key.Key_Return)
    lines = first.text.toPlainText().splitlines()
    assert len(lines) == len(first.figure.parts) > 100
    assert any("29.18" in line for line in lines)
    QTest.keyClick(first.parts, Qt.Key.Key_Return)
    assert first.text.isHidden()
    assert shown.rows[1].parts is None  # its two figures stand in the first line


def test_a_name_is_the_tick_and_taking_it_away_opens_the_figure_again(qtbot: QtBot) -> None:
    shown = listed(qtbot, figures(8))
    assert shown.heading.label.text() == "Unconfirmed figures: 0 of 8 compared"
    with qtbot.waitSignal(shown.changed):
        QTest.keyClicks(field(shown, 2), "R. Osei ")
    assert shown.count_words() == "1 of 8 compared"
    assert list(shown.compared) == [Compared("/equations/0/terms/2", "R. Osei")]
    field(shown, 2).setText("  ")
    assert list(shown.compared) == []
    assert shown.heading.label.text() == "Unconfirmed figures: 0 of 8 compared"


def test_the_same_name_is_offered_after_the_first_one_and_only_for_what_is_open_below(qtbot: QtBot) -> None:
    shown = listed(qtbot, figures(6))
    assert all(row.same.isHidden() for row in shown.rows)
    field(shown, 3).setText("B. Lamb")
    field(shown, 1).setText("R. Osei")
    offers = [not row.same.isHidden() for row in shown.rows]
    assert offers == [False, True, False, False, False, False]
    assert shown.rows[1].same.text() == "Same for 3 below"
    shown.rows[1].same.setFocus()
    QTest.keyClick(shown.rows[1].same, Qt.Key.Key_Space)
    assert [field(shown, place).text() for place in range(6)] == [
        "", "R. Osei", "R. Osei", "B. Lamb", "R. Osei", "R. Osei",
    ]  # fmt: skip
    assert QApplication.focusWidget() is field(shown, 1)
    assert all(row.same.isHidden() for row in shown.rows)
    assert shown.count_words() == "5 of 6 compared"


def test_no_row_moves_when_the_offer_comes(qtbot: QtBot) -> None:
    shown = listed(qtbot, figures(4))
    before = [row.y() for row in shown.rows]
    field(shown, 0).setText("R. Osei")
    qtbot.wait(1)
    assert [row.y() for row in shown.rows] == before


def test_enter_leads_from_name_to_name_and_makes_further_rows(qtbot: QtBot) -> None:
    shown = listed(qtbot, figures(45))
    assert len(shown.rows) == 20
    assert shown.more.text() == "Show the next 20 of 25 further figures"
    field(shown, 18).setFocus()
    QTest.keyClick(field(shown, 18), Qt.Key.Key_Return)
    assert QApplication.focusWidget() is field(shown, 19)
    QTest.keyClick(field(shown, 19), Qt.Key.Key_Return)
    assert len(shown.rows) == 40
    assert QApplication.focusWidget() is field(shown, 20)
    QTest.keyClick(shown.more, Qt.Key.Key_Return)
    assert len(shown.rows) == 45
    assert shown.more.isHidden()


def test_rows_that_are_not_made_yet_take_the_name_too(qtbot: QtBot) -> None:
    shown = listed(qtbot, figures(400))
    field(shown, 0).setText("R. Osei")
    shown.rows[0].same.click()
    assert shown.count_words() == "400 of 400 compared"
    assert len(shown.compared) == 400
    shown.more.click()
    assert field(shown, 30).text() == "R. Osei"


def test_the_focus_goes_to_the_first_open_figure_wherever_it_is(qtbot: QtBot) -> None:
    shown = listed(qtbot, tuple(replace(f, compared_by="R. Osei" if n < 25 else "") for n, f in enumerate(figures(30))))
    shown.focus_open()
    assert QApplication.focusWidget() is field(shown, 25)


def test_what_the_approval_says_stands_there_and_without_a_decision_in_words(qtbot: QtBot) -> None:
    entries = (replace(figures(1)[0], compared_by="R. Osei"), figures(2)[1])
    assert field(listed(qtbot, entries), 0).text() == "R. Osei"
    told = listed(qtbot, entries, asks=False)
    assert [row.edit for row in told.rows] == [None, None]
    assert [row.said.text() for row in told.rows] == ["Compared by R. Osei", "Compared by nobody"]
    assert told.heading.label.text() == "Unconfirmed figures: 1 of 2 compared"


def test_a_place_named_twice_counts_when_both_have_a_name(qtbot: QtBot) -> None:
    entries = (figures(1)[0], figures(1)[0])
    shown = listed(qtbot, entries)
    field(shown, 0).setText("R. Osei")
    assert list(shown.compared) == []
    field(shown, 1).setText("B. Lamb")
    assert list(shown.compared) == [Compared("/equations/0/terms/0", "B. Lamb")]


def test_the_library_takes_what_was_entered(qtbot: QtBot, card_shelf: CardShelf) -> None:
    card = card_shelf.cards["unconfirmed"]
    assert card.candidate is not None
    shown = listed(qtbot, card.unconfirmed)
    field(shown, 0).setText("R. Osei")
    shown.rows[0].same.click()
    settled = settle_comparisons(card.candidate.model.content.unconfirmed, shown.compared)
    assert {one.by for one in settled} == {"R. Osei"}
    assert len(settled) == 8
