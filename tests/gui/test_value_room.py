"""A long number in its frame: it is seen whole, or its beginning with the sign that it is cut, never its tail alone."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QFontMetrics
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.value_frame import CUT
from clinicalc.operations.bedside import open_example
from tests.gui.bedside_hands import choose_unit, number_row, press, retype_number

pytestmark = pytest.mark.gui

LETTER = 16
"""The usual size of a number in its frame, in pixels."""


def settle(window: MainWindow) -> None:
    QApplication.processEvents()


def is_whole(window: MainWindow, id: str) -> bool:
    """Whether all that stands in the edit has room in it, measured with its own font, and begins at its beginning."""
    edit = number_row(window, id).edit
    inside = edit.width() - 4  # a line keeps two pixels at each side
    return QFontMetrics(edit.font()).horizontalAdvance(edit.text()) <= inside


@pytest.mark.parametrize("text", ["1234567890", "123456.78901", "123456789012"])
@pytest.mark.parametrize("id", ["total_cholesterol", "systolic_bp", "age"])
def test_twelve_characters_are_seen_whole(qtbot: QtBot, window: MainWindow, id: str, text: str) -> None:
    retype_number(window, id, text)
    settle(window)
    assert is_whole(window, id)
    number_row(window, "hdl_cholesterol").edit.setFocus()
    settle(window)
    edit = number_row(window, id).edit
    assert is_whole(window, id)
    assert edit.words_on_screen == text
    assert edit.font().pixelSize() >= 12


def test_beside_a_wide_unit_the_beginning_stands_with_the_sign_that_it_is_cut(
    qtbot: QtBot, open_window: Callable[[Model | None], MainWindow]
) -> None:
    window = open_window(open_example("total-cvd-2024-base.json"))
    retype_number(window, "egfr", "123456789012")
    settle(window)
    assert is_whole(window, "egfr")
    number_row(window, "age").edit.setFocus()
    settle(window)
    edit = number_row(window, "egfr").edit  # "mL/min/1.73 m²" needs most of the frame
    assert edit.is_cut
    assert edit.words_on_screen.endswith(CUT)
    assert "123456789012".startswith(edit.words_on_screen.removesuffix(CUT))


def test_unit_stays_whole_beside_a_long_number(qtbot: QtBot, window: MainWindow) -> None:
    retype_number(window, "total_cholesterol", "1234567890")
    number_row(window, "hdl_cholesterol").edit.setFocus()
    settle(window)
    chooser = number_row(window, "total_cholesterol").frame.chooser
    assert chooser is not None
    # 7 px before the words of a chooser and 24 px for its chevron after them
    assert chooser.width() >= QFontMetrics(chooser.font()).horizontalAdvance("mg/dL") + 31
    frame = number_row(window, "total_cholesterol").frame
    assert chooser.geometry().right() < frame.width()


@pytest.mark.parametrize("text", ["201 mg/dL", "5.2 mmol/L on 2020-01-01"])
def test_what_is_typed_is_seen_from_its_first_digit(qtbot: QtBot, window: MainWindow, text: str) -> None:
    retype_number(window, "total_cholesterol", text)
    settle(window)
    edit = number_row(window, "total_cholesterol").edit
    assert is_whole(window, "total_cholesterol")
    assert edit.cursorPositionAt(QPoint(0, edit.height() // 2)) == 0


def test_what_does_not_fit_shows_its_beginning_once_it_is_left(qtbot: QtBot, window: MainWindow) -> None:
    text = "12345678901234567890123456789012"
    retype_number(window, "total_cholesterol", text)
    number_row(window, "hdl_cholesterol").edit.setFocus()
    settle(window)
    edit = number_row(window, "total_cholesterol").edit
    assert edit.is_cut
    shown = edit.words_on_screen
    assert shown.endswith(CUT)
    assert text.startswith(shown.removesuffix(CUT))
    assert len(shown) > 7
    picture = edit.grab().toImage()
    before = picture.copy()
    edit.end(False)  # wherever the cursor stands, the beginning is painted
    assert edit.grab().toImage() == before


def test_a_short_number_has_the_usual_room_again(qtbot: QtBot, window: MainWindow) -> None:
    edit = number_row(window, "total_cholesterol").edit
    usual = edit.width()
    retype_number(window, "total_cholesterol", "5.2 mmol/L on 2020-01-01")
    settle(window)
    assert edit.width() > 2 * usual
    number_row(window, "hdl_cholesterol").edit.setFocus()
    settle(window)
    assert (edit.width(), edit.font().pixelSize()) == (usual, LETTER)


def test_a_converted_value_with_many_digits_is_seen_whole(qtbot: QtBot, window: MainWindow) -> None:
    retype_number(window, "total_cholesterol", "180.5000")
    choose_unit(window, "total_cholesterol", "mmol/L")
    settle(window)
    assert is_whole(window, "total_cholesterol")


def test_tab_still_goes_from_number_to_unit(qtbot: QtBot, window: MainWindow) -> None:
    retype_number(window, "total_cholesterol", "5.2 mmol/L on 2020-01-01")
    settle(window)
    row = number_row(window, "total_cholesterol")
    press(row.edit, Qt.Key.Key_Tab)
    assert row.frame.chooser is not None
    assert row.frame.chooser.hasFocus()
