"""The ground of a scroll area is made here, and nobody can tell it from Qt's."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QScrollArea, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.scroller import Scroller

pytestmark = pytest.mark.gui


def traits(area: QScrollArea) -> dict[str, object]:
    """What Qt sets on the viewport that it makes."""
    ground = area.viewport()
    return {
        "name": ground.objectName(),
        "fills": ground.autoFillBackground(),
        "roles": (ground.backgroundRole(), ground.foregroundRole()),
        "attributes": {attribute for attribute in Qt.WidgetAttribute if ground.testAttribute(attribute)},
        "focus": (ground.focusPolicy(), ground.focusProxy() is area),
        "menu": ground.contextMenuPolicy(),
        "mouse": (ground.hasMouseTracking(), ground.acceptDrops()),
    }


def test_viewport_is_as_qt_makes_it(qtbot: QtBot) -> None:
    ours, qts = Scroller(), QScrollArea()
    for area in (ours, qts):
        qtbot.addWidget(area)
    assert traits(ours) == traits(qts)
    assert type(ours.viewport()) is QWidget
