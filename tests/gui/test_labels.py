"""Labels say how high they are as Qt would, whatever they were asked before."""

from collections.abc import Callable

import pytest
from PySide6.QtWidgets import QLabel
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
