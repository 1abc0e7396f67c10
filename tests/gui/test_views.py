"""The views under the findings: one is open, the others hold nothing; and nothing outlives its number."""

import json
import sys
from collections.abc import Callable

import pytest
from PySide6.QtCore import QSize, Qt
from PySide6.QtWidgets import QLabel, QPlainTextEdit, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model_bytes
from clinicalc.gui import comparison_view, shares_view
from clinicalc.gui.exceptions import ExceptionHook
from clinicalc.gui.figure_view import FigureView
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.gui.views import View, Views
from clinicalc.report.phrases_comparison import NO_PROMISE
from clinicalc.resources import read_shipped
from tests.assessment.cases import DEMO, WOMAN_61
from tests.gui.bedside_hands import click, press, retype_number
from tests.gui.test_walks import walk
from tests.gui.walking import settle

pytestmark = pytest.mark.gui


def rows_of(view: View) -> tuple[tuple[str, ...], ...]:
    """The table of what a view shows; () where it shows nothing."""
    return () if view.figure is None else view.figure.table


def opened(views: Views) -> str:
    """The name of the open view."""
    return next(name for name in ("shares", "comparison", "people") if getattr(views, name) is views.open_view)


def everything_said(root: QWidget) -> str:
    """Every word and description below a widget, shown or hidden."""
    labels = [label.text() for label in root.findChildren(QLabel)]
    texts = [text.toPlainText() for text in root.findChildren(QPlainTextEdit)]
    spoken = [f"{w.accessibleName()} {w.accessibleDescription()}" for w in root.findChildren(QWidget)]
    return " | ".join([*labels, *texts, *spoken])


def test_people_are_open_at_first_and_arrows_go_from_view_to_view(viewed: MainWindow) -> None:
    views = viewed.sheet.views
    tabs = views.tabs
    assert [tabs.tabText(index) for index in range(3)] == ["Shares", "Comparison", "In 100 people"]
    assert opened(views) == "people"
    assert (views.people.isVisible(), views.shares.isVisible(), views.comparison.isVisible()) == (True, False, False)
    tabs.setFocus()
    press(tabs, Qt.Key.Key_Left)
    assert opened(views) == "comparison"
    press(tabs, Qt.Key.Key_Left)
    assert opened(views) == "shares"
    assert views.shares.isVisible()
    assert tabs.hasFocus()


def test_only_the_open_view_holds_a_figure(viewed: MainWindow) -> None:
    views = viewed.sheet.views
    viewed.state.type_change("smoker", Typed("no"))
    for opened in (views.shares, views.comparison, views.people, views.shares):
        views.open(opened)
        held = [view for view in (views.shares, views.comparison, views.people) if view.figure is not None]
        assert held == [opened]


def test_shares_lead_from_the_reference_person_to_the_number(viewed: MainWindow) -> None:
    """Shares, reference person: of the file. The number: 12.3 % in its worked examples."""
    views = viewed.sheet.views
    views.open(views.shares)
    rows = rows_of(views.shares)
    assert rows[0] == ("Reference person, Female, 61 years", "5.0\u202f%")
    assert rows[-1] == ("This patient", "12.3\u202f%")
    assert views.shares.reference.text().startswith("Reference person: Systolic blood pressure 120 mmHg;")
    assert "age" not in rows[-1][0]


def test_matching_age_only_for_those_who_ask(viewed: MainWindow, tarnwick: Model) -> None:
    views = viewed.sheet.views
    views.open(views.shares)
    assert "Matching age" not in everything_said(views)
    asked: list[bool] = []
    views.shares.matching_age_asked.connect(asked.append)
    click(views.shares.ask)
    assert views.shares.matched.text().startswith("The reference person would have this number at ")
    assert "it is no biological age" in views.shares.caution.text()
    assert views.shares.caution.isVisible()
    assert rows_of(views.shares)[-1][0].startswith("This patient, matching age ")
    click(views.shares.ask)
    assert "would have this number" not in everything_said(views)
    click(views.shares.ask)
    assert asked == [True, False, True]
    viewed.begin_new_patient()
    assert not viewed.state.matching_age
    assert "would have this number" not in everything_said(viewed)
    viewed.state.ask_matching_age(True)
    viewed.use_model(tarnwick, entry_from_texts(DEMO))
    assert not viewed.state.matching_age


def test_no_shares_for_a_reason(viewed: MainWindow, tarnwick: Model) -> None:
    content = json.loads(read_shipped("example_models/tarnwick-cvd-10y.json"))
    del content["model"]["equations"][0]["reference_person"]
    viewed.use_model(load_model_bytes(json.dumps(content).encode(), "bare.json"), entry_from_texts(DEMO))
    views = viewed.sheet.views
    views.open(views.shares)
    assert views.shares.empty.text() == "No shares: The file names no reference person for this equation."
    assert views.shares.empty.isVisible()
    assert not views.shares.ask.isVisible()
    viewed.begin_new_patient()
    assert views.shares.empty.text() == shares_view.EMPTY


def test_comparison_says_how_then_compares(viewed: MainWindow, qtbot: QtBot) -> None:
    sheet, views = viewed.sheet, viewed.sheet.views
    with qtbot.waitSignal(sheet.comparison_opened) as opened:
        views.open(views.comparison)
    assert opened.args == [True]
    assert views.comparison.how.text() == comparison_view.HOW
    assert rows_of(views.comparison) == ()
    viewed.state.type_change("smoker", Typed("no"))
    assert not views.comparison.how.isVisible()
    assert views.tabs.tabText(1) == "Comparison (1)"
    assert views.comparison.people.text().startswith("Of 1000 people: 123 as entered, ")
    assert views.comparison.people.text().endswith(NO_PROMISE)
    assert rows_of(views.comparison)[0] == ("Smokes now", "Yes, changed to No")
    assert sheet.number.figure == "12.3"  # the number stays the one as entered
    assert not views.comparison.findings.isVisible()
    with qtbot.waitSignal(sheet.comparison_opened) as closed:
        views.open(views.people)
    assert closed.args == [False]


def test_what_is_said_about_changed_values_is_listed_with_them(viewed: MainWindow, qtbot: QtBot) -> None:
    sheet, comparison = viewed.sheet, viewed.sheet.views.comparison
    sheet.views.open(comparison)
    before = sheet.findings.shown
    viewed.state.type_change("systolic_bp", Typed("210"))
    assert sheet.findings.shown == before
    assert [number for number, _ in comparison.findings.shown] == [len(before) + 1]
    assert comparison.findings.shown[0][1].message.startswith("With changes: Systolic blood pressure 210 mmHg")
    assert rows_of(comparison)
    mark = comparison.findings.tab_stops()[0]
    assert mark in sheet.tab_stops()
    with qtbot.waitSignal(comparison.field_asked) as asked:
        mark.click()
    assert asked.args == ["systolic_bp"]
    viewed.state.type_change("systolic_bp", Typed("1"))
    assert rows_of(comparison) == ()
    assert comparison.people.text() == ""
    assert sheet.number.figure == "12.3"
    assert [finding.grade for _, finding in comparison.findings.shown] == ["stop"]
    assert comparison.reason.text() == "No comparison."
    assert "the number as entered stands" in everything_said(comparison.findings)
    viewed.state.type_change("systolic_bp", Typed("142"))  # what was entered
    assert comparison.reason.text() == comparison_view.SAME


def test_comparison_closes_for_another_patient_or_model(
    viewed: MainWindow, tarnwick: Model, lipids: Model, qtbot: QtBot
) -> None:
    views = viewed.sheet.views
    acts: list[Callable[[], None]] = [
        viewed.begin_new_patient,
        lambda: viewed.use_model(lipids),
        lambda: viewed.use_model(tarnwick, entry_from_texts(DEMO)),
    ]
    for act in acts:
        views.open(views.comparison)
        with qtbot.waitSignal(viewed.sheet.comparison_opened) as closed:
            act()
        assert closed.args == [False]
        assert opened(views) == "people"
        assert not viewed.state.entry.changes
    views.open(views.shares)
    viewed.begin_new_patient()
    assert opened(views) == "shares"


@pytest.mark.parametrize("opened", ["shares", "comparison", "people"])
@pytest.mark.parametrize("way", ["new patient", "stop", "emptied", "fault"])
def test_nothing_of_a_number_outlives_it(
    viewed: MainWindow, monkeypatch: pytest.MonkeyPatch, opened: str, way: str
) -> None:
    views = viewed.sheet.views
    viewed.state.ask_matching_age(True)
    viewed.state.type_change("smoker", Typed("no"))
    for view in (views.shares, views.people, views.comparison, getattr(views, opened)):
        views.open(view)
    views.toggle_text()
    settle()
    gone = ("12.3", "9.7", "15.5", "9.8–15.3", "5.0\u202f%", "77", "12 of 100", "Of 100", "+0.66", "probably")
    assert "12.3" in everything_said(viewed.sheet)
    if way == "new patient":
        viewed.begin_new_patient()
    elif way == "fault":
        viewed.state.blank("A fault.")
    else:
        retype_number(viewed, "total_cholesterol", "5.2 mg/dL" if way == "stop" else "")
    settle()
    assert viewed.sheet.number.figure == ""
    said = everything_said(viewed.sheet)
    assert [figure for figure in gone if figure in said] == []
    figures = [view for view in views.findChildren(FigureView) if view.figure_shown is not None]
    assert figures == []


@pytest.mark.parametrize("name", ["shares_view", "comparison_view"])
def test_fault_while_a_view_is_drawn_leaves_no_number(
    viewed: MainWindow, monkeypatch: pytest.MonkeyPatch, name: str
) -> None:
    views = viewed.sheet.views
    viewed.state.type_change("smoker", Typed("no"))
    monkeypatch.setattr(sys, "excepthook", ExceptionHook(viewed.state))

    def break_down(*_: object) -> None:
        raise RuntimeError("no drawing")

    module = {"shares_view": shares_view, "comparison_view": comparison_view}[name]
    monkeypatch.setattr(module, "draw_shares" if name == "shares_view" else "draw_comparison", break_down)
    views.tabs.setFocus()
    press(views.tabs, Qt.Key.Key_Left)  # from a key, as a person does: the fault comes up through Qt
    if name == "shares_view":
        press(views.tabs, Qt.Key.Key_Left)
    assert viewed.sheet.number.figure == ""
    assert viewed.state.assessment is None
    assert "12.3" not in everything_said(viewed.sheet)


@pytest.mark.parametrize("size", [QSize(1280, 800), SMALLEST, NARROWEST], ids=["usual", "smallest", "double text"])
@pytest.mark.parametrize("opened", ["shares", "comparison"])
def test_walks_of_the_views(viewed: MainWindow, monkeypatch: pytest.MonkeyPatch, opened: str, size: QSize) -> None:
    viewed.resize(size)
    views = viewed.sheet.views
    views.open(getattr(views, opened))
    assert walk(viewed, monkeypatch) == {}
    viewed.state.ask_matching_age(True)
    for change in (Typed("210"), Typed("1"), Typed("130")):
        viewed.state.type_change("systolic_bp", change)
        assert walk(viewed, monkeypatch) == {}
    views.toggle_text()
    assert walk(viewed, monkeypatch) == {}
    viewed.begin_new_patient()
    assert walk(viewed, monkeypatch) == {}


def test_text_has_every_chart_shown(viewed: MainWindow) -> None:
    views = viewed.sheet.views
    viewed.state.type_change("smoker", Typed("no"))
    views.toggle_text()
    for opened, said in (
        (views.shares, "Smokes now Yes, reference No: +0.66"),
        (views.comparison, "Smokes now: Yes, changed to No"),
        (views.people, "have it: 12 of 100"),
    ):
        views.open(opened)
        text = views.text.toPlainText()
        assert said in text
        assert "Re-measurement spread: 9.8–15.3\u202f%" in text
        rows = views.text.document().size().height()
        assert views.text.height() >= rows * views.text.fontMetrics().lineSpacing()


def test_a_value_that_is_not_known_is_said(viewed: MainWindow, lipids: Model) -> None:
    viewed.use_model(lipids, entry_from_texts(WOMAN_61))
    assert viewed.sheet.sentence.text().startswith("Of 100 people with these values,")
    viewed.use_model(lipids, entry_from_texts(WOMAN_61 | {"smoker": "not measured"}))
    assert viewed.sheet.number.figure
    assert viewed.sheet.sentence.text().startswith("Of 100 people with the values that are known,")
    assert "with the same known values" in viewed.sheet.people.explained.text()
    views = viewed.sheet.views
    views.open(views.shares)
    assert views.shares.empty.text().startswith("No shares: ")
    viewed.state.type_change("systolic_bp", Typed("130"))
    views.open(views.comparison)
    assert rows_of(views.comparison) == ()
    assert "not measured" in views.comparison.reason.text()
