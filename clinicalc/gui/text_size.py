"""Text as large as the system's: where its text is larger than usual, the whole window is drawn larger.

Not the letters alone: marks, rows, frames and figures grow with them, and the window takes its one-column form when
it has room for no more. Most systems scale every program themselves and need nothing here; others only enlarge their
font.
"""

import os
import sys
from collections.abc import Sequence

import shiboken6
from PySide6.QtGui import QFontInfo
from PySide6.QtWidgets import QApplication

_SCALE = "QT_SCALE_FACTOR"
_STYLE = ("-style", "fusion")
"""Named at the start: setting it later hands a style object to PySide6, which sets up a class of 4 ms for it."""
_USUAL = {"win32": 12, "darwin": 13}
"""Pixels of the system's font at usual text size: 9 points at 96 dots per inch; 13 points at 72 (both from memory)."""
_USUAL_ELSEWHERE = 15
"""Desktops differ, 12 to 15 (common practice); the largest is taken, so that nobody's usual text counts as large."""
_LARGEST = 2.0
"""As far as the layout is made for."""


def text_factor(pixels: float, platform: str = sys.platform) -> float:
    """How many times larger than usual a system font of so many pixels is: 1 to 2, in quarters."""
    ratio = pixels / _USUAL.get(platform, _USUAL_ELSEWHERE)
    return min(max(round(ratio * 4) / 4, 1.0), _LARGEST)


def start_application(arguments: Sequence[str]) -> QApplication:
    """The running application, or a new one that draws everything as much larger as the system's text is.

    Only an application knows the system's font, and only before it starts can its scale be set: so where text is large,
    a first one is asked and a second one started. The environment is left as it was, for programs started from here.
    """
    running = QApplication.instance()
    if isinstance(running, QApplication):
        return running
    application = QApplication([*arguments, *_STYLE])
    factor = text_factor(QFontInfo(application.font()).pixelSize())
    if factor == 1.0:
        return application
    shiboken6.delete(application)
    before = os.environ.get(_SCALE)
    os.environ[_SCALE] = str(_factor_asked_for(before) * factor)
    try:
        return QApplication([*arguments, *_STYLE])
    finally:
        if before is None:
            del os.environ[_SCALE]
        else:
            os.environ[_SCALE] = before


def _factor_asked_for(text: str | None) -> float:
    """What the environment already asks for; what is no number asks for nothing, as with Qt."""
    try:
        return float(text or "1")
    except ValueError:
        return 1.0
