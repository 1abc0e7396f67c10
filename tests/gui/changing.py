"""Changing the values of a comparison as a person does, by field id."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication

from clinicalc.assessment.comparison import Comparison
from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.gui.changed_answer import ChangedAnswer
from clinicalc.gui.changed_number import ChangedNumber
from clinicalc.gui.main_window import MainWindow
from tests.assessment.cases import DEMO
from tests.gui.bedside_hands import click, number_row, press, question_row, type_text

MMHG = "mm[Hg]"
SYSTOLIC, TOTAL, HDL, SMOKER = "systolic_bp", "total_cholesterol", "hdl_cholesterol", "smoker"


def open_demo(window: MainWindow) -> MainWindow:
    """The whole patient of the invented file (142 mmHg, 5.2 mmol/L, smokes), with the comparison open."""
    assert window.state.model is not None
    window.use_model(window.state.model, entry_from_texts(DEMO))
    window.sheet.views.open(window.sheet.views.comparison)
    QApplication.processEvents()
    return window


def second(window: MainWindow, id: str) -> ChangedNumber:
    """The second field of a value."""
    change = number_row(window, id).change
    assert isinstance(change, ChangedNumber)
    return change


def second_answer(window: MainWindow, id: str) -> ChangedAnswer:
    """The second field of a question."""
    change = question_row(window, id).change
    assert isinstance(change, ChangedAnswer)
    return change


def change_number(window: MainWindow, id: str, text: str) -> None:
    """Type in a second field instead of what stands there."""
    edit = second(window, id).edit
    edit.setFocus()
    edit.selectAll()
    press(edit, Qt.Key.Key_Delete)
    type_text(edit, text)


def answer_second(window: MainWindow, id: str, option: str) -> None:
    """Click one of the answers of a second field."""
    click(next(s for s in second_answer(window, id).segments.segments if s.option.id == option))


def shown(window: MainWindow, id: str) -> tuple[str, str, bool]:
    """Text, soft text in its place, and whether the arrow points."""
    change = second(window, id)
    return change.edit.text(), change.edit.placeholderText(), change.arrow.points


def comparison_of(window: MainWindow) -> Comparison:
    assessment = window.state.assessment
    assert assessment is not None
    assert assessment.estimate is not None
    assert assessment.estimate.comparison is not None
    return assessment.estimate.comparison


def changes(window: MainWindow) -> dict[str, Typed]:
    return dict(window.state.entry.changes)
