"""Painting and filtering a list of 1,000 models, beside a bare list view with the same texts in the same run.

Run with `--benchmark-only`. Nothing is asserted about time: the ratios are written down, a slow machine breaks nothing.
"""

import os
import sys
from collections.abc import Callable
from pathlib import Path
from statistics import median
from time import perf_counter

import pytest
from pytest_benchmark.fixture import BenchmarkFixture

os.environ["QT_QPA_PLATFORM"] = "offscreen"

from PySide6.QtCore import QSortFilterProxyModel, QStringListModel, Qt
from PySide6.QtGui import QPixmap
from PySide6.QtWidgets import QApplication, QListView
from pytestqt.qtbot import QtBot

from clinicalc.gui.application import dress
from clinicalc.gui.models.models_list import ModelsList
from clinicalc.operations.library_view import LibraryView
from tests.gui.models.shelves import many_rows, reading_of

MODELS, ROUNDS = 1_002, 30
AIM_FILTER = 0.016
"""Seconds from a key in the filter to the painted list: one picture of a screen."""
WORDS = ("invented", "1.3", "kind form 7", "waiting", "form 5 waiting", "")
"""From all of them to a few and back."""


@pytest.fixture
def view(tmp_path: Path) -> LibraryView:
    """A reading with 1,002 rows."""
    return reading_of(many_rows(MODELS), tmp_path)


def shown(qtbot: QtBot, made: QListView) -> QListView:
    """On screen, 400 wide and as high as the page has it."""
    qtbot.addWidget(made)
    made.resize(400, 600)
    with qtbot.waitExposed(made):
        made.show()
    return made


def seconds(verb: Callable[[], object]) -> float:
    """The median of many rounds."""
    times = []
    for _ in range(ROUNDS):
        begin = perf_counter()
        verb()
        times.append(perf_counter() - begin)
    return median(times)


def paint(made: QListView, canvas: QPixmap) -> None:
    """Everything that is due, and one painting."""
    QApplication.processEvents()
    made.render(canvas)


def test_models_list(
    benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str], qtbot: QtBot, qapp: QApplication, view: LibraryView
) -> None:
    dress(qapp)
    ours = ModelsList()
    ours.show_view(view)
    shown(qtbot, ours)
    texts = QStringListModel([f"{row.title} {row.version}\n{row.says}" for row in view.rows])
    kept = QSortFilterProxyModel()
    kept.setSourceModel(texts)
    kept.setFilterCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
    bare = QListView()
    bare.setModel(kept)
    shown(qtbot, bare)
    assert len(ours.entries.rows) == kept.rowCount() == MODELS
    canvas = QPixmap(ours.size())

    def filter_ours() -> None:
        for words in WORDS:
            ours.keep(words)
            paint(ours, canvas)

    def filter_bare() -> None:
        for words in WORDS:
            kept.setFilterFixedString(words)
            paint(bare, canvas)

    ours.keep("form 5 waiting")
    assert 0 < len(ours.entries.rows) < MODELS // 10
    ours.keep("")
    painted, painted_bare = seconds(lambda: paint(ours, canvas)), seconds(lambda: paint(bare, canvas))
    filtered, filtered_bare = seconds(filter_ours) / len(WORDS), seconds(filter_bare) / len(WORDS)
    benchmark.extra_info |= {
        "paint_seconds": painted,
        "paint_ratio_to_bare": painted / painted_bare,
        "filter_seconds": filtered,
        "filter_ratio_to_bare": filtered / filtered_bare,
        "aim_filter_seconds": AIM_FILTER,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\n{MODELS} models: painted in {painted * 1e3:.2f} ms, {painted / painted_bare:.2f} times a bare list;"
            f" filtered and painted in {filtered * 1e3:.2f} ms (aim {AIM_FILTER * 1e3:.0f} ms),"
            f" {filtered / filtered_bare:.2f} times a bare list\n"
        )
    benchmark(filter_ours)
