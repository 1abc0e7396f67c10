"""A narrow window, which is the usual one at 200 % text: one column, the number in sight, every field reachable."""

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import QPoint, QRect, QSize, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import NARROWEST, MainWindow
from clinicalc.gui.number_row import NumberRow
from clinicalc.operations.bedside import open_example
from clinicalc.resources import list_example_models
from tests.gui.bedside_hands import (
    ANSWERS_2008,
    NUMBERS_2008,
    POOLED_2013,
    answer,
    click,
    number_row,
    press,
    retype_number,
)
from tests.gui.test_layout import cut_labels
from tests.gui.walking import cut_texts

pytestmark = pytest.mark.gui

USUAL = QSize(1280, 800)


def settle(window: MainWindow, size: QSize) -> None:
    window.resize(size)
    for _ in range(3):
        QApplication.processEvents()


@pytest.fixture
def narrow(window: MainWindow, lipids: Model) -> MainWindow:
    """A window with a number, as narrow as it can be."""
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    settle(window, NARROWEST)
    return window


def pinned_number(window: MainWindow) -> str:
    """What the number at the top says, "" for none."""
    figure = window.patient.pinned.number.figure_shown
    return figure.sentence if figure is not None and "%" in figure.sentence else ""


def is_in_sight(window: MainWindow, widget: QWidget) -> bool:
    """Whether a widget of the column lies within its viewport."""
    view = window.patient.one_column.viewport()
    return view.rect().contains(QRect(widget.mapTo(view, QPoint(0, 0)), widget.size()))


def test_smallest_window_is_half_of_the_usual(narrow: MainWindow) -> None:
    assert narrow.size() == NARROWEST
    assert (NARROWEST.width() * 2, NARROWEST.height() * 2) == (USUAL.width(), USUAL.height())


def test_number_band_and_model_stay_in_sight(narrow: MainWindow) -> None:
    assert narrow.patient.pinned.isVisible()
    assert "10.5" in pinned_number(narrow)
    assert narrow.patient.pinned.headline.text() == narrow.sheet.headline.text()
    assert narrow.patient.pinned.band.text() == "8.3–13.2\u202f%"
    assert narrow.patient.pinned.fingerprint.text() == narrow.model_bar.fingerprint.text()
    assert narrow.patient.pinned.model.text() == "Not vetted: General cardiovascular disease, lipid form 1.1.0"


def test_pinned_number_goes_with_the_number(qtbot: QtBot, narrow: MainWindow) -> None:
    retype_number(narrow, "age", "5")
    assert pinned_number(narrow) == ""
    retype_number(narrow, "age", "61")
    assert "10.5" in pinned_number(narrow)
    narrow.state.blank("A fault.")
    assert pinned_number(narrow) == ""
    assert narrow.patient.pinned.band.text() == ""


def test_bar_says_why_there_is_no_number(qtbot: QtBot, narrow: MainWindow, lipids: Model, pooled: Model) -> None:
    pinned = narrow.patient.pinned
    assert pinned.sentence.isHidden()
    with_number = pinned.height()
    retype_number(narrow, "total_cholesterol", "5.2")
    said = {pinned.sentence.text()}
    assert pinned.headline.text() == "No number"
    assert pinned.sentence.text().startswith("Total cholesterol stops it.")
    retype_number(narrow, "hdl_cholesterol", "1.2")
    retype_number(narrow, "systolic_bp", "14")
    said.add(pinned.sentence.text())
    assert "and 1 other value stop it." in pinned.sentence.text()
    settle(narrow, NARROWEST)
    assert (pinned.height(), cut_labels(narrow)) == (with_number, [])
    answer(narrow, "prior_cvd", "yes")
    said.add(pinned.sentence.text())
    assert pinned.sentence.text().startswith("This model does not answer for this patient.")
    narrow.begin_new_patient()
    said.add(pinned.sentence.text())
    assert pinned.headline.text() == "No number yet"
    assert pinned.sentence.text() == "9 entries to go. Next: the question at the top."
    settle(narrow, NARROWEST)
    assert (pinned.height(), cut_labels(narrow)) == (with_number, [])
    assert len(said) == 4
    assert (pinned.sentence.text(), pinned.band.text()) == (narrow.sheet.sentence.text(), "")
    narrow.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    assert (pinned.sentence.isHidden(), pinned.band.text()) == (True, "8.3–13.2\u202f%")
    narrow.state.blank("A fault.")
    assert "10.5" not in pinned_number(narrow)
    narrow.use_model(pooled, entry_from_texts(POOLED_2013))
    assert (pinned.sentence.isHidden(), pinned.band.text()) == (True, "no band")


@pytest.mark.parametrize("name", list_example_models())
def test_bar_is_as_high_with_every_reason(open_window: Callable[[Model | None], MainWindow], name: str) -> None:
    model = open_example(name)
    window = open_window(model)
    settle(window, NARROWEST)
    heights = {window.patient.pinned.height()}
    for text in ("5.2", "-1", "99999"):
        numbers = [id for id, row in window.values.rows.items() if isinstance(row, NumberRow)]
        window.use_model(model, entry_from_texts(dict.fromkeys(numbers, text)))
        settle(window, NARROWEST)
        assert window.patient.pinned.sentence.isVisible()
        heights.add(window.patient.pinned.height())
    assert len(heights) == 1
    assert cut_labels(window) == []


def test_pinned_words_leave_with_the_number_and_with_the_form(narrow: MainWindow) -> None:
    """What a screen reader says of the headline names the number too; in two panes the bar holds nothing at all."""
    pinned = narrow.patient.pinned
    assert "Of 100 people" in pinned.headline.accessibleDescription()
    narrow.state.blank("")
    assert pinned.headline.accessibleDescription() == ""
    narrow.state.reassess()
    assert "Of 100 people" in pinned.headline.accessibleDescription()
    settle(narrow, USUAL)
    assert pinned.headline.accessibleDescription() == ""
    labels = (pinned.headline, pinned.sentence, pinned.band_name, pinned.band, pinned.fingerprint, pinned.model)
    assert [label.text() for label in labels] == [""] * len(labels)
    settle(narrow, NARROWEST)
    assert pinned.model.text() == "Not vetted: General cardiovascular disease, lipid form 1.1.0"


def test_number_of_further_findings_is_never_cut(narrow: MainWindow, lipids: Model) -> None:
    """A long band and six findings, in the narrowest window and with room for the words."""
    old = {"total_cholesterol": "330 on 2020-01-01", "hdl_cholesterol": "22 on 2020-01-01", "systolic_bp": "190"}
    narrow.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008 | old))
    for size, said in ((NARROWEST, "+4"), (QSize(860, 400), "and 4 more"), (NARROWEST, "+4")):
        settle(narrow, size)
        more = next(label for label in narrow.patient.pinned.findChildren(QLabel) if label.text() == said)
        assert more.accessibleName() == "and 4 more"
        assert more.isVisible()
        assert cut_texts(narrow.patient.pinned) == []


def test_pinned_mark_leads_to_the_field(qtbot: QtBot, narrow: MainWindow) -> None:
    retype_number(narrow, "total_cholesterol", "5.2")
    number_row(narrow, "age").edit.setFocus()
    mark = number_row(narrow, "total_cholesterol").mark
    pinned = [m for m, _ in narrow.patient.pinned._marks if m.isVisible() and m.number == mark.number]
    click(pinned[0])
    assert number_row(narrow, "total_cholesterol").edit.hasFocus()


def test_every_field_comes_into_sight_when_it_is_gone_to(qtbot: QtBot, narrow: MainWindow) -> None:
    narrow.values.focus_first()
    seen = []
    for _ in range(30):
        focused = QApplication.focusWidget()
        assert focused is not None
        if not narrow.values.isAncestorOf(focused):
            if narrow.field_note.isAncestorOf(focused):
                press(focused, Qt.Key.Key_Tab)
                QApplication.processEvents()
                continue
            break
        QApplication.processEvents()
        seen.append(focused.accessibleName())
        assert is_in_sight(narrow, focused), focused.accessibleName()
        press(focused, Qt.Key.Key_Tab)
    assert seen[-1] == "Name or number"
    assert len(seen) > 10


def test_f6_shows_the_sheet(narrow: MainWindow) -> None:
    number_row(narrow, "age").edit.setFocus()
    press(narrow, Qt.Key.Key_F6)
    QApplication.processEvents()
    view = narrow.patient.one_column.viewport()
    top = narrow.sheet.scroller.mapTo(view, QPoint(0, 0)).y()
    assert 0 <= top < view.height() // 2
    press(narrow, Qt.Key.Key_F6)
    assert number_row(narrow, "age").edit.hasFocus()


def test_keys_scroll_the_column_from_the_sheet_to_both_ends(narrow: MainWindow) -> None:
    bar = narrow.patient.one_column.verticalScrollBar()
    number_row(narrow, "age").edit.setFocus()
    handle = narrow.windowHandle()
    QTest.keyClick(handle, Qt.Key.Key_F6)
    assert narrow.sheet.scroller.hasFocus()
    places = [bar.value()]
    for key in (Qt.Key.Key_Down, Qt.Key.Key_PageDown, Qt.Key.Key_End):
        QTest.keyClick(handle, key)
        places.append(bar.value())
    assert places == sorted(set(places))  # every key went further down
    assert places[-1] == bar.maximum() > 0
    assert is_in_sight(narrow, narrow.sheet.not_used)
    for key in (Qt.Key.Key_Up, Qt.Key.Key_PageUp, Qt.Key.Key_Home):
        QTest.keyClick(handle, key)
        places.append(bar.value())
    assert places[-4:] == sorted(set(places[-4:]), reverse=True)
    assert places[-1] == bar.minimum()
    assert narrow.sheet.scroller.hasFocus()


def test_keys_of_a_field_stay_its_own(narrow: MainWindow) -> None:
    edit = number_row(narrow, "age").edit
    edit.setFocus()
    bar = narrow.patient.one_column.verticalScrollBar()
    before = bar.value()
    for key in (Qt.Key.Key_End, Qt.Key.Key_Home):
        QTest.keyClick(narrow.windowHandle(), key)
    assert (bar.value(), edit.cursorPosition()) == (before, 0)


def test_keys_scroll_the_sheet_alone_again_when_the_window_is_wide(narrow: MainWindow) -> None:
    settle(narrow, QSize(1280, 640))
    number_row(narrow, "age").edit.setFocus()
    QTest.keyClick(narrow.windowHandle(), Qt.Key.Key_F6)
    bar = narrow.sheet.scroller.verticalScrollBar()
    assert bar.maximum() > 0
    QTest.keyClick(narrow.windowHandle(), Qt.Key.Key_Down)
    assert bar.value() > 0


def test_no_number_stands_beside_a_file_that_was_refused(narrow: MainWindow, tmp_path: Path) -> None:
    narrow.open_path(tmp_path / "nowhere.json")
    assert narrow.refusal.isVisible()
    assert not narrow.patient.pinned.isVisible()
    click(narrow.refusal.back)
    assert narrow.patient.pinned.isVisible()


def test_there_and_back_keeps_values_focus_and_places(qtbot: QtBot, window: MainWindow, lipids: Model) -> None:
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    edit = number_row(window, "hdl_cholesterol").edit
    edit.setFocus()
    settle(window, USUAL)
    parts = (window.model_bar, window.values, window.sheet, window.foot.save_pdf, edit)
    before = [QRect(part.mapTo(window, QPoint(0, 0)), part.size()) for part in parts]
    areas = (window.values, window.sheet.scroller)
    usual = [area.verticalScrollBarPolicy() for area in areas]
    settle(window, NARROWEST)
    assert {area.verticalScrollBarPolicy() for area in areas} == {Qt.ScrollBarPolicy.ScrollBarAlwaysOff}
    assert edit.hasFocus()
    assert window.sheet.number.figure == "10.5"
    settle(window, USUAL)
    assert [area.verticalScrollBarPolicy() for area in areas] == usual
    assert [QRect(part.mapTo(window, QPoint(0, 0)), part.size()) for part in parts] == before
    assert edit.hasFocus()
    assert not window.patient.pinned.isVisible()
    press(edit, Qt.Key.Key_Tab)
    focused = QApplication.focusWidget()
    assert focused is not None
    assert focused.accessibleName() == "HDL cholesterol, unit"


@pytest.mark.parametrize("name", list_example_models())
def test_nothing_is_cut_off(open_window: Callable[[Model | None], MainWindow], name: str) -> None:
    window = open_window(open_example(name))
    settle(window, NARROWEST)
    typed = dict.fromkeys(window.values.rows, "5.2") | {"sex": "female", "smoker": "yes", "prior_cvd": "yes"}
    assert window.state.model is not None
    window.use_model(window.state.model, entry_from_texts(typed, "Ottilie Fenn"))
    settle(window, NARROWEST)
    assert cut_labels(window) == []
    assert window.values.verticalScrollBar().maximum() == 0
    assert window.sheet.scroller.verticalScrollBar().maximum() == 0
