"""The preview by hand: what can be chosen, printed and closed, and that nothing stands of values that have changed."""

import sys
from dataclasses import replace

import pytest
from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QAccessible
from PySide6.QtPrintSupport import QPrintDialog
from PySide6.QtWidgets import QAbstractButton, QApplication, QCheckBox, QDialog, QLabel, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.errors import PrintRefused
from clinicalc.gui import page_stack
from clinicalc.gui.exceptions import ExceptionHook
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_stack import SheetView, Zoom
from clinicalc.gui.preview_view import NARROWEST, PreviewView
from clinicalc.gui.printing import PrintJob, preview
from clinicalc.gui.segments import Segment
from clinicalc.report.document import Document
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.settings import Paper
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008, click, press, retype_number
from tests.gui.previewing import open_preview, picture_of
from tests.report.printing import with_band

pytestmark = pytest.mark.gui

JUST_THIS = PrintParts(comparison=False)
"""What is chosen where there is nothing else to choose."""


def test_choices_change_the_pages(qtbot: QtBot) -> None:
    view, _ = open_preview(qtbot)
    assert [sheet.accessibleName() for sheet in view.pages.sheets] == ["Page 1 of 2", "Page 2 of 2"]
    assert round(view.pages.sheets[0].page.height) == 842
    choose(view.paper_choice.segments[1])
    assert view.paper is Paper.LETTER
    assert round(view.pages.sheets[0].page.height) == 792
    choose(view.patient_choice.segments[1])
    assert [sheet.accessibleName() for sheet in view.pages.sheets] == ["Page 1 of 1"]
    assert view.findChildren(QCheckBox) == []


def choose(segment: Segment) -> None:
    click(segment)
    QApplication.processEvents()


def test_what_is_chosen_is_printed(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot, paper=Paper.LETTER)
    choose(view.patient_choice.segments[1])
    click(view.print_button)
    assert job.sent == [(Paper.LETTER, replace(JUST_THIS, patient_page=False))]
    assert view.result() == QDialog.DialogCode.Accepted
    assert view.refusal == ""


def test_a_printer_that_refuses_is_said_and_another_can_be_chosen(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot, refusal="the printer does not take the print.")
    click(view.print_button)
    assert view.isVisible()
    assert view.message.text().startswith("The printer does not take the print.")
    assert not view.is_covered
    job.printer_refusal = ""
    click(view.print_button)
    assert job.sent == [(Paper.A4, JUST_THIS)]
    assert view.refusal == ""


def assert_covered(view: PreviewView) -> None:
    assert view.is_covered
    assert "the values on screen have changed since this preview was opened" in view.cover_words.text()
    assert view.cover_words.text() == view.refusal
    assert view.cover_words.isVisible()
    assert not view.pages.isVisible()
    assert view.pages.sheets == ()
    assert view.pages.area.widget() is None
    assert not view.print_button.isEnabled()
    assert view.focusWidget() is view.close_button


def test_a_value_changed_after_the_preview_is_not_printed(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)
    job.current[0] = False
    click(view.print_button)
    assert job.sent == []
    assert_covered(view)


def test_a_value_changed_while_the_printer_is_chosen_covers_the_pages(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)
    job.meanwhile = lambda: job.current.__setitem__(0, False)
    click(view.print_button)
    assert job.sent == []
    assert_covered(view)


def test_a_value_changed_covers_the_pages_at_their_next_painting(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)
    assert not view.is_covered
    before = picture_of(view.pages.sheets[0])
    job.current[0] = False
    after = picture_of(view.pages.sheets[0])
    assert (before.min(axis=2) < 100).mean() > 0.01
    assert (after.min(axis=2) < 100).mean() < (before.min(axis=2) < 100).mean() / 100  # not a letter is painted
    qtbot.waitUntil(lambda: view.is_covered)
    assert_covered(view)
    job.current[0] = True
    click(view.print_button)
    assert job.sent == []  # once covered, always covered


def test_a_value_changed_covers_the_pages_once_the_preview_is_the_active_window_again(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)
    view.pages.setUpdatesEnabled(False)  # nothing is painted meanwhile
    other = QWidget()
    qtbot.addWidget(other)
    with qtbot.waitExposed(other):
        other.show()
    other.activateWindow()
    qtbot.waitUntil(other.isActiveWindow)
    assert not view.is_covered
    job.current[0] = False
    view.activateWindow()
    qtbot.waitUntil(lambda: view.is_covered)
    view.pages.setUpdatesEnabled(True)
    assert_covered(view)


def test_keyboard(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)
    assert view.focusWidget() is view.print_button
    bar = view.pages.area.verticalScrollBar()
    press(view, Qt.Key.Key_PageDown)
    first = bar.value()
    assert 0 < first <= view.pages.area.viewport().height()
    press(view, Qt.Key.Key_PageDown)
    assert bar.value() > first
    press(view, Qt.Key.Key_PageUp)
    assert bar.value() == first
    sizes = [view.pages.sheets[0].width()]
    for key in (Qt.Key.Key_Minus, Qt.Key.Key_Minus, Qt.Key.Key_Plus, Qt.Key.Key_Plus, Qt.Key.Key_Equal):
        press(view, key, Qt.KeyboardModifier.ControlModifier)
        sizes.append(view.pages.sheets[0].width())
    # 96 pixels to the inch: A4 is 794 wide; to fit, 1024 less ring, scroll bar and margins
    fit = sizes[0]
    assert 900 < fit < 1024
    assert sizes == [fit, 794, 794, fit, 1587, 1587]
    assert view.zoom_choice.answer == Zoom.DOUBLE.value
    press(view, Qt.Key.Key_Escape)
    assert not view.isVisible()
    assert view.result() == QDialog.DialogCode.Rejected
    assert job.sent == []
    assert view.refusal == ""


def test_enter_prints_and_tab_goes_through_everything_once(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)
    stops: list[QWidget] = []
    for _ in range(7):
        focused = view.focusWidget()
        assert focused is not None
        stops.append(focused)
        press(focused, Qt.Key.Key_Tab)
    assert stops == [
        view.print_button,
        view.zoom_choice.segments[0],
        view.paper_choice.segments[0],
        view.patient_choice.segments[0],
        view.part_buttons["shares"],
        view.pages.area,
        view.close_button,
    ]
    assert view.focusWidget() is view.print_button
    press(view.print_button, Qt.Key.Key_Return)
    assert job.sent == [(Paper.A4, JUST_THIS)]


def test_the_place_of_the_print_stays_when_the_size_changes(qtbot: QtBot) -> None:
    view, _ = open_preview(qtbot)
    bar = view.pages.area.verticalScrollBar()
    bar.setValue(bar.maximum() // 2)
    view.pages.take_zoom(Zoom.DOUBLE)
    QApplication.processEvents()
    assert bar.value() / bar.maximum() == pytest.approx(0.5, abs=0.01)


@pytest.mark.parametrize("size", [QSize(1024, 640), QSize(640, 400), NARROWEST], ids=["usual", "200 % text", "least"])
def test_everything_has_its_room_and_its_name(qtbot: QtBot, size: QSize) -> None:
    view, _ = open_preview(qtbot, size=size)
    QApplication.processEvents()
    assert view.size() == size
    for button in view.findChildren(QAbstractButton):
        if button.isVisible():
            assert min(button.width(), button.height()) >= 24, button.text()
            assert view.rect().contains(button.mapTo(view, button.rect().bottomRight())), button.accessibleName()
    for label in view.findChildren(QLabel):
        assert label.textFormat() == Qt.TextFormat.PlainText
        if label.isVisible() and label.text() and not label.wordWrap():
            assert label.width() >= label.fontMetrics().horizontalAdvance(label.text().replace("&", "")), label.text()
    for named in (*view.findChildren(QAbstractButton), *view.findChildren(SheetView), view.pages.area):
        interface = QAccessible.queryAccessibleInterface(named)
        assert interface is not None
        assert interface.text(QAccessible.Text.Name).strip(), named
    assert "Ottilie Fenn" in view.pages.sheets[0].accessibleDescription()
    assert "Fenn" not in view.windowTitle()
    first = view.pages.sheets[0]
    assert first.width() < view.width()  # fitted to the width: nothing to scroll sideways
    assert view.pages.area.horizontalScrollBar().maximum() == 0


def test_a_value_changed_in_the_window_behind_the_preview(
    qtbot: QtBot, window: MainWindow, lipids: Model, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The whole way from the button in the foot: the preview is shown, a value is changed, nothing is printed."""
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008, "Ottilie Fenn"))
    seen: list[str] = []

    def stay_open(view: PreviewView) -> int:
        view.show()
        QApplication.processEvents()
        assert not view.is_covered
        retype_number(window, "age", "62")
        click(view.print_button)
        seen.append(view.cover_words.text())
        view.reject()
        return 0

    def no_printer(*_: object) -> bool:
        raise AssertionError("a printer was asked for")

    monkeypatch.setattr(PreviewView, "exec", stay_open)
    monkeypatch.setattr(QPrintDialog, "exec", no_printer)
    click(window.foot.print)
    assert len(seen) == 1
    assert "have changed since this preview was opened" in seen[0]
    assert window.foot.message.text() == seen[0]


def test_a_fault_while_painting_leaves_no_number(
    qtbot: QtBot, lipids: Model, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    window = MainWindow()
    qtbot.addWidget(window)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008, "Ottilie Fenn"))
    with qtbot.waitExposed(window):
        window.show()
    assert window.sheet.number.figure == "10.5"
    assessment = window.state.assessment
    assert assessment is not None
    job = PrintJob(assessment, lambda: window.outputs.still_on_screen(assessment))
    view = PreviewView(window, job, paper=Paper.A4, parts=USUAL_PARTS)
    monkeypatch.setattr(sys, "excepthook", ExceptionHook(window.state))

    def break_down(*_: object, **__: object) -> None:
        raise RuntimeError("Ottilie Fenn")

    monkeypatch.setattr(page_stack, "paint", break_down)
    view.show()
    qtbot.waitUntil(lambda: view.is_covered)
    assert window.sheet.number.figure == ""
    assert window.state.assessment is None
    assert not view.print_button.isEnabled()
    assert "Fenn" not in view.refusal + capsys.readouterr().err


def test_closing_without_printing_is_no_refusal(qtbot: QtBot, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(PreviewView, "exec", lambda view: view.close())
    said: list[str] = []
    assert preview(None, with_band(), lambda: True, explain=lambda _, sentence: said.append(sentence))
    assert said == []


def test_a_text_refused_only_with_the_patient_page_covers_the_pages(qtbot: QtBot) -> None:
    view, job = open_preview(qtbot)

    def refuse(paper: Paper, parts: PrintParts) -> Document:
        raise PrintRefused("the title cannot be printed.", do="Correct the file.")

    job.lay_out = refuse  # type: ignore[method-assign]
    choose(view.patient_choice.segments[1])
    assert view.is_covered
    assert view.cover_words.text().startswith("The title cannot be printed.")


def test_the_dialog_for_the_printer_offers_no_part_of_the_pages(qtbot: QtBot, monkeypatch: pytest.MonkeyPatch) -> None:
    """Every print goes out whole, with its findings."""
    seen: list[bool] = []

    def look(dialog: QPrintDialog) -> int:
        seen.append(dialog.testOption(QPrintDialog.PrintDialogOption.PrintPageRange))
        return 0

    monkeypatch.setattr(QPrintDialog, "exec", look)
    assert not PrintJob(with_band(), lambda: True).send(None, Paper.A4, parts=USUAL_PARTS)
    assert seen == [False]
