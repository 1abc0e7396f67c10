"""Second fields of a comparison: what stands in place of a patient's own values, in their units, and back again."""

from collections.abc import Callable
from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QFont
from pytestqt.qtbot import QtBot

from clinicalc.assessment.changeable import changeable_fields
from clinicalc.assessment.entry import PatientEntry, Typed, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.changed_answer import ChangedAnswer
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
from clinicalc.resources import list_example_models
from tests.assessment.cases import DEMO, WOMAN_61
from tests.gui.bedside_hands import (
    answer,
    choose_unit,
    click,
    number_row,
    press,
    retype_number,
    type_text,
)
from tests.gui.changing import (
    HDL,
    MMHG,
    SMOKER,
    SYSTOLIC,
    TOTAL,
    answer_second,
    change_number,
    changes,
    comparison_of,
    open_demo,
    second,
    second_answer,
    shown,
)

pytestmark = pytest.mark.gui


@pytest.fixture
def compared(open_window: Callable[[Model | None], MainWindow]) -> MainWindow:
    """A window on the invented file with a whole patient and the comparison open."""
    return open_demo(open_window(open_example("tarnwick-cvd-10y.json")))


@pytest.mark.parametrize("name", list_example_models())
def test_who_has_a_second_field(open_window: Callable[[Model | None], MainWindow], name: str) -> None:
    model = open_example(name)
    window = open_window(model)
    having = [id for id, row in window.values.rows.items() if row.change is not None]
    assert having == [field.id for field in changeable_fields(model)]
    assert all(not row.change.isVisible() for row in window.values.rows.values() if row.change is not None)
    window.values.show_changes(True)
    assert all(row.change.isVisible() for row in window.values.rows.values() if isinstance(row.change, ChangedAnswer))


def test_they_are_there_while_the_comparison_is_open_and_ranges_are_not(compared: MainWindow) -> None:
    views = compared.sheet.views
    row = number_row(compared, SYSTOLIC)
    assert second(compared, SYSTOLIC).isVisible()
    assert second_answer(compared, SMOKER).isVisible()
    assert not row.range.isVisible()
    assert not number_row(compared, "age").range.isVisible()
    row.edit.setFocus()
    assert "Derivation range" in compared.field_note.words.text()
    views.open(views.people)
    assert not second(compared, SYSTOLIC).isVisible()
    assert row.range.isVisible()
    assert "Derivation range" not in compared.field_note.words.text()


def test_a_change_is_compared_at_every_key_and_given_up_with_escape(compared: MainWindow, qtbot: QtBot) -> None:
    own = compared.sheet.number.figure
    assert shown(compared, SYSTOLIC) == ("", "142", False)
    for text in ("1", "13", "132"):
        with qtbot.waitSignal(compared.state.assessed):
            change_number(compared, SYSTOLIC, text) if text == "1" else type_text(
                second(compared, SYSTOLIC).edit, text[-1]
            )
        assert changes(compared) == {SYSTOLIC: Typed(text, MMHG)}
    assert shown(compared, SYSTOLIC) == ("132", "142", True)
    assert compared.sheet.number.figure == own
    assert [(c.own, c.changed) for c in comparison_of(compared).changes] == [("142 mmHg", "132 mmHg")]
    press(second(compared, SYSTOLIC).edit, Qt.Key.Key_Escape)
    assert shown(compared, SYSTOLIC) == ("", "142", False)
    assert changes(compared) == {}
    assert second(compared, SYSTOLIC).edit.hasFocus()


def test_one_assessment_for_every_act(compared: MainWindow) -> None:
    told: list[object] = []
    compared.state.assessed.connect(told.append)
    change_number(compared, TOTAL, "4")
    assert len(told) == 1
    answer_second(compared, SMOKER, "no")
    assert len(told) == 2
    choose_unit(compared, TOTAL, "mg/dL")
    assert len(told) == 3
    press(second(compared, TOTAL).edit, Qt.Key.Key_Escape)
    assert len(told) == 4
    press(second(compared, TOTAL).edit, Qt.Key.Key_Escape)
    assert len(told) == 4


def test_what_equals_the_own_value_is_soft(compared: MainWindow) -> None:
    change_number(compared, SYSTOLIC, "142.0")
    assert shown(compared, SYSTOLIC) == ("142.0", "142", False)
    assert second(compared, SYSTOLIC).edit.is_soft
    assert second(compared, SYSTOLIC).edit.font().weight() == QFont.Weight.Normal
    retype_number(compared, SYSTOLIC, "150")
    assert shown(compared, SYSTOLIC) == ("142.0", "150", True)
    assert not second(compared, SYSTOLIC).edit.is_soft
    assert second(compared, SYSTOLIC).edit.font().weight() == QFont.Weight.DemiBold


def test_a_question_follows_its_answer_until_another_is_chosen(compared: MainWindow) -> None:
    change = second_answer(compared, SMOKER)
    assert (change.segments.answer, change.arrow.points) == ("yes", False)
    answer_second(compared, SMOKER, "no")
    assert (change.segments.answer, change.arrow.points, changes(compared)) == ("no", True, {SMOKER: Typed("no")})
    press(change.segments.segments[0], Qt.Key.Key_Escape)
    assert (change.segments.answer, change.arrow.points, changes(compared)) == ("yes", False, {})
    answer_second(compared, SMOKER, "no")
    answer_second(compared, SMOKER, "yes")
    assert changes(compared) == {}
    answer(compared, SMOKER, "no")
    assert (change.segments.answer, change.arrow.points) == ("no", False)


def test_the_unit_is_that_of_the_own_value_and_every_character_comes_back(compared: MainWindow) -> None:
    change_number(compared, TOTAL, "4,50")
    before = comparison_of(compared).difference
    choose_unit(compared, TOTAL, "mg/dL")
    # 5.2 and 4.50 mmol/L / 0.02586 = 201.1 and 174.0 mg/dL
    assert shown(compared, TOTAL) == ("174.0", "201", True)
    assert changes(compared)[TOTAL] == Typed("4,50", "mmol/L")
    assert comparison_of(compared).difference == before
    assert "4.50 mmol/L as typed" in second(compared, TOTAL).words()
    choose_unit(compared, TOTAL, "mmol/L")
    assert shown(compared, TOTAL) == ("4,50", "5.2", True)
    assert "as typed" not in second(compared, TOTAL).words()


def test_a_unit_typed_after_the_digits_is_read_and_converted_when_the_field_is_left(compared: MainWindow) -> None:
    change_number(compared, TOTAL, "174 mg/dL")
    assert changes(compared)[TOTAL] == Typed("174 mg/dL", "mg/dL")
    press(second(compared, TOTAL).edit, Qt.Key.Key_Tab)
    assert changes(compared)[TOTAL] == Typed("174", "mg/dL")
    assert shown(compared, TOTAL) == ("4.50", "5.2", True)  # 174 mg/dL x 0.02586 = 4.4996 mmol/L
    choose_unit(compared, TOTAL, "mg/dL")
    assert shown(compared, TOTAL)[0] == "174"


def test_an_offer_takes_the_second_fields_place_and_reads_both_anew(compared: MainWindow) -> None:
    choose_unit(compared, TOTAL, "mg/dL")
    retype_number(compared, TOTAL, "5.2")
    change_number(compared, TOTAL, "4.5")
    row = number_row(compared, TOTAL)
    assert row.offer.isVisible()
    assert not second(compared, TOTAL).isVisible()
    told: list[object] = []
    compared.state.assessed.connect(told.append)
    click(row.offer)
    assert len(told) == 1
    assert second(compared, TOTAL).isVisible()
    assert changes(compared)[TOTAL] == Typed("4.5", "mmol/L")
    assert shown(compared, TOTAL) == ("4.5", "5.2", True)


@pytest.mark.parametrize("text", ["1,234", "abc", "5.2 kg", "52", "unknown"])
def test_what_cannot_be_used_has_the_stop_frame_and_its_reason(compared: MainWindow, text: str) -> None:
    own = compared.sheet.number.figure
    change_number(compared, TOTAL, text)
    change = second(compared, TOTAL)
    assert change.frame.is_stopped
    assert not number_row(compared, TOTAL).frame.is_stopped
    assert compared.sheet.number.figure == own
    [(_, stop)] = compared.sheet.views.comparison.findings.shown
    assert stop.field == TOTAL
    assert compared.field_note.words.text() == stop.message
    assert change.edit.accessibleDescription() == stop.message
    press(change.edit, Qt.Key.Key_Escape)
    assert not second(compared, TOTAL).frame.is_stopped
    assert "As entered 5.2 mmol/L." in compared.field_note.words.text()


def test_a_finding_of_the_comparison_leads_to_the_second_field(compared: MainWindow) -> None:
    change_number(compared, TOTAL, "52")
    number_row(compared, "age").edit.setFocus()
    compared.sheet.views.comparison.findings.tab_stops()[0].click()
    assert second(compared, TOTAL).edit.hasFocus()


def test_a_change_without_an_own_value(compared: MainWindow) -> None:
    retype_number(compared, SYSTOLIC, "")
    change_number(compared, SYSTOLIC, "132")
    assert compared.sheet.number.figure == ""
    assert shown(compared, SYSTOLIC) == ("132", "", True)
    assert "No value is entered yet." in compared.field_note.words.text()


def test_not_measured_leaves_nothing_to_change(window: MainWindow, lipids: Model) -> None:
    entry = entry_from_texts(WOMAN_61 | {SMOKER: "unknown", HDL: "unknown"})
    window.use_model(lipids, replace(entry, changes={SYSTOLIC: Typed("115")}))
    window.values.show_changes(True)
    change = second_answer(window, SMOKER)
    assert change.isVisible()
    assert not change.segments.segments[0].isEnabled()
    for widget in change.segments.segments:
        assert widget.accessibleDescription().startswith("Not measured, so there is nothing to compare with.")
    row = number_row(window, HDL)
    assert row.not_measured is not None
    assert row.not_measured.isVisible()  # in the second field's place, so that it can be taken back
    assert not second(window, HDL).isVisible()
    assert not second(window, HDL).edit.isEnabled()
    retype_number(window, HDL, "47")
    assert second(window, HDL).isVisible()
    assert second(window, HDL).edit.isEnabled()
    answer(window, SMOKER, "yes")
    assert change.segments.segments[0].isEnabled()
    assert change.segments.answer == "yes"


@pytest.mark.parametrize("how", ["new patient", "another model", "another entry"])
def test_changes_and_their_history_go_with_the_patient(compared: MainWindow, pooled: Model, how: str) -> None:
    change_number(compared, SYSTOLIC, "132")
    answer_second(compared, SMOKER, "no")
    if how == "new patient":
        click(compared.foot.new_patient)
    elif how == "another model":
        compared.use_model(pooled)
    else:
        assert compared.state.model is not None
        compared.use_model(compared.state.model, entry_from_texts(DEMO))
    assert changes(compared) == {}
    change = second(compared, SYSTOLIC)
    assert change.edit.text() == ""
    assert not change.edit.isUndoAvailable()
    change.edit.undo()
    assert change.edit.text() == ""
    assert not change.arrow.points
    assert not second_answer(compared, SMOKER).arrow.points
    assert second_answer(compared, SMOKER).segments.answer == ("yes" if how == "another entry" else None)


def test_an_entry_with_changes_is_shown_with_them(compared: MainWindow) -> None:
    entry = PatientEntry(entry_from_texts(DEMO).typed, "", {TOTAL: Typed("174 mg/dL"), SMOKER: Typed("No")})
    assert compared.state.model is not None
    compared.use_model(compared.state.model, entry)
    assert shown(compared, TOTAL) == ("4.50", "5.2", True)
    assert changes(compared) == {TOTAL: Typed("174", "mg/dL"), SMOKER: Typed("no")}
    assert second_answer(compared, SMOKER).segments.answer == "no"


def test_the_label_for_the_print_leaves_changes_alone(compared: MainWindow) -> None:
    change_number(compared, SYSTOLIC, "132")
    assert compared.values.label_row is not None
    type_text(compared.values.label_row.edit, "F 2031")
    assert changes(compared) == {SYSTOLIC: Typed("132", MMHG)}


def test_a_hidden_second_field_catches_up(compared: MainWindow) -> None:
    views = compared.sheet.views
    change_number(compared, SYSTOLIC, "118")
    views.open(views.people)
    retype_number(compared, SYSTOLIC, "118")
    views.open(views.comparison)
    assert shown(compared, SYSTOLIC) == ("118", "118", False)
    assert "As entered 118 mmHg." in second(compared, SYSTOLIC).edit.accessibleDescription()
    views.open(views.people)
    retype_number(compared, SYSTOLIC, "142")
    views.open(views.comparison)
    assert shown(compared, SYSTOLIC) == ("118", "142", True)
    assert "As entered 142 mmHg." in second(compared, SYSTOLIC).edit.accessibleDescription()


def test_a_patient_with_changes_has_them_at_once(open_window: Callable[[Model | None], MainWindow]) -> None:
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    window.use_model(model, entry_from_texts(DEMO).with_change(SYSTOLIC, Typed("118")).with_change(SMOKER, Typed("no")))
    assert set(changes(window)) == {SYSTOLIC, SMOKER}
    window.sheet.views.open(window.sheet.views.comparison)
    assert shown(window, SYSTOLIC) == ("118", "142", True)
    assert second_answer(window, SMOKER).arrow.points
    walked = [stop.accessibleName() for stop in window.values.tab_stops() if stop.isVisible()]
    assert walked.index("Systolic blood pressure, with changes") > walked.index("Systolic blood pressure")


def test_a_second_field_that_is_made_late_says_what_is_found(
    open_window: Callable[[Model | None], MainWindow],
) -> None:
    """An entry changes one value, and what is found concerns another one too."""
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    window.use_model(model, entry_from_texts(DEMO | {HDL: "3.1"}).with_change(TOTAL, Typed("2.5")))
    [said] = [finding for finding in comparison_of(window).refused if finding.field == HDL]
    window.sheet.views.open(window.sheet.views.comparison)
    assert second(window, HDL).edit.accessibleDescription() == said.message
    assert second(window, HDL).frame.is_stopped
