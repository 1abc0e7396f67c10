"""Saying of a value that it was not measured: the button, the frame, the keys, and what is shown and copied then."""

import pytest
from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import QApplication

from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.result import Estimate
from clinicalc.gui.main_window import SMALLEST, MainWindow
from clinicalc.gui.not_measured_button import NotMeasuredButton
from clinicalc.operations.copying import copy_text
from tests.assessment.cases import WOMAN_61, run
from tests.gui.bedside_hands import answer, click, fill_2008, number_row, press, question_row, retype_number, type_text

pytestmark = pytest.mark.gui

HDL, SMOKER = "hdl_cholesterol", "smoker"


def button(window: MainWindow, id: str) -> NotMeasuredButton:
    row = number_row(window, id) if id == HDL else question_row(window, id)
    assert row.not_measured is not None
    return row.not_measured


def estimate(window: MainWindow) -> Estimate:
    assessment = window.state.assessment
    assert assessment is not None
    assert assessment.estimate is not None
    return assessment.estimate


def is_checked(widget: NotMeasuredButton) -> bool:
    """As a screen reader is told."""
    face = QAccessible.queryAccessibleInterface(widget)
    return bool(face.state().checked)


def test_only_fields_that_may_be_missing_have_the_button(window: MainWindow) -> None:
    having = {id for id, row in window.values.rows.items() if getattr(row, "not_measured", None) is not None}
    assert having == {"total_cholesterol", HDL, SMOKER}


def test_a_number_is_marked_and_cleared_again(window: MainWindow) -> None:
    fill_2008(window)
    known = estimate(window).probability
    retype_number(window, HDL, "")
    row = number_row(window, HDL)
    click(button(window, HDL))
    assert window.state.entry.typed[HDL] == Typed("unknown")
    assert row.edit.text() == ""
    assert row.edit.placeholderText() == "not measured"
    assert not row.edit.is_cut
    assert row.edit.fontMetrics().horizontalAdvance("not measured") < row.edit.width()
    assert is_checked(button(window, HDL))
    wanted = run("general-cvd-2008-lipids", WOMAN_61, hdl_cholesterol="unknown").estimate
    assert wanted is not None
    assert estimate(window).probability == wanted.probability != known
    click(button(window, HDL))
    assert HDL not in window.state.entry.typed
    assert row.edit.placeholderText() == ""
    assert not is_checked(button(window, HDL))
    assert window.state.assessment is not None
    assert [finding.field for finding in window.state.assessment.missing] == [HDL]


def test_typing_a_number_takes_the_mark_away(window: MainWindow) -> None:
    fill_2008(window)
    known = estimate(window).probability
    retype_number(window, HDL, "")
    click(button(window, HDL))
    retype_number(window, HDL, "47")
    assert not is_checked(button(window, HDL))
    assert number_row(window, HDL).edit.placeholderText() == ""
    assert estimate(window).probability == known


def test_a_question_is_marked_answered_and_cleared(window: MainWindow) -> None:
    fill_2008(window)
    known = estimate(window).probability
    click(button(window, SMOKER))
    assert question_row(window, SMOKER).segments.answer is None
    assert estimate(window).not_measured is not None
    answer(window, SMOKER, "yes")
    assert not is_checked(button(window, SMOKER))
    assert estimate(window).probability == known
    click(button(window, SMOKER))
    click(button(window, SMOKER))
    assert SMOKER not in window.state.entry.typed
    assert window.state.assessment is not None
    assert [finding.field for finding in window.state.assessment.missing] == [SMOKER]


def test_by_keyboard_alone(window: MainWindow) -> None:
    fill_2008(window)
    segments = question_row(window, SMOKER).segments
    segments.setFocus(Qt.FocusReason.TabFocusReason)
    press(QApplication.focusWidget() or segments, Qt.Key.Key_Tab)
    focused = QApplication.focusWidget()
    assert focused is button(window, SMOKER)
    press(focused, Qt.Key.Key_Space)
    assert is_checked(button(window, SMOKER))
    press(focused, Qt.Key.Key_Return)
    assert not is_checked(button(window, SMOKER))


@pytest.mark.parametrize("words", ["unknown", "Not measured"])
def test_the_words_may_be_typed(window: MainWindow, words: str) -> None:
    fill_2008(window)
    retype_number(window, HDL, words)
    press(number_row(window, HDL).edit, Qt.Key.Key_Tab)
    assert is_checked(button(window, HDL))
    assert number_row(window, HDL).edit.text() == ""
    assert estimate(window).not_measured is not None


def test_what_a_screen_reader_says(window: MainWindow) -> None:
    face = QAccessible.queryAccessibleInterface(button(window, SMOKER))
    assert face.text(QAccessible.Text.Name) == "Smokes now: not measured"
    assert face.state().checkable
    click(button(window, HDL))
    assert number_row(window, HDL).edit.accessibleDescription() == "not measured"


def test_the_finding_stands_at_the_field_and_in_the_list(window: MainWindow) -> None:
    fill_2008(window)
    click(button(window, SMOKER))
    assert window.state.assessment is not None
    (said,) = [f for f in window.state.assessment.findings if f.code is FindingCode.NOT_MEASURED]
    assert said.grade is Grade.CAUTION
    assert question_row(window, SMOKER).mark.isVisible()
    for word in ("no", "yes"):
        result = run("general-cvd-2008-lipids", WOMAN_61, smoker=word).estimate
        assert result is not None
        assert percent(result.probability) in said.message
    assert "What was not measured is in it." in window.sheet.meaning.text()
    answer(window, SMOKER, "no")
    assert "What was not measured is in it." not in window.sheet.meaning.text()


def test_copy_text_says_so(window: MainWindow) -> None:
    fill_2008(window)
    click(button(window, SMOKER))
    assert window.state.assessment is not None
    assert "Smokes now: not measured" in copy_text(window.state.assessment)


def test_an_entry_from_elsewhere_and_a_new_patient(window: MainWindow) -> None:
    model = window.state.model
    assert model is not None
    window.use_model(model, entry_from_texts(WOMAN_61 | {HDL: "unknown", SMOKER: "Unknown"}))
    assert is_checked(button(window, HDL))
    assert is_checked(button(window, SMOKER))
    window.state.begin_new_patient()
    assert not is_checked(button(window, HDL))
    assert not is_checked(button(window, SMOKER))
    assert number_row(window, HDL).edit.placeholderText() == ""


def test_nothing_moves_when_a_value_is_typed_in_the_narrow_window(window: MainWindow) -> None:
    """There the button has a line of its own, which stays when there is a number."""
    window.resize(QSize(SMALLEST))
    QApplication.processEvents()
    heights = {id: row.height() for id, row in window.values.rows.items()}
    for id in (HDL, "total_cholesterol"):
        retype_number(window, id, "120" if id != HDL else "50")
    answer(window, SMOKER, "no")
    QApplication.processEvents()
    assert {id: row.height() for id, row in window.values.rows.items()} == heights
    assert button(window, HDL).isVisible()


def test_three_are_too_many(window: MainWindow) -> None:
    fill_2008(window)
    for id in ("total_cholesterol", HDL):
        retype_number(window, id, "")
    total = number_row(window, "total_cholesterol").not_measured
    assert total is not None
    for each in (total, button(window, HDL), button(window, SMOKER)):
        click(each)
    assert window.state.assessment is not None
    assert window.state.assessment.estimate is None
    assert window.sheet.number.percentage == ""
    (stop,) = window.state.assessment.stops
    assert stop.field == SMOKER
    assert question_row(window, SMOKER).segments.is_stopped


def test_a_field_that_must_be_known_refuses_the_words(window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "age", "")
    type_text(number_row(window, "age").edit, "unknown")
    assert window.state.assessment is not None
    (stop,) = window.state.assessment.stops
    assert stop.message.startswith("Age: not measured. This model gives no number without it")
