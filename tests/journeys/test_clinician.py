"""A clinician's whole path: open the file, type the values, mend a slip, read the number, hand over the print."""

import json
from io import BytesIO
from pathlib import Path

import pytest
from pypdf import PdfReader
from PySide6.QtCore import Qt
from PySide6.QtGui import QInputMethodEvent
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from clinicalc.report.attachment import read_attached_record
from tests.cli.calling import call, example
from tests.gui.bedside_hands import click, number_row, press, retype_number, type_text

pytestmark = pytest.mark.gui

TARNWICK = Path(example("tarnwick-cvd-10y"))
LABEL = "Ottilie Fenn-Łuczak, Ωμέγα 7"


@pytest.fixture
def window(qtbot: QtBot, tmp_path: Path) -> MainWindow:
    """A window whose file dialogs are answered with the Tarnwick file and a place for the print."""

    def choose_open(parent: QWidget) -> Path | None:
        return TARNWICK

    def choose_save(parent: QWidget, suggestion: str) -> Path | None:
        return tmp_path / "print.pdf"

    window = MainWindow(choose_open=choose_open, choose_save=choose_save)
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    return window


def hands(*keys: Qt.Key | str) -> None:
    """Keys and texts, each to whatever has the focus."""
    for key in keys:
        focused = QApplication.focusWidget()
        assert focused is not None
        if isinstance(key, str):
            type_text(focused, key)
        else:
            press(focused, key)


def write_name(name: str) -> None:
    """A name as an input method writes it: Qt's own test keys stop at ASCII."""
    event = QInputMethodEvent()
    event.setCommitString(name)
    focused = QApplication.focusWidget()
    assert focused is not None
    QApplication.sendEvent(focused, event)


def test_from_the_file_to_the_print(window: MainWindow, tmp_path: Path) -> None:
    enter = Qt.Key.Key_Return
    window.model_bar.chooser.open_action.trigger()
    assert window.sheet.headline.text() == "No number yet"
    hands("n", enter, "61", enter, Qt.Key.Key_Left, enter)
    hands("142", enter, "n", enter, "201 mg/dL", enter, "1.3", enter, Qt.Key.Key_Right, enter, "n", enter)
    assert window.sheet.number.figure == "12.3"
    write_name(LABEL)

    # the figure of another laboratory typed over it, in the unit that stands there: no number until the unit is mended
    row = number_row(window, "total_cholesterol")
    retype_number(window, "total_cholesterol", "5.2")
    assert window.sheet.number.figure == ""
    assert not window.foot.save_pdf.isEnabled()
    assert row.offer.text().replace("&", "") == "Use 5.2 mmol/L"
    click(row.offer)
    assert window.sheet.number.figure == "12.3"

    click(window.foot.save_pdf)
    pdf = (tmp_path / "print.pdf").read_bytes()
    text = "\n".join(page.extract_text() for page in PdfReader(BytesIO(pdf)).pages)
    for part in (LABEL, "12.3", "5.2 mmol/L", "142 mmHg", "61 years", "Not vetted", "9.7–15.5"):
        assert part in text.replace("\u202f", " "), part

    record = json.loads(read_attached_record(pdf))
    words = [f"{value['id']}={value['typed']}" for value in record["values"]]
    assert call("assess", str(TARNWICK), *words, "--json").record == record
    assert "Ottilie" not in json.dumps(record)

    click(window.foot.new_patient)
    assert window.sheet.number.figure == ""
    assert dict(window.state.entry.typed) == {}
    assert window.state.entry.label == ""
