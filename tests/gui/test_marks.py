"""The mark at a field about which there are several findings."""

from collections.abc import Callable

import pytest
from PySide6.QtWidgets import QApplication
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import Grade
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.wording import numbered_findings
from clinicalc.operations.bedside import open_example
from tests.assessment.cases import DEMO
from tests.gui.bedside_hands import number_row, question_row, retype_number

pytestmark = pytest.mark.gui


@pytest.fixture
def tarnwick(open_window: Callable[[Model | None], MainWindow]) -> MainWindow:
    """A window on the invented file with a whole patient."""
    window = open_window(open_example("tarnwick-cvd-10y.json"))
    assert window.state.model is not None
    window.use_model(window.state.model, entry_from_texts(DEMO))
    return window


def test_the_mark_of_several_findings_has_the_numbers_of_all_and_moves_nothing(
    qtbot: QtBot, tarnwick: MainWindow
) -> None:
    QApplication.processEvents()
    row = number_row(tarnwick, "hdl_cholesterol")
    heights = [other.height() for other in tarnwick.values.rows.values()]
    tops = [other.y() for other in tarnwick.values.rows.values()]
    retype_number(tarnwick, "hdl_cholesterol", "0.5")  # unusual, and below the derivation range
    QApplication.processEvents()
    assessment = tarnwick.state.assessment
    assert assessment is not None
    numbers = [number for number, finding in numbered_findings(assessment) if finding.field == row.field_id]
    assert [row.mark.number, *map(int, row.mark.others.split("\u202f"))] == numbers
    assert len(numbers) == 2
    assert [other.height() for other in tarnwick.values.rows.values()] == heights
    assert [other.y() for other in tarnwick.values.rows.values()] == tops
    assert row.mark.height() <= row.height()
    retype_number(tarnwick, "hdl_cholesterol", "1.3")
    assert row.mark.others == ""


def test_a_mark_has_as_many_other_numbers_as_there_is_room_for(qtbot: QtBot, tarnwick: MainWindow) -> None:
    assessment = tarnwick.state.assessment
    assert assessment is not None
    finding = next(finding for finding in assessment.findings if finding.grade is Grade.NOTE)
    mark = question_row(tarnwick, "smoker").mark
    top = question_row(tarnwick, "smoker").height()
    mark.show_findings([(1, finding), (2, finding), (3, finding)])
    assert mark.others == "2\u202f3"
    mark.show_findings([(number, finding) for number in range(9, 15)])
    assert mark.others == "…"
    mark.show_findings([(number, finding) for number in range(2, 7)])
    assert mark.others == "3…"
    assert mark.accessibleName().endswith("note 6")  # a screen reader is told of all
    QApplication.processEvents()
    assert question_row(tarnwick, "smoker").height() == top
