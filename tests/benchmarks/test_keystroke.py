"""From a key in a value field to the painted result, beside repainting an empty widget of the window's size.

Run with `--benchmark-only`. Nothing is asserted about time: the figures are written down, a slow machine breaks
nothing. Every key is shown to have changed what the sheet says, so that none is counted that painted nothing.
"""

import os
import sys
from collections.abc import Callable, Sequence
from statistics import median, quantiles
from time import perf_counter

import pytest
from pytest_benchmark.fixture import BenchmarkFixture

os.environ["QT_QPA_PLATFORM"] = "offscreen"

from PySide6.QtCore import QAbstractEventDispatcher, QEvent, QEventLoop, QObject
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import Typed, entry_from_texts
from clinicalc.gui.application import dress
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.number_row import NumberRow
from clinicalc.operations.bedside import open_example
from tests.assessment.cases import DEMO, WOMAN_55_AT_RISK

KEYS = 200
WARM_UP = 10
AIM = 0.004
"""Seconds from key to painted result, median."""
CHANGED_HDL = {"tarnwick-cvd-10y": "1.6", "diabetes-2007-clinical": "45"}
"""In the file's unit; another value than the patient's."""
_ALL = QEventLoop.ProcessEventsFlag.AllEvents


class PaintWatch(QObject):
    """Counts the paints of one widget."""

    def __init__(self, widget: QWidget) -> None:
        super().__init__(widget)
        self.paints = 0
        widget.installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        self.paints += event.type() == QEvent.Type.Paint
        return False


def seconds_to_paint(ask: Callable[[], None], watch: PaintWatch) -> float:
    """How long until the watched widget has been painted and no event is left, such as a layout that follows."""
    events = QAbstractEventDispatcher.instance()
    before = watch.paints
    start = perf_counter()
    ask()
    while events.processEvents(_ALL) or (watch.paints == before and perf_counter() < start + 5):
        pass
    took = perf_counter() - start
    assert watch.paints > before
    return took


def time_keys(window: MainWindow, empty: QWidget, keys: Sequence[str], places: slice) -> list[tuple[float, float]]:
    """Seconds of each key and, turn about, of repainting the empty widget; every key changes the headline or number."""
    row = window.values.rows["systolic_bp"]
    assert isinstance(row, NumberRow)
    row.edit.setFocus()
    number, nothing = PaintWatch(window.sheet.number), PaintWatch(empty)
    pairs = []
    for key in keys:
        said = window.sheet.number.accessibleName()
        row.edit.setSelection(places.start, places.stop - places.start)
        QApplication.processEvents()
        took = seconds_to_paint(lambda key=key: QTest.keyClick(row.edit, key), number)  # type: ignore[misc]
        assert window.sheet.number.accessibleName() != said
        pairs.append((took, seconds_to_paint(empty.update, nothing)))
    return pairs[WARM_UP:]


@pytest.fixture(scope="module", autouse=True)
def _dressed(qapp: QApplication) -> None:
    dress(qapp)


@pytest.fixture
def empty(qtbot: QtBot) -> QWidget:
    """A widget without content, as large as the window."""
    widget = QWidget()
    qtbot.addWidget(widget)
    widget.resize(1280, 800)
    with qtbot.waitExposed(widget):
        widget.show()
    return widget


@pytest.mark.gui
@pytest.mark.parametrize(
    ("model", "texts"),
    [("tarnwick-cvd-10y", DEMO), ("diabetes-2007-clinical", WOMAN_55_AT_RISK)],
    ids=["tarnwick", "diabetes_2007"],
)
@pytest.mark.parametrize("ends", ["number", "stop"])
@pytest.mark.parametrize("view", ["people", "shares", "comparison"])
def test_keystroke(
    benchmark: BenchmarkFixture,
    capsys: pytest.CaptureFixture[str],
    qtbot: QtBot,
    empty: QWidget,
    model: str,
    texts: dict[str, str],
    ends: str,
    view: str,
) -> None:
    """Keys that lead from a number to another, or to a stop and back, with each view open; a comparison is made."""
    window = MainWindow()
    qtbot.addWidget(window)
    window.resize(1280, 800)
    window.use_model(open_example(f"{model}.json"), entry_from_texts(texts))
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.sheet.views.open(getattr(window.sheet.views, view))
    if view == "shares":
        window.state.ask_matching_age(True)
    if view == "comparison":
        window.state.type_change("hdl_cholesterol", Typed(CHANGED_HDL[model]))
    QApplication.processEvents()
    # the tens: 122 and 142; the hundreds: 942 and 142, the first of which no one has
    keys, places = (["2", "4"], slice(1, 2)) if ends == "number" else (["9", "1"], slice(0, 1))
    if ends == "number" and texts["systolic_bp"][1] == "2":
        keys = keys[::-1]
    pairs = time_keys(window, empty, keys * ((KEYS + WARM_UP) // 2), places)
    times, bare = [pair[0] for pair in pairs], median(pair[1] for pair in pairs)
    middle, slow = median(times), quantiles(times, n=20)[-1]
    benchmark.extra_info |= {
        "keys": len(times),
        "median_seconds": middle,
        "p95_seconds": slow,
        "empty_widget_seconds": bare,
        "ratio": middle / bare,
        "aim_seconds": AIM,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\n{model}, {view}, key to {ends}: median {1000 * middle:.2f} ms (aim {1000 * AIM:g}),"
            f" p95 {1000 * slow:.2f} ms; {middle / bare:.1f} times repainting an empty widget of that size"
            f" ({1000 * bare:.2f} ms)\n"
        )
    benchmark(time_keys, window, empty, keys * WARM_UP, places)
