"""A comparison by keyboard: type a patient, change smoking and blood pressure, read both numbers, leave no trace."""

from math import exp, log

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
from tests.journeys.keyboard import ALT, CONTROL, ENTER, TAB, focused_name, hit, write

pytestmark = pytest.mark.gui

# age, sex, total cholesterol and HDL in mg/dL, systolic pressure, treated, smokes, diabetes, with the exclusion first
WOMAN = ("n", "61", "f", "180", "47", "124", "n", "y", "n")


def probability(*, systolic: float, smokes: bool) -> float:
    """D'Agostino et al., Circulation 2008;117:743-753, Table 2, women, untreated, from memory: the equation by hand."""
    lp = 2.32888 * log(61) + 1.20904 * log(180) - 0.70833 * log(47) + 2.76157 * log(systolic) + 0.52873 * smokes
    return 1 - exp(log(0.95012) * exp(lp - 26.1931))


def tab_to(name: str) -> None:
    """Press the tab key until this has the focus."""
    for _ in range(100):
        if focused_name() == name:
            return
        hit(TAB)
    raise AssertionError(f"the tab key never reaches {name!r}")


def test_a_comparison_by_keyboard(qtbot: QtBot) -> None:
    window = MainWindow(choose_open=lambda _: None, choose_save=lambda *_: None)
    qtbot.addWidget(window)
    window.resize(1280, 800)
    window.use_model(open_example("general-cvd-2008-lipids.json"))
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.values.focus_first()
    for typed in WOMAN:
        write(typed)
        hit(ENTER)
    own, changed = probability(systolic=124, smokes=True), probability(systolic=115, smokes=False)
    figures = [f"{100 * p:.1f}" for p in (own, changed)]
    apart = f"{100 * (own - changed):.1f}"
    assert (figures, apart) == (["10.5", "5.2"], "5.3")
    assert window.sheet.number.figure == figures[0]

    hit(Qt.Key.Key_F6)
    tab_to("Views")
    hit(Qt.Key.Key_Left)
    assert window.sheet.views.open_view is window.sheet.views.comparison
    assert "with changes" in window.sheet.views.comparison.how.text()
    hit(Qt.Key.Key_F6)
    tab_to("Systolic blood pressure, with changes")
    write("115")
    hit(ENTER)
    assert focused_name() == "Smokes now, with changes: Yes"
    hit(Qt.Key.Key_Left)
    assert focused_name() == "Smokes now, with changes: No"

    assert window.sheet.number.figure == figures[0]
    view = window.sheet.views.comparison
    figure = view.figure
    assert figure is not None
    table = {row[0]: row[1] for row in figure.table}
    assert table["Systolic blood pressure"] == "124 mmHg, changed to 115 mmHg"
    assert table["Smokes now"] == "Yes, changed to No"
    assert table["As entered"].startswith(f"{figures[0]}\u202f%")
    assert table["With changes"].startswith(f"{figures[1]}\u202f%")
    assert table["Difference"].startswith(f"\u2212{apart} percentage points")

    hit(Qt.Key.Key_C, CONTROL | Qt.KeyboardModifier.ShiftModifier)
    copied = QGuiApplication.clipboard().text()
    for part in ("Systolic blood pressure, 115 mmHg instead of 124 mmHg", "Smokes now, No instead of Yes"):
        assert part in " ".join(copied.split()), part
    said = copied.replace("\u202f", " ")
    assert f"{figures[0]} % as entered, {figures[1]} % with the changes" in " ".join(said.split())
    assert f"Difference \u2212{apart} points" in said

    hit(Qt.Key.Key_N, ALT)
    qtbot.waitUntil(lambda: dict(window.state.entry.typed) == {}, timeout=3000)
    assert dict(window.state.entry.changes) == {}
    assert view.figure is None
    assert [row.change.arrow.points for row in window.values.rows.values() if row.change is not None] == [False] * 4
    for typed in WOMAN:
        write(typed)
        hit(ENTER)
    assert window.sheet.number.figure == figures[0]
    hit(Qt.Key.Key_C, CONTROL | Qt.KeyboardModifier.ShiftModifier)
    assert "115" not in QGuiApplication.clipboard().text()
