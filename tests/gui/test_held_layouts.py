"""When a number comes or goes the sheet is arranged as a whole before it is painted: no picture in between."""

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import QEvent, QObject, QSize
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget

import clinicalc.gui
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.number_row import NumberRow
from clinicalc.operations.bedside import open_example
from tests.assessment.cases import WOMAN_55_AT_RISK

pytestmark = pytest.mark.gui


class SizeWatch(QObject):
    """The sizes in which widgets were painted."""

    def __init__(self, *widgets: QWidget) -> None:
        super().__init__()
        self.painted: list[tuple[QWidget, QSize]] = []
        for widget in widgets:
            widget.installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        if event.type() == QEvent.Type.Paint and isinstance(watched, QWidget):
            self.painted.append((watched, watched.size()))
        return False


@pytest.mark.parametrize("size", [(1280, 800), (1024, 640)])
def test_sheet_is_painted_only_as_it_stays(
    open_window: Callable[[Model | None], MainWindow], size: tuple[int, int]
) -> None:
    """The clinical form of 2007 has notes of two lines with a number and none of them without: the sheet grows."""
    window = open_window(None)
    window.resize(*size)
    window.use_model(open_example("diabetes-2007-clinical.json"), entry_from_texts(WOMAN_55_AT_RISK))
    row, sheet = window.values.rows["systolic_bp"], window.sheet
    body = sheet.scroller.widget()
    assert isinstance(row, NumberRow)
    assert body is not None
    row.edit.setFocus()
    heights = set()
    for key in "9191":
        row.edit.setSelection(0, 1)
        QApplication.processEvents()
        watch = SizeWatch(body, sheet.findings, sheet.views, sheet.people, sheet.crown)
        QTest.keyClicks(row.edit, key)
        for _ in range(5):
            QApplication.processEvents()
        assert {widget for widget, _ in watch.painted} >= {body, sheet.findings}
        assert [(widget, at) for widget, at in watch.painted if at != widget.size()] == []
        heights.add(body.height())
    assert len(heights) == 2


def test_no_event_that_is_made_in_python_is_posted() -> None:
    # Qt keeps a posted event and PySide its own idea of who owns it: sessions died of it, some three of a hundred
    gui = Path(clinicalc.gui.__file__).parent
    assert [path.name for path in sorted(gui.glob("*.py")) if "postEvent(" in path.read_text(encoding="utf-8")] == []
