"""Second fields of a comparison by keyboard and screen reader, and what a key in one of them paints."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtGui import QAccessible
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
from tests.gui.bedside_hands import (
    number_row,
    press,
    question_row,
    type_text,
)
from tests.gui.changing import (
    HDL,
    MMHG,
    SMOKER,
    SYSTOLIC,
    TOTAL,
    change_number,
    changes,
    open_demo,
    second,
    second_answer,
)

pytestmark = pytest.mark.gui


@pytest.fixture
def compared(open_window: Callable[[Model | None], MainWindow]) -> MainWindow:
    """A window on the invented file with a whole patient and the comparison open."""
    return open_demo(open_window(open_example("tarnwick-cvd-10y.json")))


def test_keys(compared: MainWindow) -> None:
    """Tab: value, unit, second field. Enter: the next value, or the next second field. F6: across and back."""

    def focused() -> str:
        now = QApplication.focusWidget()
        return "" if now is None else now.accessibleName()

    def hit(key: Qt.Key) -> None:
        press(QApplication.focusWidget() or compared, key)

    number_row(compared, TOTAL).edit.setFocus()
    names: list[str] = []
    while focused() != "HDL cholesterol" and len(names) < 20:
        names.append(focused())
        hit(Qt.Key.Key_Tab)
    assert names[:2] == ["Total cholesterol", "Total cholesterol, unit"]
    assert names[-1] == "Total cholesterol, with changes"
    assert names.count(names[-1]) == 1
    number_row(compared, TOTAL).edit.setFocus()
    hit(Qt.Key.Key_Return)
    assert focused() == "HDL cholesterol"
    second(compared, SYSTOLIC).edit.setFocus()
    names = []
    for _ in range(5):
        names.append(focused())
        hit(Qt.Key.Key_Return)
    assert names == [
        "Systolic blood pressure, with changes",
        "Total cholesterol, with changes",
        "HDL cholesterol, with changes",
        "Smokes now, with changes: Yes",
        "Name or number",
    ]
    second(compared, HDL).edit.setFocus()
    hit(Qt.Key.Key_F6)
    assert compared.sheet.scroller.hasFocus()
    hit(Qt.Key.Key_F6)
    assert focused() == "HDL cholesterol, with changes"
    hit(Qt.Key.Key_F6)
    compared.sheet.views.open(compared.sheet.views.people)
    hit(Qt.Key.Key_F6)
    assert focused() != "HDL cholesterol, with changes"
    assert compared.values.isAncestorOf(QApplication.focusWidget() or compared)


def test_arrows_and_letters_choose_in_a_second_question(compared: MainWindow) -> None:
    segments = second_answer(compared, SMOKER).segments
    segments.setFocus()
    press(QApplication.focusWidget() or segments, Qt.Key.Key_Left)
    assert changes(compared) == {SMOKER: Typed("no")}
    press(QApplication.focusWidget() or segments, Qt.Key.Key_Y)
    assert changes(compared) == {}


def test_what_a_screen_reader_says(compared: MainWindow) -> None:
    change_number(compared, SYSTOLIC, "132")
    said = QAccessible.queryAccessibleInterface(second(compared, SYSTOLIC).edit)
    assert said is not None
    assert said.text(QAccessible.Text.Name) == "Systolic blood pressure, with changes"
    assert said.text(QAccessible.Text.Value) == "132"
    assert said.text(QAccessible.Text.Description) == "As entered 142 mmHg. Escape goes back to it."
    answers = second_answer(compared, SMOKER).segments.segments
    yes = QAccessible.queryAccessibleInterface(answers[1])
    assert yes is not None
    assert yes.text(QAccessible.Text.Name) == "Smokes now, with changes: Yes"
    assert yes.text(QAccessible.Text.Description) == "As entered “Yes”."
    assert yes.state().checked


def test_a_hidden_second_field_takes_no_keys(compared: MainWindow) -> None:
    change_number(compared, SYSTOLIC, "132")
    compared.sheet.views.open(compared.sheet.views.people)
    assert number_row(compared, SYSTOLIC).edit.hasFocus()
    assert changes(compared) == {SYSTOLIC: Typed("132", MMHG)}  # the comparison goes on, and the tab says so


def test_nothing_is_painted_twice_for_one_key(compared: MainWindow) -> None:
    """A key in a second field leaves the other rows alone."""

    class Watch(QObject):
        painted = 0

        def eventFilter(self, watched: QObject, event: QEvent) -> bool:
            self.painted += event.type() == QEvent.Type.Paint
            return False

    edit = second(compared, SYSTOLIC).edit
    edit.setFocus()
    type_text(edit, "13")
    QTest.qWait(50)
    watch = Watch()
    others: list[QWidget] = [number_row(compared, "age").frame, question_row(compared, "diabetes").segments]
    for other in others:
        other.installEventFilter(watch)
    type_text(edit, "2")
    QTest.qWait(50)
    assert watch.painted == 0
