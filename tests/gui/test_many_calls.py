"""PySide6 6.12.0 loses a reference to None on every void call on Python 3.10 and 3.11 and dies after some thousands."""

import os
import subprocess
import sys

import pytest

pytestmark = pytest.mark.gui

PROGRAM = """
from PySide6.QtWidgets import QApplication, QLabel
application = QApplication([])
label = QLabel()
for number in range(20_000):
    label.setText(str(number))
print(label.text())
"""


def test_twenty_thousand_calls() -> None:
    done = subprocess.run(
        [sys.executable, "-c", PROGRAM],
        capture_output=True,
        text=True,
        env=os.environ | {"QT_QPA_PLATFORM": "offscreen"},
        timeout=120,
        check=False,
    )
    assert (done.returncode, done.stdout.strip()) == (0, "19999")
