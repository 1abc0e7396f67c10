"""The window obeys the practice's library: what is approved is offered; what no longer is gives no number."""

import gc
import threading
from collections.abc import Callable
from datetime import timedelta
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from pytestqt.qtbot import QtBot

from clinicalc.assessment.findings import FindingCode
from clinicalc.errors import LibraryError
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.model_library import EVERY, ModelLibrary
from clinicalc.library.holds import hold, release
from clinicalc.library.machine import Machine
from clinicalc.operations.bedside import assess_patient, open_example
from clinicalc.resources import read_shipped
from tests.assessment.cases import DEMO
from tests.gui.approving import Surgery, fill
from tests.gui.bedside_hands import press
from tests.library.machines import MODEL_ID, NOW
from tests.library.records_kit import POINT

pytestmark = pytest.mark.gui

MINUTE = timedelta(minutes=1)
HOUR = timedelta(hours=1)
DAY = timedelta(days=1)
Open = Callable[[], MainWindow]


@pytest.fixture
def surgery(tmp_path: Path) -> Surgery:
    """A library with one model in use."""
    return Surgery(tmp_path)


@pytest.fixture
def open_here(qtbot: QtBot, surgery: Surgery) -> Open:
    """Opens a window of the surgery, shown."""

    def open_() -> MainWindow:
        window = surgery.open()
        qtbot.addWidget(window)
        window.resize(1280, 800)
        with qtbot.waitExposed(window):
            window.show()
        return window

    return open_


@pytest.fixture
def answered(open_here: Open) -> MainWindow:
    """A window with the number of the demonstration patient, by the approved model."""
    window = open_here()
    fill(window, DEMO)
    assert window.sheet.number.figure
    return window


def library_of(window: MainWindow) -> ModelLibrary:
    """The window's library."""
    assert window.library is not None
    return window.library


def tick(window: MainWindow) -> None:
    """What the timer does."""
    library_of(window)._timer.timeout.emit()


def offered(window: MainWindow) -> list[str]:
    """The words of the menu, opened afresh; the lines between its parts as ""."""
    window.model_bar.chooser.about_to_open.emit()
    return [action.text() for action in window.model_bar.chooser.menu.actions()]


def assert_no_number(window: MainWindow, reason: str) -> None:
    """No number anywhere, nothing can be made of it, and the place says why."""
    assert window.state.assessment is None
    assert window.sheet.number.figure == ""
    assert window.sheet.people.figure is None
    assert window.sheet.headline.text() == "No number"
    assert reason in window.sheet.sentence.text()
    assert not any(button.isEnabled() for button in (window.foot.copy, window.foot.print, window.foot.save_pdf))


def test_the_only_model_in_use_is_chosen_with_its_approval(open_here: Open) -> None:
    window = open_here()
    assert window.state.model is not None
    assert window.state.model.content.id == MODEL_ID
    bar = window.model_bar
    assert (bar.approved.text(), bar.review.text()) == ("1 Dec 2026, Dr Ada Tarn", "30 June 2027")
    assert bar.approved.isVisible()
    assert not bar.vetting.isVisible()


def test_the_number_of_an_approved_model_is_the_file_s_own_and_stands_without_the_strip(answered: MainWindow) -> None:
    assert not answered.sheet.strip.isVisible()
    assert answered.sheet.pinned_summary().vetted
    assessment = answered.state.assessment
    assert assessment is not None
    assert assessment.estimate is not None
    assert assessment.vetting is not None
    by_file = assess_patient(open_example(f"{MODEL_ID}.json"), answered.state.entry, span=answered.state.span)
    assert by_file.estimate is not None
    assert assessment.estimate.probability == by_file.estimate.probability


def test_of_several_models_none_is_chosen_for_anybody(surgery: Surgery, open_here: Open) -> None:
    other = surgery.add_version("1.9.0")
    window = open_here()
    assert window.state.model is None
    assert window.sheet.headline.text() == "No model is chosen"
    assert "the 2 models in use" in window.sheet.sentence.text()
    words = offered(window)
    assert words[0].endswith(", 1.9.0") != words[1].endswith(", 1.9.0")
    assert words[2:] == ["", "&Open a file to try out…"]
    place = 0 if words[0].endswith(", 1.9.0") else 1
    window.model_bar.chooser.menu.actions()[place].trigger()
    assert window.state.vetting is not None
    assert window.state.vetting.fingerprint == other
    assert window.model_bar.version.text() == "1.9.0"


def test_a_file_opened_lately_is_offered_to_be_tried_out(answered: MainWindow, tmp_path: Path) -> None:
    path = tmp_path / "lipids.json"
    path.write_bytes(read_shipped("example_models/general-cvd-2008-lipids.json"))
    answered.open_path(path)
    words = offered(answered)
    assert "Try out: General cardiovascular disease, lipid form, 1.1.0" in words
    assert "General cardiovascular disease, lipid form, 1.1.0" not in words
    answered.model_bar.chooser.menu.actions()[0].trigger()
    assert answered.model_bar.approved.isVisible()


def test_versions_of_a_long_title_are_told_apart_in_the_menu(surgery: Surgery, open_here: Open) -> None:
    for version in ("1.8.0", "1.9.0"):
        surgery.add_version(version, title="Tarnwick cardiovascular disease, " + "invented for many tests, " * 3)
    words = offered(open_here())
    assert [word[-7:] for word in words if "…" in word and "Open" not in word] == [", 1.8.0", ", 1.9.0"]


def test_a_withdrawal_takes_the_number_off_within_the_reading(surgery: Surgery, answered: MainWindow) -> None:
    surgery.withdraw()
    tick(answered)
    assert_no_number(answered, "Withdrawn by Dr Ben Wick")
    assert answered.model_bar.vetting.text() == "Not in use"
    assert answered.model_bar.vetting.isVisible()
    assert not answered.model_bar.approved.isVisible()


def test_the_timer_runs_and_reads_at_least_once_a_minute(answered: MainWindow) -> None:
    assert library_of(answered)._timer.isActive()
    assert library_of(answered)._timer.interval() == EVERY <= 60_000 - 2_000


def test_no_key_brings_a_withdrawn_number_back(surgery: Surgery, answered: MainWindow) -> None:
    surgery.withdraw()
    tick(answered)
    fill(answered, {"age": "60"})
    answered.state.ask_matching_age(True)
    assert_no_number(answered, "Withdrawn by Dr Ben Wick")
    answered.begin_new_patient()
    fill(answered, DEMO)
    assert_no_number(answered, "Withdrawn by Dr Ben Wick")


@pytest.mark.parametrize("button", ["copy", "print", "save_pdf"])
def test_nothing_leaves_the_window_after_a_withdrawal(surgery: Surgery, answered: MainWindow, button: str) -> None:
    QGuiApplication.clipboard().clear()
    surgery.withdraw()
    getattr(answered.foot, button).click()
    assert_no_number(answered, "Withdrawn by Dr Ben Wick")
    assert QGuiApplication.clipboard().text() == ""


def test_a_review_overdue_takes_the_number_off(surgery: Surgery, answered: MainWindow) -> None:
    surgery.now = NOW + timedelta(days=213)  # 2 July 2027; to be reviewed by 30 June
    tick(answered)
    assert_no_number(answered, "Review overdue: approved by Dr Ada Tarn")


def test_a_clock_set_back_takes_the_number_off(surgery: Surgery, answered: MainWindow) -> None:
    surgery.now = NOW - 3 * DAY
    tick(answered)
    assert_no_number(answered, "clock")


def test_a_changed_file_takes_the_number_off(surgery: Surgery, answered: MainWindow) -> None:
    surgery.shelf.model_file.write_bytes(surgery.shelf.model_file.read_bytes().replace(b"0.", b"1.", 1))
    tick(answered)
    assert_no_number(answered, "changed after it was installed")


def test_a_hold_on_this_machine_takes_the_number_off_and_its_end_brings_it_back(
    surgery: Surgery, answered: MainWindow
) -> None:
    figure = answered.sheet.number.figure
    hold(surgery.machine, surgery.shelf.fingerprint, "the paper is being corrected", NOW)
    tick(answered)
    assert_no_number(answered, "the paper is being corrected")
    release(surgery.machine, surgery.shelf.fingerprint, NOW)
    tick(answered)
    assert answered.sheet.number.figure == figure
    assert answered.model_bar.approved.isVisible()


def test_the_copy_serves_with_a_caution_while_the_library_is_out_of_reach(
    surgery: Surgery, answered: MainWindow
) -> None:
    figure = answered.sheet.number.figure
    surgery.lose()
    surgery.now = NOW + 2 * HOUR
    tick(answered)
    assert answered.sheet.number.figure == figure
    codes = [finding.code for _, finding in answered.sheet.findings.shown]
    assert FindingCode.LIBRARY_COPY in codes
    surgery.now = NOW + 25 * HOUR
    tick(answered)
    assert_no_number(answered, "cannot be reached")
    surgery.find_again()
    tick(answered)
    assert answered.sheet.number.figure == figure
    assert FindingCode.LIBRARY_COPY not in [finding.code for _, finding in answered.sheet.findings.shown]


def test_an_approval_with_other_choices_is_not_taken_under_a_patient(surgery: Surgery, answered: MainWindow) -> None:
    surgery.shelf.practice.approve(points=(POINT,))
    surgery.shelf.put()
    tick(answered)
    assert_no_number(answered, "approved this model anew")
    answered.begin_new_patient()
    fill(answered, DEMO)
    assert answered.sheet.number.figure
    assert POINT.label in [point.label for point in answered.state.decision_points]


def test_an_extended_review_is_taken_without_a_word(surgery: Surgery, answered: MainWindow) -> None:
    figure = answered.sheet.number.figure
    surgery.shelf.practice.approve(until="2028-01-31")
    surgery.shelf.put()
    tick(answered)
    assert (answered.sheet.number.figure, answered.model_bar.review.text()) == (figure, "31 Jan 2028")


def test_a_file_tried_out_is_left_at_new_patient(answered: MainWindow) -> None:
    answered.use_model(open_example(f"{MODEL_ID}.json"))
    fill(answered, DEMO)
    assert answered.sheet.strip.isVisible()
    assert answered.model_bar.vetting.text() == "Not vetted"
    assert answered.state.vetting is None
    tick(answered)
    assert answered.sheet.number.figure
    answered.foot.new_patient.click()
    assert answered.model_bar.approved.isVisible()
    assert not answered.model_bar.vetting.isVisible()
    assert not answered.sheet.strip.isVisible()
    assert not answered.state.entry.typed


def test_a_file_tried_out_is_left_even_where_nothing_is_approved(surgery: Surgery, open_here: Open) -> None:
    surgery.withdraw()
    window = open_here()
    assert window.sheet.headline.text() == "No model is in use"
    window.use_model(open_example("general-cvd-2008-lipids.json"))
    assert window.values.rows
    window.begin_new_patient()
    assert window.state.model is None
    assert not window.values.rows
    assert window.model_bar.chooser.title == ""
    assert window.sheet.headline.text() == "No model is in use"
    press(window, Qt.Key.Key_F6)


def test_a_machine_that_never_saw_its_library_says_so(surgery: Surgery, open_here: Open) -> None:
    surgery.lose()
    window = open_here()
    assert window.state.model is None
    assert window.sheet.headline.text() == "The library cannot be used"
    assert str(surgery.shelf.place) in window.sheet.sentence.text()
    assert offered(window) == ["&Open a file to try out…"]


def test_a_model_withdrawn_between_menu_and_click_is_refused_in_words(surgery: Surgery, answered: MainWindow) -> None:
    offered(answered)
    surgery.withdraw()
    answered.model_bar.chooser.menu.actions()[0].trigger()
    assert answered.bedside.views.currentWidget() is answered.refusal
    assert "Withdrawn by Dr Ben Wick" in answered.refusal.problems.toPlainText()
    answered.refusal.back.click()
    assert_no_number(answered, "Withdrawn by Dr Ben Wick")


def test_each_window_reads_by_itself(surgery: Surgery, open_here: Open) -> None:
    windows = [open_here(), open_here()]
    for window in windows:
        fill(window, DEMO)
    surgery.withdraw()
    tick(windows[0])
    assert_no_number(windows[0], "Withdrawn by Dr Ben Wick")
    tick(windows[1])
    assert_no_number(windows[1], "Withdrawn by Dr Ben Wick")


def test_a_fault_of_our_own_blanks_before_it_is_told(surgery: Surgery, answered: MainWindow, qtbot: QtBot) -> None:
    def fail() -> None:
        raise ZeroDivisionError("told nobody")

    library_of(answered).reading.machine = fail  # type: ignore[assignment]  # stands for a fault nobody thought of
    with pytest.raises(ZeroDivisionError):
        library_of(answered).check()
    assert_no_number(answered, "ZeroDivisionError")
    fill(answered, {"age": "60"})
    assert_no_number(answered, "ZeroDivisionError")


def test_a_machine_that_no_longer_names_its_library_gives_no_number(surgery: Surgery, answered: MainWindow) -> None:
    def name_none() -> Machine:
        raise LibraryError("this machine uses no model library.")

    library_of(answered).reading.machine = name_none
    tick(answered)
    assert_no_number(answered, "This machine uses no model library.")


@pytest.mark.parametrize("reached", [True, False])
def test_no_widget_is_collected_while_a_share_is_asked(surgery: Surgery, answered: MainWindow, reached: bool) -> None:
    if not reached:
        surgery.lose()
    threads: list[threading.Thread] = []

    def note(phase: str, info: dict[str, int]) -> None:
        threads.append(threading.current_thread())

    usual = gc.get_threshold()
    gc.set_threshold(1)
    gc.callbacks.append(note)
    try:
        library_of(answered).read()
        assert gc.isenabled() is reached
    finally:
        gc.callbacks.remove(note)
        gc.set_threshold(*usual)
    assert set(threads) <= {threading.main_thread()}
    assert threads
