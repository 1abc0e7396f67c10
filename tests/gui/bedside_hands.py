"""Typing and clicking as a person does, by field id."""

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QComboBox, QWidget

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.number_row import NumberRow
from clinicalc.gui.question_row import QuestionRow

# the woman of 61 of D'Agostino et al., Circulation 2008;117:743-753 (case in the text; printed 10.5 %, from memory)
NUMBERS_2008 = {"age": "61", "total_cholesterol": "180", "hdl_cholesterol": "47", "systolic_bp": "124"}
ANSWERS_2008 = {"prior_cvd": "no", "sex": "female", "bp_treated": "no", "smoker": "yes", "diabetes": "no"}

# the white woman of 55 of Goff et al., Circulation 2014;129(25 Suppl 2):S49-S73, Table A (2.1 %, from memory); no band
POOLED_2013 = {
    "prior_cvd": "no",
    "age": "55",
    "sex": "female",
    "ethnic_group": "white",
    "total_cholesterol": "213",
    "hdl_cholesterol": "50",
    "systolic_bp": "120",
    "bp_treated": "no",
    "smoker": "no",
    "diabetes": "no",
}


def click(widget: QWidget) -> None:
    """Press and release the left button in the middle of a widget."""
    QTest.mouseClick(widget, Qt.MouseButton.LeftButton)


def press(widget: QWidget, key: Qt.Key, modifier: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
    """Press and release one key."""
    QTest.keyClick(widget, key, modifier)


def type_text(widget: QWidget, text: str) -> None:
    """Press the keys of a text one after the other."""
    QTest.keyClicks(widget, text)


def number_row(window: MainWindow, id: str) -> NumberRow:
    """The row of a value."""
    row = window.values.rows[id]
    assert isinstance(row, NumberRow)
    return row


def question_row(window: MainWindow, id: str) -> QuestionRow:
    """The row of a question."""
    row = window.values.rows[id]
    assert isinstance(row, QuestionRow)
    return row


def type_number(window: MainWindow, id: str, text: str) -> None:
    """Type after what stands in the field."""
    edit = number_row(window, id).edit
    edit.setFocus()
    edit.end(False)
    type_text(edit, text)


def retype_number(window: MainWindow, id: str, text: str) -> None:
    """Replace what stands in the field, key by key."""
    edit = number_row(window, id).edit
    edit.setFocus()
    press(edit, Qt.Key.Key_A, Qt.KeyboardModifier.ControlModifier)
    press(edit, Qt.Key.Key_Delete)
    type_text(edit, text)


def answer(window: MainWindow, id: str, option: str) -> None:
    """Click one of the answers."""
    segments = question_row(window, id).segments.segments
    click(next(s for s in segments if s.option.id == option))


def choose_unit(window: MainWindow, id: str, code: str) -> None:
    """Choose a unit in the chooser beside the value."""
    chooser = unit_chooser(window, id)
    chooser.setCurrentIndex(chooser.findData(code))


def unit_chooser(window: MainWindow, id: str) -> QComboBox:
    """The unit chooser of a value."""
    chooser = number_row(window, id).frame.chooser
    assert chooser is not None
    return chooser


def fill_2008(window: MainWindow) -> None:
    """Every value and answer of the printed case."""
    for id, text in NUMBERS_2008.items():
        type_number(window, id, text)
    for id, option in ANSWERS_2008.items():
        answer(window, id, option)
