"""Beside and under a value: its derivation range, the mark of its finding, its date, what the file means by it."""

from collections.abc import Callable
from dataclasses import replace
from datetime import date, timedelta

import pytest
from PySide6.QtCore import QPoint, QSize, Qt
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import PatientEntry, Typed, entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.main_window import SMALLEST, MainWindow
from clinicalc.gui.wording import numbered_findings
from clinicalc.operations.bedside import open_example
from clinicalc.report.document import LONGEST_NAME
from tests.gui.bedside_hands import (
    ANSWERS_2008,
    NUMBERS_2008,
    answer,
    choose_unit,
    click,
    fill_2008,
    number_row,
    press,
    question_row,
    retype_number,
    type_number,
    type_text,
)

pytestmark = pytest.mark.gui

OLD = date.today() - timedelta(days=30)
TARNWICK = {
    "prior_cvd": "no",
    "age": "61",
    "sex": "female",
    "systolic_bp": "142",
    "bp_treated": "no",
    "total_cholesterol": "5.2",
    "hdl_cholesterol": "1.3",
    "smoker": "yes",
    "diabetes": "no",
}


@pytest.fixture
def tarnwick(open_window: Callable[[Model | None], MainWindow]) -> MainWindow:
    """A window on the invented file, which states derivation ranges, with a whole patient."""
    window = open_window(open_example("tarnwick-cvd-10y.json"))
    assert window.state.model is not None
    window.use_model(window.state.model, entry_from_texts(TARNWICK))
    return window


def drawn_range(window: MainWindow, id: str) -> str:
    """The words of the range beside a value, "" where none is on screen."""
    shown = number_row(window, id).range
    return shown.accessibleName() if shown.isVisible() else ""


def test_range_stands_beside_its_value_in_the_unit_on_screen(qtbot: QtBot, tarnwick: MainWindow) -> None:
    # 35 to 79 years and 2.4 to 8.9 mmol/L are stated in the file; 2.4 / 0.02586 = 92.8, 8.9 / 0.02586 = 344.2 mg/dL
    assert drawn_range(tarnwick, "age") == "Derivation range 35 to 79"
    assert drawn_range(tarnwick, "total_cholesterol") == "Derivation range 2.4 to 8.9"
    choose_unit(tarnwick, "total_cholesterol", "mg/dL")
    assert drawn_range(tarnwick, "total_cholesterol") == ""  # "5.2 mmol/L as typed" has its place
    choose_unit(tarnwick, "hdl_cholesterol", "mg/dL")
    retype_number(tarnwick, "hdl_cholesterol", "50")
    # 0.6 / 0.02586 = 23.202 and 3.2 / 0.02586 = 123.743 mg/dL, rounded inwards: 23.2 and 124 would be refused
    assert drawn_range(tarnwick, "hdl_cholesterol") == "Derivation range 23.3 to 123"


def test_a_value_has_one_range_beside_it_in_its_finding_and_in_the_note(qtbot: QtBot, tarnwick: MainWindow) -> None:
    # 2.4 / 0.02586 = 92.807 and 8.9 / 0.02586 = 344.16 mg/dL, rounded inwards
    choose_unit(tarnwick, "total_cholesterol", "mg/dL")
    retype_number(tarnwick, "total_cholesterol", "350")
    assert drawn_range(tarnwick, "total_cholesterol").startswith("Derivation range 92.9 to 344")
    assessment = tarnwick.state.assessment
    assert assessment is not None
    [outside] = [f for f in assessment.findings if f.code is FindingCode.OUTSIDE_DERIVATION]
    assert "92.9–344 mg/dL" in outside.message
    number_row(tarnwick, "total_cholesterol").edit.setFocus()
    QApplication.processEvents()
    assert "Derivation range" not in tarnwick.field_note.words.text()
    usual = tarnwick.size()
    tarnwick.resize(SMALLEST)  # the range leaves the row for the note of the field in focus
    QApplication.processEvents()
    assert "Derivation range 92.9–344 mg/dL." in tarnwick.field_note.words.text()
    tarnwick.resize(usual)
    QApplication.processEvents()
    assert "Derivation range" not in tarnwick.field_note.words.text()


def test_a_worked_out_value_has_the_digits_of_its_findings(
    qtbot: QtBot, open_window: Callable[[Model | None], MainWindow]
) -> None:
    model = open_example("total-cvd-2024-base.json")
    window = open_window(model)
    # CKD-EPI 2021, woman of 50 with 5.0 mg/dL: 142 (5.0/0.7)^-1.2 0.9938^50 1.012 = 9.95 mL/min/1.73 m²,
    # worked out by hand from Inker et al. 2021
    typed = {"age": "50", "sex": "female", "creatinine": "5.0 mg/dL"}
    window.use_model(model, entry_from_texts(typed))
    assessment = window.state.assessment
    assert assessment is not None
    shown = number_row(window, "egfr").remark.text()
    assert shown == "9.95 mL/min/1.73 m² worked out"
    about = [f.message for f in assessment.findings if f.field == "egfr"]
    assert about
    assert all(shown.removesuffix(" worked out") + " (worked out from" in message for message in about)


def test_a_label_is_as_long_as_a_print_takes(qtbot: QtBot, window: MainWindow) -> None:
    assert window.values.label_row is not None
    assert window.values.label_row.edit.maxLength() == LONGEST_NAME


def test_value_outside_its_range_is_pointed_at(qtbot: QtBot, tarnwick: MainWindow) -> None:
    retype_number(tarnwick, "age", "96")
    assert drawn_range(tarnwick, "age").endswith("the value lies above it")
    retype_number(tarnwick, "age", "79")
    assert drawn_range(tarnwick, "age") == "Derivation range 35 to 79"


def test_range_gives_way_to_the_offer(qtbot: QtBot, tarnwick: MainWindow) -> None:
    retype_number(tarnwick, "total_cholesterol", "193")
    row = number_row(tarnwick, "total_cholesterol")
    assert row.offer.isVisible()
    assert not row.range.isVisible()
    click(row.offer)
    assert not row.offer.isVisible()


def test_an_offer_that_went_keeps_no_digits(qtbot: QtBot, tarnwick: MainWindow) -> None:
    retype_number(tarnwick, "total_cholesterol", "193")
    offer = number_row(tarnwick, "total_cholesterol").offer
    assert "193" in offer.text()
    assert "193" in offer.accessibleName()
    tarnwick.begin_new_patient()
    assert (offer.text(), offer.accessibleName()) == ("", "")


def test_ranges_leave_the_narrow_pane_and_stand_in_the_note(qtbot: QtBot, tarnwick: MainWindow) -> None:
    tarnwick.resize(SMALLEST)
    number_row(tarnwick, "age").edit.setFocus()
    QApplication.processEvents()
    assert drawn_range(tarnwick, "age") == ""
    assert tarnwick.field_note.words.text() == "Derivation range 35–79 years."
    tarnwick.resize(QSize(1280, 800))
    QApplication.processEvents()
    assert drawn_range(tarnwick, "age") == "Derivation range 35 to 79"


def test_marks_carry_the_numbers_of_the_list(qtbot: QtBot, tarnwick: MainWindow) -> None:
    retype_number(tarnwick, "total_cholesterol", "193")
    retype_number(tarnwick, "systolic_bp", "236")
    assessment = tarnwick.state.assessment
    assert assessment is not None
    numbered = numbered_findings(assessment)
    assert {finding.field for _, finding in numbered} >= {"total_cholesterol", "systolic_bp"}
    for id, row in tarnwick.values.rows.items():
        about = [(number, finding.grade) for number, finding in numbered if finding.field == id]
        assert row.mark.isVisible() is bool(about), id
        if about:
            assert (row.mark.number, row.mark.grade) == about[0]
            assert row.mark.accessibleName().startswith(f"Finding: {about[0][1].value} {about[0][0]}")
    assert number_row(tarnwick, "total_cholesterol").mark.grade is Grade.STOP
    retype_number(tarnwick, "total_cholesterol", "5.2")
    assert not number_row(tarnwick, "total_cholesterol").mark.isVisible()


@pytest.mark.parametrize("by_key", [False, True], ids=["click", "Enter"])
def test_a_mark_leads_to_its_finding_and_the_finding_back(qtbot: QtBot, tarnwick: MainWindow, by_key: bool) -> None:
    def use(mark: QWidget) -> None:
        if by_key:
            press(mark, Qt.Key.Key_Return)
        else:
            click(mark)

    retype_number(tarnwick, "age", "96")
    retype_number(tarnwick, "total_cholesterol", "193")
    row = number_row(tarnwick, "total_cholesterol")
    use(row.mark)
    focused = QApplication.focusWidget()
    assert isinstance(focused, IndexMark)
    assert tarnwick.sheet.findings.isAncestorOf(focused)
    assert focused.number == row.mark.number
    use(focused)
    assert row.edit.hasFocus()


def test_mark_of_an_exclusion_and_what_does_not_move(qtbot: QtBot, tarnwick: MainWindow) -> None:
    QApplication.processEvents()

    def places() -> list[QPoint]:
        rows = list(tarnwick.values.rows.values())
        return [stop.mapTo(tarnwick, QPoint(0, 0)) for row in rows for stop in row.tab_stops()[:1]]

    before = places()
    answer(tarnwick, "prior_cvd", "yes")
    retype_number(tarnwick, "age", "96")
    number_row(tarnwick, "hdl_cholesterol").edit.setFocus()
    QApplication.processEvents()
    assert question_row(tarnwick, "prior_cvd").mark.isVisible()
    assert number_row(tarnwick, "age").mark.isVisible()
    assert places() == before


def test_a_finding_leads_to_its_field(qtbot: QtBot, tarnwick: MainWindow) -> None:
    tarnwick.sheet.field_asked.emit("hdl_cholesterol")
    assert number_row(tarnwick, "hdl_cholesterol").edit.hasFocus()
    tarnwick.sheet.field_asked.emit("no such field")
    assert number_row(tarnwick, "hdl_cholesterol").edit.hasFocus()


def test_note_says_what_the_file_means(qtbot: QtBot, window: MainWindow) -> None:
    height = window.field_note.height()
    segments = question_row(window, "smoker").segments
    segments.segments[0].setFocus()
    meaning = window.state.model.by_id["smoker"].meaning if window.state.model is not None else ""
    assert meaning
    assert window.field_note.words.text().casefold() == f"{meaning}.".casefold()
    number_row(window, "age").edit.setFocus()
    assert window.field_note.words.text() == ""
    assert window.field_note.height() == height


def test_date_field_stands_where_the_file_asks_for_a_date(qtbot: QtBot, window: MainWindow) -> None:
    assert number_row(window, "age").dated is None
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    assert not row.dated.isVisible()
    row.edit.setFocus()
    assert row.dated.isVisible()
    other = number_row(window, "hdl_cholesterol")
    other.edit.setFocus()
    assert not row.dated.isVisible()
    assert other.dated is not None
    assert other.dated.isVisible()


def test_date_goes_into_the_entry_and_its_age_is_judged(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    row.edit.setFocus()
    row.dated.edit.setFocus()
    type_text(row.dated.edit, OLD.isoformat())
    assert window.state.entry.typed["total_cholesterol"] == Typed("180", "mg/dL", OLD)
    assert window.sheet.number.figure == "10.5"
    assert row.remark.text() == f"of {OLD.isoformat()}"
    row.dated.edit.clear()
    type_text(row.dated.edit, "2020-01-31")
    assessment = window.state.assessment
    assert assessment is not None
    assert [f.code for f in assessment.findings if f.field == "total_cholesterol"] == [FindingCode.OUT_OF_DATE]
    row.dated.edit.clear()
    assert window.state.entry.typed["total_cholesterol"] == Typed("180", "mg/dL")
    assert row.remark.text() == ""


@pytest.mark.parametrize("slip", ["2026-1", "20261002", "2026-02-30", "last week", "31.01.2026"])
def test_what_is_no_date_is_never_passed_over(qtbot: QtBot, window: MainWindow, slip: str) -> None:
    fill_2008(window)
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    row.edit.setFocus()
    type_text(row.dated.edit, slip)
    assert window.sheet.number.figure == ""
    assert row.frame.is_stopped
    assessment = window.state.assessment
    assert assessment is not None
    assert [f.code for f in assessment.stops] == [FindingCode.UNREADABLE]
    assert "is not a date" in assessment.stops[0].message


def test_date_typed_after_the_number_moves_to_its_field(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", f"180 on {OLD.isoformat()}")
    row = number_row(window, "total_cholesterol")
    assert window.sheet.number.figure == "10.5"
    press(row.edit, Qt.Key.Key_Return)
    assert row.dated is not None
    assert (row.edit.text(), row.dated.edit.text()) == ("180", OLD.isoformat())
    assert window.state.entry.typed["total_cholesterol"] == Typed("180", "mg/dL", OLD)
    assert window.sheet.number.figure == "10.5"
    choose_unit(window, "total_cholesterol", "mmol/L")
    assert row.dated.edit.text() == OLD.isoformat()
    assert window.state.entry.typed["total_cholesterol"] == Typed("180", "mg/dL", OLD)


def test_a_date_that_came_with_a_number_goes_with_it(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", f"180 on {OLD.isoformat()}")
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    press(row.edit, Qt.Key.Key_Return)
    retype_number(window, "total_cholesterol", "190")
    assert row.dated.edit.text() == ""
    assert window.state.entry.typed["total_cholesterol"] == Typed("190", "mg/dL")
    assert row.remark.text() == ""
    row.dated.edit.undo()
    assert row.dated.edit.text() == ""
    press(row.edit, Qt.Key.Key_Return)
    assert window.state.entry.typed["total_cholesterol"] == Typed("190", "mg/dL")


def test_a_date_edited_in_its_field_stays(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    retype_number(window, "total_cholesterol", "180 on 2020-01-31")
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    press(row.edit, Qt.Key.Key_Return)
    row.dated.edit.setFocus()
    row.dated.edit.selectAll()
    type_text(row.dated.edit, OLD.isoformat())
    retype_number(window, "total_cholesterol", "190")
    assert row.dated.edit.text() == OLD.isoformat()
    assert window.state.entry.typed["total_cholesterol"] == Typed("190", "mg/dL", OLD)


def test_of_two_dates_the_later_typed_counts_and_is_seen(qtbot: QtBot, window: MainWindow) -> None:
    fill_2008(window)
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    row.dated.edit.setFocus()
    type_text(row.dated.edit, "2020-01-31")
    retype_number(window, "total_cholesterol", f"180 on {OLD.isoformat()}")
    assert row.remark.text() == f"of {OLD.isoformat()}"
    press(row.edit, Qt.Key.Key_Return)
    assert row.dated.edit.text() == OLD.isoformat()
    row.dated.edit.setFocus()
    row.dated.edit.selectAll()
    type_text(row.dated.edit, "2020-02-01")
    assert window.state.entry.typed["total_cholesterol"] == Typed("180", "mg/dL", date(2020, 2, 1))
    assert row.remark.text() == "of 2020-02-01"


def test_a_date_of_an_entry_goes_with_its_number(qtbot: QtBot, window: MainWindow, lipids: Model) -> None:
    entry = entry_from_texts(NUMBERS_2008 | ANSWERS_2008)
    dated = replace(entry.typed["total_cholesterol"], dated=OLD)
    window.use_model(lipids, PatientEntry({**entry.typed, "total_cholesterol": dated}))
    choose_unit(window, "total_cholesterol", "mmol/L")
    choose_unit(window, "total_cholesterol", "mg/dL")
    assert window.state.entry.typed["total_cholesterol"].dated == OLD  # another unit is no other number
    retype_number(window, "total_cholesterol", "190")
    assert window.state.entry.typed["total_cholesterol"] == Typed("190", "mg/dL")


def test_entry_with_a_date_is_shown_with_it(qtbot: QtBot, window: MainWindow, lipids: Model) -> None:
    entry = entry_from_texts(NUMBERS_2008 | ANSWERS_2008)
    dated = replace(entry.typed["total_cholesterol"], dated=OLD)
    window.use_model(lipids, PatientEntry({**entry.typed, "total_cholesterol": dated}))
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    assert (row.edit.text(), row.dated.edit.text()) == ("180", OLD.isoformat())
    assert window.state.entry.typed["total_cholesterol"].dated == OLD


def test_enter_in_the_date_goes_on(qtbot: QtBot, window: MainWindow) -> None:
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    row.edit.setFocus()
    row.dated.edit.setFocus()
    press(row.dated.edit, Qt.Key.Key_Return)
    assert number_row(window, "hdl_cholesterol").edit.hasFocus()


def test_new_patient_clears_dates_and_their_history(qtbot: QtBot, window: MainWindow) -> None:
    type_number(window, "total_cholesterol", "180")
    row = number_row(window, "total_cholesterol")
    assert row.dated is not None
    type_text(row.dated.edit, "2026-10-02")
    click(window.foot.new_patient)
    assert row.dated.edit.text() == ""
    assert not row.dated.edit.isUndoAvailable()
    row.dated.edit.undo()
    assert row.dated.edit.text() == ""
    assert dict(window.state.entry.typed) == {}
    type_number(window, "total_cholesterol", "180")
    assert window.state.entry.typed["total_cholesterol"].dated is None
