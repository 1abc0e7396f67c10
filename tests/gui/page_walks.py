"""The walk over a page that is not the patient's."""

import pytest
from PySide6.QtWidgets import QLabel

from clinicalc.gui.main_window import MainWindow
from tests.gui.test_walks import walk
from tests.gui.walking import settle


def walk_page(window: MainWindow, monkeypatch: pytest.MonkeyPatch) -> dict[str, list[str]]:
    """What is wrong; the walk takes every tip for markup, and the hidden page of the patient has a walk of its own."""
    settle()
    for line in window.bedside.findChildren(QLabel):
        line.setToolTip("")
    return walk(window, monkeypatch)
