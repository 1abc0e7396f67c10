"""Every widget of every view, in every state, at usual and at double text size: named, plain, large enough, whole."""

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import QDialog, QLabel, QMenu, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model
from clinicalc.gui.about_view import AboutView
from clinicalc.gui.guide_view import GuideView
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.gui.number_row import NumberRow
from clinicalc.operations.bedside import open_example
from clinicalc.resources import list_example_models
from tests.gui.bedside_hands import number_row
from tests.gui.walking import (
    access_letters,
    cut_texts,
    nameless,
    on_screen,
    paints_itself,
    place_in,
    rich_texts,
    settle,
    small_targets,
    tab_walk,
    watched_painting,
)

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support raise", "This plugin does not support grabbing"),
]

USUAL = QSize(1280, 800)
SIZES = pytest.mark.parametrize("size", [USUAL, SMALLEST, NARROWEST], ids=["usual", "smallest", "double text"])
"""The last is the usual window where everything is drawn twice as large."""


def whole_patient(model: Model) -> dict[str, str]:
    """The values of the file's first worked example: a patient with a number."""
    return dict(model.content.worked_examples[0].values)


def states(model: Model) -> dict[str, dict[str, str]]:
    """What may be typed: nothing, a whole patient, slips of unit in every value, answers that exclude."""
    whole = whole_patient(model)
    numbers = [field.id for field in model.fields if isinstance(field, NumberField) and field.may_be_typed]
    excluding = {
        field.id: next(iter(field.excludes))
        for field in model.fields
        if not isinstance(field, NumberField) and field.excludes
    }
    return {
        "nothing": {},
        "whole": whole,
        "slips": whole | dict.fromkeys(numbers, "5.2"),
        "no numbers": whole | dict.fromkeys(numbers, "1,234"),
        "excluded": whole | excluding,
    }


def walk(root: QWidget, monkeypatch: pytest.MonkeyPatch) -> dict[str, list[str]]:
    """Everything that any of the walks finds wrong, by walk."""
    settle()
    with watched_painting(monkeypatch) as painted:
        for widget in on_screen(root):  # each by itself: what is scrolled out of sight is not painted with the window
            if paints_itself(widget):
                widget.grab()
    letters = access_letters(root)
    found = {
        "nameless": nameless(root),
        "rich": rich_texts(root),
        "small": small_targets(root),
        "cut": cut_texts(root),
        "painted": list(painted),
        "letters twice": sorted({letter for letter in letters if letters.count(letter) > 1}),
    }
    return {walked: wrong for walked, wrong in found.items() if wrong}


@SIZES
@pytest.mark.parametrize("name", list_example_models())
def test_patient_page(
    open_window: Callable[[Model | None], MainWindow], monkeypatch: pytest.MonkeyPatch, name: str, size: QSize
) -> None:
    model = open_example(name)
    window = open_window(model)
    window.resize(size)
    wrong = {}
    for state, typed in states(model).items():
        window.use_model(model, entry_from_texts(typed, "Ottilie Fenn"))
        if len(model.spans) > 1:
            window.state.choose_span(model.spans[0])
        wrong[state] = walk(window, monkeypatch)
    assert len(on_screen(window)) > 100
    assert {state: found for state, found in wrong.items() if found} == {}


@SIZES
def test_every_field_in_focus(
    open_window: Callable[[Model | None], MainWindow], monkeypatch: pytest.MonkeyPatch, size: QSize
) -> None:
    """What a field in focus adds: the file's meaning of it, and its date."""
    for name in ("tarnwick-cvd-10y.json", "cvd-2021-regional.json"):
        model = open_example(name)
        window = open_window(model)
        window.resize(size)
        for id, row in window.values.rows.items():
            window.values.focus_field(id)
            assert walk(window, monkeypatch) == {}, id
            if row.dated is not None:
                assert row.dated.isVisible(), id


@SIZES
def test_no_model_and_a_refused_file(
    open_window: Callable[[Model | None], MainWindow], monkeypatch: pytest.MonkeyPatch, size: QSize, tmp_path: Path
) -> None:
    window = open_window(None)
    window.resize(size)
    assert walk(window, monkeypatch) == {}
    broken = tmp_path / "broken.json"
    broken.write_text('{"format": "x"}', encoding="utf-8")
    window.open_path(broken)
    assert window.refusal.isVisible()
    assert walk(window, monkeypatch) == {}


@SIZES
def test_messages_of_the_foot(
    open_window: Callable[[Model | None], MainWindow], monkeypatch: pytest.MonkeyPatch, size: QSize
) -> None:
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    window.resize(size)
    window.use_model(model, entry_from_texts(whole_patient(model)))
    for message in (
        "Copied as text, without name or number.",
        "Saved as tarnwick-cvd-10y-2026-10-02-1415.pdf.",
        "Not saved: a value was changed while the place was chosen. Save again.",
        "This holds until the program is closed, and is not kept: the settings file holds something that could not be"
        " taken, and nothing is written over it unasked. settings.toml: “theme” is 5, and takes light, dark or system.",
    ):
        window.foot.say(message)
        assert walk(window, monkeypatch) == {}


def test_messages_are_announced_and_their_end_is_not(window: MainWindow, monkeypatch: pytest.MonkeyPatch) -> None:
    said: list[str] = []
    monkeypatch.setattr(QAccessible, "updateAccessibility", lambda event: said.append(event.message()))
    window.foot.say("Copied as text, without name or number.")
    window.resize(NARROWEST)
    settle()
    window.foot.say("")
    assert said == ["Copied as text, without name or number."]


@pytest.mark.parametrize("size", [None, NARROWEST], ids=["usual", "double text"])
@pytest.mark.parametrize("kind", [GuideView, AboutView])
def test_dialogs(
    qtbot: QtBot, monkeypatch: pytest.MonkeyPatch, kind: Callable[[], QDialog], size: QSize | None
) -> None:
    dialog = kind()
    qtbot.addWidget(dialog)
    if size is not None:
        dialog.resize(size)
    dialog.show()
    settle()
    assert size is None or dialog.size() == size
    pages = [page.name for page in dialog.guide_pages] if isinstance(dialog, GuideView) else [""]
    for page in pages:
        if isinstance(dialog, GuideView):
            dialog.show_page(page)
        assert walk(dialog, monkeypatch) == {}, page


def test_menus(window: MainWindow) -> None:
    """Every entry has words, a letter of its own in its menu, and a height that can be hit."""
    bar, chooser = window.page_bar, window.model_bar.chooser
    for menu in (bar.menu, bar.themes, chooser.menu):
        menu.popup(window.mapToGlobal(window.rect().center()))
        settle()
        _walk_menu(menu)
        menu.close()


def _walk_menu(menu: QMenu) -> None:
    entries = [action for action in menu.actions() if not action.isSeparator()]
    assert entries
    letters = [action.text()[action.text().index("&") + 1].lower() for action in entries]
    assert sorted(set(letters)) == sorted(letters)
    for action in entries:
        assert menu.actionGeometry(action).height() >= 24, action.text()
        assert menu.actionGeometry(action).width() >= menu.fontMetrics().horizontalAdvance(action.text()) + 24


@SIZES
@pytest.mark.parametrize("name", ["tarnwick-cvd-10y.json", "cvd-2021-regional.json"])
def test_tab_key_goes_as_the_eye_goes(
    open_window: Callable[[Model | None], MainWindow], size: QSize, name: str
) -> None:
    """Model line, values downwards and to the right, views, findings, foot, page bar; all reached, each once."""
    model = open_example(name)
    window = open_window(model)
    window.resize(size)
    numbers = [field.id for field in model.fields if isinstance(field, NumberField) and field.may_be_typed]
    window.use_model(model, entry_from_texts(whole_patient(model)))
    for slips in ((), numbers[1:2], numbers[2:]):  # the last bring more findings, but none of another grade
        for id in slips:
            number_row(window, id).edit.setText("5.2")
        settle()
        _walk_by_tab(window)


def _walk_by_tab(window: MainWindow) -> None:
    first = next(
        iter(m for m in window.patient.pinned.tab_stops() if m.isVisible() and m.isEnabled()), window.model_bar.chooser
    )
    stops = tab_walk(window, first)
    sheet = window.sheet
    regions: tuple[QWidget, ...] = (window.patient.pinned, window.model_bar, window.values, sheet.assumptions)
    regions += (sheet.views, sheet.findings, window.foot, window.page_bar)
    order = []
    for region in regions:
        inside = [stop for stop in stops if region.isAncestorOf(stop)]
        order += inside
        body = window.values.widget() if region is window.values else region
        assert body is not None
        places = [place_in(stop, body) for stop in inside]
        rows = [(y // 24, x) for y, x in places]
        if region is window.values:
            rows = [(_row_of(window, stop), x) for stop, (_, x) in zip(inside, places, strict=True)]
        assert rows == sorted(rows), region
    assert [s for s in stops if not window.field_note.isAncestorOf(s)] == order
    reachable = {
        w
        for w in on_screen(window)
        if w.focusPolicy() & Qt.FocusPolicy.TabFocus and w.isEnabled() and w.focusProxy() is None
    }
    assert reachable - set(stops) == set()


def _row_of(window: MainWindow, stop: QWidget) -> int:
    rows = list(window.values.rows.values())
    return next((place for place, row in enumerate(rows) if row.isAncestorOf(stop)), len(rows))


def test_a_field_mark_leads_to_its_finding_and_back(window: MainWindow, lipids: Model) -> None:
    window.use_model(lipids, entry_from_texts(whole_patient(lipids) | {"total_cholesterol": "5.2"}))
    settle()
    row = window.values.rows["total_cholesterol"]
    assert isinstance(row, NumberRow)
    row.mark.click()
    settle()
    there = next(mark for mark in window.sheet.findings.tab_stops() if mark.hasFocus())
    assert there.number == row.mark.number
    there.click()
    assert row.edit.hasFocus()


def test_the_walks_find_what_they_are_for(qtbot: QtBot, monkeypatch: pytest.MonkeyPatch) -> None:
    """A window in which everything is wrong once."""
    root = QWidget()
    qtbot.addWidget(root)
    root.resize(200, 100)
    cut = QLabel("more words than there is room for", root)
    cut.setGeometry(0, 0, 40, 20)
    mark = IndexMark()
    mark.setParent(root)
    mark.setFixedSize(12, 12)
    mark.setAccessibleName("")
    mark.setFocusPolicy(Qt.FocusPolicy.TabFocus)
    mark.setVisible(True)
    root.show()
    assert {"nameless", "rich", "small", "cut"} <= set(walk(root, monkeypatch))
