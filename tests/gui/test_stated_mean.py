"""What a value is the mean of, stated at the foot of the values for the field in focus."""

from dataclasses import replace

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QAccessible, QWheelEvent
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.model import Model
from clinicalc.gui.averaged_entry import AveragedEntry, CountField
from clinicalc.gui.main_window import MainWindow
from clinicalc.units import Averaged
from tests.gui.bedside_hands import choose_unit, fill_2008, number_row, press, retype_number, type_text

BP = "systolic_bp"


def mean_of(window: MainWindow, id: str = BP) -> AveragedEntry:
    """The fields of the mean of one value, which must have them."""
    stated = number_row(window, id).stated
    assert stated is not None
    assert stated.averaged is not None
    return stated.averaged


def type_count(count: CountField, text: str) -> None:
    """Go to a count and type another."""
    count.setFocus()
    count.selectAll()
    type_text(count, text)


def typed(window: MainWindow, id: str = BP) -> Typed:
    """What the entry holds."""
    return window.state.entry.typed[id]


def test_it_is_offered_where_the_file_states_the_variation(qtbot: QtBot, window: MainWindow) -> None:
    assert number_row(window, "age").stated is None
    mean = mean_of(window)
    assert not mean.isVisible()
    number_row(window, BP).edit.setFocus()
    assert mean.isVisible()
    assert (mean.visits.text(), mean.readings.text()) == ("1", "1")
    other = mean_of(window, "hdl_cholesterol")
    number_row(window, "hdl_cholesterol").edit.setFocus()
    assert other.isVisible()
    assert not mean.isVisible()
    number_row(window, "age").edit.setFocus()
    assert not other.isVisible()


def test_it_is_within_the_note_and_beside_nothing_else(qtbot: QtBot, window: MainWindow) -> None:
    row = number_row(window, "total_cholesterol")
    row.edit.setFocus()
    QApplication.processEvents()
    assert row.stated is not None
    note = window.field_note.rect()
    stops = row.stated.tab_stops()
    assert len(stops) == 3
    places = [stop.rect().translated(stop.mapTo(window.field_note, QPoint(0, 0))) for stop in stops]
    assert all(note.contains(place) for place in places)
    assert all(place.width() >= 16 for place in places)
    assert places[0].right() < places[1].left()
    assert places[1].right() < places[2].left()


def test_counts_go_into_the_entry_and_leave_the_number(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    number_row(window, BP).edit.setFocus()
    mean = mean_of(window)
    type_count(mean.visits, "2")
    assert typed(window) == Typed("124", "mm[Hg]", averaged=Averaged(2))
    assert mean.isVisible()
    type_count(mean.readings, "3")
    assert typed(window) == Typed("124", "mm[Hg]", averaged=Averaged(2, 3))
    assert window.sheet.number.figure == "10.5"
    assert number_row(window, BP).remark.text() == "mean of 6 readings"
    line = next(line for line in window.state.assessment.values if line.id == BP) if window.state.assessment else None
    assert line is not None
    assert line.typed == "124 mm[Hg] of 2 visits of 3 readings"
    type_count(mean.visits, "1")
    type_count(mean.readings, "1")
    assert typed(window) == Typed("124", "mm[Hg]")
    assert number_row(window, BP).remark.text() == ""


def test_counts_survive_other_fields_another_number_and_another_unit(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    number_row(window, "total_cholesterol").edit.setFocus()
    type_count(mean_of(window, "total_cholesterol").visits, "2")
    number_row(window, "age").edit.setFocus()
    number_row(window, "total_cholesterol").edit.setFocus()
    assert mean_of(window, "total_cholesterol").visits.value() == 2
    retype_number(window, "total_cholesterol", "190")
    choose_unit(window, "total_cholesterol", "mmol/L")
    assert mean_of(window, "total_cholesterol").visits.value() == 2
    assert typed(window, "total_cholesterol") == Typed("190", "mg/dL", averaged=Averaged(2))


def test_a_new_patient_has_no_mean(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    number_row(window, BP).edit.setFocus()
    type_count(mean_of(window).visits, "2")
    type_count(mean_of(window).readings, "3")
    window.begin_new_patient()
    assert (mean_of(window).visits.value(), mean_of(window).readings.value()) == (1, 1)
    retype_number(window, BP, "124")
    assert typed(window) == Typed("124", "mm[Hg]")
    assert not mean_of(window).visits.lineEdit().isUndoAvailable()


def test_a_mean_typed_after_the_number_moves_to_its_fields(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "180 of 2 visits of 3 readings on 2026-10-02")
    row, mean = number_row(window, "total_cholesterol"), mean_of(window, "total_cholesterol")
    assert window.sheet.number.figure == "10.5"
    press(row.edit, Qt.Key.Key_Return)
    assert (row.edit.text(), mean.averaged) == ("180", Averaged(2, 3))
    assert row.dated is not None
    assert row.dated.text == "2026-10-02"
    assert row.remark.text() == "mean of 6, 2026-10-02"
    retype_number(window, "total_cholesterol", "190")  # what came with a number goes with it
    assert mean.averaged is None
    assert typed(window, "total_cholesterol") == Typed("190", "mg/dL")


def test_a_mean_that_is_not_clear_stops_at_its_field(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, BP, "124 of 0 visits")
    press(number_row(window, BP).edit, Qt.Key.Key_Return)
    assert window.sheet.number.figure == ""
    assert number_row(window, BP).edit.text() == "124 of 0 visits"
    assert number_row(window, BP).frame.is_stopped


@pytest.mark.parametrize("text", ["124", "124 of 5 visits"])
def test_an_entry_made_elsewhere_is_shown_and_its_text_counts(
    qtbot: QtBot, window: MainWindow, lipids: Model, text: str
) -> None:
    stated = Typed(text, averaged=Averaged(2, 3))
    window.use_model(lipids, PatientEntry({BP: stated}))
    averaged = Averaged(5) if "of" in text else Averaged(2, 3)
    assert number_row(window, BP).edit.text() == "124"
    assert mean_of(window).averaged == averaged
    assert typed(window) == replace(Typed("124", "mm[Hg]"), averaged=averaged)


def test_by_keys_alone(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    number_row(window, BP).edit.setFocus()

    def focused() -> QWidget:
        now = QApplication.focusWidget()
        assert now is not None
        return now

    names = []
    for _ in range(3):
        press(focused(), Qt.Key.Key_Tab)
        names.append(focused().accessibleName())
    assert names[1:] == ["Systolic blood pressure, visits", "Systolic blood pressure, readings of each visit"]
    press(focused(), Qt.Key.Key_Up)
    assert mean_of(window).averaged == Averaged(1, 2)
    press(focused(), Qt.Key.Key_Return)
    assert not mean_of(window).isAncestorOf(focused())  # on to the next field


def test_counts_stay_between_1_and_30(qtbot: QtBot, window: MainWindow) -> None:
    number_row(window, BP).edit.setFocus()
    visits = mean_of(window).visits
    type_count(visits, "45")
    assert visits.value() == 4
    type_count(visits, "0")
    press(visits, Qt.Key.Key_Tab)
    assert visits.value() in range(1, 31)
    assert visits.text() == str(visits.value())
    press(visits, Qt.Key.Key_Down)
    for _ in range(40):
        press(visits, Qt.Key.Key_Up)
    assert visits.value() == 30


def test_the_wheel_changes_no_count(qtbot: QtBot, window: MainWindow) -> None:
    number_row(window, BP).edit.setFocus()
    visits = mean_of(window).visits
    visits.setFocus()
    turn = QWheelEvent(
        QPointF(5, 5), QPointF(visits.mapToGlobal(QPoint(5, 5))), QPoint(), QPoint(0, 120), Qt.MouseButton.NoButton,
        Qt.KeyboardModifier.NoModifier, Qt.ScrollPhase.NoScrollPhase, False,
    )  # fmt: skip
    QApplication.sendEvent(visits, turn)
    assert visits.value() == 1


def test_a_screen_reader_hears_what_each_count_is(qtbot: QtBot, window: MainWindow) -> None:
    number_row(window, BP).edit.setFocus()
    interface = QAccessible.queryAccessibleInterface(mean_of(window).visits)
    assert interface.text(QAccessible.Text.Name) == "Systolic blood pressure, visits"
    assert "Of how many visits" in interface.text(QAccessible.Text.Description)
    assert interface.role() == QAccessible.Role.SpinBox
