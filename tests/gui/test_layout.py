"""Nothing is cut off, at the usual size and at the smallest, for every shipped file."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import QSize
from PySide6.QtWidgets import QAbstractButton, QApplication, QComboBox, QLabel, QLineEdit, QWidget

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.gui.segments import Segment
from clinicalc.gui.tokens import RING
from clinicalc.operations.bedside import open_example
from clinicalc.resources import list_example_models

pytestmark = pytest.mark.gui


def cut_labels(window: MainWindow) -> list[str]:
    """The texts of visible labels that have less room than their text takes."""
    cut = []
    for label in window.findChildren(QLabel):
        if not label.isVisible() or not label.text():
            continue
        if label.wordWrap():
            fits = label.height() >= label.heightForWidth(label.width())
        else:
            fits = label.width() >= label.fontMetrics().horizontalAdvance(label.text())
        if not fits:
            cut.append(label.text())
    return cut


def overhanging(inner: QWidget, outer: QWidget) -> bool:
    place = inner.mapTo(outer, inner.rect().bottomRight())
    return place.x() >= outer.width()


@pytest.mark.parametrize("size", [QSize(1280, 800), SMALLEST], ids=["usual", "smallest"])
@pytest.mark.parametrize("name", list_example_models())
def test_nothing_is_cut_off(open_window: Callable[[Model | None], MainWindow], name: str, size: QSize) -> None:
    window = open_window(open_example(name))
    window.resize(size)
    # a patient of whom much is to be said: a stop in every number field, and every question answered
    typed = dict.fromkeys(window.values.rows, "5.2") | {"sex": "female", "smoker": "yes", "prior_cvd": "yes"}
    assert window.state.model is not None
    window.use_model(window.state.model, entry_from_texts(typed, "Ottilie Fenn"))
    QApplication.processEvents()
    QApplication.processEvents()
    assert window.size() == size
    assert cut_labels(window) == []
    body = window.values.widget()
    assert body is not None
    assert [id for id, row in window.values.rows.items() if overhanging(row, body)] == []
    for segment in window.findChildren(Segment):
        assert segment.width() >= segment.fontMetrics().horizontalAdvance(segment.option.label), segment.option
        assert segment.height() >= 24


@pytest.mark.parametrize("size", [QSize(1280, 800), SMALLEST, NARROWEST], ids=["usual", "smallest", "narrowest"])
def test_nothing_to_press_is_under_24_pixels(open_window: Callable[[Model | None], MainWindow], size: QSize) -> None:
    """WCAG 2.2, 2.5.8: targets of 24 by 24 pixels."""
    window = open_window(open_example("cvd-2021-regional.json"))
    window.resize(size)
    typed = dict.fromkeys(window.values.rows, "5.2") | {"sex": "female", "smoker": "yes", "prior_cvd": "yes"}
    assert window.state.model is not None
    window.use_model(window.state.model, entry_from_texts(typed, "Ottilie Fenn"))
    for id in ("age", "total_cholesterol"):  # the second shows its date field
        window.values.focus_field(id)
        QApplication.processEvents()
        targets = [
            target
            for kind in (QAbstractButton, QLineEdit, QComboBox)
            for target in window.findChildren(kind)
            if target.isVisible() and not target.objectName().startswith("qt_")
        ]
        assert len(targets) > 20
        small = [(type(t).__name__, t.accessibleName(), t.size()) for t in targets if min(t.width(), t.height()) < 24]
        assert small == []


@pytest.mark.parametrize("name", list_example_models())
def test_the_chooser_is_as_wide_for_every_title_and_says_the_whole(
    open_window: Callable[[Model | None], MainWindow], name: str
) -> None:
    window = open_window(open_example(name))
    window.resize(QSize(1280, 800))
    QApplication.processEvents()
    chooser = window.model_bar.chooser
    assert chooser.width() == 322 + 2 * RING
    assert chooser.accessibleName() == f"Model: {chooser.title}"
    assert " ".join(chooser.shown_lines) == chooser.title
    assert len(chooser.shown_lines) <= 2
    assert chooser.tip == ""


def test_a_title_too_long_for_the_chooser_keeps_its_ends(window: MainWindow) -> None:
    chooser = window.model_bar.chooser
    title = f"Cardiovascular disease {'in people of every age ' * 5}with < 5 visits, lipid form"
    chooser.show_title(title)
    [shown] = chooser.shown_lines
    start, _, end = shown.partition("…")
    assert title.startswith(start)
    assert title.endswith(end)
    assert end.endswith("lipid form")
    assert chooser.tip == f"<qt>{title.replace('<', '&lt;')}</qt>"
    assert chooser.accessibleName() == f"Model: {title}"
