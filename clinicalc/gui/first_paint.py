"""What is done once a window can be seen, so that nobody waits for it before."""

from collections.abc import Callable

from PySide6.QtCore import QEvent, QObject, QTimer
from PySide6.QtWidgets import QWidget


class FirstPaint(QObject):
    """Waits for the first painting of a window and then calls the verb, once the painting is done."""

    def __init__(self, window: QWidget, verb: Callable[[], None]) -> None:
        super().__init__(window)
        self._verb = verb
        window.installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Lets every event through."""
        if event.type() == QEvent.Type.Paint:
            watched.removeEventFilter(self)
            QTimer.singleShot(0, self, self._verb)
        return False


def after_first_paint(window: QWidget, verb: Callable[[], None]) -> None:
    """Call the verb when the window has been painted for the first time."""
    FirstPaint(window, verb)
