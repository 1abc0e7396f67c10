"""The column of changes at every size: whole, named, in the order of the eye, and still when a finding comes."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import QPoint, QSize
from PySide6.QtWidgets import QApplication, QLabel, QWidget

from clinicalc.assessment.changeable import changeable_fields
from clinicalc.assessment.entry import PatientEntry, Typed, entry_from_texts
from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.model import Model
from clinicalc.gui.changed_number import ChangedNumber
from clinicalc.gui.changed_place import ChangedPlace
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.operations.bedside import open_example
from clinicalc.resources import list_example_models
from tests.assessment.cases import DEMO
from tests.gui.bedside_hands import answer, number_row, retype_number, type_text
from tests.gui.test_walks import SIZES, states, walk
from tests.gui.walking import place_in, settle, tab_walk

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support raise", "This plugin does not support grabbing"),
]

_LINE = 34
"""A little less than the height of a line in a row, in pixels."""
CHANGED: dict[str, Callable[[Field], Typed | None]] = {
    "as entered": lambda field: None,
    "changed": lambda field: Typed("120" if isinstance(field, NumberField) else field.options[0].id),
    "no numbers": lambda field: Typed("1,234" if isinstance(field, NumberField) else field.options[-1].id),
}


def changed_entry(model: Model, typed: dict[str, str], kind: str) -> PatientEntry:
    """A patient with every value changed that may be."""
    changes = {field.id: CHANGED[kind](field) for field in changeable_fields(model)}
    return PatientEntry(
        entry_from_texts(typed).typed, "Ottilie Fenn", {id: typed for id, typed in changes.items() if typed is not None}
    )


def open_compared(window: MainWindow, model: Model, entry: PatientEntry) -> None:
    window.use_model(model, entry)
    if len(model.spans) > 1:
        window.state.choose_span(model.spans[0])
    window.sheet.views.open(window.sheet.views.comparison)
    QApplication.processEvents()


@SIZES
@pytest.mark.parametrize("name", list_example_models())
def test_every_widget(
    open_window: Callable[[Model | None], MainWindow], monkeypatch: pytest.MonkeyPatch, name: str, size: QSize
) -> None:
    model = open_example(name)
    window = open_window(model)
    window.resize(size)
    wrong = {}
    for state, typed in states(model).items():
        for kind in CHANGED:
            open_compared(window, model, changed_entry(model, typed, kind))
            wrong[state, kind] = walk(window, monkeypatch)
    assert {state: found for state, found in wrong.items() if found} == {}


@SIZES
@pytest.mark.parametrize("kind", list(CHANGED))
def test_every_second_field_in_focus(
    open_window: Callable[[Model | None], MainWindow], monkeypatch: pytest.MonkeyPatch, size: QSize, kind: str
) -> None:
    for name in ("tarnwick-cvd-10y.json", "cvd-2021-regional.json"):
        model = open_example(name)
        window = open_window(model)
        window.resize(size)
        open_compared(window, model, changed_entry(model, states(model)["whole"], kind))
        for field in changeable_fields(model):
            window.values.focus_change(field.id)
            assert walk(window, monkeypatch) == {}, field.id


def tops(window: MainWindow) -> dict[str, tuple[QPoint, QPoint | None]]:
    """Where every row and every second field stands."""
    body = window.values.widget()
    assert body is not None

    def place(widget: QWidget | None) -> QPoint | None:
        return None if widget is None or not widget.isVisible() else widget.mapTo(body, QPoint(0, 0))

    found = {}
    for id, row in window.values.rows.items():
        found[id] = (row.mapTo(body, QPoint(0, 0)), place(None if row.change is None else row.change.frame))
    return found


@SIZES
def test_nothing_moves_when_a_finding_comes(open_window: Callable[[Model | None], MainWindow], size: QSize) -> None:
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    window.resize(size)
    open_compared(window, model, changed_entry(model, DEMO, "as entered"))
    before, high = tops(window), window.field_note.height()
    assert sum(place is not None for _, place in before.values()) == 4
    for text in ("1,234", "210", "132"):  # a stop, a caution, neither
        edit = second(window, "systolic_bp").edit
        edit.setFocus()
        edit.selectAll()
        type_text(edit, text)
        QApplication.processEvents()
        assert tops(window) == before, text
        assert window.field_note.height() == high
    retype_number(window, "age", "96")
    answer(window, "prior_cvd", "yes")
    QApplication.processEvents()
    assert tops(window) == before
    retype_number(window, "total_cholesterol", "193")  # its offer takes the place of its second field
    QApplication.processEvents()
    assert number_row(window, "total_cholesterol").offer.isVisible()
    assert {id: row for id, (row, _) in tops(window).items()} == {id: row for id, (row, _) in before.items()}


def second(window: MainWindow, id: str) -> ChangedNumber:
    change = number_row(window, id).change
    assert isinstance(change, ChangedNumber)
    return change


def all_changes(window: MainWindow) -> list[ChangedPlace]:
    return [row.change for row in window.values.rows.values() if row.change is not None]


@SIZES
def test_second_fields_stand_under_each_other(open_window: Callable[[Model | None], MainWindow], size: QSize) -> None:
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    window.resize(size)
    open_compared(window, model, changed_entry(model, DEMO, "changed"))
    places = [change.frame.mapTo(window.values, QPoint(0, 0)).x() for change in all_changes(window)]
    assert len(set(places)) == 1
    row = number_row(window, "systolic_bp")
    own = row.frame.mapTo(row, row.frame.rect().bottomRight())
    there = second(window, "systolic_bp").frame
    changed = there.mapTo(row, there.rect().bottomRight())
    if size == SMALLEST:  # on a line of its own: it ends where the first does
        assert changed.x() == own.x()
        assert there.mapTo(row, QPoint(0, 0)).y() > own.y()
    else:
        assert there.mapTo(row, QPoint(0, 0)).x() > own.x()


def test_the_columns_are_named_where_they_end(open_window: Callable[[Model | None], MainWindow]) -> None:
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    open_compared(window, model, changed_entry(model, DEMO, "changed"))
    pane, row = window.values, number_row(window, "systolic_bp")
    [own] = named(pane, "as entered")
    [changed] = named(pane, "with changes")
    ends = [
        w.mapTo(pane, w.rect().topRight()).x() for w in (own, row.frame, changed, second(window, "systolic_bp").frame)
    ]
    assert abs(ends[0] - (ends[1] - 3)) <= 2  # a frame keeps 3 px for its ring
    assert abs(ends[2] - (ends[3] - 3)) <= 2
    assert named(pane, "derivation range") == []
    window.resize(SMALLEST)
    QApplication.processEvents()
    assert named(pane, "as entered") == []
    assert len(named(pane, "with changes")) == len(all_changes(window))


def named(pane: QWidget, words: str) -> list[QWidget]:
    """The labels on screen with these words."""
    return [label for label in pane.findChildren(QLabel) if label.text() == words and label.isVisible()]


@SIZES
@pytest.mark.parametrize("name", ["tarnwick-cvd-10y.json", "general-cvd-2008-lipids.json"])
def test_tab_key_goes_as_the_eye_goes(
    open_window: Callable[[Model | None], MainWindow], size: QSize, name: str
) -> None:
    model = open_example(name)
    window = open_window(model)
    window.resize(size)
    open_compared(window, model, changed_entry(model, states(model)["whole"], "changed"))
    settle()
    walked = tab_walk(window, window.model_bar.chooser)
    window.focusNextChild()
    assert QApplication.focusWidget() is walked[1]  # it came round to where it began
    stops = [stop for stop in walked if window.values.isAncestorOf(stop)]
    rows = list(window.values.rows.values())
    places = []
    for stop in stops:
        number, row = next(
            ((number, row) for number, row in enumerate(rows) if row.isAncestorOf(stop)), (len(rows), window.values)
        )
        down, right = place_in(stop, row)
        places.append((number, down // _LINE if row in rows else 0, right))
    assert places == sorted(places)
    reached = {change.frame for change in all_changes(window) for stop in stops if change.isAncestorOf(stop)}
    assert reached == {change.frame for change in all_changes(window)}


def test_one_column_is_as_wide_as_its_words(open_window: Callable[[Model | None], MainWindow]) -> None:
    model = open_example("tarnwick-cvd-10y.json")
    window = open_window(model)
    window.resize(NARROWEST)
    open_compared(window, model, changed_entry(model, DEMO, "changed"))
    row = number_row(window, "systolic_bp")
    assert second(window, "systolic_bp").frame.mapTo(row, QPoint(0, 0)).y() < row.frame.height()
