"""The sheet: its columns, what stays where it is, the charts and their tables, findings as footnotes."""

import sys
from collections.abc import Callable

import pytest
from PySide6.QtCore import QPoint, QSize, Qt
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QColor
from PySide6.QtWidgets import QApplication, QLabel, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import PatientEntry, entry_from_texts
from clinicalc.assessment.findings import Grade
from clinicalc.assessment.model import Model
from clinicalc.gui import figure_view, theme
from clinicalc.gui.exceptions import ExceptionHook
from clinicalc.gui.figure_view import FigureView
from clinicalc.gui.lanes import RULER_AT, overhang
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.gui.number_face import BASELINE, GRID_AT, NumberFace
from clinicalc.gui.people_view import EMPTY
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.wording import explain_no_number, numbered_findings
from clinicalc.report.phrases_spread import spread_sources
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008, POOLED_2013, click, press, retype_number
from tests.gui.walking import cut_texts

pytestmark = pytest.mark.gui

USUAL = QSize(1280, 800)
INVENTED = {
    "prior_cvd": "no",
    "age": "61",
    "sex": "female",
    "systolic_bp": "142",
    "bp_treated": "no",
    "total_cholesterol": "5.2 mmol/L",
    "hdl_cholesterol": "1.3 mmol/L",
    "smoker": "yes",
    "diabetes": "no",
}
"""An invented patient of the invented practice; 12.3 % in its worked examples, with a band from 9.7 to 15.5 %."""
LOW = INVENTED | {"age": "36", "smoker": "no", "systolic_bp": "100", "hdl_cholesterol": "2.2 mmol/L"}
SLIP = INVENTED | {"total_cholesterol": "5.2 mg/dL"}
PRINTED = NUMBERS_2008 | ANSWERS_2008
LOW_2008 = PRINTED | {"age": "31", "smoker": "no", "total_cholesterol": "120", "systolic_bp": "95"}
HIGHEST = PRINTED | {
    "age": "74",
    "sex": "male",
    "total_cholesterol": "320",
    "hdl_cholesterol": "25",
    "systolic_bp": "190",
    "bp_treated": "yes",
    "diabetes": "yes",
}


@pytest.fixture
def sheeted(open_window: Callable[[Model | None], MainWindow], tarnwick: Model) -> MainWindow:
    """A window on the invented model with its invented patient."""
    window = open_window(tarnwick)
    return show(window, INVENTED)


def show(window: MainWindow, typed: dict[str, str], model: Model | None = None, size: QSize = USUAL) -> MainWindow:
    """Another patient, all at once, laid out."""
    window.resize(size)
    used = model or window.state.model
    assert used is not None
    window.use_model(used, entry_from_texts(typed) if typed else PatientEntry())
    for _ in range(3):
        QApplication.processEvents()
    return window


def place(widget: QWidget, window: MainWindow) -> tuple[int, int, int, int]:
    at = widget.mapTo(window.sheet, QPoint(0, 0))
    return at.x(), at.y(), widget.width(), widget.height()


@pytest.mark.parametrize("size", [USUAL, SMALLEST], ids=["usual", "smallest"])
@pytest.mark.parametrize("typed", [{}, INVENTED, LOW, SLIP], ids=["empty", "number", "low", "stop"])
def test_columns(sheeted: MainWindow, typed: dict[str, str], size: QSize) -> None:
    """The axis runs from 304 to 28 before the edge, be there a scroll bar or not; figures end 24 before it."""
    sheet = show(sheeted, typed, size=size).sheet
    left, _, _, _ = place(sheet.lanes.view, sheeted)
    assert left + overhang() == SHEET_MARGIN + RULER_AT
    drawn = sheet.lanes.figure
    assert drawn is not None
    assert drawn.width - 2 * overhang() == sheet.width() - SHEET_MARGIN - RULER_AT - SHEET_MARGIN_RIGHT
    for label in (sheet.band_figure, sheet.lanes.caption):
        x, _, width, _ = place(label, sheeted)
        assert x + width == SHEET_MARGIN + RULER_AT - 24
    assert place(sheet.headline, sheeted)[0] == SHEET_MARGIN + RULER_AT
    assert place(sheet.people, sheeted)[0] == place(sheet.meaning, sheeted)[0] == SHEET_MARGIN


@pytest.mark.parametrize("size", [USUAL, SMALLEST], ids=["usual", "smallest"])
@pytest.mark.parametrize("band", ["of its own fit", "rebuilt", "none"])
def test_nothing_moves(
    sheeted: MainWindow, lipids: Model, pooled: Model, tarnwick: Model, band: str, size: QSize
) -> None:
    states: list[dict[str, str]]
    if band == "none":
        other = POOLED_2013 | {"age": "20"}
        model, states = pooled, [{}, POOLED_2013, POOLED_2013 | {"systolic_bp": "190"}, other]
    elif band == "rebuilt":
        model, states = lipids, [{}, PRINTED, HIGHEST, PRINTED | {"total_cholesterol": "5"}, PRINTED | {"age": "20"}]
    else:
        model, states = tarnwick, [{}, INVENTED, LOW, SLIP, SLIP | {"age": "200", "systolic_bp": "1"}]
    places = set()
    listed = set()
    for typed in states:
        sheet = show(sheeted, typed, model, size).sheet
        parts: tuple[QWidget, ...] = (sheet.number, sheet.small_grid, sheet.lanes, sheet.lanes.view, sheet.meaning)
        places.add((*(place(part, sheeted)[:2] for part in parts), place(sheet.findings, sheeted)[1]))
        listed.add(len(sheet.findings.shown))
    assert len(places) == 1
    assert len(listed) > 1


def test_sheet_shrinks_again_with_a_thousand_people(sheeted: MainWindow) -> None:
    for size in (QSize(1900, 900), USUAL, SMALLEST):
        show(sheeted, LOW, size=size)
        body = sheeted.sheet.scroller.widget()
        assert body is not None
        assert body.width() == sheeted.sheet.scroller.viewport().width()
        dots = sheeted.sheet.people.dots.figure_shown
        assert dots is not None
        assert dots.width <= sheeted.sheet.people.dots.width()


def test_small_grid_stands_on_the_baseline_of_the_number(sheeted: MainWindow) -> None:
    _, top, _, height = place(sheeted.sheet.small_grid, sheeted)
    assert abs(top + height - (place(sheeted.sheet.number, sheeted)[1] + BASELINE)) <= 1


def test_longest_number_leaves_the_small_grid_alone(qtbot: QtBot) -> None:
    face = NumberFace()
    qtbot.addWidget(face)
    face.show_percentage(">99.9 %", "Sentence.", vetted=True)
    assert face.figure_shown is not None
    assert face.figure_shown.width <= GRID_AT - 6
    assert face.figure == ">99.9"
    assert face.accessibleName() == ">99.9 %. Sentence."


def has(widget: QWidget, colour: str) -> bool:
    image = widget.grab().toImage()
    wanted = QColor(colour).rgb()
    return any(image.pixel(x, y) == wanted for x in range(image.width()) for y in range(image.height()))


def test_without_a_number_nothing_is_in_accent(sheeted: MainWindow) -> None:
    tokens = theme.tokens()
    view = sheeted.sheet.lanes.view
    assert has(view, tokens.accent)
    assert has(view, tokens.wash)
    assert has(view, tokens.tint)
    assert has(sheeted.sheet.small_grid, tokens.accent)
    show(sheeted, SLIP)
    assert sheeted.sheet.band_figure.text() == "–"
    for widget in (view, sheeted.sheet.small_grid, sheeted.sheet.number):
        assert not has(widget, tokens.accent), widget
        assert not has(widget, tokens.wash), widget


def test_number_of_a_file_that_is_not_vetted_is_soft(sheeted: MainWindow) -> None:
    tokens = theme.tokens()
    for widget in (sheeted.sheet.number, sheeted.sheet.people.have_count):
        assert has(widget, tokens.soft), widget
        assert not has(widget, tokens.accent), widget


def test_lane_of_the_band(sheeted: MainWindow, lipids: Model, pooled: Model) -> None:
    sheet = sheeted.sheet
    assert (sheet.band_name.text(), sheet.band_figure.text()) == ("95\u202f% band", "9.7–15.5\u202f%")
    assert sheet.band_reason.isHidden()
    assert sheet.lanes.caption.text() == "% within 10 years"
    assert "Approximate" not in sheet.meaning.text()
    show(sheeted, PRINTED, lipids)
    assert (sheet.band_name.text(), sheet.band_figure.text()) == ("95\u202f% band, approximate", "8.3–13.2\u202f%")
    assert sheet.pinned_summary().band_name == "95\u202f% band about"
    assert "Approximate, rebuilt from printed intervals" in sheet.meaning.text()
    assert sheet.assumptions.isVisible()
    show(sheeted, POOLED_2013, pooled)
    assert sheet.band_figure.text() == "no band"
    assert sheet.band_reason.text().startswith("No band: ")
    assert sheet.meaning.isVisible()
    assert "Approximate" not in sheet.meaning.text()


def test_wide_scale_says_so(sheeted: MainWindow) -> None:
    assert "0.5 to 80" in sheeted.sheet.lanes.view.accessibleName()
    show(sheeted, LOW)
    assert "0.05 to 99" in sheeted.sheet.lanes.view.accessibleName()


def test_people_and_both_counts(sheeted: MainWindow, lipids: Model, pooled: Model) -> None:
    people = sheeted.sheet.people
    assert (people.have_count.text(), people.rest_count.text()) == ("12", "88")
    assert people.have.text() == "have a first heart attack or stroke within 10 years"
    assert "leaves room for 10 to 16." in people.explained.text()  # 9.7 and 15.5 in whole people
    show(sheeted, LOW)
    assert sheeted.sheet.views.tabs.tabText(2) == "In 1000 people"
    assert (people.have_count.text(), people.rest_count.text()) == ("2", "998")
    show(sheeted, HIGHEST, lipids)
    assert (people.have_count.text(), people.rest_count.text()) == (">999", "<1")
    assert (people.have.text().split()[0], people.rest.text()) == ("have", "does not")
    assert "leaves room for 999 to 1000" in people.explained.text()
    show(sheeted, POOLED_2013, pooled)
    assert "does not say how precisely" in people.explained.text()


def test_picture_and_counts_lie_beside_each_other(sheeted: MainWindow) -> None:
    people = sheeted.sheet.people
    for typed, left, right in ((INVENTED, people.dots, people.counts), (LOW, people.counts, people.dots)):
        show(sheeted, typed, size=SMALLEST)
        (x, _, width, _), (start, _, room, _) = place(left, sheeted), place(right, sheeted)
        assert x == SHEET_MARGIN
        assert x + width <= start == SHEET_MARGIN + RULER_AT
        assert start + room <= sheeted.sheet.width() - SHEET_MARGIN_RIGHT + 1


@pytest.mark.parametrize("size", [USUAL, SMALLEST, NARROWEST], ids=["usual", "smallest", "one column"])
def test_none_of_1000_people_is_cut_off(sheeted: MainWindow, lipids: Model, size: QSize) -> None:
    """Beside long words for the outcome too, and again beside the short ones of a hundred people."""
    people = sheeted.sheet.people
    for typed in (LOW_2008, PRINTED, LOW_2008):
        show(sheeted, typed, lipids, size)
        figure = people.dots.figure_shown
        assert figure is not None
        assert ("1000" in figure.sentence) == (typed is LOW_2008)
        assert figure.width <= people.dots.width() + 1
        assert figure.height <= people.dots.height()
        assert cut_texts(people) == []


def test_a_number_that_went_leaves_no_words(sheeted: MainWindow) -> None:
    def said() -> str:
        labels = sheeted.sheet.findChildren(QLabel)
        figures = sheeted.sheet.findChildren(FigureView)
        return " ".join([label.text() for label in labels] + [view.accessibleDescription() for view in figures])

    sheeted.sheet.views.toggle_text()
    assert "12 of 100" in said()
    assert "12 of 100" in sheeted.sheet.views.text.toPlainText()
    sheeted.begin_new_patient()
    for gone in ("12", "88", "15.5"):
        assert gone not in said()
        assert gone not in sheeted.sheet.views.text.toPlainText()
    assert sheeted.sheet.people.empty.isVisible()
    assert sheeted.sheet.people.empty.text() == EMPTY


def test_every_chart_has_a_table(sheeted: MainWindow) -> None:
    views, people = sheeted.sheet.views, sheeted.sheet.people
    assert not views.text.isVisible()
    click(views.as_text)
    assert views.text.isVisible()
    assert sheeted.state.assessment is not None
    assert sheeted.state.assessment.estimate is not None
    spread = sheeted.state.assessment.estimate.spread
    assert spread is not None
    assert views.text.toPlainText().replace("\u202f", " ").split("\n") == [
        "Probability: 12.3 %",
        "95 % band: 9.7–15.5 %",
        "Re-measurement spread: 9.8–15.3 %",
        "Decision point (Practice setting): 10.0 %",
        *spread_sources(spread),
        "",
        "In 100 people",
        "have it: 12 of 100",
        "do not: 88 of 100",
    ]
    show(sheeted, LOW)
    assert "2 of 1000" in views.text.toPlainText()
    sheeted.sheet.scroller.setFocus()
    press(sheeted.sheet.scroller, Qt.Key.Key_T)
    assert not views.text.isVisible()
    for view in (sheeted.sheet.lanes.view, people.dots, sheeted.sheet.small_grid, sheeted.sheet.number):
        assert view.accessibleName(), view
        assert view.accessibleDescription(), view


def test_footnotes(sheeted: MainWindow, qtbot: QtBot) -> None:
    show(sheeted, SLIP | {"age": "80"})  # outside of the ages it was made from, which stops this model
    sheet = sheeted.sheet
    assert sheeted.state.assessment is not None
    assert sheet.findings.shown == numbered_findings(sheeted.state.assessment)
    first, second = sheet.findings.tab_stops()
    assert [(mark.number, mark.grade) for mark in (first, second)] == [(1, Grade.STOP), (2, Grade.STOP)]
    assert first.accessibleName() == "Stop 1: go to Age"
    assert second.accessibleName() == "Stop 2: go to Total cholesterol"
    assert min(first.width(), first.height()) >= 24
    with qtbot.waitSignal(sheet.field_asked) as asked:
        press(second, Qt.Key.Key_Return)
    assert asked.args == ["total_cholesterol"]
    show(sheeted, INVENTED)
    # the caution about the decision point and the file's own note lead to no field
    assert [f.field for _, f in sheet.findings.shown] == ["", ""]
    assert sheet.findings.tab_stops() == ()


def test_stop_has_a_frame_and_others_have_none(sheeted: MainWindow) -> None:
    show(sheeted, SLIP)
    ink = QColor(theme.tokens().ink)
    entry = sheeted.sheet.findings.tab_stops()[0].parentWidget()
    assert entry is not None
    middle = QPoint(entry.width() - 1, entry.height() // 2)
    assert entry.grab().toImage().pixelColor(middle) == ink
    show(sheeted, INVENTED)
    assert entry.grab().toImage().pixelColor(QPoint(entry.width() - 1, entry.height() // 2)) != ink


def test_number_and_grades_are_announced_but_not_every_key(
    sheeted: MainWindow, monkeypatch: pytest.MonkeyPatch
) -> None:
    said: list[str] = []

    def hear(event: QAccessibleAnnouncementEvent) -> None:
        said.append(event.message().replace("\u202f", " "))

    monkeypatch.setattr(QAccessible, "updateAccessibility", hear)
    retype_number(sheeted, "age", "6")
    said.clear()
    retype_number(sheeted, "age", "62")
    assert len(said) == 3  # no number while the field was empty, then an impossible age, then a number again
    assert said[0].startswith("No number yet")
    assert said[1] == "No number, 1 stop"
    assert said[2].endswith("%, 1 note")
    said.clear()
    show(sheeted, INVENTED)
    said.clear()
    sheeted.state.reassess()
    assert said == []


def test_fault_in_the_paint_of_a_figure_leaves_no_number(
    sheeted: MainWindow, monkeypatch: pytest.MonkeyPatch, qtbot: QtBot
) -> None:
    tries = []

    def break_down(*_: object, **__: object) -> None:
        tries.append(1)
        raise RuntimeError("no paint")

    monkeypatch.setattr(sys, "excepthook", ExceptionHook(sheeted.state))
    monkeypatch.setattr(figure_view, "paint", break_down)
    sheeted.sheet.lanes.view.update()
    qtbot.waitUntil(lambda: sheeted.sheet.number.figure == "")
    qtbot.wait(200)
    assert sheeted.state.assessment is None
    assert sheeted.sheet.band_figure.text() == "–"
    before = len(tries)
    qtbot.wait(200)
    assert len(tries) == before  # a paint that fails does not ask for the next one
    monkeypatch.undo()


def test_pinned_summary(sheeted: MainWindow) -> None:
    pinned = sheeted.sheet.pinned_summary()
    assert (pinned.percentage, pinned.headline) == ("12.3\u202f%", "First heart attack or stroke within 10\u00a0years")
    assert (pinned.band_name, pinned.band_figures) == ("95\u202f% band", "9.7–15.5\u202f%")
    assert [(mark.number, mark.word) for mark in pinned.marks] == [(1, "Caution"), (2, "Note")]
    show(sheeted, SLIP)
    stopped = sheeted.sheet.pinned_summary()
    assert (stopped.percentage, stopped.headline, stopped.band_figures) == ("", "No number", "–")
    assert [(mark.grade, mark.field) for mark in stopped.marks] == [(Grade.STOP, "total_cholesterol")]


def test_what_the_model_does_not_use(sheeted: MainWindow) -> None:
    assert sheeted.sheet.not_used.text().startswith("Not used by this model: family history, kidney function,")


def test_many_stops_are_not_all_named(sheeted: MainWindow) -> None:
    show(sheeted, INVENTED | {"age": "500", "systolic_bp": "2", "total_cholesterol": "900", "hdl_cholesterol": "900"})
    assert sheeted.state.assessment is not None
    _, sentence = explain_no_number(sheeted.state.assessment)
    assert sentence.startswith("Age, Systolic blood pressure and 2 other values stop it.")
