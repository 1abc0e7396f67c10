"""The lanes beside the ruler, the decision points they hold, and what is said and can be opened under them."""

import pytest
from msgspec import UnsetType
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.coefficients.equations import ReconstructedBand
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.lanes import Lanes
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.tokens import FIGURE_COLUMN
from clinicalc.report.measured import DecisionPoint, Interval, Lane, Measured
from clinicalc.settings import PracticePoint, Settings
from tests.assessment.cases import DEMO, WOMAN_61
from tests.gui.bedside_hands import press
from tests.gui.walking import settle

pytestmark = pytest.mark.gui


def test_lanes_keep_their_place_and_say_a_dash(viewed: MainWindow, pooled: Model, tarnwick: Model) -> None:
    """Spread where the file states variation, decision point where there is one; both before there is a number."""
    lanes = viewed.sheet.lanes

    def shown() -> list[tuple[str, str]]:
        rows = [row for row in lanes.rows if not row.name.isHidden()]
        return [(row.name.text().replace("\u202f", " "), row.figures.text().replace("\u202f", " ")) for row in rows]

    assert shown() == [
        ("95 % band", "9.7–15.5 %"),
        ("Re-measurement spread", "9.8–15.3 %"),
        ("Decision point", "10.0 %"),
    ]
    places = [row.name.geometry().topLeft() for row in lanes.rows]
    viewed.begin_new_patient()
    assert shown() == [("95 % band", "–"), ("Re-measurement spread", "–"), ("Decision point", "10.0 %")]
    assert [row.name.geometry().topLeft() for row in lanes.rows] == places
    viewed.use_model(pooled)
    assert shown() == [("95 % band", "–"), ("Re-measurement spread", "–")]


def test_spread_that_is_not_known_for_this_patient_is_a_dash(qtbot: QtBot) -> None:
    lanes = Lanes()
    qtbot.addWidget(lanes)
    lanes.resize(700, 100)
    lanes.show_measured(Measured("logit", 0.12, 0.88), "10 years", (Lane.BAND, Lane.SPREAD))
    assert [row.figures.text() for row in lanes.rows] == ["no band", "–"]


def test_caption_has_room_for_a_horizon_that_is_chosen_later(qtbot: QtBot) -> None:
    """Before there is a number only the caption changes: of the ruler nothing is another."""
    lanes = Lanes()
    qtbot.addWidget(lanes)
    lanes.resize(700, 100)
    for within in ("", "10 years", "90 days", ""):
        lanes.show_measured(Measured("logit"), within)
        assert lanes.caption.width() == lanes.caption.sizeHint().width()
        assert lanes.caption.geometry().right() == FIGURE_COLUMN - 1


def test_a_lane_with_many_decimals_has_a_shorter_name(qtbot: QtBot) -> None:
    lanes = Lanes()
    qtbot.addWidget(lanes)
    lanes.resize(700, 100)
    close = (DecisionPoint(0.12, "Our own"), DecisionPoint(0.2, "Our own"))
    spread = Interval(0.1199996, 0.1999996)
    lanes.show_measured(Measured("logit", 0.15, 0.85, spread=spread, decisions=close), "", (Lane.BAND, Lane.SPREAD))
    spread_row = lanes.rows[1]
    assert spread_row.figures.text() == "11.99996–19.99996\u202f%"
    assert spread_row.name.text() == "Spread"
    assert spread_row.name.geometry().right() < spread_row.figures.geometry().left()


def test_number_stands_on_its_side_of_a_practice_point_everywhere(qtbot: QtBot, tarnwick: Model) -> None:
    """A point that the number would meet with one decimal: the number gets as many as show on which side it lies."""
    probe = EntryState()
    probe.use_model(tarnwick, entry_from_texts(DEMO))
    assert probe.assessment is not None
    assert probe.assessment.estimate is not None
    exact = probe.assessment.estimate.probability
    above = round(exact, 3) > exact
    close = PracticePoint(tarnwick.content.id, 10, "a", round(exact, 3), "Our own", "practice meeting")
    preferences = Preferences(Settings(decision_points=(close,)))
    window = MainWindow(preferences=preferences)
    qtbot.addWidget(window)
    window.use_model(tarnwick, entry_from_texts(DEMO))
    figure = window.sheet.number.figure
    assert float(figure) != 100 * close.probability
    assert (float(figure) < 100 * close.probability) == above
    sheet = window.sheet
    assert sheet.number.accessibleName().startswith(f"{figure}\u202f%")
    assert sheet.pinned_summary().percentage == f"{figure}\u202f%"
    assert sheet.lanes.view.accessibleName().startswith(f"{figure}\u202f%")
    sheet.views.open(sheet.views.shares)
    assert sheet.views.shares.figure is not None
    assert sheet.views.shares.figure.table[-1][1] == f"{figure}\u202f%"
    window.state.type_change("smoker", Typed("no"))
    sheet.views.open(sheet.views.comparison)
    assert sheet.views.comparison.figure is not None
    assert ("As entered", f"{figure}\u202f%") in [
        (row[0], row[1].partition(",")[0]) for row in sheet.views.comparison.figure.table
    ]
    assert "this practice’s decision point 12.3\u202f% (Our own; practice meeting)" in sheet.decided.text()


def test_practice_points_come_and_go_with_the_settings(qtbot: QtBot, tarnwick: Model) -> None:
    preferences = Preferences()
    window = MainWindow(preferences=preferences)
    qtbot.addWidget(window)
    window.use_model(tarnwick, entry_from_texts(DEMO))
    names = [row.name.text() for row in window.sheet.lanes.rows if not row.name.isHidden()]
    assert names.count("Decision point") == 1
    own = tuple(
        PracticePoint(tarnwick.content.id, 10, "a", at, f"Act at {at:g}", "practice meeting") for at in (0.05, 0.2)
    )
    preferences.take(Settings(decision_points=own))
    names = [row.name.text() for row in window.sheet.lanes.rows if not row.name.isHidden()]
    assert names.count("Decision point") == 3
    preferences.take(Settings())
    names = [row.name.text() for row in window.sheet.lanes.rows if not row.name.isHidden()]
    assert names.count("Decision point") == 1


def test_what_the_band_assumes_is_reachable(viewed: MainWindow, lipids: Model) -> None:
    assumptions = viewed.sheet.assumptions
    assert not assumptions.isVisible()
    viewed.use_model(lipids, entry_from_texts(WOMAN_61))
    assert assumptions.isVisible()
    assert not assumptions.text.isVisible()
    assumptions.link.setFocus()
    press(assumptions.link, Qt.Key.Key_Return)
    settle()
    assert assumptions.text.isVisible()
    spoken = QAccessible.queryAccessibleInterface(assumptions.text)
    assert spoken is not None
    assert spoken.text(QAccessible.Text.Name) == "What the band assumes"
    women = next(e for e in lipids.content.equations if e.id == "women")
    assert isinstance(women.uncertainty, ReconstructedBand)
    stated = women.uncertainty.assumptions
    assert not isinstance(stated, UnsetType)
    assert assumptions.text.toPlainText().split("\n") == [f"• {line}" for line in stated]
    rows = assumptions.text.document().size().height()
    assert assumptions.text.height() >= rows * assumptions.text.fontMetrics().lineSpacing()
    press(assumptions.link, Qt.Key.Key_Space)
    assert not assumptions.text.isVisible()
    assert assumptions.text.toPlainText() == ""
