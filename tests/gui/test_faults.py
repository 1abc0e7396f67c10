"""A fault of the program anywhere leaves no number on screen, and is explained in words."""

import sys
from collections.abc import Sequence
from datetime import datetime
from pathlib import Path

import pytest
from PySide6.QtGui import QPaintEvent
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import PatientEntry, Typed, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.spans import Span
from clinicalc.errors import ClinicalcError, UnitError
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.exceptions import ExceptionHook, explain
from clinicalc.gui.main_window import MainWindow
from clinicalc.settings import PracticePoint
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008, number_row, retype_number

pytestmark = pytest.mark.gui

SECRET = "Ottilie Fenn"


def break_at_77(
    model: Model,
    entry: PatientEntry,
    *,
    span: Span | None,
    recalibration: str | None,
    practice_points: Sequence[PracticePoint],
    matching_age: bool,
    vetting: Vetting | None,
    level: float,
) -> Assessment:
    """The real verb, but for one age."""
    age = entry.typed.get("age")
    if age is not None and age.text == "77":
        raise ZeroDivisionError(SECRET)
    return assess(model, entry, span=span, recalibration=recalibration, at=datetime(2026, 12, 1).astimezone())


@pytest.fixture
def hooked(qtbot: QtBot, lipids: Model, monkeypatch: pytest.MonkeyPatch) -> MainWindow:
    """A window with a number on it, whose assess verb breaks at 77, with our hook installed."""
    window = MainWindow(EntryState(break_at_77))
    qtbot.addWidget(window)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008, SECRET))
    with qtbot.waitExposed(window):
        window.show()
    assert window.sheet.number.figure == "10.5"
    monkeypatch.setattr(sys, "excepthook", ExceptionHook(window.state))
    return window


def assert_blank(window: MainWindow) -> None:
    assert window.sheet.number.figure == ""
    assert window.sheet.number.accessibleName() == "No number"
    assert window.state.assessment is None
    assert window.sheet.headline.text() == "No number"
    assert window.sheet.band_figure.text() == "–"
    assert not window.foot.save_pdf.isEnabled()


def test_fault_inside_an_assessment(qtbot: QtBot, hooked: MainWindow, capsys: pytest.CaptureFixture[str]) -> None:
    retype_number(hooked, "age", "77")
    assert_blank(hooked)
    assert "ZeroDivisionError" in hooked.sheet.sentence.text()
    said = capsys.readouterr().err
    assert "ZeroDivisionError" in said
    assert SECRET not in said
    assert SECRET not in hooked.sheet.sentence.text()
    retype_number(hooked, "age", "61")
    assert hooked.sheet.number.figure == "10.5"


def test_fault_inside_an_assessment_needs_no_hook_to_blank(hooked: MainWindow) -> None:
    with pytest.raises(ZeroDivisionError):
        hooked.state.type_value("age", Typed("77"))
    assert_blank(hooked)


def test_fault_in_a_slot_that_hears_of_the_assessment(qtbot: QtBot, hooked: MainWindow) -> None:
    def break_down(_: object) -> None:
        raise KeyError("a listener")

    hooked.state.assessed.connect(break_down)
    retype_number(hooked, "age", "62")
    assert_blank(hooked)
    assert "KeyError" in hooked.sheet.sentence.text()


def test_fault_in_a_slot_before_the_sheet_hears(qtbot: QtBot, lipids: Model, monkeypatch: pytest.MonkeyPatch) -> None:
    state = EntryState()

    def break_down(_: object) -> None:
        raise KeyError("a listener")

    state.assessed.connect(break_down)
    window = MainWindow(state)
    qtbot.addWidget(window)
    monkeypatch.setattr(sys, "excepthook", ExceptionHook(state))
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    assert_blank(window)


def test_fault_in_a_paint(qtbot: QtBot, hooked: MainWindow) -> None:
    class Broken(QWidget):
        painted = False

        def paintEvent(self, event: QPaintEvent) -> None:
            self.painted = True
            raise RuntimeError("no paint")

    broken = Broken(hooked)
    broken.resize(10, 10)
    broken.show()
    qtbot.waitUntil(lambda: broken.painted)
    assert_blank(hooked)


def test_fault_while_opening_a_file(qtbot: QtBot, hooked: MainWindow, tmp_path: Path) -> None:
    def break_down(_: QWidget) -> Path | None:
        raise OSError("a dialog")

    window = MainWindow(hooked.state, choose_open=break_down)
    qtbot.addWidget(window)
    window.model_bar.chooser.open_action.trigger()
    assert_blank(hooked)


def test_values_stay_after_a_fault(qtbot: QtBot, hooked: MainWindow) -> None:
    retype_number(hooked, "age", "77")
    assert number_row(hooked, "age").edit.text() == "77"
    assert number_row(hooked, "total_cholesterol").edit.text() == "180"


class Unspeakable(ClinicalcError):
    """An error that fails again when it is asked for its words."""

    def __str__(self) -> str:
        raise ValueError("no words")


def test_fault_that_cannot_be_explained_leaves_no_number_either(hooked: MainWindow) -> None:
    with pytest.raises(ValueError, match="no words"):
        sys.excepthook(Unspeakable, Unspeakable("x"), None)
    assert_blank(hooked)


def test_our_own_errors_are_given_in_their_words() -> None:
    assert explain(UnitError("This is said.", do="Do that.")) == "This is said. Do that."
