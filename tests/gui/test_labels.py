"""Labels say how high they are as Qt would, whatever they were asked before."""

from collections.abc import Callable

import pytest
from PySide6.QtCore import QCoreApplication, QEvent, QObject
from PySide6.QtWidgets import QLabel, QVBoxLayout, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.labels import Label, make_label
from clinicalc.gui.typeface import HEADLINE, face

pytestmark = pytest.mark.gui

SHORT, LONG = "Age", "Where new diabetes was more common the score gave too low a probability. " * 4


def height_by_qt(label: QLabel, width: int) -> int:
    """What a label of Qt's own that was never asked before says."""
    fresh = QLabel()
    fresh.setTextFormat(label.textFormat())
    fresh.setWordWrap(label.wordWrap())
    fresh.setFont(label.font())
    fresh.setContentsMargins(label.contentsMargins())
    fresh.setText(label.text())
    return fresh.heightForWidth(width)


def test_height_follows_words_letters_margins_and_width(qtbot: QtBot) -> None:
    label = make_label(LONG)
    qtbot.addWidget(label)
    assert isinstance(label, Label)
    seen = []
    changes: tuple[Callable[[], object], ...] = (
        lambda: None,
        lambda: label.setText(SHORT),
        lambda: label.setText(LONG),
        lambda: label.setFont(face(HEADLINE)),
        lambda: label.setContentsMargins(0, 8, 0, 4),
        lambda: label.setWordWrap(False),
        lambda: label.setWordWrap(True),
        label.ensurePolished,
    )
    for change in changes:
        change()
        for width in (120, 400, 120):
            seen.append(label.heightForWidth(width))
            assert seen[-1] == height_by_qt(label, width)
    assert len(set(seen)) > 6


class Requests(QObject):
    """Counts how often a widget was asked to arrange what is in it."""

    def __init__(self, watched: QWidget) -> None:
        super().__init__(watched)
        self.count = 0
        watched.installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        self.count += event.type() == QEvent.Type.LayoutRequest
        return False


def test_only_words_in_another_room_ask_for_an_arrangement(qtbot: QtBot) -> None:
    around = QWidget()
    qtbot.addWidget(around)
    label, under = make_label("12 of 100 people"), make_label(SHORT)
    column = QVBoxLayout(around)
    for part in (label, under):
        column.addWidget(part)
    column.addStretch(1)
    around.resize(300, 400)
    with qtbot.waitExposed(around):
        around.show()
    QCoreApplication.processEvents()
    requests, top = Requests(around), under.y()

    def say(words: str) -> int:
        before = requests.count
        label.setText(words)
        QCoreApplication.processEvents()
        assert label.text() == words
        assert label.isVisible()
        assert not label.isHidden()
        assert label.height() == label.heightForWidth(label.width())
        return requests.count - before

    assert say("13 of 100 people") == 0
    assert under.y() == top
    assert say(LONG) > 0
    assert under.y() > top
    assert say("13 of 100 people") > 0
    assert under.y() == top
    label.hide()
    QCoreApplication.processEvents()
    label.setText(LONG)
    assert label.isHidden()
    label.show()
    QCoreApplication.processEvents()
    assert under.y() > top
