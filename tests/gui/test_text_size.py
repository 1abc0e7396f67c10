"""Text follows the system's: where its font is larger than usual, the whole window is."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from clinicalc.gui.text_size import text_factor

pytestmark = pytest.mark.gui

# The screenless platform's font has 12 pixels; said to be usual for 6 of them, it is double text.
_START = """
import os
from clinicalc.gui import text_size
text_size._USUAL_ELSEWHERE = {usual}
text_size._USUAL = {{}}
application = text_size.start_application(["clinicalc"])
from PySide6.QtCore import QSize
from clinicalc.gui.application import dress
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
dress(application)
window = MainWindow()
window.use_model(open_example("tarnwick-cvd-10y.json"))
window.resize(QSize(1280, 800) / application.devicePixelRatio())
window.show()
for _ in range(4):
    application.processEvents()
picture = window.grab()
print(application.devicePixelRatio(), picture.width(), picture.height(), window.patient.is_narrow)
print(os.environ.get("QT_SCALE_FACTOR"), text_size.start_application([]) is application)
picture.save({picture!r})
"""


def start(usual: float, picture: Path, **environment: str) -> list[str]:
    """What a program of its own says about its window."""
    kept = {name: value for name, value in os.environ.items() if not name.startswith("QT_")}
    done = subprocess.run(
        [sys.executable, "-c", _START.format(usual=usual, picture=str(picture))],
        env=kept | {"QT_QPA_PLATFORM": "offscreen"} | environment,
        capture_output=True,
        text=True,
        check=True,
        timeout=60,
    )
    return done.stdout.splitlines()


@pytest.mark.parametrize(
    ("pixels", "platform", "factor"),
    [
        (12, "win32", 1.0),
        (18, "win32", 1.5),
        (24, "win32", 2.0),
        (27, "win32", 2.0),  # the layout is made for double text and no more
        (13, "darwin", 1.0),
        (12, "linux", 1.0),
        (15, "linux", 1.0),
        (16, "linux", 1.0),
        (30, "linux", 2.0),
    ],
)
def test_factor_is_the_size_by_the_usual_one(pixels: float, platform: str, factor: float) -> None:
    assert text_factor(pixels, platform) == factor


def test_double_text_draws_the_usual_window_twice_as_large(tmp_path: Path) -> None:
    said = start(6, tmp_path / "double.png")
    assert said == ["2.0 1280 800 True", "None True"]


def test_usual_text_changes_nothing(tmp_path: Path) -> None:
    assert start(12, tmp_path / "usual.png") == ["1.0 1280 800 False", "None True"]


def test_a_scale_that_was_asked_for_is_kept_and_multiplied(tmp_path: Path) -> None:
    assert start(8, tmp_path / "both.png", QT_SCALE_FACTOR="2")[0].startswith("3.0")
    assert start(12, tmp_path / "asked.png", QT_SCALE_FACTOR="2") == ["2.0 1280 800 True", "2 True"]


@pytest.mark.parametrize("scale", ["1.25", "1.5", "2"])
def test_the_system_may_scale_by_itself(tmp_path: Path, scale: str) -> None:
    """A system that scales every program leaves its font at the usual size, and then nothing is enlarged twice."""
    said = start(12, tmp_path / "scaled.png", QT_SCALE_FACTOR=scale)
    assert float(said[0].split()[0]) == float(scale)
