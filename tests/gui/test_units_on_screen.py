"""Units: typed text and unit are the truth; switching there and back restores every character."""

from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtCore import Qt
from pytestqt.qtbot import QtBot

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model
from clinicalc.gui.held_value import choosable_units, hold, switch_unit
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
from tests.gui.bedside_hands import (
    choose_unit,
    click,
    fill_2008,
    number_row,
    press,
    retype_number,
    type_number,
    unit_chooser,
)

pytestmark = pytest.mark.gui

TODAY = date(2026, 12, 1)


def test_unit_slip_stops_and_the_offer_brings_the_number(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "5.2")
    row = number_row(window, "total_cholesterol")
    assert window.sheet.number.figure == ""
    assert "Total cholesterol stops it" in window.sheet.sentence.text()
    assert row.frame.is_stopped
    assert row.offer.isVisible()
    assert row.offer.text() == "&Use 5.2 mmol/L"
    click(row.offer)
    assert window.sheet.number.figure != ""
    assert (row.edit.text(), unit_chooser(window, "total_cholesterol").currentText()) == ("5.2", "mmol/L")
    assert row.remark.text() == "read as 5.2 mmol/L"
    assert not row.offer.isVisible()
    assert not number_row(window, "total_cholesterol").frame.is_stopped
    assert row.edit.hasFocus()


def test_only_one_offer_has_the_access_letter(window: MainWindow) -> None:
    for id in ("total_cholesterol", "hdl_cholesterol"):
        type_number(window, id, "1.2" if id == "hdl_cholesterol" else "5.2")
    offers = [number_row(window, id).offer.text() for id in ("total_cholesterol", "hdl_cholesterol")]
    assert offers == ["&Use 5.2 mmol/L", "Use 1.2 mmol/L"]


def test_switching_there_and_back_restores_every_character(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "180,50")
    row, before = number_row(window, "total_cholesterol"), window.sheet.number.figure
    choose_unit(window, "total_cholesterol", "mmol/L")
    assert row.edit.text() == "4.6677"  # 180.50 * 0.02586, to what the last typed digit is worth
    assert row.remark.text() == "180.50 mg/dL as typed"
    assert window.sheet.number.figure == before
    choose_unit(window, "total_cholesterol", "mg/dL")
    assert (row.edit.text(), row.remark.text()) == ("180,50", "")


def test_digits_stay_where_only_the_new_unit_makes_them_believable(qtbot: QtBot, window: MainWindow) -> None:
    type_number(window, "total_cholesterol", "5.2")
    choose_unit(window, "total_cholesterol", "mmol/L")
    row = number_row(window, "total_cholesterol")
    assert (row.edit.text(), row.remark.text()) == ("5.2", "read as 5.2 mmol/L")
    assert row.held.typed.unit == "mmol/L"
    choose_unit(window, "total_cholesterol", "mg/dL")
    assert (row.edit.text(), row.held.typed.unit) == ("5.2", "mg/dL")


def test_editing_a_converted_value_makes_it_the_truth(qtbot: QtBot, window: MainWindow) -> None:
    type_number(window, "total_cholesterol", "180")
    choose_unit(window, "total_cholesterol", "mmol/L")
    press(number_row(window, "total_cholesterol").edit, Qt.Key.Key_Backspace)
    held = number_row(window, "total_cholesterol").held
    assert (held.typed.text, held.typed.unit, held.remark) == ("4.6", "mmol/L", "")


def test_unit_typed_in_the_field_counts(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "4.655 mmol/l")
    assert unit_chooser(window, "total_cholesterol").currentText() == "mmol/L"
    # the same patient with 4.655 mmol/L: 0.1049 instead of 0.1048 at 180 mg/dL, both printed as 10.5 %
    assert window.sheet.number.figure == "10.5"
    number_row(window, "hdl_cholesterol").edit.setFocus()
    row = number_row(window, "total_cholesterol")
    assert (row.edit.text(), row.held.typed.unit) == ("4.655", "mmol/L")
    assert window.sheet.number.figure == "10.5"


def test_wheel_over_a_unit_changes_nothing(qtbot: QtBot, window: MainWindow) -> None:
    from PySide6.QtCore import QPoint, QPointF
    from PySide6.QtGui import QWheelEvent
    from PySide6.QtWidgets import QApplication

    chooser = unit_chooser(window, "total_cholesterol")
    chooser.setFocus()
    turn = QWheelEvent(
        QPointF(5, 5),
        chooser.mapToGlobal(QPointF(5, 5)),
        QPoint(0, -120),
        QPoint(0, -120),
        Qt.MouseButton.NoButton,
        Qt.KeyboardModifier.NoModifier,
        Qt.ScrollPhase.NoScrollPhase,
        False,
    )
    QApplication.sendEvent(chooser, turn)
    assert chooser.currentText() == "mg/dL"


def _fields() -> list[NumberField]:
    models: list[Model] = [open_example(name) for name in ("total-cvd-2024-base.json", "diabetes-2007-clinical.json")]
    return [
        f
        for model in models
        for f in model.fields
        if isinstance(f, NumberField) and f.may_be_typed and len(choosable_units(f)) > 1
    ]


_TEXTS = st.one_of(
    st.text(max_size=12),
    st.from_regex(r"[-+]?[0-9]{1,4}([.,][0-9]{1,4})?( ?(mmol/l|mg/dL))?", fullmatch=True),
)


@given(st.data())
def test_any_text_survives_any_walk_through_the_units(data: st.DataObject) -> None:
    field = data.draw(st.sampled_from(_fields()))
    units = choosable_units(field)
    first = hold(field, data.draw(_TEXTS), data.draw(st.sampled_from(units)))
    held = first
    for unit in data.draw(st.lists(st.sampled_from(units), max_size=4)):
        if unit != held.unit:
            held = switch_unit(field, held, unit, TODAY)
            assert held.unit == unit
    if held.unit != first.unit:
        held = switch_unit(field, held, first.unit, TODAY)
    assert held.text == first.text
    assert held.typed == first.typed
