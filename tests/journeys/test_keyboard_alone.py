"""A patient by keyboard alone: open, type, meet a unit slip, take its offer, read, copy, save, begin anew."""

from io import BytesIO
from pathlib import Path

import pytest
from pypdf import PdfReader
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from tests.cli.calling import example
from tests.journeys.keyboard import ALT, CONTROL, ENTER, TAB, focused_name, hit, write

pytestmark = pytest.mark.gui


def test_whole_job_by_keyboard(qtbot: QtBot, tmp_path: Path) -> None:
    def choose_open(parent: QWidget) -> Path | None:
        return Path(example("tarnwick-cvd-10y"))

    def choose_save(parent: QWidget, suggestion: str) -> Path | None:
        return tmp_path / "print.pdf"

    window = MainWindow(choose_open=choose_open, choose_save=choose_save)
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.model_bar.chooser.setFocus()

    hit(Qt.Key.Key_O, ALT)
    assert window.sheet.headline.text() == "No number yet"
    for typed in ("n", "61", "f", "142", "n"):
        write(typed)
        hit(ENTER)
    assert focused_name() == "Total cholesterol"
    write("201")  # mg/dL in a field that stands in mmol/L
    hit(ENTER)
    for typed in ("1.3", "y", "n", "Ottilie Fenn"):
        write(typed)
        hit(ENTER)
    assert window.sheet.headline.text() == "No number"

    # the stop's mark in the list leads back to the field, and the offer mends it
    hit(Qt.Key.Key_F6)
    hit(TAB)
    while not focused_name().startswith("Stop 1"):
        hit(TAB)
    hit(ENTER)
    assert focused_name() == "Total cholesterol"
    hit(Qt.Key.Key_U, ALT)  # a button pressed by its letter is seen to go down first
    qtbot.waitUntil(lambda: window.sheet.number.figure == "12.3", timeout=3000)
    assert window.values.rows["total_cholesterol"].mark.isHidden()

    hit(Qt.Key.Key_C, CONTROL | Qt.KeyboardModifier.ShiftModifier)
    copied = QGuiApplication.clipboard().text()
    assert "12.3" in copied
    assert "Ottilie" not in copied
    hit(Qt.Key.Key_V, ALT)
    qtbot.waitUntil(lambda: window.foot.message.text() == "Saved as print.pdf.", timeout=10_000)
    pages = PdfReader(BytesIO((tmp_path / "print.pdf").read_bytes())).pages
    text = "\n".join(page.extract_text() for page in pages).replace("\u202f", " ")
    for part in ("Ottilie Fenn", "12.3", "61 years", "142 mmHg", "201 mg/dL", "1.3 mmol/L"):
        assert part in text, part

    hit(Qt.Key.Key_N, ALT)
    qtbot.waitUntil(lambda: dict(window.state.entry.typed) == {}, timeout=3000)
    assert window.state.entry.label == ""
    assert window.sheet.number.figure == ""
