"""The practice's preferred unit stands beside an empty field, and never touches what is typed."""

from dataclasses import replace

import pytest

from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.preferences import Preferences
from clinicalc.settings import PreferredUnit, Settings
from tests.gui.bedside_hands import (
    ANSWERS_2008,
    NUMBERS_2008,
    choose_unit,
    fill_2008,
    number_row,
    retype_number,
    type_number,
    unit_chooser,
)

pytestmark = pytest.mark.gui

MMOL = PreferredUnit("total_cholesterol", "mmol/L")


def prefer(window: MainWindow, *units: PreferredUnit) -> None:
    window.preferences.take(replace(window.preferences.settings, units=units))


def unit_of(window: MainWindow, id: str) -> str:
    return str(unit_chooser(window, id).currentData())


def test_an_empty_field_begins_with_the_preferred_unit(window: MainWindow) -> None:
    assert unit_of(window, "total_cholesterol") == "mg/dL"  # the file's own
    prefer(window, MMOL)
    assert unit_of(window, "total_cholesterol") == "mmol/L"
    assert unit_of(window, "hdl_cholesterol") == "mg/dL"
    assert dict(window.state.entry.typed) == {}
    type_number(window, "total_cholesterol", "4.7")
    assert window.state.entry.typed["total_cholesterol"] == Typed("4.7", "mmol/L")


def test_a_typed_value_keeps_its_unit_and_the_number_stays(window: MainWindow) -> None:
    fill_2008(window)
    before, entry = window.sheet.number.figure, window.state.entry
    assert before == "10.5"
    prefer(window, MMOL)
    assert unit_of(window, "total_cholesterol") == "mg/dL"
    assert number_row(window, "total_cholesterol").edit.text() == NUMBERS_2008["total_cholesterol"]
    assert (window.sheet.number.figure, window.state.entry) == (before, entry)


def test_the_next_patient_begins_with_it_again(window: MainWindow) -> None:
    prefer(window, MMOL)
    choose_unit(window, "total_cholesterol", "mg/dL")
    type_number(window, "total_cholesterol", "180")
    assert window.state.entry.typed["total_cholesterol"] == Typed("180", "mg/dL")
    window.begin_new_patient()
    assert unit_of(window, "total_cholesterol") == "mmol/L"


def test_an_entry_from_elsewhere_is_in_the_file_s_unit_where_it_names_none(window: MainWindow, lipids: Model) -> None:
    """The digits of a saved entry were meant in the file's unit: a preference reads them in no other."""
    prefer(window, MMOL)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    assert unit_of(window, "total_cholesterol") == "mg/dL"
    assert window.sheet.number.figure == "10.5"


def test_a_unit_that_the_file_does_not_offer_changes_nothing(window: MainWindow) -> None:
    """Systolic pressure is in mmHg; a preference for another quantity's unit is none of its own."""
    prefer(window, PreferredUnit("glucose", "mmol/L"))
    assert unit_of(window, "total_cholesterol") == "mg/dL"
    fill_2008(window)
    assert window.sheet.number.figure == "10.5"


def test_an_emptied_field_keeps_the_unit_that_was_chosen_for_this_patient(window: MainWindow) -> None:
    prefer(window, MMOL)
    choose_unit(window, "total_cholesterol", "mg/dL")
    retype_number(window, "total_cholesterol", "180")
    number_row(window, "total_cholesterol").edit.clear()
    assert unit_of(window, "total_cholesterol") == "mg/dL"


def test_the_same_patient_gives_the_same_number_and_record_of_units(window: MainWindow) -> None:
    """4.655 mmol/L is 180 mg/dL by the table's factor 38.67, from memory; typed either way, the number agrees."""
    fill_2008(window)
    figure = window.sheet.number.figure
    prefer(window, MMOL)
    window.begin_new_patient()
    for id, text in NUMBERS_2008.items():
        type_number(window, id, "4.655" if id == "total_cholesterol" else text)
    fill_answers(window)
    assert window.sheet.number.figure == figure
    assert window.state.entry.typed["total_cholesterol"] == Typed("4.655", "mmol/L")


def fill_answers(window: MainWindow) -> None:
    from tests.gui.bedside_hands import answer

    for id, option in ANSWERS_2008.items():
        answer(window, id, option)


def test_a_window_opens_with_what_is_preferred(qtbot: object, lipids: Model) -> None:
    window = MainWindow(preferences=Preferences(Settings(units=(MMOL,))))
    qtbot.addWidget(window)  # type: ignore[attr-defined]
    window.use_model(lipids)
    assert unit_of(window, "total_cholesterol") == "mmol/L"
